import { correctBaseline, defaultNoise, scoreOf, scoreWeights } from '../../src/erp/index.ts'
import type { Score } from '../../src/erp/index.ts'
import { effectiveWindow } from '../../src/evidence/effective-window.ts'
import { computeCell, prepareMap } from '../../src/evidence/trade-off-map.ts'
import { applyChain } from '../../src/filter/apply-chain.ts'
import { chainResponse, designChain } from '../../src/filter/index.ts'
import type { Pass, StageSpec } from '../../src/filter/index.ts'
import { kernelOn, stepResponseOn } from '../../src/filter/kernel.ts'

/**
 * What is timed. `scipy_side.py` does the same work under the same names: sizes, cutoffs and orders must agree.
 */
export const RATE = 500
export const CHANNELS = 64
export const SAMPLES = 300_000
export const FILTERS = 320
export const AVERAGES = 200
export const EPOCH = 1500

/** Seeded noise without structure; SciPy gets its own, since neither's time depends on the values. */
export function noise(count: number, seed: number, target: Float64Array = new Float64Array(count)): Float64Array {
  let state = seed >>> 0
  for (let i = 0; i < count; i++) {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0
    target[i] = state / 2 ** 31 - 1
  }
  return target
}

export function butterworth(
  pass: Pass,
  order: number,
  cutoffsHz: number[],
  direction: 'both' | 'forward' = 'both',
): StageSpec {
  return { design: 'butterworth', pass, order, cutoffsHz, meaning: 'design', direction }
}

/** W1: high-pass of order 4 at 0.1 Hz and low-pass of order 4 at 30 Hz, both zero-phase. */
export const BROAD_BAND: StageSpec[] = [butterworth('high', 4, [0.1]), butterworth('low', 4, [30])]

/** W2: 1651 taps. */
export const LONG_FIR: StageSpec[] = [
  {
    design: 'windowed-sinc',
    pass: 'low',
    cutoffsHz: [30],
    meaning: 'design',
    transitionHz: 1,
    window: { name: 'hamming' },
    delay: 'compensated',
  },
]

/** Milliseconds of the epochs of W4 and W5: −500 to 2498. */
export const TIMES_MS = Float64Array.from({ length: EPOCH }, (_, i) => -500 + (i * 1000) / RATE)
export const BASELINE = { fromMs: -200, toMs: 0 }
export const MEAN: Score = { kind: 'mean', fromMs: 300, toMs: 500, polarity: 'positive' }

/** W4 and W4f: everything that one move of a cutoff asks for. */
export interface Slider {
  waveforms: Float64Array[]
  frequenciesHz: Float64Array
  extent: 'epochs' | 'continuous'
  specsAt(position: number): StageSpec[]
}

function slider(extent: Slider['extent'], specsAt: Slider['specsAt']): Slider {
  // Smooth deflections on a little noise, as averages are, so that peaks and areas exist.
  const waveforms = [1, 2, 3, 4].map((k) => {
    const wave = noise(EPOCH, k)
    return wave.map((v, i) => 0.2 * v + 8 * Math.exp(-(((TIMES_MS[i]! - 250 - 60 * k) / 90) ** 2)))
  })
  const frequenciesHz = Float64Array.from({ length: 1024 }, (_, i) => 0.01 * (RATE / 2 / 0.01) ** (i / 1023))
  return { waveforms, frequenciesHz, extent, specsAt }
}

export const RECURSIVE_SLIDER = slider('epochs', (position) => [
  butterworth('high', 2, [0.1 + 1.9 * position]),
  butterworth('low', 4, [30]),
])

/** 3301 taps; an epoch would be shorter than their padding, so that the waveform stands alone. */
export const FINITE_SLIDER = slider('continuous', (position) => [
  {
    design: 'windowed-sinc',
    pass: 'high',
    cutoffsHz: [0.3 + 1.7 * position],
    meaning: 'half-amplitude',
    transitionHz: 0.5,
    window: { name: 'hamming' },
    delay: 'compensated',
  },
])

const SCORES: Score[] = [
  MEAN,
  { ...MEAN, kind: 'peak-amplitude' },
  { ...MEAN, kind: 'peak-latency' },
  { ...MEAN, kind: 'area' },
]

