/** Fewer numbers that stand for a waveform of n samples: its products with `count` orthonormal rows. */
export interface LowestCosines {
  readonly rows: Float64Array
  readonly count: number
}

/** Waveforms of at most so many samples are fitted as they are. */
const KEPT_WHOLE = 512
/** Highest frequency that must be kept: evoked activity has no detail beyond some 30 Hz. */
const KEPT_HZ = 50
/** Largest problem; its time grows with the third power. */
const MOST_KEPT = 1200

/**
 * What a fit works on: a short waveform as it is (null), of a long one the lowest cosines (the first rows of the discrete cosine transform
 * of type II, of the frequencies k·fs/(2n)). The rows are orthonormal, so that white noise stays white; the covariance of everything else
 * is carried over exactly, so that the fit of the cosines is an exact fit to less data: what is given up is noise above the highest of them
 * (85 Hz for 1500 samples at 500 Hz).
 *
 * @throws RangeError for a waveform that lasts so long that even 50 Hz asks for too many.
 */
export function lowestCosines(n: number, samplingRateHz: number): LowestCosines | null {
  if (n <= KEPT_WHOLE) return null
  const count = Math.min(n, Math.max(KEPT_WHOLE, Math.ceil((2 * KEPT_HZ * n) / samplingRateHz)))
  if (count > MOST_KEPT) {
    const most = (MOST_KEPT / (2 * KEPT_HZ)) * samplingRateHz
    throw new RangeError(`the waveform must have at most ${Math.floor(most)} samples at ${samplingRateHz} Hz, had ${n}`)
  }
  if (count === n) return null
  const rows = new Float64Array(count * n)
  for (let k = 0; k < count; k++) {
    const scale = Math.sqrt((k === 0 ? 1 : 2) / n)
    // k·(2i + 1) modulo 4n keeps the angle exact
    for (let i = 0; i < n; i++) rows[k * n + i] = scale * Math.cos((Math.PI * ((k * (2 * i + 1)) % (4 * n))) / (2 * n))
  }
  return { rows, count }
}
