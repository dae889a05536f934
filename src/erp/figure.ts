import type { Polarity } from './peak.ts'
import type { TimeWindow } from './time-axis.ts'

/** The figures beside the score that tell what a chain did to a waveform, in the readout's order. */
export type FigureId =
  | 'score'
  | 'mean-amplitude'
  | 'peak-amplitude'
  | 'signed-area'
  | 'peak-latency'
  | 'area-latency'
  | 'onset-latency'
  | 'false-deflection'

/** Where the figures of size and time are measured: the window of the component that the study is about. */
export interface Measure {
  mean: TimeWindow
  /** For peak, area and latencies: wide enough to hold the whole component. */
  peak: TimeWindow
  polarity: Polarity
}

/** The largest change, in either direction, that the user accepts. */
export interface Limit {
  value: number
  unit: 'µV' | 'ms' | 'µV·s' | '%'
}

export type Limits = Partial<Record<FigureId, Limit>>
