"""Do both sides of the bench agree? python3 compare.py OURS.nc THEIRS.nc: prints the worst difference of each variable."""
import sys

import numpy as np
from scipy.io import netcdf_file

ours, theirs = (netcdf_file(name, "r", mmap=False) for name in sys.argv[1:3])
amplitude = theirs.variables["amplitude"].data[:, 0]
worst = {}
for name in ["amplitude", "variance_share", "phase_speed", "lag_one_speed", "stationarity_ratio"]:
    a, b = ours.variables[name].data, theirs.variables[name].data
    rows = slice(1, -1)  # pole rows hold one value: their waves are rounding
    diff = np.abs(a[..., rows, :] - b[..., rows, :])
    worst[name] = float(np.nanmax(diff))
print(", ".join(f"{name} {value:.1e}" for name, value in worst.items()))
sys.exit(0 if worst["amplitude"] < 1e-3 and worst["phase_speed"] < 1e-3 else 1)
