"""Claims answered the slow way: Gaussians on a long time axis, SciPy's filters with zeros all around, SciPy's root finders for cutoffs."""

import math
import os
import random

# arrays this small lose more to threads than they gain
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

import numpy as np
from scipy import integrate, optimize, signal, stats

import scipy_design
from reference_file import arguments, write

HALF = {"half-amplitude": 0.5, "half-power": math.sqrt(0.5)}
Z = stats.norm.ppf(0.975)
GRID = 110
ORDERS = 12


# filters


def response(realised, f, rate):
    """Complex gain of (kind, coefficients, passes or lead), a delay of a FIR stage that is made up for taken out."""
    kind, coefficients, extra = realised
    if kind == "sos":
        h = signal.freqz_sos(coefficients, worN=f, fs=rate)[1]
        return np.abs(h) ** 2 if extra == 2 else h
    h = signal.freqz(coefficients, worN=f, fs=rate)[1]
    return h * np.exp(2j * np.pi * np.asarray(f) * extra / rate)


def butter(spec, cutoff, rate):
    return signal.butter(spec["order"], cutoff, scipy_design.BTYPE[spec["pass"]], fs=rate, output="sos")


def design_cutoff(spec, rate):
    """SciPy's cutoff with which the response of all passes has the stated gain at the stated frequency, by brentq."""
    stated = spec["cutoffsHz"][0]
    if spec["meaning"] == "design":
        return stated
    passes = scipy_design.passes_of(spec)
    wanted = HALF[spec["meaning"]]
    near = 3.0 ** (1 / spec["order"])

    def miss(log_cutoff):
        h = signal.freqz_sos(butter(spec, math.exp(log_cutoff), rate), worN=[stated], fs=rate)[1]
        return math.log(abs(h[0])) * passes - math.log(wanted)

    low, high = math.log(stated / near), math.log(min(stated * near, 0.4999999 * rate))
    return math.exp(optimize.brentq(miss, low, high, xtol=1e-14, rtol=1e-14))


def minimum_phase(taps, band_pass):
    """SciPy's, which returns the square root of its input's amplitude. A high-pass has a double zero at 0 Hz, on which the logarithm of its
    amplitude founders: it is taken out before, and put back."""
    rest, zeros = (np.cumsum(np.cumsum(taps))[:-2], [1, -2, 1]) if band_pass == "high" else (taps, [1])
    return np.convolve(signal.minimum_phase(np.convolve(rest, rest[::-1]), n_fft=1 << 20), zeros)


def realise(spec, rate):
    if spec["design"] == "butterworth":
        return "sos", butter(spec, design_cutoff(spec, rate), rate), scipy_design.passes_of(spec)
    if spec["design"] == "amplifier":
        return "sos", signal.butter(spec["order"], spec["cutoffHz"], scipy_design.BTYPE[spec["pass"]], fs=rate, output="sos"), 1
    taps, lead = scipy_design.taps_of(spec, rate)
    if spec["delay"] == "minimum-phase":
        taps, lead = minimum_phase(taps, spec["pass"]), 0
    return "taps", taps, lead


def twins(spec, twin, rate):
    """The causal or zero-phase version of a stage, ready to run."""
    if spec["design"] == "amplifier":
        return [realise(spec, rate)]
    if spec["design"] == "butterworth":
        if twin == "causal" and spec["direction"] == "both":
            kind, sections, _ = realise(spec, rate)
            return [(kind, sections, 1), (kind, sections, 1)]
        if twin == "zero-phase" and spec["direction"] == "forward":
            meaning = "half-power" if spec["meaning"] == "design" else spec["meaning"]
            return [realise({**spec, "direction": "both", "meaning": meaning}, rate)]
        return [realise(spec, rate)]
    if twin == "causal" and spec["delay"] == "compensated":
        return [realise({**spec, "delay": "minimum-phase"}, rate)]
    if twin == "zero-phase" and spec["delay"] != "compensated":
        return [realise({**spec, "delay": "compensated"}, rate)]
    return [realise(spec, rate)]


