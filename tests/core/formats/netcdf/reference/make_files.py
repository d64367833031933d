"""Small netCDF files of every classic kind, and their contents as scipy reads them.

    python3 tests/core/formats/netcdf/reference/make_files.py

Needs numpy, scipy and netCDF's own ncgen and nccopy. The files are written by ncgen (the netCDF C library) from CDL text or by
scipy.io.netcdf_file, and read back by scipy.io.netcdf_file into values.json. scipy does not read CDF-5: such a file is made from a
classic one by nccopy, which keeps its contents, or its values are those of the CDL text below.
"""

import json
import pathlib
import subprocess

import numpy as np
from scipy.io import netcdf_file

HERE = pathlib.Path(__file__).parent

TYPES = """netcdf types { dimensions: n = 3, m = 5 ;
variables:
  byte b(n) ; b:note = -1b, 2b, 3b ;
  char c(m) ;
  short s(n) ; s:note = -32768s, 32767s ; s:_FillValue = 7s ;
  int i(n) ; i:note = -2147483648 ;
  float f(n) ; f:note = 1.5f, -0.25f ;
  double d(n) ; d:note = 0.1 ;
  short odd(m, n) ; odd:text = "Grüße, 500 hPa" ;
  double scalar ; scalar:units = "hPa" ;
  float cube(n, m, n) ;
:title = "every type" ; :empty = "" ; :number = 42 ;
data: b = -128, 0, 127 ; c = "abcde" ; s = -32768, 0, 32767 ; i = -2147483648, 0, 2147483647 ;
  f = 1.5, -3.25, 1e30 ; d = 0.1, -1e300, 5 ; odd = 1,2,3,4,5,6,7,8,9,10,11,12,13,14,15 ; scalar = 500 ;
  cube = CUBE ;
}""".replace("CUBE", ", ".join(str(k * 0.5) for k in range(45)))

RECORDS = """netcdf records { dimensions: t = UNLIMITED, n = 3 ;
variables:
  int t(t) ; byte b(t, n) ; short s(t, n) ; double d(t) ; float fixed(n) ; short one(t) ;
data: t = 10, 20, 30, 40 ; b = 1,2,3,4,5,6,7,8,9,10,11,-12 ; s = 101,102,103,104,105,106,107,108,109,110,111,-112 ;
  d = 0.5, 1.5, 2.5, 3.5 ; fixed = 7, 8, 9 ; one = 1, -2, 3, -4 ;
}"""
ONE_SHORT = "netcdf one_short { dimensions: t = UNLIMITED, n = 3 ; variables: float x(n) ; short s(t, n) ; data: x = 1, 2, 3 ; s = 1,2,3,4,5,6,7,8,9,10,11,12,13,14,-15 ; }"
ONE_BYTE = "netcdf one_byte { dimensions: t = UNLIMITED, n = 5 ; variables: byte b(t, n) ; data: b = 1,2,3,4,5,6,7,8,9,10,11,12,13,14,-15 ; }"
NO_RECORDS = "netcdf no_records { dimensions: t = UNLIMITED, n = 3 ; variables: double t(t) ; float x(n) ; short s(t, n) ; data: x = 1, 2, 3 ; }"
WIDE_TYPES = """netcdf wide_types { dimensions: n = 3 ;
variables: ubyte ub(n) ; ushort us(n) ; uint ui(n) ; int64 l(n) ; uint64 ul(n) ; ub:note = 255ub ; l:note = -9007199254740991LL ;
data: ub = 0, 128, 255 ; us = 0, 32768, 65535 ; ui = 0, 2147483648, 4294967295 ;
  l = -9007199254740991LL, 0, 9007199254740991LL ; ul = 0, 1, 9007199254740991ULL ; }"""
# A field as the CF conventions describe it, with a record dimension.
FIELD = """netcdf field { dimensions: time = UNLIMITED, lev = 2, lat = 3, lon = 4 ;
variables:
  double time(time) ; time:units = "hours since 2001-02-09 00:00:00" ; time:calendar = "noleap" ;
  float lev(lev) ; lev:units = "hPa" ; float lat(lat) ; lat:units = "degrees_north" ; float lon(lon) ; lon:units = "degrees_east" ;
  short z(time, lev, lat, lon) ; z:standard_name = "geopotential" ; z:units = "m2 s-2" ; z:scale_factor = 0.5 ; z:add_offset = 100. ;
  float u(time, lat, lon) ; u:standard_name = "eastward_wind" ; u:units = "m s-1" ; u:level = 250. ;
data: time = 0, 6, 12 ; lev = 500, 250 ; lat = 45, 0, -45 ; lon = -90, 0, 90, 180 ; z = ZZ ; u = UU ;
}""".replace("ZZ", ", ".join(str(k) for k in range(72))).replace("UU", ", ".join(f"{k}.25" for k in range(36)))
WIDE_VALUES = {
    "ub": ([3], [0, 128, 255]),
    "us": ([3], [0, 32768, 65535]),
    "ui": ([3], [0, 2147483648, 4294967295]),
    "l": ([3], [-9007199254740991, 0, 9007199254740991]),
    "ul": ([3], [0, 1, 9007199254740991]),
}


