"""Each stage designed with SciPy's functions alone."""

import math

import numpy as np
from scipy import optimize, signal

HALF = {"half-amplitude": 0.5, "half-power": 1 / math.sqrt(2)}


def design_cutoffs(spec, rate):
    """Single-pass half-power cutoffs of a Butterworth stage, in closed form (after Winter, Biomechanics and Motor
    Control of Human Movement, smoothing section, extended to every order, pass and gain)."""
    cutoffs = spec["cutoffsHz"]
    if spec["meaning"] == "design":
        return list(cutoffs)
    passes = 2 if spec["direction"] == "both" else 1
    k = (HALF[spec["meaning"]] ** (-2 / passes) - 1) ** (1 / (2 * spec["order"]))
    warped = [math.tan(math.pi * f / rate) for f in cutoffs]
    back = lambda omega: rate / math.pi * math.atan(omega)
    if spec["pass"] == "low":
        return [back(warped[0] / k)]
    if spec["pass"] == "high":
        return [back(warped[0] * k)]
    centre_squared = warped[0] * warped[1]
    width = (warped[1] - warped[0]) * (1 / k if spec["pass"] == "band" else k)
    upper = math.sqrt(centre_squared + width * width / 4) + width / 2
    return [back(centre_squared / upper), back(upper)]


BTYPE = {"low": "lowpass", "high": "highpass", "band": "bandpass", "stop": "bandstop"}


def butterworth_sections(spec, rate):
    cutoffs = design_cutoffs(spec, rate)
    return signal.butter(spec["order"], cutoffs if len(cutoffs) == 2 else cutoffs[0],
                         BTYPE[spec["pass"]], fs=rate, output="sos")


def notch_sections(spec, rate):
    rows = []
    for harmonic in range(1, spec["harmonics"] + 2):
        f0 = spec["frequencyHz"] * harmonic
        width = spec["bandwidthHz"]
        if spec["direction"] == "both":
            # The width as applied is met by the squared gain: tan(width / 2) shrinks by (sqrt(2) - 1) ** 0.5.
            shrunk = math.tan(math.pi * width / rate) * math.sqrt(math.sqrt(2) - 1)
            width = rate / math.pi * math.atan(shrunk)
        b, a = signal.iirnotch(f0, f0 / width, fs=rate)
        rows.append(np.concatenate([b, a]))
    return np.array(rows)


def tap_count(spec, rate):
    """(odd number of taps, window for firwin)."""
    window, transition = spec["window"], spec["transitionHz"]
    if window["name"] == "kaiser":
        attenuation = window["attenuationDb"]
        exact = (attenuation - 7.95) / (2.285 * 2 * math.pi * transition / rate) + 1
        count = math.ceil(exact - 1e-9)
        beta = signal.kaiser_beta(attenuation)
        kaiserord_count, kaiserord_beta = signal.kaiserord(attenuation, transition / (rate / 2))
        # kaiserord refuses less than 8 dB and gives the same numbers above.
        assert kaiserord_count == count and kaiserord_beta == beta
        return count + 1 - count % 2, ("kaiser", beta)
    factor = {"rectangular": 0.9, "hann": 3.1, "hamming": 3.3, "blackman": 5.5}[window["name"]]
    count = math.ceil(factor * rate / transition - 1e-9)
    return count + 1 - count % 2, {"rectangular": "boxcar"}.get(window["name"], window["name"])


