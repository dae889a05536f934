"""The late-only fit the slow way: every matrix written out sample by sample, SciPy's Cholesky factors and optimiser."""

import os

# matrices this small lose more to threads than they gain
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

import numpy as np
from scipy import linalg, optimize, signal

import scipy_design
from reference_file import arguments, write

RATE = 250
AMPLIFIER = {"design": "amplifier", "pass": "high", "order": 1, "cutoffHz": 0.5}
POWER_LAW = {"kind": "model", "exponent": 1, "levelAt1HzUv2PerHz": 20, "flatBelowHz": 0.02, "whiteUv2PerHz": 0.02, "lines": []}
WHITE = {"kind": "model", "exponent": 0, "levelAt1HzUv2PerHz": 0, "flatBelowHz": 0.02, "whiteUv2PerHz": 0.8, "lines": []}
ALPHA = {"kind": "model", "exponent": 0, "levelAt1HzUv2PerHz": 0, "flatBelowHz": 0.02, "whiteUv2PerHz": 0,
         "alpha": {"centreHz": 10, "sdHz": 2, "peakUv2PerHz": 1}, "lines": []}


def butterworth(band_pass, order, cutoffs, direction):
    return {"design": "butterworth", "pass": band_pass, "order": order, "cutoffsHz": cutoffs,
            "meaning": "half-amplitude", "direction": direction}


def sinc(band_pass, cutoffs, transition, delay):
    return {"design": "windowed-sinc", "pass": band_pass, "cutoffsHz": cutoffs, "meaning": "half-amplitude",
            "transitionHz": transition, "window": {"name": "hamming"}, "delay": delay}


CHAINS = [
    [butterworth("high", 2, [1], "both")],
    [butterworth("high", 2, [1], "forward")],
    [butterworth("high", 2, [0.5], "both"), butterworth("low", 4, [30], "both")],
    [sinc("high", [1.5], 2.5, "compensated")],
    [sinc("band", [2.5, 30], 4, "causal")],
    [AMPLIFIER, butterworth("high", 2, [1], "both"), sinc("low", [30], 8, "compensated")],
]


def density(noise, f):
    g = np.maximum(f, noise["flatBelowHz"])
    s = noise["whiteUv2PerHz"] + noise["levelAt1HzUv2PerHz"] * g ** -float(noise["exponent"])
    if "alpha" in noise:
        alpha = noise["alpha"]
        s = s + alpha["peakUv2PerHz"] * np.exp(-0.5 * ((f - alpha["centreHz"]) / alpha["sdHz"]) ** 2)
    return s


def power_gain(stages, rate, f):
    gain = np.ones(len(f))
    for spec in stages:
        sections = scipy_design.sections_of(spec, rate)
        if sections is None:
            h = signal.freqz(scipy_design.taps_of(spec, rate)[0], worN=f, fs=rate)[1]
            gain = gain * np.abs(h) ** 2
        else:
            h = signal.sosfreqz(sections, worN=f, fs=rate)[1]
            gain = gain * np.abs(h) ** (2 * scipy_design.passes_of(spec))
    return gain


def autocovariance(stages, rate, noise, count):
    """The integral of S|H|^2 cos on a fine grid, by the trapezoidal rule."""
    half = 2 ** 19
    f = np.arange(half + 1) * rate / (2 * half)
    s = density(noise, f) * power_gain(stages, rate, f)
    return np.fft.irfft(s)[:count] * half * rate / (2 * half) * 1.0


def main():
    options = arguments(__doc__, 11)
    rng = np.random.default_rng(options.seed)
    count, t = 220, (np.arange(220) - 70) * 1000 / RATE
    work = [(stages, noise, extent) for stages in CHAINS for noise in (POWER_LAW, WHITE) for extent in ("continuous", "epochs")]
    cases = []
    for index, (stages, noise, extent) in enumerate(work):
        # always drawn, so that a case is the same whichever others are kept
        seed = rng.integers(2 ** 31)
        if index % options.every != options.seed % options.every:
            continue
        cases.append(solve(np.random.default_rng(seed), stages, noise, extent, count, t))
    note = "Dense matrices, restricted likelihood by Nelder-Mead from the best of a grid; y rounded to 0.001 microvolt."
    write(options.out or os.path.join(os.path.dirname(os.path.abspath(__file__)), "late-only-fit.json"), options.seed, note, cases)


def running_operator(stages, count, onset, ahead):
    """Continuous stages as a matrix from the samples onset ... count + ahead - 1 to 0 ... count - 1: one impulse, moved."""
    most = 2 * count + ahead + abs(onset)
    impulse = np.zeros(2 * most + 1)
    impulse[most] = 1
    h = scipy_design.apply_stand_alone(stages, RATE, impulse)
    return h[most + np.arange(count)[:, None] - np.arange(onset, count + ahead)]


