"""Reference values for local wave activity, numpy alone: writes lwa.json beside this file.

Written from Chen et al. 2015's definition, by plain loops and a full sort, not from the project's code. Heights: three steps of the
sample case at 500 hPa; invented heights on uneven rows without one on the equator or at the pole, whole numbers divided by 8; and
January of ERA-Interim at 500 hPa (eraint_uvz.nc, in the folder that ISOHYPSE_DATA names).
Run: ISOHYPSE_DATA=... python3 make_lwa.py
"""
import json
import os
import pathlib

import numpy as np
from scipy.io import netcdf_file

HERE = pathlib.Path(__file__).parent
SAMPLE = HERE.parents[3] / "sample-data" / "invented-winter.nc"
A = 6371229.0  # m, WMO Manual on Codes, GRIB2 code table 3.2, shape 6


def sines(phi):
    """sin of the edges between rows of one hemisphere, equator to pole: midway, the equator and the pole."""
    return np.concatenate([[0.0], np.sin(np.deg2rad((phi[1:] + phi[:-1]) / 2)), [1.0]])


def equivalent_height(z, area, cap):
    """Height below which the air has the area `cap`; between two cells their mean."""
    order = np.argsort(z, kind="stable")
    below = np.cumsum(area[order])
    k = int(np.searchsorted(below, cap - 1e-11))
    if abs(below[k] - cap) <= 1e-11:
        return (z[order[k]] + z[order[k + 1]]) / 2
    return z[order[k]]


def activity(z, phi):
    """(anticyclonic, cyclonic), shape of z (rows equator to pole, longitudes)."""
    weight = np.diff(sines(phi))
    n_lon = z.shape[1]
    area = np.repeat(weight / n_lon, n_lon)
    ridge, trough = np.zeros(z.shape), np.zeros(z.shape)
    for e in range(len(phi)):
        cap = weight[e + 1 :].sum() + weight[e] / 2
        departure = z - equivalent_height(z.ravel(), area, cap)
        share = np.where(np.arange(len(phi)) == e, 0.5, 1.0) * weight
        for i in range(n_lon):
            for j in range(len(phi)):
                if j >= e and departure[j, i] > 0:
                    ridge[e, i] += departure[j, i] * share[j]
                if j <= e and departure[j, i] < 0:
                    trough[e, i] -= departure[j, i] * share[j]
        with np.errstate(divide="ignore"):
            ridge[e] *= A / np.cos(np.deg2rad(phi[e]))
            trough[e] *= A / np.cos(np.deg2rad(phi[e]))
    return ridge, trough


def sample_heights():
    with netcdf_file(SAMPLE, "r", mmap=False) as f:
        v = f.variables["z"]
        level = list(f.variables["level"].data).index(500)
        lat = f.variables["latitude"].data.astype(float)
        return [v.data[t, level].astype(float) * v.scale_factor + v.add_offset for t in (0, 30, 59)], lat


def invented_heights():
    lat = np.array([-88.0, -81, -75, -66, -60, -51, -45, -36, -30, -21, -15, -6, 4, 9, 20, 25, 33, 44, 50, 58, 69, 71, 80, 87])
    j, i = np.arange(len(lat))[:, None], np.arange(32)[None, :]
    z = np.floor(5850 - 9 * np.abs(lat[:, None])) + ((j * j * 37 + i * i * 101 + i * j * 13) % 2003) / 8
    return z, lat


out = {"numpy": np.__version__, "sample": [], "invented": {}}
heights, lat = sample_heights()
for z in heights:
    step = {}
    for side, name in ((1, "north"), (-1, "south")):
        rows = [r for r in np.argsort(side * lat) if side * lat[r] >= 0]
        ridge, trough = activity(z[rows], side * lat[rows])
        # Every fourth row and sixth column; the equator and the pole have none.
        step[name] = {"rows": [int(r) for r in rows[2:-1:4]], "ridge": ridge[2:-1:4, ::6].tolist(), "trough": trough[2:-1:4, ::6].tolist()}
    out["sample"].append(step)
z, lat = invented_heights()
for side, name in ((1, "north"), (-1, "south")):
    rows = [r for r in np.argsort(side * lat) if side * lat[r] >= 0]
    ridge, trough = activity(z[rows], side * lat[rows])
    out["invented"][name] = {"rows": [int(r) for r in rows], "ridge": ridge.tolist(), "trough": trough.tolist()}
with netcdf_file(pathlib.Path(os.environ["ISOHYPSE_DATA"]) / "eraint_uvz.nc", "r", mmap=False) as f:
    v = f.variables["z"]
    z = (v.data[0, list(f.variables["level"].data).index(500)].astype(float) * v.scale_factor + v.add_offset) / 9.80665
    lat = f.variables["latitude"].data.astype(float)
    lon = f.variables["longitude"].data.astype(float)
out["january"] = {"lon": lon[::60].tolist()}
for side, name in ((1, "north"), (-1, "south")):
    rows = [r for r in np.argsort(side * lat) if side * lat[r] >= 0]
    ridge, trough = activity(z[rows], side * lat[rows])
    out["january"][name] = {
        "lat": lat[rows][6:-1:12].tolist(),
        "ridge": ridge[6:-1:12, ::60].tolist(),
        "trough": trough[6:-1:12, ::60].tolist(),
    }
(HERE / "lwa.json").write_text(json.dumps(out, separators=(",", ":")) + "\n")
