"""Reference transforms by numpy.fft and scipy.fft: writes fourier.json beside this file. Run: python3 make_reference.py"""
import json
import pathlib

import numpy as np
import scipy.fft

LENGTHS = [8, 9, 11, 64, 72, 97, 120, 128, 144, 180, 240, 250, 256, 288, 320, 331, 360, 480, 720, 1440, 2879, 2880]


def row(n):
    """A row that any language can make: no random generator, full spectrum, heights of the atmosphere's size."""
    j = np.arange(n, dtype=float)
    return 5500 + 120 * np.cos(2 * (2 * np.pi * j / n) - 1) + 50 * ((j * 7919) % 101) / 101 - 25 * ((j * j) % 37) / 37


out = {"numpy": np.__version__, "scipy": scipy.__version__, "cases": []}
for n in LENGTHS:
    x = row(n)
    c = np.fft.rfft(x)
    d = scipy.fft.rfft(x)
    assert np.abs(c - d).max() <= 1e-12 * np.abs(x).sum()
    keep = sorted({k for k in [0, 1, 2, 3, 5, 8, n // 3, n // 2 - 1, n // 2] if k <= n // 2})
    z = x + 1j * row(n)[::-1] * 0.5
    f = scipy.fft.fft(z)
    out["cases"].append({
        "n": n, "sum_abs": float(np.abs(x).sum()), "k": keep,
        "re": [float(c[k].real) for k in keep], "im": [float(c[k].imag) for k in keep],
        "complex_re": [float(f[k].real) for k in keep], "complex_im": [float(f[k].imag) for k in keep],
    })
pathlib.Path(__file__).with_name("fourier.json").write_text(json.dumps(out, indent=1) + "\n")
