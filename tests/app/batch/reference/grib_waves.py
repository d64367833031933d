"""Reference for the batch command on GRIB files: waves of the 500 hPa height, by numpy.fft on values that ecCodes decodes.

    python3 tests/app/batch/reference/grib_waves.py FOLDER_OF_THE_FILES > tests/app/batch/reference/grib_waves.json

Needs numpy and ecCodes' Python module. For the forecast of one member three rows; for the ensemble of ten every member and time on
one row.
"""

import json
import sys

import eccodes
import numpy as np

G0 = 9.80665  # m s-2, WMO geopotential metre
WAVES = range(1, 7)


def messages(path, name):
    with open(path, "rb") as file:
        while (handle := eccodes.codes_grib_new_from_file(file)) is not None:
            get = lambda key: eccodes.codes_get(handle, key)
            if get("shortName") == name and get("level") == 500 and get("typeOfLevel") == "isobaricInhPa":
                ni, nj = get("Ni"), get("Nj")
                lat = np.linspace(get("latitudeOfFirstGridPointInDegrees"), get("latitudeOfLastGridPointInDegrees"), nj)
                lon0 = get("longitudeOfFirstGridPointInDegrees")
                member = get("number") if eccodes.codes_is_defined(handle, "number") else None
                when = f"{get('validityDate')}T{get('validityTime'):04d}"
                yield member, when, lat, lon0, eccodes.codes_get_values(handle).reshape(nj, ni)
            eccodes.codes_release(handle)


def waves(row, lon0):
    c = np.fft.fft(row) / len(row)
    out = []
    for k in WAVES:
        turned = c[k] * np.exp(-1j * k * np.radians(lon0))
        out.append([2 * abs(c[k]), float(np.degrees(-np.angle(turned)) / k % (360 / k))])
    return out


folder = sys.argv[1]
found = {"forecast": [], "ensemble": []}
for _, when, lat, lon0, values in messages(f"{folder}/gfs_2p5_20110110T12_f120.grib2", "gh"):
    for latitude in (60.0, 45.0, -50.0):
        row = int(np.argmin(np.abs(lat - latitude)))
        found["forecast"].append({"time": when, "latitude": float(lat[row]), "waves": waves(values[row], lon0)})
for member, when, lat, lon0, values in messages(f"{folder}/era5_eda_z_t_3deg_10memb.grib", "z"):
    row = int(np.argmin(np.abs(lat - 54.0)))
    found["ensemble"].append({"member": member, "time": when, "latitude": float(lat[row]), "waves": waves(values[row] / G0, lon0)})
print(json.dumps(found))
