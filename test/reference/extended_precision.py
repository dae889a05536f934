"""Recursive stages in extended precision (80 bits on x86), independent of SciPy and of the project's own code.

A stage is kept as poles and zeros in the bilinear variable s = (1 - 1/z) / (1 + 1/z), which is j*tan(pi*f/fs) on the unit circle.
Poles near z = 1 are small numbers there, so nothing is lost by rounding them, whatever the cutoff. Filtering uses
trapezoidal integrators, whose coefficients are those small numbers; kernels are sums of the poles' residues.
"""

import numpy as np

LD = np.longdouble
CLD = np.clongdouble
PI = LD("3.14159265358979323846264338327950288")
HALF_SQUARED = {"half-amplitude": LD("0.25"), "half-power": LD("0.5")}


def precise_enough():
    """False where long double is an ordinary double (some ARM machines)."""
    return np.finfo(LD).nmant >= 63


def butterworth_pairs(spec, rate):
    """Rows (c2, c1, c0, d2, d1, d0) of one pass, from the analogue prototype's poles."""
    n, band_pass = spec["order"], spec["pass"]
    warped = [np.tan(PI * LD(f) / LD(rate)) for f in spec["cutoffsHz"]]
    passes = 2 if spec["direction"] == "both" else 1
    k = LD(1)
    if spec["meaning"] != "design":
        k = (HALF_SQUARED[spec["meaning"]] ** (LD(-1) / passes) - 1) ** (LD(1) / (2 * n))
    zero, one = LD(0), LD(1)
    rows = []
    angles = [PI * LD(2 * i + n - 1) / LD(2 * n) for i in range(1, n + 1)]
    upper = [CLD(np.cos(a)) + CLD(1j) * CLD(np.sin(a)) for i, a in enumerate(angles) if 2 * (i + 1) < n + 1]
    odd = n % 2 == 1
    if band_pass in ("low", "high"):
        omega = warped[0] / k if band_pass == "low" else warped[0] * k
        for p in upper:
            d1, d0 = -2 * p.real * omega, omega * omega
            rows.append((zero, zero, d0, one, d1, d0) if band_pass == "low" else (one, zero, zero, one, d1, d0))
        if odd:
            rows.append((zero, zero, omega, zero, one, omega) if band_pass == "low"
                        else (zero, one, zero, zero, one, omega))
        return rows
    centre = warped[0] * warped[1]
    width = (warped[1] - warped[0]) * (1 / k if band_pass == "band" else k)
    def numerator():
        return (zero, width, zero) if band_pass == "band" else (one, zero, centre)
    for p in upper:
        scaled = p * CLD(width) if band_pass == "band" else CLD(width) / p
        root = np.sqrt(scaled * scaled - 4 * CLD(centre))
        large = (scaled + root) / 2 if abs(scaled + root) >= abs(scaled - root) else (scaled - root) / 2
        for s in (large, CLD(centre) / large):
            rows.append((*numerator(), one, -2 * s.real, s.real * s.real + s.imag * s.imag))
    if odd:
        rows.append((*numerator(), one, width, centre))
    return rows


def notch_pairs(spec, rate):
    rows = []
    for harmonic in range(1, spec["harmonics"] + 2):
        t = np.tan(PI * LD(spec["frequencyHz"]) * harmonic / LD(rate))
        width = np.tan(PI * LD(spec["bandwidthHz"]) / LD(rate))
        if spec["direction"] == "both":
            width = width * np.sqrt(np.sqrt(LD(2)) - 1)
        rows.append((LD(1), LD(0), t * t, LD(1), width * (1 + t * t), t * t))
    return rows


def pairs_of(spec, rate):
    """Rows of one pass of a recursive stage; None for a FIR stage."""
    if spec["design"] == "butterworth":
        return butterworth_pairs(spec, rate)
    if spec["design"] == "amplifier":
        return butterworth_pairs({**spec, "cutoffsHz": [spec["cutoffHz"]], "meaning": "design",
                                  "direction": "forward"}, rate)
    if spec["design"] == "notch":
        return notch_pairs(spec, rate)
    return None


def response(rows, passes, frequencies, rate):
    """Complex gain of a recursive stage as applied; frequencies in Hz, at most half the sampling rate."""
    out = np.empty(len(frequencies), dtype=CLD)
    for i, f in enumerate(frequencies):
        value = CLD(1)
        at_nyquist = 2 * f == rate
        omega = LD(0) if at_nyquist else np.tan(PI * LD(f) / LD(rate))
        s = CLD(1j) * CLD(omega)
        for c2, c1, c0, d2, d1, d0 in rows:
            if at_nyquist:
                value *= CLD(c2 / d2 if d2 else c1 / d1)
            else:
                value *= (CLD(c2) * s * s + CLD(c1) * s + CLD(c0)) / (CLD(d2) * s * s + CLD(d1) * s + CLD(d0))
        out[i] = value * np.conj(value) if passes == 2 else value
    return out


