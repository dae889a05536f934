/**
 * A stage is one filter of a chain: what the user says about it (`StageSpec`) and what follows for one sampling
 * rate (`Stage`). Conventions of this room: frequencies in Hz, the sampling rate is always an argument, `order` is the
 * order of ONE pass, `taps` is a number of samples (order + 1), arrays are Float64Array, arguments are never changed.
 */

export type Pass = 'low' | 'high' | 'band' | 'stop'
/** 'forward' is causal; 'both' runs forward and backward and is zero-phase. */
export type Direction = 'forward' | 'both'
/** The first two are meant as applied (after all passes of the stage); 'design' is the single-pass design cutoff. */
export type CutoffMeaning = 'half-amplitude' | 'half-power' | 'design'
export type Delay = 'compensated' | 'causal' | 'minimum-phase'
export type WindowSpec =
  | { name: 'rectangular' | 'hann' | 'hamming' | 'blackman' }
  | { name: 'kaiser'; attenuationDb: number }

export interface ButterworthSpec {
  design: 'butterworth'
  pass: Pass
  order: number
  /** One cutoff for low and high, two ascending ones for band and stop. */
  cutoffsHz: number[]
  meaning: CutoffMeaning
  direction: Direction
}
export interface WindowedSincSpec {
  design: 'windowed-sinc'
  pass: Pass
  cutoffsHz: number[]
  meaning: CutoffMeaning
  transitionHz: number
  window: WindowSpec
  delay: Delay
}
/** Half-power cutoff; always forward, always before the offline stages. */
export interface AmplifierSpec {
  design: 'amplifier'
  pass: 'low' | 'high'
  order: number
  cutoffHz: number
}
/** `bandwidthHz` is the -3 dB width as applied. */
export interface NotchSpec {
  design: 'notch'
  frequencyHz: number
  bandwidthHz: number
  harmonics: number
  direction: Direction
}
export interface MovingAverageSpec {
  design: 'moving-average'
  durationMs: number
  delay: 'compensated' | 'causal'
}

/** `enabled` is true and `inData` false where absent. A stage in the data has already acted and is not run again. */
export type StageSpec = { enabled?: boolean; inData?: boolean } & (
  | ButterworthSpec
  | WindowedSincSpec
  | AmplifierSpec
  | NotchSpec
  | MovingAverageSpec
)
