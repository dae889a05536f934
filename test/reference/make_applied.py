"""Epochs of noise on an offset and a drift, filtered by SciPy."""

import os

import numpy as np

import extended_precision
import scipy_design
from random_signal import random_signal
from reference_file import arguments, checkpoints, write
from specification_grid import grid, lowest_cutoff_ratio

CHAINS = [
    (500, [{"design": "amplifier", "pass": "high", "order": 1, "cutoffHz": 0.5},
           {"design": "butterworth", "pass": "low", "order": 4, "cutoffsHz": [30], "meaning": "half-amplitude", "direction": "both"}]),
    (250, [{"design": "butterworth", "pass": "high", "order": 2, "cutoffsHz": [0.5], "meaning": "half-power", "direction": "both"},
           {"design": "butterworth", "pass": "low", "order": 4, "cutoffsHz": [30], "meaning": "half-power", "direction": "both"}]),
    (1000, [{"design": "amplifier", "pass": "high", "order": 1, "cutoffHz": 1},
            {"design": "amplifier", "pass": "low", "order": 3, "cutoffHz": 100},
            {"design": "notch", "frequencyHz": 50, "bandwidthHz": 2, "harmonics": 2, "direction": "both"},
            {"design": "windowed-sinc", "pass": "low", "cutoffsHz": [40], "meaning": "half-amplitude", "transitionHz": 10,
             "window": {"name": "hamming"}, "delay": "compensated"}]),
    (256, [{"design": "windowed-sinc", "pass": "high", "cutoffsHz": [1], "meaning": "half-amplitude", "transitionHz": 1.5,
            "window": {"name": "hann"}, "delay": "causal"},
           {"design": "butterworth", "pass": "low", "order": 3, "cutoffsHz": [20], "meaning": "design", "direction": "forward"}]),
    (512, [{"design": "moving-average", "durationMs": 31.25, "delay": "compensated"},
           {"design": "butterworth", "pass": "band", "order": 2, "cutoffsHz": [1, 20], "meaning": "half-amplitude", "direction": "both"}]),
]


def main():
    options = arguments(__doc__, 20250)
    work = [(rate, [spec]) for rate, spec in grid(options.seed)
            if spec.get("delay") != "minimum-phase" and lowest_cutoff_ratio(rate, spec) >= 2e-4] + CHAINS
    cases = []
    for index, (rate, stages) in enumerate(work):
        if index % options.every != options.seed % options.every:
            continue
        ratio = min(lowest_cutoff_ratio(rate, spec) for spec in stages)
        needed = max([len(scipy_design.taps_of(s, rate)[0]) for s in stages if scipy_design.sections_of(s, rate) is None] + [0])
        count = max(600, needed + 300)
        seed = options.seed * 1000 + index
        recipe = {"seed": seed, "count": count, "amplitude": 40, "offset": (-1) ** index * 500 * (index % 4),
                  "drift": 0.02 * (index % 3 - 1)}
        x = random_signal(**recipe)
        y = scipy_design.apply_epochs(stages, rate, x)
        case = {"samplingRateHz": rate, "stages": stages, "signal": recipe, "cutoffRatio": ratio}
        if len(stages) == 1 and scipy_design.sections_of(stages[0], rate) is not None and extended_precision.precise_enough():
            exact = extended_precision.apply_epochs(stages[0], rate, x)
            case["scipyError"] = np.abs(y - exact).max() / np.abs(x).max()
            case["judge"] = "scipy"
            # Narrow band designs of high order: SciPy's rounding passes a tenth of the bound, so it cannot judge to it.
            if case["scipyError"] > (1e-12 if ratio >= 1e-3 else 1e-11):
                case["judge"] = "extended precision"
                y = exact
        else:
            case["judge"] = "scipy"
        at = checkpoints(count, options.full)
        case.update(at=at, y=y[at], norm=np.sqrt(np.dot(y, y)), largestInput=np.abs(x).max())
        cases.append(case)
    note = ("sosfiltfilt; sosfilt from sosfilt_zi times the first sample; sosfilt from rest for amplifier stages; "
            "convolution after odd reflection for FIR stages. scipyError: largest difference from extended precision over "
            "the largest input; where it is too large for SciPy to judge, y is the extended-precision result.")
    write(options.out or os.path.join(os.path.dirname(os.path.abspath(__file__)), "applied.json"), options.seed, note, cases)


if __name__ == "__main__":
    main()
