/** Draws the same signals as random_signal.py, bit for bit, so that inputs need not be stored. */
export interface SignalRecipe {
  seed: number
  count: number
  amplitude: number
  offset: number
  drift: number
}

/** Numbers in [0, 1) of the public-domain generator mulberry32. */
export function uniform(seed: number): () => number {
  let state = seed >>> 0
  return () => {
    state = (state + 0x6d2b79f5) >>> 0
    let t = Math.imul(state ^ (state >>> 15), state | 1)
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61)
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296
  }
}

/** Noise of the given amplitude on an electrode offset that drifts by `drift` per sample. */
export function randomSignal({ seed, count, amplitude, offset, drift }: SignalRecipe): Float64Array {
  const next = uniform(seed)
  return Float64Array.from({ length: count }, (_, i) => offset + drift * i + amplitude * (next() - 0.5))
}
