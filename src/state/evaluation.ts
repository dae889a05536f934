/**
 * What follows from a workspace: every number and curve on the page, as plain data that survives being sent to and from a worker.
 * `evaluate.ts` makes it; the page only draws it.
 */
import type { Chain } from '../filter/chain.ts'
import type { FidelityRow } from '../evidence/fidelity.ts'
import type { NoiseRow } from '../evidence/precision.ts'

/** Something the user said that cannot be computed, in words, at the token that says it. */
export interface Problem {
  /** Id of the token, or its beginning: `stage:1`, `stage:1:cutoff`, `score-window`, `baseline`, `waveform` … */
  at: string
  message: string
}

/** One condition (or the difference wave) on the epoch's samples, each curve minus its own baseline mean, in µV. */
export interface Curves {
  name: string
  before: Float64Array
  after: Float64Array
  takenOut: Float64Array
}

/** Standard errors of a recorded average at its samples, from its single trials, µV. */
export interface StandardErrors {
  before: Float64Array
  /** Null where the trials are too many to be filtered in a frame. */
  after: Float64Array | null
}

export interface WindowFigure {
  /** Sample i lies at (fromIndex + i) samples from the epoch's first; its time is `firstMs + (fromIndex + i)·stepMs`. */
  fromIndex: number
  /** Weights of the score on the unfiltered waveform without and with the chain; same length, per sample. */
  unfiltered: Float64Array
  filtered: Float64Array
  /** Share of the filtered window's absolute weight that lies outside the epoch, 0 to 1. */
  shareOutside: number
  /** Why the window stands for one moment only ("for the peak at 398 ms, held fixed"), or null. */
  heldFixed: string | null
}

export interface FrequencyFigure {
  hz: Float64Array
  /** Gains as applied, one row per enabled stage; `index` is the stage's place in the workspace's chain. */
  stages: { index: number; inData: boolean; gain: Float64Array }[]
  /** The stages applied here, together. */
  gain: Float64Array
  phaseRad: Float64Array
  groupDelayMs: Float64Array
  /** Amplitude spectra (µV·s) of the chosen condition, and the noise's amplitude density (µV/√Hz). */
  before: Float64Array
  after: Float64Array
  noise: Float64Array
  halfAmplitudeHz: number[]
  halfPowerHz: number[]
}

export interface KernelFigure {
  stepMs: number
  /** Sample i lies at lag (fromIndex + i)·stepMs. */
  fromIndex: number
  /** Impulse response per second; step response (both of the stages applied here). */
  impulse: Float64Array
  step: Float64Array
}

export interface ChainRow {
  /** Place in the workspace's chain. */
  index: number
  name: string
  inData: boolean
  halfAmplitude: string
  halfPower: string
  rollOff: string
  /** A remark on a model's limit, for instance an amplifier's delay near half the sampling rate; or null. */
  remark: string | null
}

export interface ReachMs {
  beforeMs: number
  afterMs: number
}

/** The same waveform and score through a pinned chain, for every figure and the readout. */
export interface PinnedResult {
  name: string
  /** Chosen condition, minus its own baseline mean, µV. */
  after: Float64Array
  /** On `WindowFigure`'s samples; null where there is no window. */
  window: Float64Array | null
  /** On `FrequencyFigure`'s frequencies. */
  gain: Float64Array
  phaseRad: Float64Array
  groupDelayMs: Float64Array
  /** Of its offline stages, or of its amplifier stages where there are no others. */
  reach: ReachMs
  /** On `KernelFigure`'s lags. */
  impulse: Float64Array
  step: Float64Array
  rows: FidelityRow[]
  precision: NoiseRow | null
}

/** A pin that cannot be computed on this waveform, and why. */
export interface FailedPin {
  name: string
  reason: string
}

export interface Evaluation {
  samplingRateHz: number
  /** Sample times of the epoch. */
  timesMs: Float64Array
  chain: Chain
  /** Conditions drawn, the chosen one among them. */
  curves: Curves[]
  /** Index into `curves`. */
  chosen: number
  /** Of the chosen curve; null for what has no single trials. */
  standardErrors: StandardErrors | null
  /** An applied stage is causal: before − after then contains its delay. */
  delayIncluded: boolean
  /** For epochs: share of each output sample's absolute kernel weight on samples that are not in the data. Null when continuous. */
  unseenBySample: Float64Array | null
  /** Null for a score that is no weighted sum (a latency). */
  window: WindowFigure | null
  frequency: FrequencyFigure
  kernel: KernelFigure
  table: ChainRow[]
  /** Reach of the offline stages applied here, and of the amplifier stages (null without any). */
  reach: ReachMs
  amplifierReach: ReachMs | null
  /** Of the score, 0 to 1; null for a latency. */
  unseenShare: number | null
  rows: FidelityRow[]
  /** Null for a score that is no weighted sum. */
  precision: NoiseRow | null
  /** What the noise row reckons with; `extrapolated` is the part (0 to 1) of the variance before and after the chain that rests on
   * frequencies below what the trials can show, null for a model or where there is no noise row. */
  noiseOf: { from: 'model' | 'trials'; extrapolated: { before: number; after: number } | null }
  /** Interference of the noise model that does not average out; null without any, and for a difference wave, in which it cancels. */
  locked: LockedInterference | null
  /** Chains kept for comparison, in the workspace's order. */
  pins: (PinnedResult | FailedPin)[]
  /** What the chain did to the score, in a sentence or two. */
  remark: string
}

export interface LockedInterference {
  lines: readonly { hz: number; amplitudeUv: number }[]
  /** What it adds to the score (µV); null for a score that is no weighted sum. */
  score: { before: number; after: number } | null
}

export type Outcome = { ok: true; evaluation: Evaluation } | { ok: false; problems: Problem[] }
