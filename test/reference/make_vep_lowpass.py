"""A real visual evoked potential before and after a 20 Hz low-pass, with its peaks measured.

Data: UCI Machine Learning Repository, EEG Database (Begleiter, 1997), mean of 20 trials of one subject, channel PO7.
"""

import csv
import os
import sys

import numpy as np

import scipy_design
from reference_file import arguments, write

HERE = os.path.dirname(os.path.abspath(__file__))
FOLDER = os.environ.get("SIDELOBE_DATA") or os.path.join(HERE, "..", "..", "..", "shared", "data")
FILE = "uci-vep-dev/co2c0000345_S1obj_average.csv"
RATE = 256


def peak(y, times_ms, from_ms, to_ms, sign):
    """Largest sample in the window that exceeds all others within 10 ms, refined by a parabola through three."""
    best = None
    for i in range(1, len(y) - 1):
        if not from_ms <= times_ms[i] <= to_ms:
            continue
        near = [sign * y[j] for j in range(len(y)) if j != i and abs(times_ms[j] - times_ms[i]) <= 10 + 1e-9]
        if sign * y[i] > max(near) and (best is None or sign * y[i] > sign * y[best]):
            best = i
    before, at, after = y[best - 1], y[best], y[best + 1]
    shift = 0.5 * (before - after) / (before - 2 * at + after)
    return {"latencyMs": times_ms[best] + shift * 1000 / RATE, "amplitudeUv": at - 0.25 * (before - after) * shift}


def main():
    options = arguments(__doc__, 0)
    path = os.path.join(FOLDER, FILE)
    if not os.path.exists(path):
        print(f"{path} is not here: vep-lowpass.json is left as it is", file=sys.stderr)
        return
    with open(path, newline="", encoding="utf-8") as file:
        rows = list(csv.reader(file))
    x = np.array([float(row[rows[0].index("PO7")]) for row in rows[1:]])
    times = np.arange(len(x)) * 1000 / RATE
    spec = {"design": "butterworth", "pass": "low", "order": 2, "cutoffsHz": [20], "meaning": "half-amplitude",
            "direction": "both"}
    y = scipy_design.apply_epochs([spec], RATE, x)
    peaks = []
    for name, sign, start, end in (("P1", 1, 50, 120), ("N1", -1, 140, 220)):
        peaks.append({"name": name, "polarity": "positive" if sign > 0 else "negative", "fromMs": start, "toMs": end,
                      "before": peak(x, times, start, end, sign), "after": peak(y, times, start, end, sign)})
    case = {"file": FILE, "channel": "PO7", "samplingRateHz": RATE, "extent": "epochs", "baseline": "none", "stages": [spec],
            "designCutoffHz": scipy_design.design_cutoffs(spec, RATE)[0], "samples": len(x), "x": x, "y": y, "peaks": peaks}
    note = ("The channel filtered by sosfiltfilt (Butterworth low-pass of order 2 per pass, half amplitude at 20 Hz after both "
            "passes); no baseline correction. Peaks: largest sample over its neighbours within 10 ms, parabola through three.")
    write(options.out or os.path.join(HERE, "vep-lowpass.json"), options.seed, note, [case])


if __name__ == "__main__":
    main()
