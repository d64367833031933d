"""Reference values for zonal waves and climatologies by numpy and scipy: writes waves.json beside this file.

Written from the definitions (c_k, weighted least squares, centred means), not from the project's code.
Run: python3 make_reference.py
"""
import json
import pathlib

import numpy as np
import scipy
import scipy.fft

N_TIME, N_LAT, N_LON = 40, 9, 48
LAT = np.linspace(40, 60, N_LAT)
LON = -180 + 360 / N_LON * np.arange(N_LON)


def record():
    """A record that any language can make: travelling and standing waves on a sloping mean, and whole-number noise."""
    t = np.arange(N_TIME)[:, None, None]
    j = np.arange(N_LAT)[None, :, None]
    lam = np.deg2rad(LON)[None, None, :]
    i = np.arange(N_LON)[None, None, :]
    x = 5500 - 20.0 * j + 90 * np.cos(2 * (lam - np.deg2rad(30 + 4.0 * t)))
    x = x + (60 + 2.0 * j) * np.cos(3 * (lam - np.deg2rad(10 - 2.5 * t + j))) + 40 * np.cos(lam - 1)
    return x + ((t * 13 + j * 7 + i * 29) % 23 - 11) + ((t * t * 3 + i * i * 5 + j) % 17 - 8)


def edges(lat):
    mid = (lat[1:] + lat[:-1]) / 2
    return np.concatenate([[lat[0] - (lat[1] - lat[0]) / 2], mid, [lat[-1] + (lat[-1] - lat[-2]) / 2]])


def coefficients(x, waves):
    """c_k = (1/N) sum x exp(-i k lambda) with the true longitudes: the direct sum."""
    k = np.arange(waves + 1)
    return x @ np.exp(-1j * np.outer(np.deg2rad(LON), k)) / N_LON


def speed(c, k, days, floor=0.25):
    a = np.abs(c)
    keep = a >= floor * a.mean()
    ridge = -np.angle(c[keep]) / k
    ridge = np.rad2deg(np.unwrap(ridge, period=2 * np.pi / k))
    w = a[keep] ** 2
    d = np.asarray(days)[keep]
    design = np.stack([d, np.ones_like(d)], axis=1) * np.sqrt(w)[:, None]
    solution, residual, *_ = np.linalg.lstsq(design, ridge * np.sqrt(w), rcond=None)
    covariance = np.linalg.inv(design.T @ design) * residual[0] / (len(d) - 2)
    # The same by numpy's own routine: polyfit's weights multiply the residuals, and cov=True scales by chi2/(n - 2).
    line, spread = np.polyfit(d, ridge, 1, w=np.sqrt(w), cov=True)
    assert np.allclose([line[0], np.sqrt(spread[0, 0])], [solution[0], np.sqrt(covariance[0, 0])], rtol=1e-9)
    return float(solution[0]), float(np.sqrt(covariance[0, 0]))


x = record()
weights = np.diff(np.sin(np.deg2rad(edges(LAT))))
weights /= weights.sum()
band = np.tensordot(x, weights, axes=(1, 0))
days = np.arange(N_TIME, dtype=float)
c = coefficients(band, 6)
rows = coefficients(x, 6)
clim = coefficients(band.mean(axis=0), 6)
anomaly = c - clim
out = {"numpy": np.__version__, "scipy": scipy.__version__, "band": {}, "incoherent": {}, "row4": {}, "climatology": {}}
ks = np.arange(1, 7)
variance = band.var(axis=1)
out["band"] = {
    "amplitude": (2 * np.abs(c[:, 1:])).tolist(),
    "ridge": np.mod(np.rad2deg(-np.angle(c[:, 1:]) / ks), 360 / ks).tolist(),
    "share": (2 * np.abs(c[:, 1:]) ** 2 / variance[:, None]).tolist(),
    "speed": [speed(c[:, k], k, days) for k in ks],
    "drift": [[speed(c[t - 10 : t + 1, k], k, days[t - 10 : t + 1]) for k in (2, 3)] for t in (10, 25, 39)],
    "lag_one": [float(-np.rad2deg(np.angle((c[1:, k] * c[:-1, k].conj()).sum())) / k) for k in ks],
    "stationarity": [float(np.abs(c[:, k].mean()) / np.abs(c[:, k]).mean()) for k in ks],
    "interference": (2 * (anomaly[:, 1:] * clim[1:].conj()).real).tolist(),
    "interference_phase": np.rad2deg(np.angle(anomaly[:, 1:] * clim[1:].conj())).tolist(),
}
out["incoherent"] = {"amplitude": np.tensordot(2 * np.abs(rows[:, :, 1:]), weights, axes=(1, 0)).tolist()}
out["row4"] = {"amplitude": (2 * np.abs(rows[:, 4, 1:])).tolist()}

# Random rows, every wave, by scipy.fft; the first column lies at 3 degrees.
noise = np.random.default_rng(7).standard_normal((4, 60))
k = np.arange(1, 31)
fine = scipy.fft.rfft(noise, axis=1)[:, 1:] / 60 * np.exp(-1j * k * np.deg2rad(3.0))
once = np.where(k == 30, 1.0, 2.0)
out["random"] = {
    "rows": noise.tolist(),
    "first": 3.0,
    "amplitude": (once * np.abs(fine)).tolist(),
    "ridge": np.mod(np.rad2deg(-np.angle(fine) / k), 360 / k).tolist(),
    "share": (once * np.abs(fine) ** 2 / noise.var(axis=1)[:, None]).tolist(),
}

# Climatology: a year of gappy days, one cell at a time by numpy.linalg.lstsq
year = np.arange(365.0)
phase = year / 365
y = 250 + 8 * np.cos(2 * np.pi * (phase - 0.1)) + 2 * np.sin(4 * np.pi * phase) + (year * 37) % 11 - 5
gappy = y.copy()
gappy[(year.astype(int) * 7) % 19 == 3] = np.nan


def fit(values, n):
    basis = [np.ones_like(phase)]
    for h in range(1, n + 1):
        basis += [np.cos(2 * np.pi * h * phase), np.sin(2 * np.pi * h * phase)]
    basis = np.stack(basis, axis=1)
    ok = ~np.isnan(values)
    return np.linalg.lstsq(basis[ok], values[ok], rcond=None)[0].tolist()


def cycle(coefficients, points):
    p = (np.arange(points) + 0.5) / points
    basis = [np.ones_like(p)]
    for h in range(1, (len(coefficients) - 1) // 2 + 1):
        basis += [np.cos(2 * np.pi * h * p), np.sin(2 * np.pi * h * p)]
    return (np.stack(basis, axis=1) @ np.array(coefficients)).tolist()


out["climatology"] = {
    "cycle": cycle(fit(y, 4), 12),
    "cycle_gappy": cycle(fit(gappy, 2), 5),
    "full": fit(y, 4),
    "gappy": fit(gappy, 2),
    "mean_gappy": float(np.nanmean(gappy)),
    "running": np.convolve(y, np.ones(31) / 31, mode="valid")[:5].tolist(),
}
pathlib.Path(__file__).with_name("waves.json").write_text(json.dumps(out) + "\n")
