"""Small files, classic and CDF-5, packed and masked in every way that the CF conventions and the NetCDF Users Guide know, and their values as
netCDF4-python unpacks and masks them.

    python3 tests/core/formats/cf/reference/make_packed.py

Needs numpy and netCDF4. Each file holds one variable for each way, all on the same two rows and four columns.
"""

import json
import pathlib

import netCDF4
import numpy as np

HERE = pathlib.Path(__file__).parent
CLASSIC = {
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
    "three": ("i2", [-1, -2, -3, 3, 4, -32767, 6, 7], {"_FillValue": np.int16(-1), "missing_value": np.array([-2, -3], "i2"), "scale_factor": 0.25}),
    "beside": ("i2", [-32767, -9, 2, 3, 4, 5, 6, 7], {"missing_value": np.int16(-9), "add_offset": 10.0}),
    "wide_short": ("i2", [-999, 1, 2, 3, 4, 5, 6, 7], {"missing_value": -999.0}),
    "real": ("f4", [1e20, -1, 2, 3, 4, 5, 6, np.nan], {"_FillValue": np.float32(1e20), "scale_factor": 0.5, "add_offset": 100.0}),
    "floats": ("f4", [-1, 0.25, 0.5, 1, 2, 3, 1e20, 7], {"valid_range": np.array([0.25, 3], "f4")}),
    "double": ("f8", [netCDF4.default_fillvals["f8"], 1, 2, 3, -1, np.inf, 6, 7], {"valid_max": 6.0}),
    "unsigned_short": ("i2", [-1, -2, 2, 3, -32768, 32767, 6, 7], {"_Unsigned": "true", "missing_value": np.int16(-1), "scale_factor": 0.5}),
    "unsigned_int": ("i4", [-1, -2, 2, 3, -2147483648, 2147483647, 6, 7], {"_Unsigned": "true", "_FillValue": np.int32(-1)}),
    "unsigned_range": ("i1", [-128, -1, 0, 1, 127, -56, -55, 7], {"_Unsigned": "true", "valid_range": np.array([1, -56], "i1")}),
}
WIDE = {
    "ubyte_filled": ("u1", [255, 0, 128, 1, 127, 5, 6, 7], {"_FillValue": np.uint8(255), "scale_factor": 0.5}),
    "ushort": ("u2", [netCDF4.default_fillvals["u2"], 0, 32768, 1, 2, 5, 6, 7], {"add_offset": 100.0}),
    "uint": ("u4", [netCDF4.default_fillvals["u4"], 0, 2**31, 1, 2, 5, 6, 7], {}),
    "long": ("i8", [netCDF4.default_fillvals["i8"], -1, 2**40, 1, 2, 5, 6, 7], {}),
    "ulong": ("u8", [netCDF4.default_fillvals["u8"], 0, 2**52, 1, 2, 5, 6, 7], {"missing_value": np.uint64(7)}),
}

held = {}
for path, kind_of_file, ways in [("packed.nc", "NETCDF3_CLASSIC", CLASSIC), ("packed_5.nc", "NETCDF3_64BIT_DATA", WIDE)]:
    with netCDF4.Dataset(HERE / path, "w", format=kind_of_file) as file:
        file.createDimension("lat", 2)
        file.createDimension("lon", 4)
        for name, values, units in [("lat", [10, 0], "degrees_north"), ("lon", [0, 90, 180, 270], "degrees_east")]:
            axis = file.createVariable(name, "f4", (name,))
            axis.units = units
            axis[:] = values
        for name, (kind, stored, attributes) in ways.items():
            variable = file.createVariable(name, kind, ("lat", "lon"), fill_value=attributes.get("_FillValue"))
            variable.set_auto_maskandscale(False)
            for key, value in attributes.items():
                if key != "_FillValue":
                    setattr(variable, key, value)
            variable[:] = np.array(stored, kind).reshape(2, 4)
    with netCDF4.Dataset(HERE / path) as file:
        for name in ways:
            values = np.ma.filled(np.ma.asarray(file.variables[name][:]).astype("f8"), np.nan)
            # South first, as the project keeps rows.
            held[f"{path}/{name}"] = [None if value != value else float(value) for value in values[::-1].ravel()]
(HERE / "packed.json").write_text(json.dumps(held, indent=1) + "\n", encoding="utf-8")
