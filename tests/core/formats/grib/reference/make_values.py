"""Reference values for the GRIB reader, decoded by ecCodes and cross-checked by GDAL.

    /usr/bin/python3 make_values.py FOLDER_OF_REAL_FILES

Writes real.json (statistics, samples and a digest of every readable message of the real files, which stay outside)
and small.json (tiny files of every packing, scanning mode and product, whole, with all their values).
"""

import base64
import hashlib
import json
import os
import struct
import sys
import tempfile

import eccodes as ec
import numpy as np
from osgeo import gdal

gdal.UseExceptions()
# Columns as they stand in the file.
gdal.SetConfigOption("GRIB_ADJUST_LONGITUDE_RANGE", "NO")
HERE = os.path.dirname(os.path.abspath(__file__))
SAMPLES = 60


def messages(path):
    ec.codes_grib_multi_support_on()
    with open(path, "rb") as file:
        while True:
            try:
                handle = ec.codes_grib_new_from_file(file)
            except ec.CodesInternalError:
                continue
            if handle is None:
                return
            yield handle


def get(handle, key, default=None):
    return ec.codes_get(handle, key) if ec.codes_is_defined(handle, key) else default


def plane(handle):
    """Values south to north, west to east by the flags of the scanning mode (WMO FM 92, code table 3.4); NaN where missing."""
    missing = -1e300
    ec.codes_set(handle, "missingValue", missing)
    values = np.array(ec.codes_get_values(handle), dtype=np.float64)
    values[values == missing] = np.nan
    ni, nj = ec.codes_get(handle, "Ni"), ec.codes_get(handle, "Nj")
    consecutive = ec.codes_get(handle, "jPointsAreConsecutive")
    lines = values.reshape(ni, nj) if consecutive else values.reshape(nj, ni)
    if get(handle, "alternativeRowScanning", 0):
        lines = lines.copy()
        lines[1::2] = lines[1::2, ::-1]
    rows = lines.T if consecutive else lines
    if not ec.codes_get(handle, "jScansPositively"):
        rows = rows[::-1]
    if ec.codes_get(handle, "iScansNegatively"):
        rows = rows[:, ::-1]
    return np.ascontiguousarray(rows)


def pressure(handle):
    level = ec.codes_get(handle, "level", float)
    return level / 100 if get(handle, "typeOfLevel") == "isobaricInPa" else level


def digest(values, decimal):
    """First 16 hexadecimal digits of the SHA-256 of the little-endian doubles, NaN as 9.999e20.

    ecCodes makes 10^-D by dividing D times, which is the nearest double for D up to 1 only; beyond, single precision is compared.
    """
    plain = np.where(np.isnan(values), 9.999e20, values).astype("<f8" if decimal <= 1 else "<f4")
    return hashlib.sha256(plain.tobytes()).hexdigest()[:16]


def number(value):
    return None if not np.isfinite(value) else float(value)


def real(folder):
    names = sorted(name for name in os.listdir(folder) if ".grib" in name)
    out = {}
    for name in names:
        rows = []
        for handle in messages(os.path.join(folder, name)):
            # Fields that the reader gives out: on pressure levels, on regular grids.
            if get(handle, "gridType") not in ("regular_ll", "regular_gg"):
                continue
            if get(handle, "typeOfLevel") not in ("isobaricInhPa", "isobaricInPa"):
                continue
            values = plane(handle)
            flat = values.ravel()
            at = [int((k + 0.5) * flat.size / SAMPLES) for k in range(SAMPLES)]
            rows.append(
                {
                    "name": get(handle, "shortName"),
                    "level": pressure(handle),
                    "date": ec.codes_get(handle, "validityDate"),
                    "time": ec.codes_get(handle, "validityTime"),
                    "member": get(handle, "perturbationNumber") if get(handle, "numberOfForecastsInEnsemble") else None,
                    "shape": list(values.shape),
                    "mean": number(np.nanmean(flat)) if np.isfinite(flat).any() else None,
                    "min": number(np.nanmin(flat)) if np.isfinite(flat).any() else None,
                    "max": number(np.nanmax(flat)) if np.isfinite(flat).any() else None,
                    "missing": int(np.isnan(flat).sum()),
                    "decimal": get(handle, "decimalScaleFactor"),
                    "digest": digest(values, get(handle, "decimalScaleFactor")),
                    "samples": [None if np.isnan(flat[i]) else float(str(np.float32(flat[i]))) for i in at],
                }
            )
        out[name] = rows
    return out


