"""Small netCDF-4 and HDF5 files, and their contents as netCDF4-python (the netCDF C library) reads them.

    python3 tests/core/formats/hdf5/reference/make_files.py

Needs numpy, netCDF4, h5py and netCDF's own nccopy. Numbers are read as they are stored (set_auto_maskandscale(False)).
"""

import json
import pathlib
import subprocess

import h5py
import netCDF4
import numpy as np

HERE = pathlib.Path(__file__).parent
TYPES = ["i1", "u1", "i2", "u2", "i4", "u4", "i8", "u8", "f4", "f8"]


def numbers(kind: str, n: int) -> np.ndarray:
    if kind[0] == "f":
        return (np.arange(n) * 1.25 - 3).astype(kind)
    info = np.iinfo(kind)
    low, high = max(info.min, -(2**53 - 1)), min(info.max, 2**53 - 1)
    return np.linspace(low, high, n).astype(kind) if info.bits < 64 else np.array([low, 0, high, 1, 2, 3][:n]).astype(kind)


def types() -> None:
    with netCDF4.Dataset(HERE / "types.nc", "w") as file:
        file.title = "every type"
        file.numbers = np.array([1, 2, 3], "i2")
        file.createDimension("n", 6)
        file.createDimension("letters", 4)
        for kind in TYPES:
            variable = file.createVariable(kind, kind, ("n",))
            variable[:] = numbers(kind, 6)
            variable.note = numbers(kind, 2)
        file.createVariable("letters_of", "S1", ("letters",))[:] = np.array(list("abcd"), "S1")
        file.createVariable("words", str, ("n",))[:] = np.array(list("uvwxyz"), object)
        scalar = file.createVariable("scalar", "f8")
        scalar[:] = 500.0
        scalar.units = "hPa"
        scalar.long_name = "Grüße"


def packed() -> None:
    """One field in every packing that netCDF-4 offers."""
    data = np.arange(4 * 5 * 6, dtype="f4").reshape(4, 5, 6)
    with netCDF4.Dataset(HERE / "packed.nc", "w") as file:
        for name, size in [("t", None), ("y", 5), ("x", 6)]:
            file.createDimension(name, size)
        file.createVariable("t", "f8", ("t",))[:] = np.arange(4) * 0.5
        ways = {
            "plain": {},
            "deflate": dict(zlib=True, complevel=4, shuffle=False, chunksizes=(2, 3, 4)),
            "shuffle": dict(zlib=True, complevel=1, shuffle=True, chunksizes=(3, 5, 6)),
            "checked": dict(fletcher32=True, chunksizes=(1, 5, 6)),
            "turned": dict(endian="big"),
        }
        for name, how in ways.items():
            file.createVariable(name, "f4", ("t", "y", "x"), **how)[:] = data
        short = file.createVariable("short", "f4", ("t", "y", "x"))  # written to half of the record only
        short[:2] = data[:2]


def groups() -> None:
    with netCDF4.Dataset(HERE / "groups.nc", "w") as file:
        file.createDimension("lat", 3)
        file.createDimension("bare", 2)
        file.createVariable("lat", "f4", ("lat",))[:] = [-45, 0, 45]
        inner = file.createGroup("inner")
        inner.createDimension("lon", 4)
        inner.createVariable("lon", "f4", ("lon",))[:] = [0, 90, 180, 270]
        inner.createVariable("z", "i2", ("lat", "lon"))[:] = np.arange(12).reshape(3, 4)
        deeper = inner.createGroup("deeper")
        deeper.createVariable("w", "f8", ("bare",))[:] = [1.5, 2.5]
        # A variable with a dimension's name that is not its coordinate
        file.createDimension("n", 2)
        file.createVariable("n", "f4", ("lat", "n"))[:] = np.arange(6).reshape(3, 2)


def plain_hdf5() -> None:
    """HDF5 without netCDF's ways: no scales, and things that are no fields."""
    with h5py.File(HERE / "plain.h5", "w") as file:
        file["height"] = np.arange(12.0).reshape(3, 4)
        file["lat"] = np.array([1.0, 2.0, 3.0])
        file["pair"] = np.zeros(2, dtype=[("a", "f4"), ("b", "i4")])
        file["choice"] = np.zeros(2, dtype=h5py.enum_dtype({"no": 0, "yes": 1}, basetype="i1"))
        file["ragged"] = np.array([np.arange(2), np.arange(3)], dtype=h5py.vlen_dtype("i4"))
        file["half"] = np.zeros(3, dtype="f2")
        file["gone"] = h5py.SoftLink("/nothing")


def szip() -> None:
    """Packed by szip, which h5py's HDF5 may or may not have."""
    with h5py.File(HERE / "szip.h5", "w") as file:
        file.create_dataset("packed", data=(np.arange(48) * 0.5).reshape(6, 8).astype("f4"), chunks=(3, 8), compression="szip")


def filtered() -> None:
    """Packed by a filter that only its author has: a dataset whose chunk says so."""
    with h5py.File(HERE / "filtered.h5", "w") as file:
        space = h5py.h5s.create_simple((4,))
        plist = h5py.h5p.create(h5py.h5p.DATASET_CREATE)
        plist.set_chunk((4,))
        plist.set_filter(h5py.h5z.FILTER_SCALEOFFSET, h5py.h5z.FLAG_OPTIONAL, (2, 0))
        h5py.h5d.create(file.id, b"scaled", h5py.h5t.NATIVE_INT32, space, plist)
        file["scaled"][...] = [5, 6, 7, 8]
    raw = (HERE / "filtered.h5").read_bytes()
    # The filter's number (6, scale-offset) in the pipeline message becomes 32099, which nobody has registered.
    at = raw.index(b"\x06\x00", raw.index(b"scaleoffset") - 16)
    (HERE / "filtered.h5").write_bytes(raw[:at] + (32099).to_bytes(2, "little") + raw[at + 2 :])


def contents(path: pathlib.Path) -> dict:
    with netCDF4.Dataset(path) as file:
        file.set_auto_maskandscale(False)
        found = {}

        def walk(group, prefix):
            for name, variable in group.variables.items():
                if variable.dtype == str or variable.dtype.kind in "SU":
                    continue
                found[prefix + name] = {
                    "shape": list(variable.shape),
                    "values": [None if v != v else v for v in np.asarray(variable[...], "f8").ravel().tolist()],
                    "attributes": {
                        key: np.asarray(value).astype("f8").ravel().tolist() if not isinstance(value, str) else value
                        for key, value in variable.__dict__.items()
                    },
                }
            for name, child in group.groups.items():
                walk(child, f"{prefix}{name}/")

        walk(file, "")
        return found


types()
packed()
groups()
plain_hdf5()
szip()
filtered()
held = {name: contents(HERE / name) for name in ["types.nc", "packed.nc", "groups.nc"]}
# One file in every container
source = HERE.parent.parent / "netcdf" / "reference" / "field_1.nc"
for kind, options in [("nc4", ["-k", "nc4"]), ("nc4_deflate", ["-k", "nc4", "-d", "1", "-s"]), ("nc4_classic", ["-k", "nc7"])]:
    subprocess.run(["nccopy", *options, str(source), str(HERE / f"field_{kind}.nc")], check=True)
(HERE / "values.json").write_text(json.dumps(held) + "\n", encoding="utf-8")
