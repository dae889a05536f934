"""Amplitude of SciPy's homomorphic minimum-phase filters beside that of their symmetric prototypes."""

import os

import numpy as np
from scipy import signal

import scipy_design
from reference_file import arguments, write
from specification_grid import grid


def main():
    options = arguments(__doc__, 20250)
    work = [(rate, spec) for rate, spec in grid(options.seed) if spec.get("delay") == "minimum-phase"]
    cases = []
    for index, (rate, spec) in enumerate(work):
        if index % options.every != options.seed % options.every:
            continue
        taps, _ = scipy_design.windowed_sinc_taps(spec, rate)
        hz = np.linspace(0, rate / 2, 33)
        prototype = np.abs(signal.freqz(taps, 1, worN=hz, fs=rate)[1])
        # minimum_phase returns the square root of its input's amplitude: the taps convolved with their reverse have
        # the square of the taps' own.
        squared = np.convolve(taps, taps[::-1])
        own = signal.minimum_phase(squared, method="homomorphic", n_fft=1 << 20)
        amplitude = np.abs(signal.freqz(own, 1, worN=hz, fs=rate)[1])
        cases.append({"samplingRateHz": rate, "spec": spec, "hz": hz, "prototype": prototype, "scipy": amplitude})
    note = "prototype: |freqz| of the symmetric taps. scipy: |freqz| of minimum_phase(taps convolved with their reverse)."
    write(options.out or os.path.join(os.path.dirname(os.path.abspath(__file__)), "minimum-phase.json"), options.seed, note, cases)


if __name__ == "__main__":
    main()