def run(stages, x, smallest):
    """All stages on a waveform that stands alone, with zeros on both sides until every kernel that runs both ways has died.

    What a causal kernel still gives after the zeros comes back to the waveform through those kernels alone.
    """
    pad = sum(len(c) if kind == "taps" else scipy_design.settling_samples(c, smallest) if extra == 2 else 0 for kind, c, extra in stages)
    y = np.pad(x, pad)
    for kind, coefficients, extra in stages:
        if kind == "taps":
            y = signal.oaconvolve(y, coefficients)[extra:extra + len(y)]
        elif extra == 2:
            y = signal.sosfiltfilt(coefficients, y, padtype=None)
        else:
            y = signal.sosfilt(coefficients, y)
    return y[pad:pad + len(x)]


# numbers of a waveform


def gaussians(parts, t):
    return sum(p["amplitudeUv"] * np.exp2(-((2 * (t - p["latencyMs"]) / p["widthMs"]) ** 2)) for p in parts)


def inside(t, window):
    return (t > window["fromMs"] - 1e-3) & (t < window["toMs"] + 1e-3)


def corrected(y, t, baseline):
    return y if baseline == "none" else y - y[..., inside(t, baseline)].mean(axis=-1, keepdims=True)


def mean(y, t, window):
    return y[inside(t, window)].mean()


def peak(y, t, window, sign):
    """(latency, amplitude, sample): the largest sample in the window that tops all within 10 ms, a parabola through three."""
    step = t[1] - t[0]
    reach = int(10 / step + 1e-6)
    s = sign * y
    places = [i for i in np.flatnonzero(inside(t, window))
              if 0 < i < len(y) - 1 and s[i] > np.delete(s[max(0, i - reach):i + reach + 1], min(i, reach)).max()]
    if not places:
        return None
    i = max(places, key=lambda k: s[k])
    bend, slope, level = np.polyfit([-1, 0, 1], s[i - 1:i + 2], 2)
    at = -slope / (2 * bend)
    return t[i] + at * step, sign * (level + slope * at / 2), i


def onset(y, t, window, sign):
    found = peak(y, t, window, sign)
    if found is None or sign * found[1] <= 0:
        return None
    level = sign * found[1] / 2
    s = sign * y
    below = np.flatnonzero(s[:found[2]] <= level)
    if len(below) == 0:
        return None
    k = below[-1]
    return np.interp(level, [s[k], s[k + 1]], [t[k], t[k + 1]])


def running_area(y, t, window, sign):
    some = inside(t, window)
    return t[some], integrate.cumulative_trapezoid(np.clip(sign * y[some], 0, None), t[some] / 1000, initial=0)


def area_latency(y, t, window, sign):
    times, area = running_area(y, t, window, sign)
    k = int(np.argmax(area >= area[-1] / 2))
    return None if area[-1] == 0 else np.interp(area[-1] / 2, area[k - 1:k + 1], times[k - 1:k + 1])


def row_value(y, setting, row):
    t, measure = setting.t, setting.given["measure"]
    sign = 1 if measure["polarity"] == "positive" else -1
    found = peak(y, t, measure["peak"], sign) if row.startswith("peak") else None
    return {"score": lambda: mean(y, t, setting.given["score"]),
            "mean-amplitude": lambda: mean(y, t, measure["mean"]),
            "peak-amplitude": lambda: found and found[1],
            "peak-latency": lambda: found and found[0],
            "signed-area": lambda: sign * running_area(y, t, measure["peak"], sign)[1][-1],
            "area-latency": lambda: area_latency(y, t, measure["peak"], sign),
            "onset-latency": lambda: onset(y, t, measure["peak"], sign)}[row]()


# what a chain makes of a setting


class Setting:
    """The waveforms of a case, from long before its epoch to long after it."""

    def __init__(self, given):
        self.given = given
        self.rate = given["samplingRateHz"]
        first, last = (round(given["epoch"][end] * self.rate / 1000) for end in ("fromMs", "toMs"))
        around = int(1.5 * self.rate)
        self.t = np.arange(first, last + 1) * 1000 / self.rate
        self.axis = np.arange(first - around, last + around + 1) * 1000 / self.rate
        self.place = slice(around, around + len(self.t))
        one, two = (gaussians(c["components"], self.axis) for c in given["conditions"])
        self.difference = one - two
        self.chosen = self.difference if given["chosen"]["kind"] == "difference" else one
        self.before = self.cut(self.chosen)
        self.effect_before = self.cut(self.difference)
        self.realised = {}
        self.frequencies, self.share = nodes(self.rate)

    def cut(self, x):
        return corrected(x[..., self.place], self.t, self.given["baseline"])

    def weights(self, window):
        """Of a mean in a window, its baseline included."""
        return corrected(np.eye(len(self.t)), self.t, self.given["baseline"])[:, inside(self.t, window)].mean(axis=1)

    def realise(self, spec, twin=None):
        key = repr((spec, twin))
        if key not in self.realised:
            self.realised[key] = twins(spec, twin, self.rate) if twin else [realise(spec, self.rate)]
        return self.realised[key]


