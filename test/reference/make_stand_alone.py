"""Waveforms that stand alone (zero outside what is given): long zero padding in SciPy, and closed-form kernels."""

import os
import random

import numpy as np

import extended_precision
import scipy_design
from random_signal import random_signal
from reference_file import arguments, checkpoints, write
from specification_grid import grid, lowest_cutoff_ratio
from make_applied import CHAINS

LOW = [
    (500, [{"design": "amplifier", "pass": "high", "order": 1, "cutoffHz": 0.016},
           {"design": "butterworth", "pass": "high", "order": 2, "cutoffsHz": [0.1], "meaning": "half-amplitude", "direction": "both"},
           {"design": "butterworth", "pass": "low", "order": 4, "cutoffsHz": [30], "meaning": "half-power", "direction": "both"}]),
    (4096, [{"design": "butterworth", "pass": "high", "order": 2, "cutoffsHz": [0.01], "meaning": "half-amplitude", "direction": "both"}]),
    (4096, [{"design": "butterworth", "pass": "high", "order": 4, "cutoffsHz": [0.01], "meaning": "half-power", "direction": "forward"}]),
    (1000, [{"design": "butterworth", "pass": "low", "order": 4, "cutoffsHz": [0.05], "meaning": "design", "direction": "both"}]),
    (1000, [{"design": "amplifier", "pass": "high", "order": 1, "cutoffHz": 0.1},
            {"design": "amplifier", "pass": "low", "order": 2, "cutoffHz": 70},
            {"design": "butterworth", "pass": "band", "order": 2, "cutoffsHz": [0.3, 20], "meaning": "half-amplitude", "direction": "both"}]),
    (250, [{"design": "butterworth", "pass": "high", "order": 12, "cutoffsHz": [0.1], "meaning": "half-power", "direction": "both"}]),
]


def main():
    options = arguments(__doc__, 41)
    work = [(rate, [spec]) for rate, spec in grid(options.seed)
            if spec.get("delay") != "minimum-phase" and lowest_cutoff_ratio(rate, spec) >= 1e-3]
    random.Random(options.seed).shuffle(work)
    work = work[:60] + CHAINS + LOW
    cases = []
    for index, (rate, stages) in enumerate(work):
        if index % options.every != options.seed % options.every:
            continue
        recipe = {"seed": options.seed * 1000 + index, "count": 500, "amplitude": 20, "offset": 10 * (index % 3), "drift": 0}
        x = random_signal(**recipe)
        largest = np.abs(x).max()
        ratio = min(lowest_cutoff_ratio(rate, spec) for spec in stages)
        case = {"samplingRateHz": rate, "stages": stages, "signal": recipe, "largestInput": largest}
        recursive = [s for s in stages if scipy_design.sections_of(s, rate) is not None]
        closed = None
        if len(recursive) == len(stages) and extended_precision.precise_enough():
            kernel = extended_precision.kernel(stages, rate, len(x))
            closed = np.convolve(kernel, x.astype(np.longdouble))[len(x):2 * len(x)]
        if ratio >= 1e-3:
            y = scipy_design.apply_stand_alone(stages, rate, x)
            case["judge"] = "scipy"
            if closed is not None:
                case["difference"] = np.abs(y - closed).max() / largest
                if case["difference"] > 1e-12:
                    case["judge"], y = "extended precision", closed
        elif closed is None:
            continue
        else:
            case["judge"], y = "extended precision", closed
        at = checkpoints(len(x), options.full)
        case.update(at=at, y=y[at])
        cases.append(case)
    note = ("judge scipy: padded with zeros until every kernel has died, then sosfilt forward (and backward). judge "
            "extended precision: convolved with the kernel in closed form (residues of the poles). difference: between the two.")
    write(options.out or os.path.join(os.path.dirname(os.path.abspath(__file__)), "stand-alone.json"), options.seed, note, cases)


if __name__ == "__main__":
    main()