def group_delay(rows, frequencies, rate):
    """Group delay of one pass in samples; zeros on the unit circle add nothing."""
    out = np.empty(len(frequencies), dtype=LD)
    for i, f in enumerate(frequencies):
        omega = np.tan(PI * LD(f) / LD(rate))
        total = LD(0)
        for _, _, _, d2, d1, d0 in rows:
            # The phase of d0 - d2*omega**2 + j*d1*omega, differentiated by omega.
            real, imaginary = d0 - d2 * omega * omega, d1 * omega
            total += (d1 * real + 2 * d2 * omega * imaginary) / (real * real + imaginary * imaginary)
        out[i] = total * (1 + omega * omega) / 2
    return out


def run(rows, x, start):
    """One forward pass; `start` is the value that the input is taken to have had for ever before."""
    y = np.array(x, dtype=LD)
    level = LD(start)
    for c2, c1, c0, d2, d1, d0 in rows:
        out = np.empty_like(y)
        if d2 == 0:
            integral = level / d0
            scale = 1 / (1 + d0)
            for i in range(len(y)):
                w1 = (y[i] - d0 * integral) * scale
                w0 = integral + w1
                integral = w0 + w1
                out[i] = c1 * w1 + c0 * w0
        else:
            first, second = LD(0), level / d0
            scale, both = 1 / (1 + d1 + d0), d1 + d0
            for i in range(len(y)):
                w2 = (y[i] - both * first - d0 * second) * scale
                w1 = first + w2
                w0 = second + w1
                first = w1 + w2
                second = w0 + w1
                out[i] = c2 * w2 + c1 * w1 + c0 * w0
        level = level * c0 / d0
        y = out
    return y


def padding_of(spec):
    """The default length of SciPy's sosfiltfilt: 3 * (2 * sections + 1, less one for a first-order section)."""
    if spec["design"] == "notch":
        return 3 * (2 * (spec["harmonics"] + 1) + 1)
    if spec["pass"] in ("band", "stop"):
        return 3 * (2 * spec["order"] + 1)
    return 3 * (spec["order"] + 1)


def apply_epochs(spec, rate, x):
    """One recursive stage applied to one epoch."""
    rows = pairs_of(spec, rate)
    x = np.array(x, dtype=LD)
    if spec["design"] == "amplifier":
        return run(rows, x, 0)
    if spec["direction"] == "forward":
        return run(rows, x, x[0])
    pad = padding_of(spec)
    padded = np.concatenate([2 * x[0] - x[pad:0:-1], x, 2 * x[-1] - x[-2:-pad - 2:-1]])
    forward = run(rows, padded, padded[0])
    backward = run(rows, forward[::-1], forward[-1])[::-1]
    return backward[pad:pad + len(x)]


def kernel(stages, rate, reach):
    """Impulse response of recursive stages as applied, lags -reach to reach, as the sum over the poles' residues.

    The chain is G(s), and z = (1 + s) / (1 - s), so the residue of G * z**(n - 1) at z = p is that of G at s times
    2 / (1 - s)**2 * p**(n - 1). Poles with negative real part give the lags from 1 up, those with positive real part
    the lags from -1 down; lag 0 has the causal poles and the value of G at z = 0. All poles must be simple.
    """
    numerators, poles = [], []
    for spec in stages:
        for c2, c1, c0, d2, d1, d0 in pairs_of(spec, rate):
            for sign in ((1, -1) if spec.get("direction") == "both" else (1,)):
                # Scaled by the denominator's leading coefficient, which becomes -1 for a mirrored first-order row.
                lead = d2 if d2 else d1 * sign
                numerators.append((c2 / lead, sign * c1 / lead, c0 / lead))
                if d2 == 0:
                    poles.append(CLD(-d0 * sign))
                else:
                    root = np.sqrt(CLD(d1 * d1 - 4 * d0))
                    large = (-CLD(d1) - root) / 2 if d1 >= 0 else (-CLD(d1) + root) / 2
                    poles.extend([large * sign, CLD(d0) / large * sign])

    def value(s, skip):
        out = CLD(1)
        for c2, c1, c0 in numerators:
            out *= (CLD(c2) * s + CLD(c1)) * s + CLD(c0)
        for i, p in enumerate(poles):
            if i != skip:
                out /= s - p
        return out

    lags = np.arange(1, reach + 1).astype(LD)
    after, before = np.zeros(reach, dtype=LD), np.zeros(reach, dtype=LD)
    centre = value(CLD(-1), -1)
    for i, s in enumerate(poles):
        residue = value(s, i) * 2 / ((1 - s) * (1 - s))
        p = (1 + s) / (1 - s)
        # log p = 2 artanh(s), by its two logarithms of numbers near 1, keeps the precision of a small s.
        logarithm = log_near_one(s) - log_near_one(-s)
        if s.real < 0:
            after += (residue / p * np.exp(lags * logarithm)).real
            centre += residue / p
        else:
            # Outside the circle the sign turns: the contour runs round the pole the other way.
            before -= (residue / p * np.exp(-lags * logarithm)).real
    return np.concatenate([before[::-1], [centre.real], after])


def log_near_one(s):
    """log(1 + s) for a complex s in extended precision without losing a small s."""
    x, y = s.real, s.imag
    return CLD(np.log1p(2 * x + x * x + y * y) / 2) + CLD(1j) * CLD(np.arctan2(y, 1 + x))