class Filtered:
    """A setting through a chain; everything is computed when it is first asked for."""

    def __init__(self, setting, specs, twin=None, smallest=1e-14):
        self.setting, self.specs, self.smallest = setting, specs, smallest
        self.stages = [stage for spec in specs for stage in setting.realise(spec, twin)]
        self.kept = {}

    def once(self, name, compute):
        if name not in self.kept:
            self.kept[name] = compute()
        return self.kept[name]

    @property
    def after(self):
        return self.once("after", lambda: self.setting.cut(run(self.stages, self.setting.chosen, self.smallest)))

    @property
    def effect_after(self):
        if self.setting.chosen is self.setting.difference:
            return self.after
        return self.once("effect", lambda: self.setting.cut(run(self.stages, self.setting.difference, self.smallest)))

    def from_inside(self, window):
        """What the filter makes of the waveform within the window alone, against its own baseline mean."""
        s, given = self.setting, self.setting.given
        zero = 0 if given["baseline"] == "none" else mean(s.chosen[s.place], s.t, given["baseline"])
        piece = np.where(inside(s.axis, window), s.chosen - zero, 0)
        return mean(s.cut(run(self.stages, piece, self.smallest)), s.t, window)

    def absolute_sum(self, window):
        """Sum of |weight times waveform| over all moments: the weights of the mean pass the stages on reversed time."""
        s, given = self.setting, self.setting.given
        zero = 0 if given["baseline"] == "none" else mean(s.chosen[s.place], s.t, given["baseline"])
        w = np.zeros(len(s.axis))
        w[s.place] = s.weights(window)
        return np.abs(run(self.stages, w[::-1], self.smallest)[::-1] * (s.chosen - zero)).sum()

    def gain(self, f):
        """Complex, at frequencies in Hz."""
        h = np.ones(len(f), dtype=complex)
        for stage in self.stages:
            h = h * response(stage, f, self.setting.rate)
        return h

    def noise_gain(self):
        return self.once("gain", lambda: self.gain(self.setting.frequencies))

    def covariance(self, window, averages):
        """Of (after - before, before) of a mean: the integral of S times products of the windows' transforms, over the trials.

        Weights g on the unfiltered samples have the transform G = conj(H) W, W that of the weights w on the filtered ones.
        """
        s = self.setting
        f = s.frequencies

        def spectrum():
            w = s.weights(window)
            transform = np.exp(-2j * np.pi * np.outer(f / s.rate, np.arange(len(w)))) @ w
            return density(s.given["noise"], f) * np.abs(transform) ** 2 * s.share

        if window_key(window) not in s.realised:
            s.realised[window_key(window)] = spectrum()
        power = s.realised[window_key(window)] * averages / s.given["trials"]
        change = np.conj(self.noise_gain()) - 1
        return (power * np.abs(change) ** 2).sum(), (power * change.real).sum(), power.sum()


def window_key(window):
    return f"window {window['fromMs']} {window['toMs']}"


def nodes(rate):
    """Gauss-Legendre nodes and weights over pieces from 0 to half the sampling rate, fine where densities and windows vary."""
    edges = np.concatenate([[0], np.geomspace(1e-5, 0.02, 40), np.geomspace(0.02, 1, 60)[1:], np.linspace(1, rate / 2, 2 * rate)[1:]])
    x, w = np.polynomial.legendre.leggauss(8)
    half = np.diff(edges)[:, None] / 2
    return (edges[:-1, None] + half * (x + 1)).ravel(), (half * w).ravel()


def density(noise, f):
    held = np.maximum(f, noise["flatBelowHz"])
    alpha = noise["alpha"]
    return (noise["whiteUv2PerHz"] + noise["levelAt1HzUv2PerHz"] * held ** -noise["exponent"] + noise["driftAt1HzUv2PerHz"] / held ** 2
            + alpha["peakUv2PerHz"] * np.exp(-0.5 * ((f - alpha["centreHz"]) / alpha["sdHz"]) ** 2))