/** One slider step; returns a number that depends on all of its work, so that none of it can be left out. */
export function sliderStep({ waveforms, frequenciesHz, extent, specsAt }: Slider, position: number): number {
  const chain = designChain(specsAt(position), RATE)
  const response = chainResponse(chain, frequenciesHz)
  const kernel = kernelOn(chain.stages, -1000, 1000)
  const step = stepResponseOn(chain.stages, -1000, 1000)
  let total = response.re[512]! + kernel[1000]! + step[1999]!
  for (const x of waveforms) {
    const y = correctBaseline(applyChain(chain, x, extent), TIMES_MS, BASELINE)
    for (const score of SCORES) {
      const value = scoreOf(y, TIMES_MS, score)
      total += typeof value === 'number' ? value : 0
    }
  }
  const window = effectiveWindow(chain, scoreWeights(MEAN, BASELINE, TIMES_MS), extent)
  return total + window.values[0]!
}

/** W5: 40 cutoffs × orders 1 to 4 × high- and low-pass, zero-phase. */
export function sweepFilter(index: number): StageSpec {
  const pass = index % 2 === 0 ? 'high' : 'low'
  const order = 1 + (Math.floor(index / 2) % 4)
  const place = Math.floor(index / 8) / 39
  return butterworth(pass, order, [pass === 'high' ? 0.1 * 20 ** place : 5 * 20 ** place])
}

/** W5 by the adjoint: one effective window a filter, then a weighted sum for each average. */
export function sweepByAdjoint(averages: readonly Float64Array[]): Float64Array {
  const weights = scoreWeights(MEAN, BASELINE, TIMES_MS)
  const scores = new Float64Array(FILTERS * averages.length)
  for (let f = 0; f < FILTERS; f++) {
    const { values: g, start } = effectiveWindow(designChain([sweepFilter(f)], RATE), weights, 'epochs')
    for (let a = 0; a < averages.length; a++) {
      const x = averages[a]!
      let sum = 0
      for (let i = 0; i < EPOCH; i++) sum += g[i - start]! * x[i]!
      scores[f * averages.length + a] = sum
    }
  }
  return scores
}

/** W5 as the page asks it: two trade-off maps, high- and low-pass, the exact noise of every filter included. */
export function sweepByMap(averages: readonly Float64Array[]): Float64Array {
  const scores = new Float64Array(FILTERS * averages.length)
  for (const [p, pass] of (['high', 'low'] as const).entries()) {
    const prepared = prepareMap({
      samplingRateHz: RATE,
      timesMs: TIMES_MS,
      chain: [],
      place: { at: 0, replaces: false },
      candidate: { design: 'butterworth', pass, meaning: 'design', direction: 'both' },
      cutoffsHz: Array.from({ length: 40 }, (_, i) => (pass === 'high' ? 0.1 : 5) * 20 ** (i / 39)),
      rollOffs: [1, 2, 3, 4],
      extent: 'epochs',
      baseline: BASELINE,
      scores: [{ score: MEAN, noise: 'with noise' }],
      waveforms: averages.map((values) => ({ kind: 'recorded', values })),
      noise: defaultNoise(),
      noisePassed: 'nothing',
      trials: 40,
      seed: 1,
    })
    for (let index = 0; index < FILTERS / 2; index++) {
      const cell = computeCell(prepared, index)
      // sweepFilter counts passes fastest, then orders, then cutoffs
      const f = 2 * (4 * cell.cutoffIndex + cell.rollOffIndex) + p
      scores.set(cell.scores[0]!.after, f * averages.length)
    }
  }
  return scores
}

/** W5 and W5p by brute force, filters from … to − 1: every average is filtered and scored. */
export function sweepByFiltering(
  averages: readonly Float64Array[],
  kind: 'mean' | 'peak-amplitude',
  from: number,
  to: number,
) {
  const scores = new Float64Array((to - from) * averages.length)
  const y = new Float64Array(EPOCH)
  const score: Score = { ...MEAN, kind }
  for (let f = from; f < to; f++) {
    const chain = designChain([sweepFilter(f)], RATE)
    averages.forEach((x, a) => {
      correctBaseline(applyChain(chain, x, 'epochs', y), TIMES_MS, BASELINE, y)
      const value = scoreOf(y, TIMES_MS, score)
      scores[(f - from) * averages.length + a] = typeof value === 'number' ? value : NaN
    })
  }
  return scores
}