def ncgen(name: str, cdl: str, kind: str) -> pathlib.Path:
    path = HERE / f"{name}.nc"
    source = HERE / f"{name}.cdl"
    source.write_text(cdl, encoding="utf-8")
    subprocess.run(["ncgen", "-k", kind, "-o", str(path), str(source)], check=True)
    source.unlink()
    return path


def plain(value):
    if isinstance(value, bytes):
        return value.decode("utf-8")
    array = np.asarray(value)
    return array.item() if array.size == 1 else array.ravel().tolist()


def contents(path: pathlib.Path) -> dict:
    with netcdf_file(path, "r", mmap=False) as file:
        variables = {}
        for name, v in file.variables.items():
            data = np.asarray(v.data)
            values = b"".join(data.ravel().tolist()).decode() if v.typecode() == "c" else data.astype("f8").ravel().tolist()
            variables[name] = {
                "dims": list(v.dimensions),
                "shape": list(data.shape),
                "values": values,
                "attributes": {key: plain(a) for key, a in v._attributes.items()},
            }
        return {"variables": variables, "attributes": {key: plain(a) for key, a in file._attributes.items()}}


def scipy_file(path: pathlib.Path) -> None:
    """Written by scipy itself: an independent writer."""
    with netcdf_file(path, "w", version=2) as file:
        file.title = "written by scipy"
        file.createDimension("t", None)
        file.createDimension("n", 4)
        t = file.createVariable("t", "f8", ("t",))
        x = file.createVariable("x", "i2", ("t", "n"))
        y = file.createVariable("y", "f4", ("n",))
        x.scale_factor = 0.5
        y[:] = np.arange(4) / 4
        for k in range(3):
            t[k] = k * 0.25
            x[k] = np.arange(4) + 10 * k


held = {}
for name, cdl, kind in [
    ("types_1", TYPES, "nc3"),
    ("types_2", TYPES, "nc6"),
    ("records_1", RECORDS, "nc3"),
    ("records_2", RECORDS, "nc6"),
    ("one_short_1", ONE_SHORT, "nc3"),
    ("one_byte_1", ONE_BYTE, "nc3"),
    ("no_records_1", NO_RECORDS, "nc3"),
    ("field_1", FIELD, "nc3"),
    ("field_2", FIELD, "nc6"),
]:
    held[f"{name}.nc"] = contents(ncgen(name, cdl, kind))
for name in ["types", "records", "one_short", "one_byte", "field"]:
    path = HERE / f"{name}_5.nc"
    subprocess.run(["nccopy", "-k", "cdf5", str(HERE / f"{name}_1.nc"), str(path)], check=True)
    held[path.name] = held[f"{name}_1.nc"]
scipy_file(HERE / "scipy_2.nc")
held["scipy_2.nc"] = contents(HERE / "scipy_2.nc")
# ncgen writes int64 as int when it writes CDF-5 itself: netCDF-4 first, then nccopy.
wide = ncgen("wide_types_4", WIDE_TYPES, "nc4")
subprocess.run(["nccopy", "-k", "cdf5", str(wide), str(HERE / "wide_types_5.nc")], check=True)
wide.unlink()
held["wide_types_5.nc"] = {
    "variables": {
        name: {"dims": ["n"], "shape": shape, "values": values, "attributes": {}} for name, (shape, values) in WIDE_VALUES.items()
    },
    "attributes": {},
}
held["wide_types_5.nc"]["variables"]["ub"]["attributes"] = {"note": 255}
held["wide_types_5.nc"]["variables"]["l"]["attributes"] = {"note": -9007199254740991}
# While a file is being streamed its record count is all bits set (specification, numrecs); the size tells how many there are.
for name, width in [("records_1.nc", 4), ("records_5.nc", 8)]:
    raw = bytearray((HERE / name).read_bytes())
    raw[4 : 4 + width] = b"\xff" * width
    (HERE / f"streaming_{name}").write_bytes(raw)
    held[f"streaming_{name}"] = held[name]

(HERE / "values.json").write_text(json.dumps(held, indent=1, ensure_ascii=False, allow_nan=False) + "\n", encoding="utf-8")
