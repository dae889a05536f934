import { readFileSync } from 'node:fs'
import { join, resolve } from 'node:path'
import fc from 'fast-check'
import { type Chain, designChain, type StageSpec } from '../../src/filter/index.ts'
import { chain as arbitraryChain } from '../filter/arbitrary-chain.ts'

/** Chains of every design, direction and delay, each small enough for an epoch of one second at 256 Hz. */

const highPass: StageSpec = {
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [0.5],
  meaning: 'half-amplitude',
  direction: 'both',
}
const lowPass: StageSpec = { ...highPass, pass: 'low', order: 4, cutoffsHz: [30], meaning: 'half-power' }
const amplifierHigh: StageSpec = { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.5 }
const amplifierLow: StageSpec = { design: 'amplifier', pass: 'low', order: 3, cutoffHz: 60 }
const sinc: StageSpec = {
  design: 'windowed-sinc',
  pass: 'low',
  cutoffsHz: [30],
  meaning: 'half-amplitude',
  transitionHz: 10,
  window: { name: 'hamming' },
  delay: 'compensated',
}
const notch: StageSpec = { design: 'notch', frequencyHz: 50, bandwidthHz: 2, harmonics: 1, direction: 'both' }
const average: StageSpec = { design: 'moving-average', durationMs: 31.25, delay: 'compensated' }

export const RATE_HZ = 256

const SPECS: Readonly<Record<string, readonly StageSpec[]>> = {
  'no filter': [],
  'a first-order Butterworth low-pass both ways': [{ ...lowPass, order: 1, cutoffsHz: [20] }],
  'a Butterworth high-pass both ways': [highPass],
  'a Butterworth low-pass of order 12 forward': [{ ...lowPass, order: 12, direction: 'forward' }],
  'a Butterworth band-pass of order 3 both ways': [{ ...highPass, pass: 'band', order: 3, cutoffsHz: [1, 40] }],
  'a Butterworth band-pass forward': [{ ...highPass, pass: 'band', cutoffsHz: [1, 40], direction: 'forward' }],
  'a Butterworth band-stop both ways': [{ ...highPass, pass: 'stop', cutoffsHz: [45, 55] }],
  'a Butterworth high-pass of 0.1 Hz forward': [{ ...highPass, cutoffsHz: [0.1], direction: 'forward' }],
  'an amplifier': [amplifierHigh, amplifierLow],
  'an amplifier, then both ways, then forward': [
    amplifierHigh,
    highPass,
    { ...lowPass, direction: 'forward', meaning: 'design' },
  ],
  'a compensated windowed sinc': [sinc],
  'a causal Kaiser-windowed sinc high-pass': [
    {
      ...sinc,
      pass: 'high',
      cutoffsHz: [12],
      window: { name: 'kaiser', attenuationDb: 60 },
      delay: 'causal',
    },
  ],
  'a minimum-phase Blackman-windowed sinc band-pass': [
    {
      ...sinc,
      pass: 'band',
      cutoffsHz: [15, 60],
      meaning: 'design',
      transitionHz: 12,
      window: { name: 'blackman' },
      delay: 'minimum-phase',
    },
  ],
  'a notch with a harmonic both ways': [notch],
  'a notch forward': [{ ...notch, direction: 'forward', harmonics: 0 }],
  'a moving average of an even length, compensated': [average],
  'a moving average of an odd length, compensated': [{ ...average, durationMs: 27.34375 }],
  'a moving average of an even length, causal': [{ ...average, delay: 'causal' }],
  'everything, one after another': [amplifierHigh, highPass, notch, sinc, { ...average, delay: 'causal' }, lowPass],
  'stages that are off or in the data': [
    { ...amplifierHigh, inData: true },
    { ...highPass, enabled: false },
    { ...sinc, inData: true },
    lowPass,
  ],
}

export interface Exported {
  readonly title: string
  /** Whether double precision in direct form reaches 1e-9; else the file's own tolerance holds. */
  readonly strict: boolean
  readonly chain: Chain
  readonly extent: 'continuous' | 'epochs'
}

/** SIDELOBE_SEED repeats a run. */
const seed = Number(process.env.SIDELOBE_SEED ?? Math.floor(Date.now() / 1000) % 1_000_000)
const RANDOM = 8

const chains: readonly (readonly [string, Chain, boolean])[] = [
  ...Object.entries(SPECS).map(([title, specs]) => [title, designChain(specs, RATE_HZ), true] as const),
  ['a high-pass far below the sampling rate', designChain([{ ...highPass, order: 4, cutoffsHz: [0.05] }], 1000), false],
  ...fc
    .sample(arbitraryChain, { numRuns: RANDOM, seed })
    .map((chain, i) => [`random chain ${i} of seed ${seed}`, chain, false] as const),
]

/** Each chain under both extents. */
export const EXPORTED: readonly Exported[] = chains.flatMap(([title, chain, strict]) =>
  (['continuous', 'epochs'] as const).map((extent) => ({ title: `${title}, ${extent}`, chain, extent, strict })),
)

/** A real visual evoked potential, or null where the recordings are not at hand. */
export function realWaveform(): Float64Array | null {
  const folder = process.env.SIDELOBE_DATA ?? resolve(import.meta.dirname, '../../../shared/data')
  try {
    const text = readFileSync(join(folder, 'uci-vep-dev/co2c0000345_S1obj_average.csv'), 'utf8')
    const [head, ...rows] = text.trim().split(/\r?\n/)
    const column = head.split(',').indexOf('PO7')
    return Float64Array.from(rows, (row) => Number(row.split(',')[column]))
  } catch {
    return null
  }
}
