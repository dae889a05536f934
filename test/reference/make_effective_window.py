"""Effective windows found the slow way: every unit impulse is filtered and scored."""

import os

import numpy as np

import scipy_design
from reference_file import arguments, checkpoints, write

AMPLIFIER = {"design": "amplifier", "pass": "high", "order": 1, "cutoffHz": 1.6}
ANTI_ALIAS = {"design": "amplifier", "pass": "low", "order": 3, "cutoffHz": 35}


def butterworth(band_pass, order, cutoffs, direction):
    return {"design": "butterworth", "pass": band_pass, "order": order, "cutoffsHz": cutoffs,
            "meaning": "half-amplitude", "direction": direction}


def sinc(band_pass, cutoffs, transition, delay):
    return {"design": "windowed-sinc", "pass": band_pass, "cutoffsHz": cutoffs, "meaning": "half-amplitude",
            "transitionHz": transition, "window": {"name": "hamming"}, "delay": delay}


CHAINS = [
    (250, [butterworth("high", 2, [1], "both")]),
    (250, [butterworth("low", 4, [20], "both")]),
    (250, [butterworth("high", 2, [1], "forward"), butterworth("low", 2, [30], "forward")]),
    (250, [butterworth("band", 3, [1, 25], "both")]),
    (128, [butterworth("stop", 2, [8, 12], "both")]),
    (250, [sinc("low", [20], 10, "compensated")]),
    (250, [sinc("high", [3], 4, "compensated")]),
    (250, [sinc("band", [3, 25], 5, "causal")]),
    (500, [{"design": "notch", "frequencyHz": 50, "bandwidthHz": 4, "harmonics": 1, "direction": "both"}]),
    (250, [{"design": "moving-average", "durationMs": 40, "delay": "compensated"}]),
    (250, [{"design": "moving-average", "durationMs": 40, "delay": "causal"}]),
    (250, [AMPLIFIER, butterworth("low", 4, [25], "both")]),
    (128, [AMPLIFIER, ANTI_ALIAS, butterworth("high", 2, [1], "both"), sinc("low", [20], 12, "compensated")]),
]


def weights_of(count, score):
    w = np.zeros(count)
    w[score["from"]:score["to"] + 1] = 1 / (score["to"] - score["from"] + 1)
    if "baselineTo" in score:
        w[:score["baselineTo"] + 1] -= 1 / (score["baselineTo"] + 1)
    return w


def apply_with_amplifier_outside(stages, rate, count, before, x):
    """Amplifier stages run over everything, then the epoch is cut and the offline stages pad it themselves."""
    amplified = scipy_design.apply_epochs([s for s in stages if s["design"] == "amplifier"], rate, x)
    return scipy_design.apply_epochs([s for s in stages if s["design"] != "amplifier"], rate, amplified[..., before:before + count])


def main():
    options = arguments(__doc__, 7)
    count, cases = 240, []
    scores = [{"from": 120, "to": 160, "baselineTo": 39}, {"from": 200, "to": 239}]
    work = [(rate, stages, score, extent) for rate, stages in CHAINS for score in scores for extent in ("epochs", "continuous")]
    for index, (rate, stages, score, extent) in enumerate(work):
        if index % options.every != options.seed % options.every:
            continue
        w = weights_of(count, score)
        around = 200 if extent == "continuous" or stages[0] is AMPLIFIER else 0
        total = count + 2 * around
        impulses = np.eye(total)
        if extent == "epochs":
            filtered = apply_with_amplifier_outside(stages, rate, count, around, impulses)
        else:
            filtered = scipy_design.apply_stand_alone(stages, rate, impulses)[:, around:around + count]
        g = filtered @ w
        at = checkpoints(total, options.full, 40)
        cases.append({"samplingRateHz": rate, "stages": stages, "extent": extent, "count": count, "score": score,
                      "at": [i - around for i in at], "g": g[at], "absoluteSum": np.abs(g).sum()})
    note = "g[m] = the score of a filtered unit impulse at sample m, relative to the epoch's first sample."
    write(options.out or os.path.join(os.path.dirname(os.path.abspath(__file__)), "effective-windows.json"), options.seed, note, cases)


if __name__ == "__main__":
    main()
