"""Single spherical harmonics by scipy: python3 tests/core/transforms/sphere/reference/make_modes.py > tests/core/transforms/sphere/reference/modes.json

scipy's Y_n^m carries the Condon-Shortley sign and is normalised to the integral over the sphere; here mean |Y|^2 = 1 and there is no
such sign, so each value is multiplied by (-1)^m sqrt(4 pi).
"""
import json

import numpy as np
from scipy.special import sph_harm_y

found = []
for rows, columns in [(32, 64), (64, 128)]:
    x, _ = np.polynomial.legendre.leggauss(rows)
    theta = np.arccos(x)
    lam = 2 * np.pi * np.arange(columns) / columns
    for n, m in [(0, 0), (1, 0), (1, 1), (2, 1), (3, 3), (5, 2), (8, 0), (13, 7), (21, 21), (21, 4)] + ([(42, 0), (42, 17), (42, 42)] if rows == 64 else []):
        y = (-1) ** m * np.sqrt(4 * np.pi) * sph_harm_y(n, m, theta[:, None], lam[None, :])
        places = [(0, 0), (1, 5), (rows // 3, 7), (rows // 2, 11), (rows - 2, 3), (rows - 1, columns - 1)]
        found.append({"rows": rows, "columns": columns, "n": n, "m": m, "values": [[j, i, float(y[j, i].real), float(y[j, i].imag)] for j, i in places]})
print(json.dumps(found))
