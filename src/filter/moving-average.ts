import { checkChoice, said, specError } from './spec-error.ts'
import type { MovingAverageSpec } from './stage.ts'
import { checkTaps } from './tap-limit.ts'

/** @throws RangeError for a duration below two samples or beyond the longest kernel, or an unknown delay. */
export function checkMovingAverage(spec: MovingAverageSpec, samplingRateHz: number): void {
  checkChoice('delay', spec.delay, ['compensated', 'causal'])
  const shortest = 2000 / samplingRateHz
  if (!(typeof spec.durationMs === 'number' && spec.durationMs >= shortest * (1 - 1e-9))) {
    throw specError('durationMs', `durationMs must be at least ${shortest} (two samples), was ${said(spec.durationMs)}`)
  }
  checkTaps('durationMs', movingAverageSamples(spec.durationMs, samplingRateHz))
}

/** Number of samples averaged: the duration rounded to whole samples. */
export function movingAverageSamples(durationMs: number, samplingRateHz: number): number {
  return Math.round((durationMs * samplingRateHz) / 1000)
}

/**
 * Taps of a moving average over N samples (the duration rounded to whole samples); nulls at multiples of fs/N.
 *
 * @param spec  a checked moving average.
 * @returns  N taps of 1/N; compensated with an even N, N + 1 taps whose ends are halved, so that the kernel is
 *           symmetric about a sample and its nulls stay where they are.
 */
export function movingAverageTaps(spec: MovingAverageSpec, samplingRateHz: number): Float64Array {
  const samples = movingAverageSamples(spec.durationMs, samplingRateHz)
  const halved = spec.delay === 'compensated' && samples % 2 === 0
  const taps = new Float64Array(halved ? samples + 1 : samples).fill(1 / samples)
  if (halved) {
    taps[0] /= 2
    taps[samples] /= 2
  }
  return taps
}
