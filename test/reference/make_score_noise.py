"""Variance of a score's noise by a fine sum over frequency, with SciPy's filters and a spectral density written out again."""

import os

import numpy as np

import scipy_design
from make_effective_window import AMPLIFIER, butterworth, sinc, weights_of
from reference_file import arguments, write

CHAINS = [
    (250, []),
    (250, [butterworth("high", 2, [0.5], "both")]),
    (250, [butterworth("high", 1, [0.3], "forward")]),
    (250, [butterworth("low", 4, [20], "both")]),
    (250, [butterworth("band", 3, [1, 25], "both")]),
    (250, [sinc("low", [20], 10, "compensated")]),
    (250, [sinc("high", [3], 4, "causal")]),
    (250, [{"design": "notch", "frequencyHz": 50, "bandwidthHz": 4, "harmonics": 1, "direction": "both"}]),
    (250, [{"design": "moving-average", "durationMs": 40, "delay": "compensated"}]),
    (250, [AMPLIFIER, butterworth("high", 2, [1], "both"), sinc("low", [20], 12, "compensated")]),
]
SIZE = 2 ** 21


def density(noise, f):
    """One-sided power spectral density of a noise without its lines."""
    held = np.maximum(f, noise["flatBelowHz"])
    s = noise["whiteUv2PerHz"] + noise["levelAt1HzUv2PerHz"] * held ** -noise["exponent"]
    s = s + noise.get("driftAt1HzUv2PerHz", 0) / held ** 2
    if "alpha" in noise:
        alpha = noise["alpha"]
        s = s + alpha["peakUv2PerHz"] * np.exp(-0.5 * ((f - alpha["centreHz"]) / alpha["sdHz"]) ** 2)
    return s


def transposed(stages, rate, v):
    """Weights before stages that run as continuous: the stages on reversed time, with room for what they ring."""
    pad = 6000
    return scipy_design.apply_stand_alone(stages, rate, np.pad(v[::-1], pad))[::-1]


def window(stages, rate, w, extent):
    if extent == "continuous":
        return transposed(stages, rate, w)
    offline = [s for s in stages if s["design"] != "amplifier"]
    v = scipy_design.apply_epochs(offline, rate, np.eye(len(w))) @ w
    amplifiers = [s for s in stages if s["design"] == "amplifier"]
    return transposed(amplifiers, rate, v) if amplifiers else v


def variance(g, noise, rate, trials):
    f = np.arange(SIZE // 2 + 1) * rate / SIZE
    power = np.abs(np.fft.rfft(g, SIZE)) ** 2
    terms = density(noise, f) * power
    total = (terms.sum() - (terms[0] + terms[-1]) / 2) * rate / SIZE
    m = np.arange(len(g))
    for line in noise["lines"]:
        if not line["locked"]:
            total += line["amplitudeUv"] ** 2 / 2 * np.abs(g @ np.exp(-2j * np.pi * line["hz"] * m / rate)) ** 2
    return total / trials


def noises(rng):
    plain = {"kind": "model", "exponent": 1, "levelAt1HzUv2PerHz": 0, "flatBelowHz": 0.02, "whiteUv2PerHz": 0, "lines": []}
    draw = lambda low, high: round(float(rng.uniform(low, high)), 3)
    yield {**plain, "whiteUv2PerHz": draw(0.1, 1)}
    yield {**plain, "exponent": draw(0.8, 2), "levelAt1HzUv2PerHz": draw(2, 12)}
    yield {**plain, "exponent": draw(0.8, 2), "levelAt1HzUv2PerHz": draw(2, 12), "whiteUv2PerHz": 0.02, "driftAt1HzUv2PerHz": 1,
           "alpha": {"centreHz": draw(8, 12), "sdHz": draw(0.3, 2), "peakUv2PerHz": draw(2, 20)}}
    yield {**plain, "whiteUv2PerHz": 0.01, "lines": [{"hz": draw(20, 60), "amplitudeUv": draw(1, 5), "locked": False},
                                                    {"hz": draw(60, 100), "amplitudeUv": draw(1, 5), "locked": True}]}


def main():
    options = arguments(__doc__, 5)
    rng = np.random.default_rng(options.seed)
    cases = []
    scores = [{"from": 120, "to": 160, "baselineTo": 39}, {"from": 100, "to": 100}]
    for rate, stages in CHAINS:
        for extent in ("continuous", "epochs"):
            for noise in noises(rng):
                score = scores[len(cases) % 2]
                g = window(stages, rate, weights_of(240, score), extent)
                trials = int(rng.integers(1, 200))
                cases.append({"samplingRateHz": rate, "stages": stages, "extent": extent, "count": 240, "score": score, "noise": noise,
                              "trials": trials, "variance": variance(g, noise, rate, trials)})
    kept = [c for i, c in enumerate(cases) if i % options.every == options.seed % options.every]
    note = "Variance of the score of an average of N trials, by a sum over 2^20 frequencies."
    write(options.out or os.path.join(os.path.dirname(os.path.abspath(__file__)), "score-noise.json"), options.seed, note, kept)


if __name__ == "__main__":
    main()