# ---- tiny files

NI, NJ = 8, 5
LATS = [60, 30, 0, -30, -60]
LONS = [45 * i for i in range(NI)]
RANDOM = np.random.default_rng(20261201)


def smooth(ni=NI, nj=NJ):
    j, i = np.mgrid[0:nj, 0:ni]
    return 5500 + 40.0 * (nj / 2 - j) + 120 * np.cos(2 * np.pi * 2 * i / ni + 0.3 * j) + RANDOM.normal(0, 3, (nj, ni))


def sample(edition, ni=NI, nj=NJ, **keys):
    handle = ec.codes_grib_new_from_samples("GRIB%d" % edition)
    settings = {
        "centre": 98,
        "dataDate": 20170101,
        "dataTime": 1200,
        "Ni": ni,
        "Nj": nj,
        "latitudeOfFirstGridPointInDegrees": 60,
        "longitudeOfFirstGridPointInDegrees": 0,
        "latitudeOfLastGridPointInDegrees": -60,
        "longitudeOfLastGridPointInDegrees": 360 - 360 / ni,
        "iDirectionIncrementInDegrees": 360 / ni,
        "jDirectionIncrementInDegrees": 120 / (nj - 1),
    }
    if edition == 1:
        settings.update({"table2Version": 128, "indicatorOfParameter": 156, "indicatorOfTypeOfLevel": 100, "level": 500})
    else:
        settings.update(
            {
                "discipline": 0,
                "parameterCategory": 3,
                "parameterNumber": 5,
                "typeOfFirstFixedSurface": 100,
                "scaleFactorOfFirstFixedSurface": 0,
                "scaledValueOfFirstFixedSurface": 50000,
            }
        )
    settings.update(keys)
    for key, value in settings.items():
        ec.codes_set(handle, key, value)
    return handle


def with_values(handle, values, bits=12, **keys):
    flat = np.array(values, dtype=np.float64).ravel()
    if np.isnan(flat).any():
        ec.codes_set(handle, "bitmapPresent", 1)
        ec.codes_set(handle, "missingValue", 9.999e20)
        flat = np.where(np.isnan(flat), 9.999e20, flat)
    for key, value in keys.items():
        if key.startswith("packing"):
            ec.codes_set(handle, key, value)
    ec.codes_set(handle, "bitsPerValue", bits)
    for key, value in keys.items():
        if not key.startswith("packing"):
            ec.codes_set(handle, key, value)
    ec.codes_set_values(handle, flat)
    return ec.codes_get_message(handle)


def stored(values, scan):
    """The inverse of `plane`: values given south to north, west to east, in the order of a scanning mode."""
    rows = np.array(values)
    if scan & 128:
        rows = rows[:, ::-1]
    if not scan & 64:
        rows = rows[::-1]
    lines = rows.T.copy() if scan & 32 else rows.copy()
    if scan & 16:
        lines[1::2] = lines[1::2, ::-1]
    return lines.ravel()


def decoded(data):
    """What ecCodes reads in a file, message by message; damaged ones are not among them."""
    with tempfile.NamedTemporaryFile(suffix=".grib") as file:
        file.write(data)
        file.flush()
        out = []
        for handle in messages(file.name):
            values = plane(handle)
            out.append(
                {
                    "name": get(handle, "shortName"),
                    "level": pressure(handle),
                    "date": ec.codes_get(handle, "validityDate"),
                    "time": ec.codes_get(handle, "validityTime"),
                    "shape": list(values.shape),
                    "values": [None if np.isnan(v) else float(v) for v in values.ravel()],
                }
            )
        return out


def gdal_rows(data):
    """Values by GDAL of the first message, south to north."""
    path = "/vsimem/check.grib"
    gdal.FileFromMemBuffer(path, data)
    set_ = gdal.Open(path)
    band = set_.GetRasterBand(1)
    values = band.ReadAsArray().astype(np.float64)
    none = band.GetNoDataValue()
    if none is not None:
        values[values == none] = np.nan
    values[values > 9e19] = np.nan  # the secondary missing value
    return values[::-1]


