"""How every reference file is written: what made it, then one case a line."""

import argparse
import json
import platform
import sys

import numpy
import scipy


def arguments(description, seed):
    """Command line that all makers share."""
    parser = argparse.ArgumentParser(description=description)
    parser.add_argument("--out", help="file to write (default: beside this script)")
    parser.add_argument("--seed", type=int, default=seed, help="seed of the drawn specifications and signals")
    parser.add_argument("--every", type=int, default=1, help="keep every n-th case only")
    parser.add_argument("--full", action="store_true", help="write every sample, not checkpoints")
    return parser.parse_args()


def plain(value):
    """NumPy values as plain JSON values; extended precision is rounded to double once, here."""
    if isinstance(value, dict):
        return {key: plain(item) for key, item in value.items()}
    if isinstance(value, (list, tuple)):
        return [plain(item) for item in value]
    if isinstance(value, numpy.ndarray):
        return [plain(item) for item in value]
    if isinstance(value, (numpy.floating, float)):
        value = float(value)
        if not numpy.isfinite(value):
            raise ValueError("a reference value is not finite")
        return int(value) if value == int(value) and abs(value) < 1e15 else value
    if isinstance(value, numpy.integer):
        return int(value)
    return value


def write(path, seed, note, cases):
    """Write `cases` (a list of dicts) with the versions that made them."""
    head = {
        "note": note,
        "seed": seed,
        "versions": {
            "python": platform.python_version(),
            "numpy": numpy.__version__,
            "scipy": scipy.__version__,
            "extendedPrecisionBits": int(numpy.finfo(numpy.longdouble).nmant) + 1,
        },
    }
    lines = [json.dumps(plain(case), separators=(",", ":"), allow_nan=False) for case in cases]
    with open(path, "w", encoding="utf-8") as file:
        file.write(json.dumps(head, separators=(", ", ": "))[:-1])
        file.write(', "cases": [\n' + ",\n".join(lines) + "\n]}\n")
    print(f"{path}: {len(cases)} cases, SciPy {scipy.__version__}", file=sys.stderr)


def checkpoints(count, full, wanted=24):
    """Indices that are kept of `count` samples: both ends and an even grid between them; all of them if `full`."""
    if full or count <= wanted + 16:
        return list(range(count))
    inner = [round(i * (count - 1) / (wanted + 1)) for i in range(1, wanted + 1)]
    return sorted(set(range(8)) | set(inner) | set(range(count - 8, count)))
