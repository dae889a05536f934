"""Sections and taps of every specification, and what SciPy's own response says of their cutoffs."""

import os

import numpy as np
from scipy import optimize, signal

import extended_precision
import scipy_design
from reference_file import arguments, checkpoints, write
from specification_grid import grid, lowest_cutoff_ratio


def crossing(gain, frequency, target, rate):
    """The frequency near `frequency` at which the gain passes `target`."""
    factor = 1 + 1e-4
    miss = lambda f: gain(f) - target
    low, high = frequency / factor, min(frequency * factor, rate / 2 * (1 - 1e-12))
    for _ in range(20):
        if miss(low) * miss(high) < 0:
            return optimize.brentq(miss, low, high, xtol=1e-16 * rate, rtol=1e-14)
        low, high = low / factor, min(high * factor, rate / 2 * (1 - 1e-12))
    raise ValueError(f"the gain does not pass {target} near {frequency} Hz")


def measured_gain(spec, rate, sections, taps):
    """Gain as applied: SciPy's, or in extended precision where SciPy's own evaluation is off by more than 1e-8."""
    if taps is not None:
        return lambda f: abs(signal.freqz(taps, 1, worN=[f], fs=rate)[1][0])
    passes = scipy_design.passes_of(spec)
    if lowest_cutoff_ratio(rate, spec) >= 1e-4:
        return lambda f: abs(signal.sosfreqz(sections, worN=[f], fs=rate)[1][0]) ** passes
    rows = extended_precision.pairs_of(spec, rate)
    return lambda f: float(abs(extended_precision.response(rows, passes, [f], rate)[0]))


def main():
    options = arguments(__doc__, 20250)
    cases = []
    for index, (rate, spec) in enumerate(grid(options.seed)):
        if index % options.every != options.seed % options.every:
            continue
        case = {"samplingRateHz": rate, "spec": spec}
        sections = scipy_design.sections_of(spec, rate)
        taps = None
        if sections is not None:
            case["sections"] = sections.ravel()
        else:
            taps, lead = scipy_design.taps_of(spec, rate)
            at = checkpoints(len(taps), options.full)
            case.update(tapCount=len(taps), leadSamples=lead, at=at, taps=taps[at],
                        sum=taps.sum(), norm=np.sqrt(np.dot(taps, taps)))
            if spec["design"] == "windowed-sinc":
                case["nominalHz"] = scipy_design.windowed_sinc_taps(spec, rate)[1]
        target = scipy_design.HALF.get(spec.get("meaning"))
        if target:
            gain = measured_gain(spec, rate, sections, taps)
            case["crossingsHz"] = [crossing(gain, f, target, rate) for f in spec["cutoffsHz"]]
        cases.append(case)
    note = ("Butterworth: butter(output='sos') at the closed-form design cutoff. Notch: iirnotch. Windowed sinc: "
            "combinations of firwin low-passes at the solved nominal cutoffs (of a minimum-phase stage, the symmetric "
            "prototype). crossingsHz: where the gain measured on these passes the stated half amplitude or half power.")
    write(options.out or os.path.join(os.path.dirname(os.path.abspath(__file__)), "designs.json"), options.seed, note, cases)


if __name__ == "__main__":
    main()
