"""Accounts of a value found the slow way: the waveform is cut into stretches, and each is filtered and scored alone."""

import os

import numpy as np

import scipy_design
from make_effective_window import CHAINS, weights_of
from reference_file import arguments, write

COUNT = 240
AROUND = 2200
CUTS = [0, 40, 90, 120, 161, 200, COUNT]
SCORES = [{"from": 120, "to": 160, "baselineTo": 39}, {"from": 200, "to": 239}]


def components_at(m):
    """Three Gaussians, in samples relative to the epoch's first one; the first begins before the epoch, the last ends after it."""
    shapes = [(-2.0, 5, 40), (6.0, 150, 50), (3.0, 235, 30)]
    return [a * 2.0 ** (-((2 * (m - centre) / width) ** 2)) for a, centre, width in shapes]


def score(stages, rate, extent, w, x):
    """Score of x, which fills the epoch and all around it."""
    if extent == "continuous":
        return scipy_design.apply_stand_alone(stages, rate, x)[AROUND:AROUND + COUNT] @ w
    amplified = scipy_design.apply_epochs([s for s in stages if s["design"] == "amplifier"], rate, x)
    offline = [s for s in stages if s["design"] != "amplifier"]
    return scipy_design.apply_epochs(offline, rate, amplified[AROUND:AROUND + COUNT]) @ w


def seen(stages, rate, w, x):
    """Share of x in the epoch as if the offline stages had run on: filtered alone, the epoch's own samples only."""
    amplified = scipy_design.apply_epochs([s for s in stages if s["design"] == "amplifier"], rate, x)
    inside = np.zeros_like(amplified)
    inside[AROUND:AROUND + COUNT] = amplified[AROUND:AROUND + COUNT]
    offline = [s for s in stages if s["design"] != "amplifier"]
    return scipy_design.apply_stand_alone(offline, rate, inside)[AROUND:AROUND + COUNT] @ w


def main():
    options = arguments(__doc__, 11)
    m = np.arange(-AROUND, COUNT + AROUND)
    parts = components_at(m)
    cases = []
    work = [(rate, stages, s, extent) for rate, stages in CHAINS for s in SCORES for extent in ("epochs", "continuous")]
    for index, (rate, stages, s, extent) in enumerate(work):
        if index % options.every != options.seed % options.every:
            continue
        w = weights_of(COUNT, s)
        x = sum(parts)
        # the zero that shares are taken against, where the weights sum to zero
        zero = x[AROUND:AROUND + s["baselineTo"] + 1].mean() if "baselineTo" in s else 0.0
        edges = [-AROUND] + CUTS + [COUNT + AROUND]
        shares = []
        for begin, end in zip(edges, edges[1:]):
            piece = np.where((m >= begin) & (m < end), x - zero, 0.0)
            shares.append(score(stages, rate, extent, w, piece) if extent == "continuous" else seen(stages, rate, w, piece))
        cases.append({"samplingRateHz": rate, "stages": stages, "extent": extent, "count": COUNT, "score": s, "cuts": CUTS[1:-1],
                      "shares": shares,
                      "value": score(stages, rate, extent, w, x - zero),
                      "components": [score(stages, rate, extent, w, part) for part in parts],
                      "stagesUpTo": [score(stages[:k], rate, extent, w, x) for k in range(len(stages) + 1)],
                      "stagesAlone": [score([stage], rate, extent, w, x) for stage in stages]})
    note = "Shares of the stretches before, between the cuts of and after the epoch, each found by filtering that stretch alone."
    write(options.out or os.path.join(os.path.dirname(os.path.abspath(__file__)), "trace-back.json"), options.seed, note, cases)


if __name__ == "__main__":
    main()