# answers: the number, named values, and quantities that decide. All `ds` at least 0: holds; any below 0: does not hold. None: cannot be told.


def answer(setting, form, chains):
    """`chains(twin, meaning)` gives the filtered setting with some version of the chain."""
    if form["form"] == "twin":
        present, twin = (shown(setting, form["shows"], chains(version, None)) for version in (None, form["twin"]))
        p, q = present["d"], twin["d"]
        shows = p is None or p >= 0
        d = p if p is not None and p < 0 else None if p is None or q is None else min(p, -q)
        return {"number": twin["number"] if shows else present["number"], "d": d, "ds": (p, q), "values": {}}
    if form["form"] == "meaning":
        stated, other = (shown(setting, form["conclusion"], chains(None, (form["stated"], m))) for m in (form["stated"], form["other"]))
        missing = stated["d"] is None or other["d"] is None
        d = None if missing else 1 if (stated["d"] >= 0) == (other["d"] >= 0) else -1
        values = {"as stated": stated["number"], "other meaning": other["number"]}
        return {"number": stated["number"], "d": d, "ds": (stated["d"], other["d"]),
                "values": {k: v for k, v in values.items() if v is not None}}
    filtered = chains(None, None)
    if form["form"] == "attenuation":
        gain = abs(filtered.gain(np.array([form["hz"]]))[0])
        number = -20 * math.log10(max(gain, 1e-15))
        return {"number": number, "d": number - form["db"], "values": {"gain": 100 * gain}}
    if form["form"] == "tone":
        left = form["amplitudeUv"] / (1 if form["locked"] else math.sqrt(setting.given["trials"]))
        gain = abs(filtered.gain(np.array([form["hz"]]))[0])
        return {"number": left * gain, "d": form["belowUv"] - left * gain, "values": {"gain": 100 * gain, "unfiltered": left}}
    return shown(setting, form, filtered)


def shown(setting, form, filtered):
    """Of forms 1 to 5."""
    return {"change": change, "deflection": deflection, "from-outside": from_outside, "effect": effect,
            "onset": onset_shift}[form["form"]](setting, form, filtered)


def missing():
    return {"number": None, "d": None, "values": {}}


def change(setting, form, filtered):
    row = form["row"]
    before, after = row_value(setting.before, setting, row), row_value(filtered.after, setting, row)
    if before is None or after is None:
        return missing()
    number = after - before
    values = {"before": before, "after": after, "change": number}
    if form["unit"] == "%":
        largest = np.abs(setting.before).max()
        if row == "signed-area":
            window = setting.given["measure"]["peak"]
            largest *= (window["toMs"] - window["fromMs"]) / 1000
        number *= 100 / (largest if abs(before) < 0.2 * largest else before)
    sign = 1 if form["relation"] == "at least" else -1
    return {"number": number, "d": sign * (abs(number) - form["amount"]), "values": values}


def deflection(setting, form, filtered):
    some = np.flatnonzero(inside(setting.t, form["window"]))
    difference = filtered.after - setting.before
    at = some[np.abs(difference[some]).argmax()]
    largest = np.abs(setting.before).max()
    number = difference[at] * (1 if form["unit"] == "µV" else 100 / largest)
    there = np.abs(setting.before[some]).max()
    values = {"before": setting.before[at], "after": filtered.after[at], "at": setting.t[at], "largest before": largest}
    made = abs(number) - form["amount"]
    return {"number": number, "d": made if there < 0.05 * largest else -1, "values": values}


def from_outside(setting, form, filtered):
    value = mean(filtered.after, setting.t, form["window"])
    if abs(value) < max(0.005, 1e-3 * filtered.absolute_sum(form["window"])):
        return missing()
    own = filtered.from_inside(form["window"])
    number = 100 * (value - own) / value
    return {"number": number, "d": number - form["percent"], "values": {"value": value, "from inside": own, "from outside": value - own}}


def effect(setting, form, filtered):
    before, after = mean(setting.effect_before, setting.t, form["window"]), mean(filtered.effect_after, setting.t, form["window"])
    least = form["leastUv"]
    there = abs(before) - least
    ds = {"exists without the filter": (there,), "is absent without the filter": (-there, abs(after) - least),
          "changes sign": (there, -math.copysign(1, before) * after - least)}[form["says"]]
    on_after = {"exists without the filter": False, "is absent without the filter": there < 0, "changes sign": there >= 0}[form["says"]]
    return {"number": after if on_after else before, "d": min(ds), "ds": ds, "values": {"before": before, "after": after}}