def png_values(data):
    """Values of a PNG message (template 5.41), south to north: the samples as GDAL's PNG driver gives them, scaled here."""
    parts = dict(sections(data))
    path = "/vsimem/image.png"
    gdal.FileFromMemBuffer(path, parts[7][5:])
    samples = 0
    image = gdal.Open(path).ReadAsArray().astype(np.float64)
    for band in image if image.ndim == 3 else [image]:
        samples = samples * 256 + band
    reference, e, d = struct.unpack(">fHH", parts[5][11:19])
    signed = lambda n: -(n & 0x7FFF) if n & 0x8000 else n  # noqa: E731
    assert signed(d) == 1
    rows = (samples * 2.0 ** signed(e) + reference) * 0.1
    return rows if parts[3][71] & 64 else rows[::-1]


def gdal_written(values, order, nodata=None, bits=None, encoding="COMPLEX_PACKING"):
    """Complex packing and PNG as GDAL writes them."""
    nj, ni = values.shape
    memory = gdal.GetDriverByName("MEM").Create("", ni, nj, 1, gdal.GDT_Float64)
    step = 360 / ni
    memory.SetGeoTransform([-step / 2, step, 0, 60 + 60 / (nj - 1), 0, -120 / (nj - 1)])
    memory.SetProjection('GEOGCS["s",DATUM["s",SPHEROID["s",6371229,0]],PRIMEM["Greenwich",0],UNIT["degree",0.0174532925199433]]')
    band = memory.GetRasterBand(1)
    if nodata is not None:
        band.SetNoDataValue(nodata)
        values = np.where(np.isnan(values), nodata, values)
    band.WriteArray(values)
    options = [
        "DISCIPLINE=0",
        "IDS=CENTER=7 SUBCENTER=0 MASTER_TABLE=2 LOCAL_TABLE=1 SIGNF_REF_TIME=0 REF_TIME=2017-01-01T12:00:00Z PROD_STATUS=0 TYPE=0",
        "PDS_PDTN=0",
        "PDS_TEMPLATE_NUMBERS=3 5 2 0 0 0 0 0 1 0 0 0 0 100 0 0 0 195 80 255 255 255 255 255 255",
        "DATA_ENCODING=" + encoding,
        "DECIMAL_SCALE_FACTOR=1",
    ]
    if order is not None:
        options.append("SPATIAL_DIFFERENCING_ORDER=%d" % order)
    if bits is not None:
        options.append("NBITS=%d" % bits)
    path = "/vsimem/written.grib2"
    gdal.GetDriverByName("GRIB").CreateCopy(path, memory, options=options)
    file = gdal.VSIFOpenL(path, "rb")
    data = gdal.VSIFReadL(1, gdal.VSIStatL(path).size, file)
    gdal.VSIFCloseL(file)
    return bytes(data)


def sections(message):
    """Sections of an edition 2 message, by number."""
    at, out = 16, []
    while message[at : at + 4] != b"7777":
        length = struct.unpack(">I", message[at : at + 4])[0]
        out.append((message[at + 4], message[at : at + length]))
        at += length
    return out


def message_of(parts, discipline=0):
    body = b"".join(parts)
    return b"GRIB\0\0" + bytes([discipline, 2]) + struct.pack(">Q", 16 + len(body) + 4) + body + b"7777"


def bits_of(numbers, width):
    """Whole numbers of `width` bits each, padded to whole octets."""
    text = "".join(format(int(n), "0%db" % width) for n in numbers) if width else ""
    text += "0" * (-len(text) % 8)
    return bytes(int(text[i : i + 8], 2) for i in range(0, len(text), 8))


