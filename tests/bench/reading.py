"""The reading bench's other side: python3 reading.py make FOLDER | python3 reading.py read FOLDER [DATA]: JSON of seconds and sums.

Reads whole files to 64-bit numbers as this project's readers do: classic by numpy's memory map and byte swap, netCDF-4 by h5py,
GRIB by GDAL. What is not installed is left out.
"""

import json
import pathlib
import sys
import time

import numpy as np

STEPS, ROWS, COLUMNS = 400, 181, 360
ROUNDS = 15


def make(folder: pathlib.Path) -> None:
    import netCDF4

    rng = np.random.default_rng(7)
    lat = np.linspace(-90, 90, ROWS)
    lon = np.arange(COLUMNS) * 1.0
    wave = 120 * np.cos(np.radians(lat))[:, None] * np.cos(np.radians(3 * lon))[None, :]
    for name, kind, how in [
        ("classic.nc", "NETCDF3_64BIT_OFFSET", {}),
        ("deflate.nc", "NETCDF4", dict(zlib=True, complevel=4, shuffle=True, chunksizes=(1, ROWS, COLUMNS))),
    ]:
        with netCDF4.Dataset(folder / name, "w", format=kind) as file:
            for dim, size in [("time", None), ("lat", ROWS), ("lon", COLUMNS)]:
                file.createDimension(dim, size)
            for dim, values, units in [
                ("time", np.arange(STEPS), "days since 2001-01-01"),
                ("lat", lat, "degrees_north"),
                ("lon", lon, "degrees_east"),
            ]:
                axis = file.createVariable(dim, "f8", (dim,))
                axis.units = units
                axis[:] = values
            z = file.createVariable("z", "f4", ("time", "lat", "lon"), **how)
            z.units = "gpm"
            z.standard_name = "geopotential_height"
            for t in range(STEPS):
                z[t] = np.round(5500 + wave + 20 * rng.standard_normal((ROWS, COLUMNS)), 1)


def timed(act):
    seconds, total = [], 0.0
    for _ in range(ROUNDS):
        start = time.perf_counter()
        total, points = act()
        seconds.append(time.perf_counter() - start)
    return {"seconds": sorted(seconds)[ROUNDS // 2], "sum": float(total), "points": int(points)}


def classic(path):
    from scipy.io import netcdf_file

    def act():
        file = netcdf_file(path, "r", mmap=True, maskandscale=False)
        z = file.variables["z"]
        total, points = 0.0, 0
        for t in range(0, STEPS, 16):
            block = np.array(z.data[t : t + 16], dtype="f8")
            total += block[:, 90, 180].sum()
            points += block.size
        return total, points

    return timed(act)


def deflate(path):
    import h5py

    def act():
        with h5py.File(path) as file:
            total, points = 0.0, 0
            for t in range(0, STEPS, 16):
                block = file["z"][t : t + 16].astype("f8")
                total += block[:, 90, 180].sum()
                points += block.size
            return total, points

    return timed(act)


def grib(path):
    from osgeo import gdal

    gdal.UseExceptions()

    def act():
        file = gdal.Open(str(path))
        total, points = 0.0, 0
        for band in range(1, file.RasterCount + 1):
            values = file.GetRasterBand(band).ReadAsArray()
            total += float(values[values.shape[0] // 2, values.shape[1] // 2])
            points += values.size
        return total, points

    return timed(act)


command, folder = sys.argv[1], pathlib.Path(sys.argv[2])
if command == "make":
    make(folder)
else:
    found = {}
    jobs = [("classic.nc", classic, folder / "classic.nc"), ("deflate.nc", deflate, folder / "deflate.nc")]
    jobs += [(path.name, grib, path) for path in map(pathlib.Path, sys.argv[3:])]
    for name, act, path in jobs:
        try:
            found[name] = act(path)
        except (ImportError, RuntimeError) as error:
            print(f"{name}: {error}", file=sys.stderr)
    print(json.dumps(found))