def onset_shift(setting, form, filtered):
    before, after = (row_value(y, setting, "onset-latency") for y in (setting.before, filtered.after))
    if before is None or after is None:
        return missing()
    number = (after - before) * (1 if form["direction"] == "later" else -1)
    return {"number": number, "d": number - form["ms"], "values": {"before": before, "after": after}}


def measured(setting, form, filtered):
    """The number with its 95 % interval under the noise of the trials."""
    found = shown(setting, form, filtered)
    if form["form"] == "effect":
        a, c, b = filtered.covariance(form["window"], 2)
        spread = Z * math.sqrt(a + 2 * c + b) if found["number"] == found["values"]["after"] else Z * math.sqrt(b)
        return {**found, "interval": [found["number"] - spread, found["number"] + spread]}
    window = setting.given["score"] if form["row"] == "score" else setting.given["measure"]["mean"]
    averages = 2 if setting.given["chosen"]["kind"] == "difference" else 1
    a, c, b = filtered.covariance(window, averages)
    before, delta, number = found["values"]["before"], found["values"]["change"], found["number"]
    scale = number / delta
    if form["unit"] == "%" and abs(before) >= 0.2 * np.abs(setting.before).max():
        # the ratios at which change - ratio * before is just 1.96 of its standard deviations from 0
        if abs(before) < Z * math.sqrt(b) * 1.1:
            return None
        off = lambda r: abs(delta - r * before) - Z * math.sqrt(a - 2 * r * c + r * r * b)
        middle, step = delta / before, 0.01
        while off(middle - step) < 0 or off(middle + step) < 0:
            step *= 2
        roots = [optimize.brentq(off, *sorted((middle, middle + way * step)), xtol=1e-15, rtol=1e-14) for way in (-1, 1)]
        return {**found, "interval": [100 * r for r in roots]}
    spread = Z * math.sqrt(a) * scale
    return {**found, "interval": sorted([number - spread, number + spread]), "spread": abs(spread)}


# the search for what would change an answer


def verdicts(found, with_noise):
    """(verdict, the quantities that go through 0 where it may change)."""
    if found["d"] is None:
        return "cannot be told", None
    spread = found["spread"] if with_noise else 0
    ds = (found["d"] - spread, found["d"] + spread) if with_noise else found.get("ds", (found["d"],))
    if None in ds:
        ds = None
    if found["d"] - spread >= 0:
        return "holds", ds
    return ("does not hold" if found["d"] + spread <= 0 else "cannot be told"), ds


def flips(look, low, high):
    """Every change of the verdict over cutoffs, by brentq on what decides it; by halving where a number begins or ends to exist."""
    grid = np.linspace(math.log(low), math.log(high), GRID)
    seen = [look(x) for x in grid]
    roots = []
    edges = list(zip(grid, seen))
    for (a, p), (m, q), (b, r) in zip(edges, edges[1:], edges[2:]):
        # where a quantity comes near 0 and turns back between points of the grid
        if p[1] is None or q[1] is None or r[1] is None:
            continue
        for k in range(len(q[1])):
            u, v, w = (abs(s[1][k]) for s in (p, q, r))
            same = p[1][k] * q[1][k] > 0 and q[1][k] * r[1][k] > 0
            if same and v <= u and v <= w and v < 0.8 * max(u, w):
                side = math.copysign(1, q[1][k])
                height = lambda x: np.inf if look(x)[1] is None else side * look(x)[1][k]
                between = np.linspace(a, b, 9)
                lowest = 1 + int(np.argmin([height(x) for x in between[1:-1]]))
                around = between[lowest - 1], between[lowest + 1]
                turn = optimize.minimize_scalar(height, bounds=around, method="bounded", options={"xatol": 1e-4}).x
                edges += [(x, look(x)) for x in (*between[1:-1], turn)]
    edges.sort(key=lambda edge: edge[0])
    for (a, p), (b, r) in zip(edges, edges[1:]):
        if p[1] is not None and r[1] is not None:
            for k in range(len(p[1])):
                if (p[1][k] < 0) != (r[1][k] < 0):
                    roots += crossing(lambda x: look(x)[1], k, a, b)
        elif p[0] != r[0]:
            roots.append(halved(lambda x: look(x)[0] == p[0], a, b))
    found = []
    for x in sorted(roots):
        below, above = look(x - 2e-6)[0], look(x + 2e-6)[0]
        if below != above:
            found.append({"at": math.exp(x), "below": below, "above": above})
    return found


