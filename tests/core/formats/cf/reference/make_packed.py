"""Small files packed and masked in every way that the CF conventions and the NetCDF Users Guide know, and their values as
netCDF4-python unpacks and masks them.

    python3 tests/core/formats/cf/reference/make_packed.py

Needs numpy and netCDF4. The file holds one variable for each way, all on the same two rows and four columns.
"""

import json
import pathlib

import netCDF4
import numpy as np

HERE = pathlib.Path(__file__).parent
WAYS = {
    # name: (type, stored numbers, attributes)
    "plain": ("f4", [0, 1.5, -2, 3, 4, 5, 6, 1e20], {}),
    "scaled": ("i2", [-32767, -100, 0, 100, 1, 2, 3, 32767], {"scale_factor": 0.25, "add_offset": 5000.0}),
    "filled": ("i2", [-999, 1, 2, -999, 4, 5, 6, 7], {"_FillValue": np.int16(-999), "scale_factor": 0.5}),
    "missing": ("f4", [1e20, 1, 2, 3, -9, 5, 6, 7], {"missing_value": np.array([1e20, -9], "f4")}),
    "ranged": ("i2", [-5, 0, 1, 2, 3, 4, 5, 6], {"valid_range": np.array([0, 4], "i2"), "scale_factor": 2.0}),
    "least": ("f8", [-5, 0, 1, 2, 3, 4, 5, 6], {"valid_min": 1.0}),
    "most": ("i4", [-5, 0, 1, 2, 3, 4, 5, 6], {"valid_max": np.int32(4)}),
    "bytes": ("i1", [-128, -1, 0, 1, 127, 5, 6, 7], {"_Unsigned": "true", "scale_factor": 1.0}),
    "unsigned": ("i1", [-128, -1, 0, 1, 127, 5, 6, 7], {"_Unsigned": "true", "_FillValue": np.int8(-1)}),
    "default": ("i4", [netCDF4.default_fillvals["i4"], 1, 2, 3, 4, 5, 6, 7], {}),
    "nan": ("f4", [np.nan, 1, 2, 3, 4, 5, 6, 7], {"_FillValue": np.float32(np.nan)}),
}

path = HERE / "packed.nc"
held = {}
with netCDF4.Dataset(path, "w", format="NETCDF3_CLASSIC") as file:
    file.createDimension("lat", 2)
    file.createDimension("lon", 4)
    for name, values, units in [("lat", [10, 0], "degrees_north"), ("lon", [0, 90, 180, 270], "degrees_east")]:
        axis = file.createVariable(name, "f4", (name,))
        axis.units = units
        axis[:] = values
    for name, (kind, stored, attributes) in WAYS.items():
        variable = file.createVariable(name, kind, ("lat", "lon"), fill_value=attributes.get("_FillValue"))
        variable.set_auto_maskandscale(False)
        for key, value in attributes.items():
            if key != "_FillValue":
                setattr(variable, key, value)
        variable[:] = np.array(stored, kind).reshape(2, 4)
with netCDF4.Dataset(path) as file:
    for name in WAYS:
        values = np.ma.filled(np.ma.asarray(file.variables[name][:]).astype("f8"), np.nan)
        held[name] = [None if value != value else float(value) for value in values[::-1].ravel()]  # south first
(HERE / "packed.json").write_text(json.dumps(held, indent=1) + "\n", encoding="utf-8")
