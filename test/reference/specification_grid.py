"""The specifications that the reference is computed for.

Every design, order, pass, window, delay, direction and cutoff meaning occurs; sampling rates and cutoffs are drawn from
a seed (Python's own generator, the same in all versions): 100 to 4096 Hz, 0.01 Hz to 0.45 of the sampling rate.
"""

import math
import random

RATES = [100, 128, 200, 250, 256, 500, 512, 1000, 1024, 2000, 2048, 4096]
MEANINGS = ["half-amplitude", "half-power", "design"]
WINDOWS = [
    {"name": "rectangular"},
    {"name": "hann"},
    {"name": "hamming"},
    {"name": "blackman"},
    {"name": "kaiser", "attenuationDb": 60},
]
WIDTH_FACTOR = {"rectangular": 0.9, "hann": 3.1, "hamming": 3.3, "blackman": 5.5}


def rounded(value, digits=4):
    return float(f"{value:.{digits}g}")


def log_uniform(draw, low, high):
    return rounded(math.exp(draw.uniform(math.log(low), math.log(high))))


def edges(draw, rate, lowest, highest):
    """Two ascending edges, from narrow (a ratio of 1.2) to 300 times wide."""
    first = log_uniform(draw, lowest, highest / 1.3)
    ratio = math.exp(draw.uniform(math.log(1.2), math.log(min(300, highest / first))))
    return [first, min(rounded(first * ratio), rounded(highest))]


def butterworth(draw):
    cases = []
    for band_pass in ("low", "high", "band", "stop"):
        for order in range(1, 13 if band_pass in ("low", "high") else 9):
            for direction in ("forward", "both"):
                for meaning in MEANINGS:
                    rate = draw.choice(RATES)
                    top = 0.45 * rate
                    cutoffs = [log_uniform(draw, 0.01, top)]
                    if band_pass in ("band", "stop"):
                        cutoffs = edges(draw, rate, 0.01, top)
                    cases.append((rate, {
                        "design": "butterworth", "pass": band_pass, "order": order,
                        "cutoffsHz": cutoffs, "meaning": meaning, "direction": direction,
                    }))
    return cases


def kaiser_factor(attenuation_db):
    return (attenuation_db - 7.95) / (2.285 * 2 * math.pi)


def windowed_sinc(draw):
    cases = []
    for window in WINDOWS:
        for band_pass in ("low", "high", "band", "stop"):
            for delay in ("compensated", "causal", "minimum-phase"):
                rate = draw.choice(RATES)
                window_spec = dict(window)
                if window["name"] == "kaiser":
                    window_spec["attenuationDb"] = draw.choice([20, 30, 45, 60, 80, 100])
                factor = WIDTH_FACTOR.get(window["name"]) or kaiser_factor(window_spec["attenuationDb"])
                longest = 1201 if delay == "minimum-phase" else 3301
                transition = log_uniform(draw, factor * rate / longest, factor * rate / 25)
                transition = min(transition, rounded(rate / 16))
                # The ripple of a rectangular (or nearly so) window is so large that edges near 0 Hz may have no half-power point.
                rippled = window["name"] == "rectangular" or window_spec.get("attenuationDb", 100) < 40
                room = (1.3 if rippled else 0.7) * transition
                low, high = room, min(0.45 * rate, rate / 2 - room)
                cutoffs = [log_uniform(draw, low, high)]
                if band_pass in ("band", "stop"):
                    # The pass between (or beside) the edges is wider than the two half transitions.
                    first = log_uniform(draw, low, high - 1.6 * transition)
                    cutoffs = [first, rounded(draw.uniform(first + 1.5 * transition, high))]
                cases.append((rate, {
                    "design": "windowed-sinc", "pass": band_pass, "cutoffsHz": cutoffs,
                    "meaning": draw.choice(MEANINGS), "transitionHz": transition,
                    "window": window_spec, "delay": delay,
                }))
    return cases


def amplifier(draw):
    cases = []
    for order in (1, 2, 3, 4):
        rate = draw.choice(RATES)
        cases.append((rate, {"design": "amplifier", "pass": "high", "order": order,
                             "cutoffHz": log_uniform(draw, 0.01, 10)}))
    for order in range(1, 9):
        rate = draw.choice(RATES)
        cases.append((rate, {"design": "amplifier", "pass": "low", "order": order,
                             "cutoffHz": log_uniform(draw, 5, 0.4 * rate)}))
    return cases


def notch(draw):
    cases = []
    for direction in ("forward", "both"):
        for harmonics in range(4):
            for frequency in (50, 60):
                rate = draw.choice([r for r in RATES if r > 2.2 * frequency * (harmonics + 1)])
                cases.append((rate, {"design": "notch", "frequencyHz": frequency,
                                     "bandwidthHz": rounded(draw.uniform(0.5, 8), 2),
                                     "harmonics": harmonics, "direction": direction}))
    return cases


def moving_average(draw):
    cases = []
    for delay in ("compensated", "causal"):
        for parity in (0, 1):
            for _ in range(2):
                rate = draw.choice([100, 200, 250, 500, 1000, 2000])
                samples = 2 * draw.randint(2, 40) + parity
                cases.append((rate, {"design": "moving-average", "durationMs": 1000 * samples / rate, "delay": delay}))
    return cases


def grid(seed):
    """All cases: a list of (samplingRateHz, stage specification)."""
    draw = random.Random(seed)
    return butterworth(draw) + windowed_sinc(draw) + amplifier(draw) + notch(draw) + moving_average(draw)


def lowest_cutoff_ratio(rate, spec):
    """The smallest frequency of a specification over the sampling rate: what decides how hard it is to compute."""
    if spec["design"] == "butterworth":
        return min(spec["cutoffsHz"]) / rate
    if spec["design"] == "amplifier":
        return spec["cutoffHz"] / rate
    return 0.1
