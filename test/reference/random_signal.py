"""A signal that Python and TypeScript draw bit for bit alike, so that inputs need not be stored."""

import numpy as np

MASK = 0xFFFFFFFF


def uniform(seed, count):
    """`count` numbers in [0, 1) of the public-domain generator mulberry32."""
    state = seed & MASK
    out = np.empty(count)
    for i in range(count):
        state = (state + 0x6D2B79F5) & MASK
        t = state
        t = ((t ^ (t >> 15)) * (t | 1)) & MASK
        t ^= (t + ((t ^ (t >> 7)) * (t | 61))) & MASK
        out[i] = ((t ^ (t >> 14)) & MASK) / 4294967296.0
    return out


def random_signal(seed, count, amplitude, offset, drift):
    """Noise of the given amplitude on an electrode offset that drifts by `drift` per sample."""
    return offset + drift * np.arange(count) + amplitude * (uniform(seed, count) - 0.5)