def hand_packed(base, groups, missing, order=0, reference=100.0, binary=0, decimal=0, firsts=(), least=0, octets=2, ref_bits=9):
    """A message in template 5.2 or 5.3, its groups given as (reference, width, packed numbers). FM 92, templates 5.2, 5.3, 7.2, 7.3."""
    count = sum(len(numbers) for _, _, numbers in groups)
    width_bits, length_bits = 4, 5
    sign = lambda n: n if n >= 0 else -n | 0x8000  # noqa: E731
    section5 = struct.pack(">IH", count, 3 if order else 2) + struct.pack(">fHH", reference, sign(binary), sign(decimal))
    section5 += bytes([ref_bits, 0, 1, missing]) + struct.pack(">ff", 9.999e20, 9.998e20)
    section5 += struct.pack(">IBBIBIB", len(groups), 0, width_bits, 1, 1, len(groups[-1][2]), length_bits)
    if order:
        section5 += bytes([order, octets])
    data = b""
    if order:
        for value in firsts:
            data += int(value).to_bytes(octets, "big")
        data += (abs(least) | (1 << (8 * octets - 1) if least < 0 else 0)).to_bytes(octets, "big")
    data += bits_of([r for r, _, _ in groups], ref_bits)
    data += bits_of([w for _, w, _ in groups], width_bits)
    data += bits_of([len(n) - 1 for _, _, n in groups], length_bits)
    text = "".join(format(n, "0%db" % w) for _, w, numbers in groups for n in numbers if w)
    text += "0" * (-len(text) % 8)
    data += bytes(int(text[i : i + 8], 2) for i in range(0, len(text), 8))
    parts = [p for n, p in sections(base) if n < 5]
    parts.append(struct.pack(">IB", len(section5) + 5, 5) + section5)
    parts.append(struct.pack(">IBB", 6, 6, 255))
    parts.append(struct.pack(">IB", len(data) + 5, 7) + data)
    return message_of(parts)


def no_grid_product():
    """Section 1 of edition 1 with no flag for a grid description: grid 255 of a catalogue."""
    message = with_values(sample(1), smooth(), 8)
    return (28).to_bytes(3, "big") + message[11:15] + b"\0" + message[16:36]


