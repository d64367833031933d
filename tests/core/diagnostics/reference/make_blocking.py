"""Reference values for blocking, numpy alone: writes blocking.json beside this file.

Written from the papers' definitions (Tibaldi & Molteni 1990; Scherrer et al. 2006 with the condition of Davini et al. 2012; Dole &
Gordon 1983; Wiedenmann et al. 2002), not from the project's code: blocks are sets of cells grown by flood fill, events are chains of
sets. Two records: the sample case, read by scipy.io.netcdf_file, and 400 days on both hemispheres made of whole numbers alone, which
any language makes to the last bit.
Run: python3 make_blocking.py
"""
import base64
import json
import pathlib
import zlib

import numpy as np
from scipy.io import netcdf_file

HERE = pathlib.Path(__file__).parent
SAMPLE = HERE.parents[3] / "sample-data" / "invented-winter.nc"
A = 6371.229  # km, WMO Manual on Codes, GRIB2 code table 3.2, shape 6


def invented_record(days=400, n_lat=37, n_lon=72):
    """Whole-number noise (Numerical Recipes' 32-bit LCG, its upper 12 bits), summed over boxes twice along each axis."""
    wide = days + 12
    x = 12345
    noise = np.empty(wide * n_lat * n_lon, dtype=np.int64)
    for i in range(noise.size):
        x = (1664525 * x + 1013904223) & 0xFFFFFFFF
        noise[i] = (x >> 20) - 2048
    s = noise.reshape(wide, n_lat, n_lon)
    for _ in range(2):
        s = sum(np.roll(s, k, axis=2) for k in range(-4, 5))
        padded = np.pad(s, ((0, 0), (2, 2), (0, 0)), mode="edge")
        s = sum(padded[:, k : k + n_lat] for k in range(5))
        s = sum(s[k : len(s) - 6 + k] for k in range(7))
    lat = np.linspace(-90, 90, n_lat)
    lon = np.arange(n_lon) * 360 / n_lon
    z = 5850 - 7 * np.abs(lat)[None, :, None] + s / 24576
    return z, lat, lon, np.arange(days) + 11000.0


def sample_record():
    with netcdf_file(SAMPLE, "r", mmap=False) as f:
        v = f.variables["z"]
        level = list(f.variables["level"].data).index(500)
        z = v.data[:, level].astype(float) * v.scale_factor + v.add_offset
        days = f.variables["time"].data + 11323.0  # 2001-01-01 in days since 1970-01-01
        return z, f.variables["latitude"].data.astype(float), f.variables["longitude"].data.astype(float), days


def nearest(lat, wanted):
    """Index of the nearest row; of two equally near the one nearer the equator."""
    off = np.round(np.abs(lat - wanted), 4)
    ties = np.flatnonzero(off == off.min())
    return ties[np.argmin(np.abs(lat[ties]))]


def nearest_column(lon, wanted):
    """Index of the nearest column; of two equally near the western."""
    east = np.round((lon - wanted + 180) % 360 - 180, 6)
    ties = np.flatnonzero(np.abs(east) == np.abs(east).min())
    return int(ties[np.argmin(east[ties])])


def one_dimensional(z, lat, side):
    """Blocked (time, longitude) and the row of the highest central height among the offsets that block."""
    blocked = np.zeros((len(z), z.shape[2]), dtype=bool)
    best = np.full(blocked.shape, -np.inf)
    row = np.zeros(blocked.shape, dtype=int)
    for delta in (-4, 0, 4):
        n, c, s = (nearest(lat, side * (phi + delta)) for phi in (80, 60, 40))
        phi_n, phi_c, phi_s = (side * lat[k] for k in (n, c, s))
        ghgs = (z[:, c] - z[:, s]) / (phi_c - phi_s)
        ghgn = (z[:, n] - z[:, c]) / (phi_n - phi_c)
        here = (ghgs > 0) & (ghgn < -10)
        better = here & (z[:, c] > best)
        best[better] = z[:, c][better]
        row[better] = c
        blocked |= here
    return blocked, row


def two_dimensional(z, lat, side, condition=True):
    """Blocked (time, row, longitude) on the rows 35 to 75, from the equator poleward, and those rows."""
    rows = [j for j in np.argsort(side * lat) if 35 <= side * lat[j] <= 75]
    out = np.zeros((len(z), len(rows), z.shape[2]), dtype=bool)
    for k, c in enumerate(rows):
        phi = side * lat[c]
        n, s, far = (nearest(lat, side * (phi + d)) for d in (15, -15, -30))
        ghgs = (z[:, c] - z[:, s]) / (phi - side * lat[s])
        ghgn = (z[:, n] - z[:, c]) / (side * lat[n] - phi)
        out[:, k] = (ghgs > 0) & (ghgn < -10)
        if condition:
            out[:, k] &= (z[:, s] - z[:, far]) / (side * lat[s] - side * lat[far]) < -5
    return out, rows


