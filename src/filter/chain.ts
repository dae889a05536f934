import type { Stage } from './stage.ts'

/** Enabled stages in order, amplifier stages first; those that are in the data (`spec.inData`) included. */
export interface Chain {
  readonly samplingRateHz: number
  readonly stages: readonly Stage[]
}
