"""Reference for the batch command: waves of the 500 hPa height along 60 degrees north in the January mean of a monthly file.

numpy.fft on the row as the file holds it, unpacked in float64; ridge longitudes from the true longitudes (numpy knows only
column numbers, so the first column's longitude is added). Run with the file as the only argument; prints the JSON that is
committed beside this script.
"""

import json
import sys

import numpy as np
from scipy.io import netcdf_file

G0 = 9.80665  # m s-2, WMO geopotential metre
WAVES = range(1, 11)

with netcdf_file(sys.argv[1], mmap=False) as file:
    z = file.variables["z"]
    lat = np.array(file.variables["latitude"][:], dtype=float)
    lon = np.array(file.variables["longitude"][:], dtype=float)
    level = np.array(file.variables["level"][:], dtype=float)
    month = np.array(file.variables["month"][:], dtype=float)
    row = int(np.argmin(np.abs(lat - 60.0)))
    packed = np.array(z[int(np.argmax(month == 1)), int(np.argmax(level == 500)), row, :], dtype=float)
    height = (packed * float(z.scale_factor) + float(z.add_offset)) / G0

n = len(lon)
c = np.fft.fft(height) / n
variance = np.mean((height - height.mean()) ** 2)
out = {"latitude": float(lat[row]), "columns": n, "waves": []}
for k in WAVES:
    turned = c[k] * np.exp(-1j * k * np.radians(lon[0]))
    out["waves"].append(
        {
            "wavenumber": k,
            "amplitude": 2 * abs(c[k]),
            "ridge_longitude": float(np.degrees(-np.angle(turned)) / k % (360 / k)),
            "variance_share": 2 * abs(c[k]) ** 2 / variance,
        }
    )
print(json.dumps(out, indent=2))