def crossing(ds, k, a, b):
    """Where a quantity goes through 0; [] where it stops to exist on the way, which shows in the comparison."""
    try:
        return [optimize.brentq(lambda x: ds(x)[k], a, b, xtol=1e-8)]
    except TypeError:
        return []


def halved(same, a, b):
    return optimize.brentq(lambda x: 1 if same(x) else -1, a, b, xtol=1e-8)


def curve(setting, form, varied, with_noise, kept):
    """Flips of a form over a cutoff of a stage, or over its order."""
    stages = setting.given["stages"]
    index = varied["stage"]

    def filtered(value, twin=None, meaning=None):
        key = (index, varied["what"], value, twin, meaning)
        if key not in kept:
            at = {"order": value} if varied["what"] == "order" else {"cutoffsHz": [math.exp(value)]}
            changed = [{**spec, **at} if i == index else spec for i, spec in enumerate(stages)]
            kept[key] = version(setting, changed, twin, meaning, 1e-8)
        return kept[key]

    def look(value):
        key = (index, varied["what"], value, with_noise, repr(form))
        if key not in kept:
            chains = lambda twin, meaning: filtered(value, twin, meaning)
            kept[key] = verdicts(measured(setting, form, filtered(value)) if with_noise else answer(setting, form, chains), with_noise)
        return kept[key]

    if varied["what"] == "order":
        seen = [look(order)[0] for order in range(1, ORDERS + 1)]
        return {"flips": [{"at": n + 1, "below": a, "above": b} for n, (a, b) in enumerate(zip(seen, seen[1:]), 1) if a != b]}
    if ("range", index) not in kept:
        kept["range", index] = sound_range(setting, filtered, stages[index]["cutoffsHz"][0])
    low, high = kept["range", index]
    return {"flips": flips(look, low, high), "fromHz": low, "toHz": high}


def sound_range(setting, filtered, present):
    """Cutoffs around the present one that leave more of the waveform than SciPy's rounding: a millionth of its largest value."""
    largest = np.abs(setting.before).max()
    low = high = math.log(present)
    least, most = math.log(0.01), math.log(0.45 * setting.rate)
    step = (most - least) / 60
    for way in (-1, 1):
        x = math.log(present)
        while least <= x <= most and np.abs(filtered(x).after).max() > 1e-6 * largest:
            low, high = min(low, x), max(high, x)
            x += way * step
    return math.exp(low), math.exp(high)


def version(setting, specs, twin, meaning, smallest):
    if meaning is not None:
        stated, now = meaning
        has = [spec.get("meaning") == stated for spec in specs]
        if not any(has):
            has = ["meaning" in spec for spec in specs]
        specs = [{**spec, "meaning": now} if concerned else spec for spec, concerned in zip(specs, has)]
    return Filtered(setting, specs, twin, smallest)


# what is asked