def combination(band_pass, count, window, nominal, rate):
    """Taps of any pass from low-passes that are 1 at 0 Hz, so that high- and band-passes are exactly 0 there."""
    lows = [signal.firwin(count, f, window=window, fs=rate) for f in nominal]
    delta = np.zeros(count)
    delta[count // 2] = 1
    if band_pass == "low":
        return lows[0]
    if band_pass == "high":
        return delta - lows[0]
    if band_pass == "band":
        return lows[1] - lows[0]
    return delta - (lows[1] - lows[0])


def zero_phase_gain(taps, frequency, rate):
    """Real gain of symmetric taps once their delay is taken out."""
    half = len(taps) // 2
    n = np.arange(1, half + 1)
    return taps[half] + 2 * np.dot(taps[half + 1:], np.cos(2 * np.pi * frequency / rate * n))


def nominal_cutoffs(spec, rate, count, window):
    """Nominal cutoffs that put the stated gain at the stated frequencies, solved on the response."""
    wanted = spec["cutoffsHz"]
    if spec["meaning"] == "design":
        return list(wanted)
    gain = HALF[spec["meaning"]]
    nominal = list(wanted)
    reach = 0.8 * spec["transitionHz"]
    for _ in range(60):
        before = list(nominal)
        for i, frequency in enumerate(wanted):
            def miss(f):
                trial = list(nominal)
                trial[i] = f
                return zero_phase_gain(combination(spec["pass"], count, window, trial, rate), frequency, rate) - gain
            low = max(frequency - reach, 1e-9 * rate)
            high = min(frequency + reach, rate / 2 * (1 - 1e-9))
            nominal[i] = optimize.brentq(miss, low, high, xtol=1e-15 * rate, rtol=8.9e-16)
        if len(wanted) == 1 or max(abs(a - b) for a, b in zip(before, nominal)) < 1e-14 * rate:
            break
    return nominal


def windowed_sinc_taps(spec, rate):
    """(symmetric taps, nominal cutoffs). A minimum-phase stage starts from the same taps."""
    count, window = tap_count(spec, rate)
    nominal = nominal_cutoffs(spec, rate, count, window)
    return combination(spec["pass"], count, window, nominal, rate), nominal


def moving_average_taps(spec, rate):
    count = round(spec["durationMs"] * rate / 1000)
    if spec["delay"] == "compensated" and count % 2 == 0:
        taps = np.ones(count + 1)
        taps[0] = taps[-1] = 0.5
        return taps / count
    return np.ones(count) / count


def sections_of(spec, rate):
    """SciPy's sections of a recursive stage; None for a FIR stage."""
    if spec["design"] == "butterworth":
        return butterworth_sections(spec, rate)
    if spec["design"] == "amplifier":
        return signal.butter(spec["order"], spec["cutoffHz"], BTYPE[spec["pass"]], fs=rate, output="sos")
    if spec["design"] == "notch":
        return notch_sections(spec, rate)
    return None


def taps_of(spec, rate):
    """(taps, lead in samples) of a FIR stage; a minimum-phase stage gives its symmetric prototype."""
    if spec["design"] == "windowed-sinc":
        taps, _ = windowed_sinc_taps(spec, rate)
    else:
        taps = moving_average_taps(spec, rate)
    return taps, (len(taps) // 2 if spec["delay"] == "compensated" else 0)


def passes_of(spec):
    return 2 if spec.get("direction") == "both" else 1


def convolve(x, taps, mode):
    """np.convolve along the last axis."""
    return np.apply_along_axis(lambda row: np.convolve(row, taps, mode=mode), -1, x)


def apply_epochs(stages, rate, x):
    """A chain applied to one epoch (last axis): stage after stage, each padded and started as its kind asks."""
    y = np.array(x, dtype=float)
    for spec in stages:
        sections = sections_of(spec, rate)
        if sections is None:
            taps, lead = taps_of(spec, rate)
            before = len(taps) - 1 - lead
            first, last = y[..., :1], y[..., -1:]
            left = 2 * first - y[..., before:0:-1] if before else y[..., :0]
            right = 2 * last - y[..., -2:-lead - 2:-1] if lead else y[..., :0]
            y = convolve(np.concatenate([left, y, right], axis=-1), taps, "valid")
        elif spec["design"] == "amplifier":
            y = signal.sosfilt(sections, y)
        elif passes_of(spec) == 2:
            y = signal.sosfiltfilt(sections, y)
        else:
            steady = signal.sosfilt_zi(sections).reshape((len(sections),) + (1,) * (y.ndim - 1) + (2,))
            y, _ = signal.sosfilt(sections, y, zi=steady * y[..., :1])
    return y


def settling_samples(sections, smallest=1e-17):
    """Samples until the slowest pole has died."""
    radius = max(np.abs(np.roots(row[3:])).max() for row in sections)
    return int(math.ceil(math.log(smallest) / math.log(min(radius, 1 - 1e-12)))) + 50


def apply_stand_alone(stages, rate, x):
    """A chain applied to a waveform that stands alone, last axis, by padding it with zeros until every kernel has died."""
    pad = 0
    for spec in stages:
        sections = sections_of(spec, rate)
        pad += len(taps_of(spec, rate)[0]) if sections is None else settling_samples(sections)
    zeros = np.zeros(np.shape(x)[:-1] + (pad,))
    y = np.concatenate([zeros, x, zeros], axis=-1)
    for spec in stages:
        sections = sections_of(spec, rate)
        if sections is None:
            taps, lead = taps_of(spec, rate)
            y = convolve(y, taps, "full")[..., lead:lead + y.shape[-1]]
        else:
            y = signal.sosfilt(sections, y)
            if passes_of(spec) == 2:
                y = signal.sosfilt(sections, y[..., ::-1])[..., ::-1]
    return y[..., pad:pad + np.shape(x)[-1]]
