import { butterworthSections } from './butterworth.ts'
import { warpedEdges } from './warped-axis.ts'
import type { Sections } from './second-order-sections.ts'
import { checkChoice, checkFrequency, checkWhole, specError, said } from './spec-error.ts'
import type { AmplifierSpec } from './stage.ts'

/** Highest order of an amplifier stage. */
export const MAX_AMPLIFIER_ORDER = 8

/** @throws RangeError for a pass, order or cutoff that cannot be designed. */
export function checkAmplifier(spec: AmplifierSpec, samplingRateHz: number): void {
  checkChoice('pass', spec.pass, ['low', 'high'])
  checkWhole('order', spec.order, 1, MAX_AMPLIFIER_ORDER)
  checkFrequency('cutoffHz', spec.cutoffHz, samplingRateHz)
}

/** An amplifier's filter: a Butterworth of one pass, prewarped at its half-power cutoff. */
export function amplifierSections(spec: AmplifierSpec, samplingRateHz: number): Sections {
  return butterworthSections(spec.pass, spec.order, warpedEdges(spec.pass, [spec.cutoffHz], samplingRateHz))
}

/** Half-power cutoff in Hz of a first-order high-pass with a time constant in seconds: 1/(2πτ). */
export function timeConstantToHz(timeConstantS: number): number {
  return reciprocal('timeConstantS', timeConstantS)
}

/** Time constant in seconds of a first-order high-pass with a half-power cutoff in Hz: 1/(2πf). */
export function hzToTimeConstant(cutoffHz: number): number {
  return reciprocal('cutoffHz', cutoffHz)
}

function reciprocal(field: string, value: number): number {
  if (!(value > 0 && value < Infinity)) throw specError(field, `${field} must be a positive number, was ${said(value)}`)
  return 1 / (2 * Math.PI * value)
}