def operator(stages, extent, count, onset, ahead):
    """K, padding of the epoch included."""
    if extent == "continuous":
        return running_operator(stages, count, onset, ahead)
    amplified = running_operator([s for s in stages if s["design"] == "amplifier"], count, onset, ahead)
    return scipy_design.apply_epochs([s for s in stages if s["design"] != "amplifier"], RATE, amplified.T).T


def solve(rng, stages, noise, extent, count, t):
    trials, t0, slack, early = 40, 152, 30, (48, 128)
    sigma, length, residual = 10, 15, 0.01
    onset = int(np.ceil((t0 - slack - t[0]) * RATE / 1000 - 1e-6))
    ahead = 600 if extent == "continuous" else 0
    k = operator(stages, extent, count, onset, ahead)
    u = np.arange(k.shape[1]) * 1000 / RATE
    late = sigma ** 2 * np.exp(-((u[:, None] - u) ** 2) / (2 * length ** 2))
    offline = [s for s in stages if s["design"] != "amplifier"] if extent == "epochs" else []
    running = [s for s in stages if s not in offline]
    on_epoch = scipy_design.apply_epochs(offline, RATE, np.eye(count)).T
    cover = lambda spec: on_epoch @ linalg.toeplitz(autocovariance(running, RATE, spec, count)) @ on_epoch.T / trials
    c0, c_alpha = cover(noise), cover(ALPHA)
    base = k @ late @ k.T + residual ** 2 * np.eye(count)

    inside = (t >= early[0]) & (t <= early[1])
    e = np.where(inside, (1 + np.cos(2 * np.pi * (t - sum(early) / 2) / (early[1] - early[0]))) / 2, 0)
    ke = operator(stages, extent, count, 0, 0) @ e
    x = np.column_stack([ke, np.ones(count)])

    # a waveform of a late positivity, an early component in half of the cases, and noise of another scale with some alpha
    s_true, a_true, beta_true = rng.uniform(0.5, 2), rng.uniform(0, 15), rng.choice([0, 3])
    time = t[0] + (onset + np.arange(k.shape[1])) * 1000 / RATE
    wave = np.where((time > 150) & (time < 550), 5 * (1 - np.cos(2 * np.pi * (time - 150) / 400)), 0)
    drawn = linalg.cholesky(s_true * c0 + a_true * c_alpha + 1e-8 * np.eye(count), lower=True) @ rng.standard_normal(count)
    y = np.round(k @ wave + beta_true * ke + drawn - 0.7, 3)

    def factor(s, a):
        return linalg.cho_factor(base + s * c0 + a * c_alpha, lower=True)

    def deviance(s, a):
        f = factor(s, a)
        xm = linalg.cho_solve(f, x)
        inner = x.T @ xm
        b = linalg.solve(inner, xm.T @ y, assume_a="pos")
        r = y - x @ b
        return 2 * np.log(np.diag(f[0])).sum() + np.linalg.slogdet(inner)[1] + r @ linalg.cho_solve(f, r)

    # squares keep both from below zero and let them come to it; the best of a coarse grid is where the search begins
    grid = [(s, a) for s in (0.1, 0.3, 1, 3, 10) for a in (0, 0.1, 1, 5, 20, 80)]
    start = min(grid, key=lambda point: deviance(*point))
    best = optimize.minimize(lambda p: deviance(p[0] ** 2, p[1] ** 2), np.sqrt(np.maximum(start, 1e-4)), method="Nelder-Mead",
                             options={"xatol": 1e-7, "fatol": 1e-10, "maxiter": 1000})
    s, a = best.x[0] ** 2, best.x[1] ** 2
    f = factor(s, a)
    inner = x.T @ linalg.cho_solve(f, x)
    b = linalg.solve(inner, x.T @ linalg.cho_solve(f, y))
    ones = x[:, 1]
    m_ones = linalg.cho_solve(f, ones)
    rest = y - ones * (m_ones @ y) / (m_ones @ ones)
    solved = linalg.cho_solve(f, rest)
    estimate = late @ k.T @ solved
    filtered = k @ estimate
    noise_of_mean = np.sqrt(inside @ (s * c0 + a * c_alpha + residual ** 2 * np.eye(count)) @ inside) / inside.sum()
    kept = count - onset
    return {"samplingRateHz": RATE, "stages": stages, "extent": extent, "noise": noise, "trials": trials, "t0Ms": t0,
            "early": {"fromMs": early[0], "toMs": early[1]}, "startMs": t[0], "y": y, "beta": b[0],
            "standardError": np.sqrt(np.linalg.inv(inner)[0, 0]), "constant": b[1], "noiseScale": s, "alphaScale": a,
            "deviance": best.fun, "lateShare": filtered[inside].mean() / y[inside].mean(), "noiseOfMean": noise_of_mean,
            "filtered": filtered[::20], "late": estimate[:kept:20]}


if __name__ == "__main__":
    main()