def anomaly(z, lat, side, threshold=150, days=10):
    """Departures from the record's mean, in the measure of 45 degrees, over the threshold for ten daily steps at least."""
    rows = [j for j in np.argsort(side * lat) if side * lat[j] >= 25]
    departure = (z - z.mean(axis=0))[:, rows] * (np.sin(np.pi / 4) / np.sin(np.deg2rad(side * lat[rows])))[None, :, None]
    on = departure > threshold
    out = np.zeros_like(on)
    for j in range(on.shape[1]):
        for i in range(on.shape[2]):
            edges = np.flatnonzero(np.diff(np.concatenate([[0], on[:, j, i].astype(int), [0]])))
            for start, end in zip(edges[::2], edges[1::2]):
                out[start:end, j, i] = end - start >= days
    return out, rows


def components(plane):
    """Sets of blocked cells that touch, corners included, round the circle; in the order of their first cell."""
    left = {(int(j), int(i)) for j, i in np.argwhere(plane)}
    found = []
    for seed in sorted(left):
        if seed not in left:
            continue
        left.discard(seed)
        cells, edge = {seed}, [seed]
        while edge:
            j, i = edge.pop()
            for dj in (-1, 0, 1):
                for di in (-1, 0, 1):
                    cell = (j + dj, (i + di) % plane.shape[1])
                    if cell in left:
                        left.discard(cell)
                        cells.add(cell)
                        edge.append(cell)
        found.append(cells)
    return found


def events(blocked, days, gap_steps=0, width=15, least=5):
    """Chains of blocks: [(start, [set per step], [step])], daily steps without gaps."""
    n_lon = blocked.shape[2]
    chains, alive = [], []
    for t, plane in enumerate(blocked):
        blocks = [b for b in components(plane) if len({i for _, i in b}) * 360 / n_lon >= width - 1e-6]
        pairs = [
            (-len(chain["cells"][-1] & b), chain["order"], k)
            for chain in alive
            for k, b in enumerate(blocks)
            if chain["cells"][-1] & b
        ]
        owner, used = {}, set()
        for _, order, k in sorted(pairs):
            if k not in owner and order not in used:
                owner[k] = order
                used.add(order)
        for k, b in enumerate(blocks):
            if k not in owner:
                owner[k] = len(chains)
                chains.append({"order": len(chains), "cells": [], "steps": []})
                alive.append(chains[-1])
            chains[owner[k]]["cells"].append(b)
            chains[owner[k]]["steps"].append(t)
        alive = [c for c in alive if t - c["steps"][-1] <= gap_steps]
    return [c for c in chains if days[c["steps"][-1]] - days[c["steps"][0]] + 1 >= least]


def row_edges(lat):
    mid = (lat[1:] + lat[:-1]) / 2
    return np.concatenate([[-90], mid, [90]])


