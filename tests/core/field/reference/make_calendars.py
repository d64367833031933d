"""Days since 1970-01-01 in every calendar of the CF conventions, by cftime.

    python3 tests/core/field/reference/make_calendars.py

Writes calendars.json: for each calendar [year, month, day, hour, minute, days]. Needs cftime (it comes with netCDF4-python).
Years are counted as ISO 8601 and astronomers do: year 0 is there, in every calendar.
"""

import json
import pathlib
import random
import warnings

import cftime

warnings.simplefilter("ignore", cftime.CFWarning)  # the CF conventions leave year 0 of two calendars open

random.seed(20261201)
CALENDARS = ["standard", "proleptic_gregorian", "julian", "noleap", "all_leap", "360_day"]
FIXED = [
    (-4000, 1, 1), (-4000, 12, 31), (-401, 3, 1), (-400, 2, 28), (-400, 2, 29), (-100, 2, 28), (-100, 3, 1), (-5, 2, 28), (-5, 3, 1),
    (-4, 2, 28), (-4, 2, 29), (-4, 3, 1), (-1, 12, 31), (0, 1, 1), (0, 2, 28), (0, 2, 29), (0, 3, 1), (0, 12, 31),
    (1, 1, 1), (4, 2, 28), (4, 3, 1), (100, 2, 28), (1500, 2, 28), (1500, 3, 1), (1500, 2, 29), (1582, 1, 1), (1582, 10, 4), (1582, 10, 5), (1582, 10, 10), (1582, 10, 14), (1582, 10, 15), (1582, 12, 31), (1583, 1, 1), (1600, 2, 29),
    (1700, 2, 28), (1700, 3, 1), (1858, 11, 17), (1899, 12, 31), (1900, 2, 28), (1900, 3, 1), (1970, 1, 1), (1999, 12, 31), (2000, 2, 29),
    (2001, 1, 28), (2100, 2, 28), (2100, 3, 1), (9999, 12, 31),
]

found = {}
for calendar in CALENDARS:
    rows = []
    dates = [(*date, 0, 0) for date in FIXED]
    dates += [(random.randint(-4000, 9999), random.randint(1, 12), random.randint(1, 28), random.randint(0, 23), 30) for _ in range(60)]
    for year, month, day, hour, minute in dates:
        try:
            date = cftime.datetime(year, month, day, hour, minute, calendar=calendar, has_year_zero=True)
        except ValueError:
            continue
        days = cftime.date2num(date, "days since 1970-01-01", calendar=calendar, has_year_zero=True)
        rows.append([year, month, day, hour, minute, float(days)])
    found[calendar] = rows
text = json.dumps(found).replace("], [", "],\n[")
(pathlib.Path(__file__).parent / "calendars.json").write_text(text + "\n", encoding="utf-8")