def gaussian_latitudes():
    """Rows of Gaussian grids: arcsin of the zeros of Legendre polynomials, by numpy's eigenvalues polished with Newton's method."""
    out = {}
    for n in (1, 2, 8, 32, 48, 80, 160, 320, 640):
        zeros = np.polynomial.legendre.leggauss(2 * n)[0]
        rows = np.degrees(np.arcsin(zeros))
        out[n] = [float(v) for v in (rows if n <= 48 else rows[:: n // 8])]
    return out


def small():
    files = {}
    skipped = []

    def keep(name, make):
        try:
            files[name] = make()
        except Exception as error:  # told, and looked at
            skipped.append("%s: %s" % (name, error))

    # Simple packing of every width that has a loop of its own.
    for edition in (1, 2):
        for bits in (1, 7, 8, 11, 12, 16, 17, 24, 25, 26, 31, 32):
            keep("simple%d_%d" % (edition, bits), lambda: with_values(sample(edition), smooth(), bits))
        holes = smooth()
        holes[RANDOM.random(holes.shape) < 0.4] = np.nan
        keep("bitmap%d" % edition, lambda: with_values(sample(edition), holes))
        keep("all_missing%d" % edition, lambda: with_values(sample(edition), np.full((NJ, NI), np.nan)))
        keep("constant%d" % edition, lambda: with_values(sample(edition), np.full((NJ, NI), -273.25)))
        keep("negative%d" % edition, lambda: with_values(sample(edition), smooth() - 5500, decimalPrecision=2))
        for scan in (0, 64, 128, 192, 32, 96, 160, 224) + ((16, 80, 144, 48, 112, 240) if edition == 2 else ()):
            first_lat, last_lat = (-60, 60) if scan & 64 else (60, -60)
            first_lon, last_lon = (315, 0) if scan & 128 else (0, 315)

            def scanned():
                handle = sample(
                    edition,
                    latitudeOfFirstGridPointInDegrees=first_lat,
                    latitudeOfLastGridPointInDegrees=last_lat,
                    longitudeOfFirstGridPointInDegrees=first_lon,
                    longitudeOfLastGridPointInDegrees=last_lon,
                    scanningMode=scan,
                )
                return with_values(handle, stored(np.arange(NI * NJ).reshape(NJ, NI), scan), 8)

            keep("scan%d_%d" % (edition, scan), scanned)
    for precision in (1, 2):
        keep("ieee_%d" % precision, lambda: with_values(sample(2), smooth(), 32, packingType="grid_ieee", precision=precision))
    for bits in (8, 12, 16, 24):
        keep("jpeg_%d" % bits, lambda: with_values(sample(2), smooth(), bits, packingType="grid_jpeg"))
    keep("jpeg_bitmap", lambda: with_values(sample(2), holes, 12, packingType="grid_jpeg"))
    # By GDAL: ecCodes stops at tiny PNGs.
    for bits in (1, 2, 4, 8, 16, 24, 32):
        keep("png_%d" % bits, lambda: gdal_written(smooth(), None, bits=bits, encoding="PNG"))

    # CCSDS: smooth fields, noise, mostly zero, zero in long runs, over several reference intervals.
    wide, high = 32, 17
    kinds = {
        "smooth": smooth(wide, high),
        "noise": RANDOM.random((high, wide)) * 1000,
        "sparse": np.where(RANDOM.random((high, wide)) < 0.03, RANDOM.random((high, wide)) * 50, 0),
        "steps": np.repeat(RANDOM.integers(0, 5, high), wide).reshape(high, wide).astype(float),
        "spike": np.where(np.arange(wide * high).reshape(high, wide) == 300, 9000.0, 1.0),
    }
    for kind, values in kinds.items():
        for bits, block, interval in ((3, 8, 2), (8, 16, 128), (12, 32, 128), (16, 64, 3), (20, 8, 70), (24, 32, 4), (31, 16, 8)):
            keep(
                "ccsds_%s_%d_%d" % (kind, bits, block),
                lambda: with_values(
                    sample(2, wide, high), values, bits, packingType="grid_ccsds", ccsdsBlockSize=block, ccsdsRsi=interval
                ),
            )
    # Flags: 8 preprocessing, 4 most significant octet first, 2 samples of three octets; 16 restricted codes, 32 padded intervals.
    for flags in (6, 14, 22 + 8, 46):
        bits = 4 if flags & 16 else 12
        keep(
            "ccsds_flags_%d" % flags,
            lambda: with_values(sample(2, wide, high), kinds["smooth"], bits, packingType="grid_ccsds", ccsdsFlags=flags, ccsdsBlockSize=16, ccsdsRsi=5),
        )
    keep("ccsds_bitmap", lambda: with_values(sample(2), holes, 12, packingType="grid_ccsds"))

    # Complex packing, written by GDAL: no, first and second differences, without and with missing values.
    big = smooth(24, 13)
    gaps = big.copy()
    gaps[RANDOM.random(gaps.shape) < 0.2] = np.nan
    gaps[0, 0:3] = np.nan
    for order in (0, 1, 2):
        keep("complex_%d" % order, lambda: gdal_written(big, order))
        keep("complex_gaps_%d" % order, lambda: gdal_written(gaps, order, nodata=9999.0))
        keep("complex_noise_%d" % order, lambda: gdal_written(RANDOM.normal(0, 1, (13, 24)) * 1000, order))
        keep("complex_constant_%d" % order, lambda: gdal_written(np.full((13, 24), 12.5), order))

    # By hand, octet by octet: what no writer at hand makes.
    base = with_values(sample(2), smooth())
    numbers = lambda n, w: [int(v) for v in RANDOM.integers(0, 2**w - 2, n)]  # noqa: E731
    full = 2**9 - 1
    plain_groups = [(3, 4, numbers(10, 4)), (77, 0, [0] * 9), (200, 7, numbers(15, 7)), (1, 1, [0, 1, 1, 0, 1, 0])]
    both = [(3, 4, [15, 14] + numbers(8, 4)), (full, 0, [0] * 4), (full - 1, 0, [0] * 5), (200, 7, numbers(14, 7) + [127]), (1, 2, [0, 3, 1, 2, 1, 0])]
    keep("hand_complex", lambda: hand_packed(base, plain_groups, 0, binary=-2, decimal=1))
    keep("hand_primary", lambda: hand_packed(base, both, 1))
    keep("hand_both", lambda: hand_packed(base, both, 2, binary=1))
    for order in (1, 2):
        firsts = (300, 290)[:order]
        keep("hand_difference_%d" % order, lambda: hand_packed(base, plain_groups, 0, order=order, firsts=firsts, least=-61))
        keep("hand_difference_primary_%d" % order, lambda: hand_packed(base, both, 1, order=order, firsts=firsts, least=-61))
        keep("hand_difference_both_%d" % order, lambda: hand_packed(base, both, 2, order=order, firsts=firsts, least=-61))

    # Gaussian rows, whole and a part; scale factors of levels; products.
    def gaussian(edition, n, rows, first, last, ni=NI):
        handle = ec.codes_grib_new_from_samples("regular_gg_pl_grib%d" % edition)
        for key, value in (("Ni", ni), ("Nj", rows), ("N", n), ("dataDate", 20170101), ("dataTime", 1200)):
            ec.codes_set(handle, key, value)
        for key, value in (
            ("latitudeOfFirstGridPointInDegrees", first),
            ("latitudeOfLastGridPointInDegrees", last),
            ("longitudeOfFirstGridPointInDegrees", 0),
            ("longitudeOfLastGridPointInDegrees", 360 - 360 / ni),
            ("iDirectionIncrementInDegrees", 360 / ni),
        ):
            ec.codes_set(handle, key, value)
        ec.codes_set(handle, "shortName", "t")
        ec.codes_set(handle, "level", 850)
        return with_values(handle, smooth(ni, rows) / 20)

    for edition in (1, 2):
        rows = np.round(np.degrees(np.arcsin(np.polynomial.legendre.leggauss(16)[0])), 3)[::-1]
        keep("gaussian%d" % edition, lambda: gaussian(edition, 8, 16, rows[0], rows[-1]))
        # Rows 4 to 7 from the north; and a first row between two.
        keep("gaussian_part%d" % edition, lambda: gaussian(edition, 8, 4, rows[3], rows[6]))
        keep("gaussian_off%d" % edition, lambda: gaussian(edition, 8, 4, rows[3] + 2, rows[6] + 2))
    keep("repeated_meridian1", lambda: with_values(sample(1, 9, 5, longitudeOfLastGridPointInDegrees=360, iDirectionIncrementInDegrees=45), smooth(9, 5)))
    keep("fine_circle1", lambda: with_values(sample(1, 128, 3, longitudeOfLastGridPointInDegrees=357.188, iDirectionIncrementInDegrees=2.812), np.zeros((3, 128))))

    steps = b"".join(
        with_values(sample(edition, stepUnits=unit, indicatorOfUnitOfTimeRange=unit, **{key: n}), smooth(), 8)
        for edition, key in ((2, "forecastTime"),)
        for unit, n in ((1, 0), (1, 6), (11, 2), (2, 1))
    )
    keep("steps2", lambda: steps)
    keep(
        "steps1",
        lambda: b"".join(
            with_values(sample(1, indicatorOfUnitOfTimeRange=unit, P1=n, timeRangeIndicator=indicator), smooth(), 8)
            for unit, n, indicator in ((1, 0, 0), (1, 6, 0), (11, 2, 0), (2, 1, 0), (1, 0, 1))
        ),
    )
    keep("members2", lambda: b"".join(
        with_values(sample(2, productDefinitionTemplateNumber=1, typeOfEnsembleForecast=kind, perturbationNumber=n, numberOfForecastsInEnsemble=4, forecastTime=24), smooth(), 8)
        for kind, n in ((0, 0), (3, 1), (3, 2), (2, 1))
    ))
    keep("members1", lambda: b"".join(
        with_values(sample(1, setLocalDefinition=1, localDefinitionNumber=1, type=11 if n else 10, stream=1035, perturbationNumber=n, numberOfForecastsInEnsemble=3, P1=24), smooth(), 8)
        for n in (0, 1, 2)
    ))
    for definition in (15, 26, 30, 36):
        keep("members1_%d" % definition, lambda: b"".join(
            with_values(sample(1, setLocalDefinition=1, localDefinitionNumber=definition, type=11, stream=1035, perturbationNumber=n, numberOfForecastsInEnsemble=51, P1=24), smooth(), 8)
            for n in (7, 0)
        ))
    # A deterministic forecast beside an ensemble with its own control.
    keep("members_beside_single", lambda: b"".join(
        with_values(sample(1, setLocalDefinition=1, localDefinitionNumber=1, type=kind, stream=1035, perturbationNumber=n, numberOfForecastsInEnsemble=total, P1=24), smooth(), 8)
        for kind, n, total in ((9, 0, 0), (10, 0, 3), (11, 1, 3))
    ))
    keep("statistics1", lambda: b"".join(
        with_values(sample(1, setLocalDefinition=1, localDefinitionNumber=1, type=kind, stream=1035, P1=24), smooth(), 8)
        for kind in (17, 18)
    ))
    keep("statistics2", lambda: b"".join(
        with_values(sample(2, productDefinitionTemplateNumber=2, derivedForecast=kind, numberOfForecastsInEnsemble=51, forecastTime=24), smooth(), 8)
        for kind in (0, 4)
    ))
    keep("reforecast2", lambda: b"".join(
        with_values(sample(2, productDefinitionTemplateNumber=60, typeOfEnsembleForecast=3, perturbationNumber=n, numberOfForecastsInEnsemble=11, forecastTime=48), smooth(), 8)
        for n in (1, 2)
    ))
    keep("levels1", lambda: with_values(sample(1, indicatorOfTypeOfLevel=210, level=50), smooth(), 8) + with_values(sample(1, level=70), smooth(), 8))
    keep("layers2", lambda: b"".join(
        with_values(sample(2, typeOfSecondFixedSurface=kind, scaleFactorOfSecondFixedSurface=0, scaledValueOfSecondFixedSurface=value), smooth(), 8)
        for kind, value in ((100, 40000), (1, 0))
    ))
    keep("analyses_and_starts", lambda: b"".join(
        with_values(sample(2, dataDate=day, dataTime=hour, forecastTime=step), smooth(), 8)
        for day, hour, step in ((20170101, 0, 0), (20170101, 1200, 0), (20170102, 0, 12), (20170102, 0, 24), (20170102, 1200, 12))
    ))
    levels = ((1, 7), (0, 50000), (-2, 850), (2, 3000), (254, 1))
    keep("levels2", lambda: b"".join(
        with_values(sample(2, scaleFactorOfFirstFixedSurface=scale if scale != 254 else 0, scaledValueOfFirstFixedSurface=value), smooth(), 8)
        for scale, value in levels
    ))
    wind = lambda number, level: sample(2, parameterCategory=2, parameterNumber=number, scaledValueOfFirstFixedSurface=level)  # noqa: E731
    u = with_values(wind(2, 25000), holes)
    v = with_values(wind(3, 25000), smooth())
    parts_u, parts_v = sections(u), sections(v)
    counted = lambda part, n: part[:5] + struct.pack(">I", n) + part[9:]  # noqa: E731
    # v again, its values those of u's points, by u's bitmap (section 6 of indicator 254).
    v_holes = with_values(wind(3, 25000), np.where(np.isnan(holes), np.nan, smooth()))
    parts_vh = sections(v_holes)
    keep("shared_message", lambda: message_of(
        [p for _, p in parts_u]
        + [p if n != 6 else struct.pack(">IBB", 6, 6, 254) for n, p in parts_vh if n >= 4]
        + [p for n, p in sections(with_values(wind(2, 50000), smooth())) if n >= 3]
    ))
    # Padding, junk and a damaged message between good ones; the same message twice.
    keep("padded", lambda: b"\0" * 100 + u + b"\0" * 37 + b"junk GRI GRIBGRIB" + v + b"\0" * 5)
    keep("twice", lambda: with_values(sample(2), smooth()) + with_values(sample(2), smooth()))
    keep("gap", lambda: b"".join(
        with_values(sample(2, dataTime=hour, scaledValueOfFirstFixedSurface=level), smooth(), 8)
        for hour, level in ((0, 85000), (0, 50000), (1200, 50000))
    ))
    keep("parameters2", lambda: b"".join(
        with_values(sample(2, parameterCategory=c, parameterNumber=n), smooth(), 8)
        for c, n in ((3, 4), (3, 5), (2, 2), (2, 3), (0, 0), (2, 12), (2, 13), (19, 7), (3, 200))
    ))
    keep("parameters1", lambda: b"".join(
        with_values(sample(1, centre=centre, table2Version=table, indicatorOfParameter=n), smooth(), 8)
        for centre, table, n in (
            (98, 128, 129), (98, 128, 130), (98, 128, 131), (98, 128, 132), (98, 128, 138), (98, 128, 155), (98, 128, 156),
            (7, 2, 6), (7, 2, 7), (7, 2, 11), (7, 2, 33), (7, 2, 34), (7, 2, 43), (7, 2, 44), (34, 200, 7), (7, 2, 150),
        )
    ))
    keep("left_out2", lambda: b"".join(
        [
            with_values(sample(2, typeOfFirstFixedSurface=103, scaledValueOfFirstFixedSurface=10), smooth(), 8),
            with_values(sample(2, typeOfFirstFixedSurface=1), smooth(), 8),
            with_values(sample(2, typeOfFirstFixedSurface=105, scaledValueOfFirstFixedSurface=60), smooth(), 8),
            with_values(sample(2, productDefinitionTemplateNumber=8), smooth(), 8),
            with_values(sample(2, productDefinitionTemplateNumber=11), smooth(), 8),
            with_values(sample(2, productDefinitionTemplateNumber=5), smooth(), 8),
        ]
    ))
    keep("left_out1", lambda: b"".join(
        with_values(sample(1, timeRangeIndicator=indicator, P1=0, P2=6, indicatorOfTypeOfLevel=kind, level=level), smooth(), 8)
        for indicator, kind, level in ((4, 100, 500), (3, 100, 500), (123, 100, 500), (0, 105, 2), (0, 109, 12))
    ))
    grids = ("rotated_ll_pl_grib2", "reduced_gg_pl_32_grib2", "sh_pl_grib2", "polar_stereographic_pl_grib2", "reduced_gg_pl_32_grib1", "rotated_gg_pl_grib1")
    refused = {}
    for name in grids:
        try:
            handle = ec.codes_grib_new_from_samples(name)
            ec.codes_set(handle, "bitsPerValue", 0) if not name.startswith("sh") else None
            message = ec.codes_get_message(handle)
            # Without most of its numbers: what is refused by its grid is not read so far.
            if name.startswith("sh"):
                short = [p if n != 7 else struct.pack(">IB", 25, 7) + p[5:25] for n, p in sections(message)]
                message = message_of(short)
            refused["grid_" + name] = message
        except Exception as error:
            skipped.append("%s: %s" % (name, error))
    unread = {}
    try:
        handle = sample(1, 32, 17)
        with_values(handle, kinds["smooth"], 12)
        ec.codes_set(handle, "packingType", "grid_second_order")
        assert ec.codes_get(handle, "packingType") == "grid_second_order"
        unread["second_order"] = ec.codes_get_message(handle)
    except Exception as error:
        skipped.append("second order: %s" % error)
    unread["template_5_61"] = base.replace(struct.pack(">IBIH", 21, 5, NI * NJ, 0), struct.pack(">IBIH", 21, 5, NI * NJ, 61))
    unread["no_grid"] = b"".join([b"GRIB", (8 + 28 + 12 + 4).to_bytes(3, "big"), b"\1", no_grid_product(), bytes([0, 0, 12]) + bytes(9), b"7777"])

    out = []
    for name, data in files.items():
        if name.startswith("png"):
            # The image by GDAL's PNG driver: neither ecCodes nor GDAL's GRIB driver reads those of 1, 2 and 4 bits.
            values = png_values(data)
            rows = {"name": "gh", "level": 500, "date": 20170101, "time": 1200, "shape": list(values.shape)}
            found = [{**rows, "values": values.ravel().tolist()}]
            out.append({"name": name, "file": base64.b64encode(data).decode(), "messages": found})
            continue
        found = decoded(data)
        if name.startswith(("complex", "hand")):
            own = np.array([np.nan if v is None else v for v in found[0]["values"]]).reshape(found[0]["shape"])
            other = gdal_rows(data)
            # GDAL keeps float32.
            ok = np.array_equal(np.isnan(own), np.isnan(other)) and np.allclose(own, other, rtol=2**-23, atol=1e-3, equal_nan=True)
            if not ok:
                print("GDAL and ecCodes differ:", name, np.nanmax(np.abs(own - other)), np.isnan(own).sum(), np.isnan(other).sum())
        out.append({"name": name, "file": base64.b64encode(data).decode(), "messages": found})
    for name, data in {**refused, **unread}.items():
        out.append({"name": name, "file": base64.b64encode(data).decode(), "messages": None})
    for line in skipped:
        print("not made:", line)
    print({n: len(d) for n, d in {**files, **refused, **unread}.items() if len(d) > 4096})
    return out


def write(name, value):
    with open(os.path.join(HERE, name), "w") as file:
        if isinstance(value, dict):
            lines = ["%s: [\n%s\n]" % (json.dumps(k), ",\n".join(json.dumps(r, separators=(",", ":")) for r in v)) for k, v in value.items()]
            file.write("{\n" + ",\n".join(lines) + "\n}\n")
        else:
            file.write("[\n" + ",\n".join(json.dumps(r, separators=(",", ":")) for r in value) + "\n]\n")


if __name__ == "__main__":
    write("small.json", small())
    with open(os.path.join(HERE, "gaussian.json"), "w") as file:
        json.dump(gaussian_latitudes(), file, separators=(",", ":"))
        file.write("\n")
    if len(sys.argv) > 1:
        write("real.json", real(sys.argv[1]))
