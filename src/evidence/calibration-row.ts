import type { LateOnlyVerdict } from './late-only-verdict.ts'

/** What seeded draws of one setting of the late-only fit came to. Rates are parts of the draws. */
export interface CalibrationRow {
  readonly id: string
  readonly title: string
  /** Of what is far from assumed the rates are only reported. */
  readonly kind: 'as assumed' | 'misspecified' | 'far from assumed' | 'causal'
  readonly draws: number
  /** The interval excludes zero though nothing is early. */
  readonly falseAlarms: number
  /** The interval excludes zero with an early component of `effectUv`, 4 standard errors of a fit at the assumed noise. */
  readonly found: number
  readonly effectUv: number
  /** The interval covers the true amplitude. */
  readonly covered: number
  /** Verdicts where nothing is early. */
  readonly verdicts: Readonly<Record<LateOnlyVerdict, number>>
  /** Medians of β's standard error, s and a. */
  readonly standardErrorUv: number
  readonly noiseScale: number
  readonly alphaScale: number
}
