/**
 * Noise of single trials of continuous EEG, as a one-sided power spectral density S(f) in µV²/Hz, plus lines. A density
 * integrates to a variance over 0 to fs/2; white noise of variance σ² has S = 2σ²/fs.
 */

export interface NoiseLine {
  hz: number
  /** Peak, not peak-to-peak: the line is A·cos(2πft + phase) and has the power A²/2. */
  amplitudeUv: number
  /** Locked to the event: it is the same in every trial, does not average out, and is no variance. */
  locked: boolean
  /** Of a locked line, at the event; 0 where absent. */
  phaseRad?: number
}

export interface NoiseModel {
  kind: 'model'
  /** S falls as f^−exponent above `flatBelowHz`. */
  exponent: number
  levelAt1HzUv2PerHz: number
  /** Power law and drift are constant below this frequency. */
  flatBelowHz: number
  whiteUv2PerHz: number
  /** Gaussian in power: peak·exp(−(f − centre)²/(2·sd²)). */
  alpha?: { centreHz: number; sdHz: number; peakUv2PerHz: number }
  /** Slow electrode drift, f^−2. */
  driftAt1HzUv2PerHz?: number
  lines: NoiseLine[]
}

/** Measured densities at ascending positive frequencies. */
export interface NoiseTable {
  kind: 'table'
  hz: Float64Array
  uv2PerHz: Float64Array
}

export type NoiseSpec = NoiseModel | NoiseTable

/**
 * A resting adult's scalp EEG, for a first estimate; invented within these ranges:
 * exponent 1 to 2 for adults at rest (the form from Gerster et al. 2022; the range from memory, medium), single-trial
 * standard deviation 10 to 20 µV (from memory, medium to high), alpha about 10 Hz (notes on signal
 * averaging, notes.milesaron.com, as reported). Slow drift is common practice. Its standard deviation at 500 Hz sampling is 15 µV.
 */
export function defaultNoise(): NoiseModel {
  return {
    kind: 'model',
    exponent: 1.3,
    levelAt1HzUv2PerHz: 7,
    flatBelowHz: 0.02,
    whiteUv2PerHz: 0.02,
    alpha: { centreHz: 10, sdHz: 1.5, peakUv2PerHz: 6 },
    driftAt1HzUv2PerHz: 1,
    lines: [],
  }
}

/** @throws RangeError that names the field, the rule and the value. */
export function checkNoise(noise: NoiseSpec): void {
  if (noise.kind === 'table') return checkTable(noise)
  if (noise.kind !== 'model')
    throw new RangeError(`noise.kind must be model or table, was ${(noise as NoiseSpec).kind}`)
  const between = (field: string, value: number, low: number, high: number) => {
    if (!(value >= low && value <= high))
      throw new RangeError(`noise.${field} must lie between ${low} and ${high}, was ${value}`)
  }
  between('exponent', noise.exponent, 0, 4)
  between('levelAt1HzUv2PerHz', noise.levelAt1HzUv2PerHz, 0, 1e9)
  between('flatBelowHz', noise.flatBelowHz, 1e-4, 1000)
  between('whiteUv2PerHz', noise.whiteUv2PerHz, 0, 1e9)
  between('driftAt1HzUv2PerHz', noise.driftAt1HzUv2PerHz ?? 0, 0, 1e9)
  if (noise.alpha) {
    between('alpha.centreHz', noise.alpha.centreHz, 0, 1000)
    between('alpha.sdHz', noise.alpha.sdHz, 0.01, 1000)
    between('alpha.peakUv2PerHz', noise.alpha.peakUv2PerHz, 0, 1e9)
  }
  noise.lines.forEach((line, i) => {
    between(`lines[${i}].hz`, line.hz, 1e-3, 1e5)
    between(`lines[${i}].amplitudeUv`, line.amplitudeUv, 0, 1e6)
    if (!Number.isFinite(line.phaseRad ?? 0))
      throw new RangeError(`noise.lines[${i}].phaseRad must be finite, was ${line.phaseRad}`)
  })
}

function checkTable({ hz, uv2PerHz }: NoiseTable): void {
  if (hz.length < 1 || hz.length !== uv2PerHz.length) {
    throw new RangeError(
      `noise.hz and noise.uv2PerHz must be of one length of at least 1, were ${hz.length} and ${uv2PerHz.length}`,
    )
  }
  for (let i = 0; i < hz.length; i++) {
    if (!(hz[i] > (i === 0 ? 0 : hz[i - 1])) || !Number.isFinite(hz[i])) {
      throw new RangeError(`noise.hz must be positive and ascend, hz[${i}] was ${hz[i]}`)
    }
    if (!(uv2PerHz[i] >= 0) || !Number.isFinite(uv2PerHz[i])) {
      throw new RangeError(`noise.uv2PerHz must be finite and not negative, uv2PerHz[${i}] was ${uv2PerHz[i]}`)
    }
  }
}

/**
 * The continuous part of S(f) in µV²/Hz (lines have no density: see `noiseLines`).
 *
 * A table is interpolated linearly in log power over log frequency (linearly in both where an end is 0) and keeps its end values
 * outside.
 *
 * @param frequenciesHz finite, ≥ 0.
 * @throws RangeError for a noise that `checkNoise` refuses.
 */
export function noiseDensity(noise: NoiseSpec, frequenciesHz: Float64Array): Float64Array {
  return frequenciesHz.map(noiseDensityAt(noise))
}

/** The same as a function of one frequency, for sums that ask piece by piece: the noise is checked once. Throws as `noiseDensity`. */
export function noiseDensityAt(noise: NoiseSpec): (hz: number) => number {
  checkNoise(noise)
  if (noise.kind === 'table') return (hz) => tableDensity(noise, hz)
  const { exponent, levelAt1HzUv2PerHz: level, flatBelowHz, whiteUv2PerHz: white, alpha } = noise
  const drift = noise.driftAt1HzUv2PerHz ?? 0
  return (hz) => {
    const f = Math.max(hz, flatBelowHz)
    let density = white + drift / (f * f)
    if (level > 0) density += level * Math.exp(-exponent * Math.log(f))
    if (alpha) {
      const z = (hz - alpha.centreHz) / alpha.sdHz
      density += alpha.peakUv2PerHz * Math.exp(-0.5 * z * z)
    }
    return density
  }
}

function tableDensity({ hz, uv2PerHz }: NoiseTable, f: number): number {
  const last = hz.length - 1
  if (f <= hz[0]) return uv2PerHz[0]
  if (f >= hz[last]) return uv2PerHz[last]
  let low = 0
  let high = last
  while (high - low > 1) {
    const middle = (low + high) >> 1
    if (hz[middle] <= f) low = middle
    else high = middle
  }
  const a = uv2PerHz[low]
  const b = uv2PerHz[high]
  if (a === 0 || b === 0) return a + ((b - a) * (f - hz[low])) / (hz[high] - hz[low])
  return a * (b / a) ** (Math.log(f / hz[low]) / Math.log(hz[high] / hz[low]))
}

/** The lines of a noise; a table has none. */
export function noiseLines(noise: NoiseSpec): readonly NoiseLine[] {
  return noise.kind === 'model' ? noise.lines : []
}

/** The frequencies at which S has a kink, ascending: where an integral over S must begin a new piece. */
export function noiseKinksHz(noise: NoiseSpec): number[] {
  return noise.kind === 'table' ? Array.from(noise.hz) : [noise.flatBelowHz]
}
