"""SciPy's side of the bench: reads a workload's name a line, does it once, answers with its milliseconds."""

import sys
import time

import numpy as np
from scipy import signal

RATE, CHANNELS, SAMPLES, FILTERS, AVERAGES, EPOCH = 500, 64, 300_000, 320, 200, 1500
state = {}


def kept(name, make):
    """Input made once, outside the time that is measured."""
    if name not in state:
        state[name] = make()
    return state[name]


def recording():
    return kept("recording", lambda: np.random.default_rng(1).standard_normal((CHANNELS, SAMPLES)))


def averages():
    return kept("averages", lambda: np.random.default_rng(2).standard_normal((AVERAGES, EPOCH)))


def log_frequencies(count):
    return 0.01 * (RATE / 2 / 0.01) ** (np.arange(count) / (count - 1))


def weights():
    times = -500 + np.arange(EPOCH) * 1000 / RATE
    scored, base = (times >= 300) & (times <= 500), (times >= -200) & (times <= 0)
    return scored / scored.sum() - base / base.sum()


def sweep_filter(index):
    place = index // 8 / 39
    cutoff = 0.1 * 20**place if index % 2 == 0 else 5 * 20**place
    return signal.butter(1 + index // 2 % 4, cutoff, "highpass" if index % 2 == 0 else "lowpass", fs=RATE, output="sos")


def w1_one_call():
    sos = np.vstack([signal.butter(4, 0.1, "highpass", fs=RATE, output="sos"), signal.butter(4, 30, fs=RATE, output="sos")])
    x = recording()
    yield
    signal.sosfiltfilt(sos, x)


def w1_two_calls():
    high = signal.butter(4, 0.1, "highpass", fs=RATE, output="sos")
    low = signal.butter(4, 30, fs=RATE, output="sos")
    x = recording()
    yield
    signal.sosfiltfilt(low, signal.sosfiltfilt(high, x))


def w2():
    taps = signal.firwin(1651, 30, window="hamming", fs=RATE)
    x = recording()
    yield
    signal.oaconvolve(x, taps[np.newaxis, :], mode="same", axes=-1)


def w3_sections():
    sos = signal.butter(8, [1, 30], "bandpass", fs=RATE, output="sos")
    hz = log_frequencies(2048)
    yield
    signal.sosfreqz(sos, worN=hz, fs=RATE)


def w3_taps():
    taps = signal.firwin(1651, 30, window="hamming", fs=RATE)
    hz = log_frequencies(2048)
    yield
    signal.freqz(taps, 1, worN=hz, fs=RATE)


def adjoint(sos, w):
    """The exact transpose of sosfiltfilt with its odd padding and steady-state start, applied to weights."""
    taps = 2 * len(sos) + 1 - min((sos[:, 2] == 0).sum(), (sos[:, 5] == 0).sum())
    pad = 3 * taps
    gain = np.prod(sos[:, :3].sum(axis=1) / sos[:, 3:].sum(axis=1))
    v = np.concatenate([np.zeros(pad), w, np.zeros(pad)])
    for _ in range(2):
        # Both passes end on the same transpose, turned round: run from rest on reversed time, and give the first
        # sample what the steady state had taken from it.
        given = gain * v.sum()
        v = signal.sosfilt(sos, v)
        v[-1] += given - v.sum()
        v = v[::-1]
    g = v[pad:-pad].copy()
    left, right = v[:pad][::-1], v[-pad:]
    g[0] += 2 * left.sum()
    g[1:pad + 1] -= left
    g[-1] += 2 * right.sum()
    g[-2:-pad - 2:-1] -= right
    return g


def slider_scores(y):
    y = y - y[:, 150:251].mean(axis=1, keepdims=True)
    window = y[:, 400:501]
    window.mean(axis=1)
    window.max(axis=1)
    window.argmax(axis=1)
    np.clip(window, 0, None).sum(axis=1)


def w4():
    x = averages()[:4]
    hz = log_frequencies(1024)
    w = weights()
    impulse = np.zeros(2000)
    impulse[1000] = 1
    position = state["position"] = (state.get("position", 0) + 0.137) % 1
    yield
    sos = np.vstack([signal.butter(2, 0.1 + 1.9 * position, "highpass", fs=RATE, output="sos"),
                     signal.butter(4, 30, fs=RATE, output="sos")])
    signal.sosfreqz(sos, worN=hz, fs=RATE)
    np.cumsum(signal.sosfiltfilt(sos, impulse))
    slider_scores(signal.sosfiltfilt(sos, x))
    adjoint(sos, w)


def w4f():
    x = averages()[:4]
    hz = log_frequencies(1024)
    w = weights()
    position = state["position"] = (state.get("position", 0) + 0.137) % 1
    yield
    taps = -signal.firwin(3301, 0.3 + 1.7 * position, window="hamming", fs=RATE)
    taps[1650] += 1
    signal.freqz(taps, 1, worN=hz, fs=RATE)
    np.cumsum(taps[650:2650])
    slider_scores(signal.oaconvolve(x, taps[np.newaxis, :], axes=-1)[:, 1650:1650 + EPOCH])
    signal.oaconvolve(w, taps)


def w5_adjoint():
    x, w = averages(), weights()
    yield
    for index in range(FILTERS):
        x @ adjoint(sweep_filter(index), w)


def w5_brute_force():
    x, w = averages(), weights()
    yield
    for index in range(FILTERS):
        signal.sosfiltfilt(sweep_filter(index), x) @ w


def w5p():
    x = averages()
    yield
    for index in range(FILTERS):
        y = signal.sosfiltfilt(sweep_filter(index), x)
        y = y - y[:, 150:251].mean(axis=1, keepdims=True)
        y[:, 400:501].max(axis=1)


def check_adjoint():
    """What is timed must be right: the transpose gives what filtering gives."""
    x, w = averages()[:3], weights()
    for index in (0, 7, 100, 319):
        sos = sweep_filter(index)
        assert np.allclose(x @ adjoint(sos, w), signal.sosfiltfilt(sos, x) @ w, rtol=0, atol=1e-9), index


def main():
    check_adjoint()
    print("ready", flush=True)
    for line in sys.stdin:
        work = globals()[line.strip()]()
        next(work)
        began = time.perf_counter()
        next(work, None)
        print((time.perf_counter() - began) * 1000, flush=True)


main()
