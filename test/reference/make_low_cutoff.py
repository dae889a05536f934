"""Cutoffs so low that SciPy's direct-form sections lose digits: 80-bit results, and how far SciPy is from them."""

import os
import random
import sys

import numpy as np

import extended_precision
import scipy_design
from random_signal import random_signal
from reference_file import arguments, checkpoints, write


def specifications(seed):
    draw = random.Random(seed)
    cases = [(2048, {"design": "butterworth", "pass": "high", "order": 8, "cutoffsHz": [0.01], "meaning": "half-power",
                     "direction": "both"})]
    for band_pass in ("high", "low"):
        for order in (1, 2, 3, 4, 8, 12):
            for rate, cutoff in ((4096, 0.01), (1000, 0.01), (500, 0.05), (1000, 0.1), (250, 0.1), (2048, 1)):
                cutoff = float(f"{cutoff * draw.uniform(0.9, 1.1):.4g}")
                cases.append((rate, {"design": "butterworth", "pass": band_pass, "order": order, "cutoffsHz": [cutoff],
                                     "meaning": draw.choice(["half-amplitude", "half-power", "design"]),
                                     "direction": draw.choice(["both", "forward"])}))
    for band_pass in ("band", "stop"):
        for order in (1, 2, 4, 8):
            for rate, low, high in ((4096, 0.01, 30), (1000, 0.05, 40), (1000, 0.02, 0.5)):
                low = float(f"{low * draw.uniform(0.9, 1.1):.4g}")
                cases.append((rate, {"design": "butterworth", "pass": band_pass, "order": order, "cutoffsHz": [low, high],
                                     "meaning": draw.choice(["half-amplitude", "half-power", "design"]),
                                     "direction": draw.choice(["both", "forward"])}))
    for rate, cutoff in ((1000, 0.016), (4096, 0.016), (500, 0.1)):
        cases.append((rate, {"design": "amplifier", "pass": "high", "order": 1, "cutoffHz": cutoff}))
    return cases


def main():
    options = arguments(__doc__, 977)
    if not extended_precision.precise_enough():
        print("long double is no wider than double here: low-cutoff.json is left as it is", file=sys.stderr)
        return
    cases = []
    for index, (rate, spec) in enumerate(specifications(options.seed)):
        if index % options.every != options.seed % options.every:
            continue
        # An electrode offset of 20 mV that drifts, with noise of 40 microvolts.
        recipe = {"seed": options.seed * 1000 + index, "count": 2000, "amplitude": 40,
                  "offset": 20000 if index % 2 == 0 else -20000, "drift": 0.05 * (index % 3 - 1)}
        x = random_signal(**recipe)
        largest = np.abs(x).max()
        exact = extended_precision.apply_epochs(spec, rate, x)
        scipy_error = np.abs(scipy_design.apply_epochs([spec], rate, x) - exact).max() / largest
        at = checkpoints(len(x), options.full, 80)
        cases.append({"samplingRateHz": rate, "spec": spec, "signal": recipe, "at": at, "y": exact[at],
                      "largestInput": largest, "scipyError": scipy_error})
    note = ("Filtered epochs in extended precision: poles from the analogue closed form, trapezoidal integrators, edges as "
            "sosfiltfilt and sosfilt from steady state have them. scipyError: SciPy's largest error over all samples, over "
            "the largest input.")
    write(options.out or os.path.join(os.path.dirname(os.path.abspath(__file__)), "low-cutoff.json"), options.seed, note, cases)


if __name__ == "__main__":
    main()