def settings(draw):
    """Fourteen cases that differ in sampling rate, high-pass, low-pass, baseline and what is looked at."""
    plan = [
        # rate, high-pass order, direction, meaning, low-pass, amplifier, difference
        (500, 2, "both", "half-amplitude", "butterworth", True, False),
        (250, 1, "both", "half-amplitude", None, False, False),
        (250, 2, "both", "half-power", None, False, True),
        (500, 4, "both", "half-amplitude", None, False, False),
        (250, 3, "both", "half-power", "butterworth", False, False),
        (500, 1, "forward", "half-power", "butterworth", False, False),
        (250, 2, "forward", "half-amplitude", None, True, False),
        (250, 4, "forward", "half-power", "sinc", False, True),
        (500, 2, "both", "design", "sinc", False, False),
        (250, 3, "both", "design", None, False, False),
        (250, 2, "both", "half-amplitude", "sinc", False, True),
        (500, 1, "both", "half-power", None, False, False),
        (250, 4, "both", "half-amplitude", "butterworth", True, True),
        (250, 0, None, "half-amplitude", "sinc", False, False),
    ]
    for index, (rate, order, direction, meaning, low, amplifier, difference) in enumerate(plan):
        stages = []
        if amplifier:
            stages.append({"design": "amplifier", "pass": "high", "order": 1, "cutoffHz": draw.choice([0.016, 0.1])})
        cutoff = round(0.1 * 20 ** draw.random(), 3)
        if order:
            stages.append({"design": "butterworth", "pass": "high", "order": order, "cutoffsHz": [cutoff], "meaning": meaning,
                           "direction": direction})
        else:
            stages.append({"design": "windowed-sinc", "pass": "high", "cutoffsHz": [round(0.8 + draw.random(), 2)], "meaning": meaning,
                           "transitionHz": 1.5, "window": {"name": "hamming"}, "delay": "compensated"})
        if low == "butterworth":
            stages.append({"design": "butterworth", "pass": "low", "order": 4, "cutoffsHz": [30], "meaning": "half-power",
                           "direction": direction})
        if low == "sinc":
            stages.append({"design": "windowed-sinc", "pass": "low", "cutoffsHz": [30], "meaning": "half-amplitude", "transitionHz": 7.5,
                           "window": {"name": "hamming"}, "delay": "compensated"})
        late = {"latencyMs": draw.randint(340, 460) + 0.37, "widthMs": draw.randint(140, 260)}
        early = {"latencyMs": draw.randint(150, 200) + 0.37, "widthMs": draw.randint(30, 70)}
        part = lambda name, low_uv, high_uv, at: {"shape": "gaussian", "name": name, "amplitudeUv": round(draw.uniform(low_uv, high_uv), 2), **at}
        yield {
            "samplingRateHz": rate, "epoch": {"fromMs": -200, "toMs": 800}, "stages": stages,
            "baseline": draw.choice(["none", {"fromMs": -100, "toMs": 0}, {"fromMs": -200, "toMs": 0}]),
            "conditions": [{"name": "one", "components": [part("late", 7, 13, late), part("early", -4, -1, early)]},
                           {"name": "two", "components": [part("late", 2, 5, late), part("early", -1, 1, early)]}],
            "chosen": {"kind": "difference", "first": "one", "second": "two"} if difference else {"kind": "condition", "name": "one"},
            "score": {"kind": "mean", "fromMs": 60, "toMs": 120, "polarity": "positive"},
            "measure": {"mean": {"fromMs": 300, "toMs": 480}, "peak": {"fromMs": 260, "toMs": 600}, "polarity": "positive"},
            "noise": {"kind": "model", "exponent": round(draw.uniform(1, 1.8), 2), "levelAt1HzUv2PerHz": round(draw.uniform(2, 10), 2),
                      "flatBelowHz": 0.02, "whiteUv2PerHz": 0.02, "driftAt1HzUv2PerHz": draw.choice([0, 1]), "lines": [],
                      "alpha": {"centreHz": 10, "sdHz": 1.5, "peakUv2PerHz": round(draw.uniform(1, 8), 2)}},
            "trials": draw.randint(30, 120),
        }


def amounts(number, draw):
    """An amount on one side or the other of what there is, so that both verdicts occur."""
    return round(max(abs(number or 0), 1e-3) * draw.choice([0.4, 0.7, 0.9, 1.3]), 4)