def described(chains, z, lat, lon, days, side, row_of, has_area):
    """Numbers of each event. row_of(t, cell): grid row whose height stands for a cell."""
    weight = np.diff(np.sin(np.deg2rad(row_edges(lat)))) * A * A * 2 * np.pi / len(lon)
    reach = int(60 / (360 / len(lon)))
    out = []
    for chain in chains:
        steps = []
        for t, cells in zip(chain["steps"], chain["cells"]):
            rows = np.array([row_of(t, cell) for cell in sorted(cells)])
            cols = np.array([i for _, i in sorted(cells)])
            w = weight[rows] if has_area else np.ones(len(rows))
            turn = (w * np.exp(1j * np.deg2rad(lon[cols]))).sum()
            centre_lon = np.rad2deg(np.angle(turn)) % 360
            centre_lat = (w * lat[rows]).sum() / w.sum()
            heights = z[t, rows, cols]
            top = int(np.argmax(heights))
            j = nearest(lat, centre_lat)
            i = nearest_column(lon, centre_lon)
            z_u = z[t, j, [(i - d) % len(lon) for d in range(1, reach + 1)]].min()
            z_d = z[t, j, [(i + d) % len(lon) for d in range(1, reach + 1)]].min()
            m = heights[top]
            contour = ((z_u + m) / 2 + (z_d + m) / 2) / 2
            steps.append(
                {
                    "area": float(w.sum()) if has_area else None,
                    "width": len(set(cols.tolist())) * 360 / len(lon),
                    "lon": float(centre_lon),
                    "lat": float(centre_lat),
                    "highest": float(m),
                    "at": [float(lon[cols[top]]), float(lat[rows[top]])],
                    "bi": float(100 * (m / contour - 1)),
                }
            )
        points = [(np.deg2rad(s["lon"]), np.deg2rad(s["lat"])) for s in steps]
        way = 0.0
        for (l0, p0), (l1, p1) in zip(points, points[1:]):
            u = np.array([np.cos(p0) * np.cos(l0), np.cos(p0) * np.sin(l0), np.sin(p0)])
            v = np.array([np.cos(p1) * np.cos(l1), np.cos(p1) * np.sin(l1), np.sin(p1)])
            way += A * np.arctan2(np.linalg.norm(np.cross(u, v)), u @ v)
        peak = max(steps, key=lambda s: s["highest"])
        out.append(
            {
                "start": float(days[chain["steps"][0]]),
                "end": float(days[chain["steps"][-1]]),
                "days": float(days[chain["steps"][-1]] - days[chain["steps"][0]] + 1),
                "onset_cut": int(chain["steps"][0] == 0),
                "end_cut": int(chain["steps"][-1] == len(days) - 1),
                "side": side,
                "lon": round(steps[0]["lon"], 6),
                "lat": round(steps[0]["lat"], 6),
                "way": round(float(way), 6),
                "area": round(max(s["area"] for s in steps), 6) if has_area else None,
                "width": max(s["width"] for s in steps),
                "strength": round(float(np.mean([s["bi"] for s in steps])), 6),
                "largest": round(max(s["bi"] for s in steps), 6),
                "highest": peak["highest"],
                "at": peak["at"],
                "first": min(chain["cells"][0]),
                "steps": [[round(s["lon"], 5), round(s["lat"], 5), round(s["area"] or 0), round(s["bi"], 5)] for s in steps],
            }
        )
    return out


def ordered(found):
    found.sort(key=lambda e: (e["start"], -e["side"], e["first"]))
    for e in found:
        del e["first"]
    return found


def packed(flags):
    return base64.b64encode(zlib.compress(np.packbits(flags.ravel(), bitorder="little").tobytes(), 9)).decode()


def record_values(z, lat, lon, days, with_anomaly):
    out = {"one": {}, "two": {}, "two_without": {}, "sum": float(z.sum())}
    listed = {"one": [], "two": [], "one_gap": [], "two_gap": [], "anomaly": []}
    month = (np.datetime64("1970-01-01") + days.astype(int)).astype("datetime64[M]").astype(int) % 12
    for side in (1, -1):
        name = "north" if side == 1 else "south"
        flags, row = one_dimensional(z, lat, side)
        out["one"][name] = packed(flags)
        out["one"][f"{name}_frequency"] = flags.mean(axis=0).tolist()
        for key, gap in (("one", 0), ("one_gap", 2)):
            chains = events(flags[:, None], days, gap)
            listed[key] += described(chains, z, lat, lon, days, side, lambda t, cell, row=row: row[t, cell[1]], False)
        flags, rows = two_dimensional(z, lat, side)
        out["two"][name] = packed(flags)
        out["two"][f"{name}_months"] = [
            (flags[month == m].mean(axis=(0, 2)).tolist() if (month == m).any() else None) for m in range(12)
        ]
        for key, gap in (("two", 0), ("two_gap", 2)):
            chains = events(flags, days, gap)
            listed[key] += described(chains, z, lat, lon, days, side, lambda t, cell, rows=rows: rows[cell[0]], True)
        out["two_without"][name] = packed(two_dimensional(z, lat, side, condition=False)[0])
        if with_anomaly:
            flags, rows = anomaly(z, lat, side)
            out.setdefault("anomaly", {})[name] = packed(flags)
            chains = events(flags, days)
            listed["anomaly"] += described(chains, z, lat, lon, days, side, lambda t, cell, rows=rows: rows[cell[0]], True)
    for key in ("one_gap", "two_gap"):
        for e in listed[key]:
            del e["steps"]
    out["events"] = {key: ordered(found) for key, found in listed.items() if found}
    return out


if __name__ == "__main__":
    result = {
        "numpy": np.__version__,
        "invented": record_values(*invented_record(), with_anomaly=True),
        "sample": record_values(*sample_record(), with_anomaly=False),
    }
    (HERE / "blocking.json").write_text(json.dumps(result, separators=(",", ":")) + "\n")
    for name in ("invented", "sample"):
        print(name, {key: len(found) for key, found in result[name]["events"].items()})
