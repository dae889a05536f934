"""Complex gain as applied and group delay of every specification."""

import os

import numpy as np
from scipy import signal

import extended_precision
import scipy_design
from reference_file import arguments, write
from specification_grid import grid, lowest_cutoff_ratio


def frequencies_of(spec, rate):
    """0 Hz, half the sampling rate, and multiples of every frequency that the specification names."""
    named = spec.get("cutoffsHz") or [spec.get("cutoffHz") or spec.get("frequencyHz") or 1000 / spec["durationMs"]]
    wanted = {0.0, rate / 2, rate / 7}
    for f in named:
        wanted |= {float(f"{f * m:.6g}") for m in (0.1, 0.5, 0.97, 1, 1.1, 2, 10) if f * m < 0.49 * rate}
    return sorted(wanted)


def fir_group_delay(taps, frequencies, rate):
    """SciPy's group delay where the response is not near a zero; None elsewhere."""
    gains = np.abs(signal.freqz(taps, 1, worN=frequencies, fs=rate)[1])
    out = []
    for f, gain in zip(frequencies, gains):
        good = 0 < f < rate / 2 and gain > 1e-3 * gains.max()
        out.append(signal.group_delay((taps, 1), w=[f], fs=rate)[1][0] if good else None)
    return out


def main():
    options = arguments(__doc__, 20250)
    cases = []
    for index, (rate, spec) in enumerate(grid(options.seed)):
        if index % options.every != options.seed % options.every:
            continue
        hz = frequencies_of(spec, rate)
        passes = scipy_design.passes_of(spec)
        sections = scipy_design.sections_of(spec, rate)
        if sections is None:
            taps, lead = scipy_design.taps_of(spec, rate)
            values = signal.freqz(taps, 1, worN=hz, fs=rate)[1]
            values = values * np.exp(2j * np.pi * np.array(hz) / rate * lead)
            minimum = spec["delay"] == "minimum-phase"
            if minimum:
                values = np.abs(values)
            delay = None if minimum else fir_group_delay(taps, hz, rate)
            if delay:
                delay = [None if d is None else d - lead for d in delay]
            judge = "scipy"
        else:
            rows = extended_precision.pairs_of(spec, rate)
            closed = extended_precision.response(rows, passes, hz, rate)
            own = signal.sosfreqz(sections, worN=hz, fs=rate)[1]
            own = own * np.conj(own) if passes == 2 else own
            judge = "scipy" if lowest_cutoff_ratio(rate, spec) >= 1e-3 else "extended precision"
            values = own if judge == "scipy" else closed
            # The judge is judged: both agree as far as SciPy's evaluation goes.
            allowed = 1e-9 if judge == "scipy" else 1e-4
            error = np.abs(own - closed).max() / np.abs(closed).max()
            assert error < allowed, (rate, spec, error)
            delay = None
            if passes == 1:
                delay = [None if f in (0, rate / 2) else d
                         for f, d in zip(hz, extended_precision.group_delay(rows, hz, rate))]
                if judge == "scipy":
                    # Numerators are symmetric or antisymmetric, so that each delays by half its order; SciPy's own value
                    # for them loses digits near their zeros, its value for the poles does not.
                    summed = np.zeros(len(hz))
                    for row in sections:
                        summed += signal.group_delay((1, row[3:]), w=hz, fs=rate)[1] + (0.5 if row[2] == 0 else 1)
                    for i, d in enumerate(summed):
                        if delay[i] is not None:
                            assert abs(d - delay[i]) < 1e-7 * max(1, abs(d)), (rate, spec, hz[i], d, delay[i])
                for i in range(len(hz)):
                    if delay[i] is not None and abs(closed[i]) < 1e-9:
                        delay[i] = None
        case = {"samplingRateHz": rate, "spec": spec, "judge": judge, "hz": hz, "re": np.real(values), "im": np.imag(values)}
        if delay is not None:
            case["groupDelaySamples"] = delay
        cases.append(case)
    note = ("Complex gain as applied: sosfreqz and freqz; below a cutoff of 0.001 of the sampling rate, where these are "
            "off by more than 1e-9, the closed form in extended precision. Of a minimum-phase stage the amplitude. "
            "Group delay: the closed form, held to SciPy's sum over sections; SciPy's for FIR stages.")
    write(options.out or os.path.join(os.path.dirname(os.path.abspath(__file__)), "responses.json"), options.seed, note, cases)


if __name__ == "__main__":
    main()