def asked(setting, present, draw):
    """(form, whether it is measured, what is varied or None) of every form."""
    early, late = {"fromMs": -100, "toMs": 60}, setting.given["measure"]["mean"]
    number = lambda form, with_noise=False: (measured if with_noise else shown)(setting, form, present)["number"]
    offline = next(i for i, spec in enumerate(setting.given["stages"]) if spec["design"] != "amplifier")
    last = len(setting.given["stages"]) - 1
    recursive = [i for i in (offline, last) if setting.given["stages"][i]["design"] == "butterworth"]
    cutoff = {"stage": offline, "what": "cutoff", "cutoff": 0} if offline in recursive else None
    low = {"stage": last, "what": "cutoff", "cutoff": 0} if last in recursive and last != offline else None
    order = {"stage": offline, "what": "order", "cutoff": 0} if cutoff else None

    def changed(row, unit="own", relation="at least"):
        form = {"form": "change", "row": row, "relation": relation, "amount": 0, "unit": unit}
        return {**form, "amount": amounts(number(form), draw)}

    def made(unit, window=early):
        form = {"form": "deflection", "window": window, "amount": 0, "unit": unit}
        return {**form, "amount": amounts(number(form), draw)}

    def moved(direction):
        form = {"form": "onset", "direction": direction, "ms": 0}
        return {**form, "ms": amounts(number(form), draw)}

    def came(window):
        form = {"form": "from-outside", "window": window, "percent": 0}
        return {**form, "percent": amounts(number(form), draw)}

    def differs(window, says):
        form = {"form": "effect", "first": "one", "second": "two", "window": window, "says": says, "leastUv": 1e-9}
        return {**form, "leastUv": amounts(effect(setting, form, present)["values"]["after"], draw)}

    yield changed("mean-amplitude"), False, cutoff
    yield changed("mean-amplitude", "%", "at most"), False, cutoff
    yield changed("score", "%"), False, None
    yield changed("peak-amplitude", "%"), False, cutoff
    yield changed("peak-latency"), False, low
    yield changed("signed-area", "%"), False, None
    yield changed("area-latency"), False, None
    first = made("µV")
    yield first, False, cutoff
    yield made("%"), False, order
    yield made("µV", {"fromMs": 60, "toMs": 180}), False, cutoff
    yield came({"fromMs": 60, "toMs": 120}), False, None
    yield came(late), False, None
    yield differs({"fromMs": 40, "toMs": 100}, "is absent without the filter"), False, cutoff
    yield differs({"fromMs": 560, "toMs": 760}, "changes sign"), False, None
    yield differs(late, "exists without the filter"), False, None
    direction = draw.choice(["earlier", "later"])
    yield moved(direction), False, cutoff
    hz = round(draw.uniform(0.05, 0.6), 3)
    db = -20 * math.log10(abs(present.gain(np.array([hz]))[0]))
    yield {"form": "attenuation", "hz": hz, "db": amounts(db, draw)}, False, cutoff
    yield {"form": "attenuation", "hz": 50, "db": 30}, False, low
    for locked in (True, False):
        form = {"form": "tone", "hz": draw.choice([0.2, 50, 60]), "amplitudeUv": 5, "belowUv": 0, "locked": locked}
        left = answer(setting, form, lambda *_: present)["number"]
        yield {**form, "belowUv": amounts(left, draw)}, False, cutoff
    forward = any(spec.get("direction") == "forward" for spec in setting.given["stages"])
    twin = "zero-phase" if forward else "causal"
    for shows, what in ((first, cutoff), (changed("mean-amplitude"), None), (moved(direction), None)):
        yield {"form": "twin", "twin": twin, "shows": shows}, False, what
    conclusion = changed("mean-amplitude", "%")
    yield {"form": "meaning", "stated": "half-amplitude", "other": "half-power", "conclusion": conclusion}, False, cutoff
    yield {"form": "meaning", "stated": "half-power", "other": "design", "conclusion": made("µV")}, False, None
    yield changed("mean-amplitude"), True, cutoff
    yield changed("mean-amplitude", "%"), True, None
    yield changed("score"), True, None
    yield differs(late, "changes sign"), True, None


def solve(given, draw):
    setting = Setting(given)
    full = {}

    def chains(twin, meaning):
        if (twin, meaning) not in full:
            full[twin, meaning] = version(setting, given["stages"], twin, meaning, 1e-14)
        return full[twin, meaning]

    kept, answers = {}, []
    for form, with_noise, varied in asked(setting, chains(None, None), draw):
        found = measured(setting, form, chains(None, None)) if with_noise else answer(setting, form, chains)
        if found is None:
            continue
        entry = {"form": form, "measured": with_noise, "number": found["number"], "decides": found["d"], "values": found["values"],
                 "interval": found.get("interval")}
        if varied is not None:
            entry.update(varied=varied, **curve(setting, form, varied, with_noise, kept))
        answers.append(entry)
    return {**given, "answers": answers}


def main():
    options = arguments(__doc__, 23)
    draw = random.Random(options.seed)
    cases = []
    for index, given in enumerate(list(settings(draw))):
        seed = draw.randrange(2 ** 31)
        if index % options.every == options.seed % options.every:
            cases.append(solve(given, random.Random(seed)))
    note = ("Answers to claims on built waveforms under the continuous extent. decides: at least 0 where the claim holds, null where it "
            "cannot be told. flips: every change of the verdict over an order, or a cutoff between fromHz and toHz.")
    write(options.out or os.path.join(os.path.dirname(os.path.abspath(__file__)), "claims.json"), options.seed, note, cases)


if __name__ == "__main__":
    main()
