import { convolveTaps } from './finite-response.ts'
import { requireFinite } from './missing-values.ts'
import { runContinuous } from './stand-alone.ts'
import type { Stage, StageSpec } from './stage.ts'
import { programGainAtZero, runStateVariable, stateVariableProgram } from './state-variable.ts'

/**
 * Application to an epoch, which knows nothing outside itself. Stages run one after another; each pads, runs and trims.
 *
 * | stage                       | padding, over an epoch 1 2 3 4 and 2 samples                | start         |
 * | --------------------------- | ----------------------------------------------------------- | ------------- |
 * | recursive, both ways        | −1 0 · 1 2 3 4 · 5 6: odd reflection, SciPy's default length | steady state  |
 * | recursive, forward          | none                                                        | steady state  |
 * | FIR, delay compensated      | −1 0 · 1 2 3 4 · 5 6: (taps − 1)/2 at both ends             |               |
 * | FIR, causal, minimum phase  | −1 0 · 1 2 3 4: taps − 1 at the start                       |               |
 * | amplifier                   | 0 0 · 1 2 3 4 · 0 0: as if it stood alone, then cut         | rest          |
 *
 * The steady state times the first sample x0 is exact, and keeps an electrode offset out of the states, when written
 * y = run from rest(x − x0) + (gain at 0 Hz)·x0.
 */

/**
 * @param x  epoch.
 * @returns  as many values.
 * @throws RangeError for NaN or an infinity in x, or an epoch not longer than a stage's padding, whose `spec` the error
 *         carries.
 */
export function applyEpochs(stages: readonly Stage[], x: Float64Array): Float64Array {
  requireFinite('x', x)
  let y: Float64Array = x.slice()
  for (const stage of stages) y = applyStage(stage, y)
  return y
}

/** Samples by which a stage pads an epoch at its start, or at both ends if it is not causal. */
export function epochPaddingSamples(stage: Stage): number {
  if (stage.spec.design === 'amplifier') return 0
  if (stage.taps !== null) return stage.taps.length - 1 - stage.leadSamples
  return stage.passes === 2 ? reflectionLength(stage.sections as Float64Array) : 0
}

/** Default `padlen` of SciPy's `sosfiltfilt`: three times the number of taps that the sections come to. */
function reflectionLength(sections: Float64Array): number {
  let zerosAtOrigin = 0
  let polesAtOrigin = 0
  for (let at = 0; at < sections.length; at += 6) {
    if (sections[at + 2] === 0) zerosAtOrigin++
    if (sections[at + 5] === 0) polesAtOrigin++
  }
  return 3 * (sections.length / 3 + 1 - Math.min(zerosAtOrigin, polesAtOrigin))
}

/** @throws RangeError where the epoch is not longer than the padding. */
export function requireRoom(stage: Stage, samples: number): void {
  const padding = epochPaddingSamples(stage)
  if (samples > padding || padding === 0) return
  const message = `${nameOf(stage.spec)} needs ${padding + 1} samples, the epoch has ${samples}`
  throw Object.assign(new RangeError(message), { spec: stage.spec })
}

function nameOf(spec: StageSpec): string {
  switch (spec.design) {
    case 'butterworth':
    case 'windowed-sinc':
      return `${spec.design} ${spec.pass} ${spec.cutoffsHz.join('–')} Hz`
    case 'amplifier':
      return `amplifier ${spec.pass} ${spec.cutoffHz} Hz`
    case 'notch':
      return `notch ${spec.frequencyHz} Hz`
    case 'moving-average':
      return `moving average ${spec.durationMs} ms`
  }
}

function applyStage(stage: Stage, x: Float64Array): Float64Array {
  if (stage.spec.design === 'amplifier') return runContinuous([stage], x, 0, x.length)
  requireRoom(stage, x.length)
  if (x.length === 0) return x
  if (stage.taps !== null) return applyFinite(stage.taps, stage.leadSamples, x)
  const { program, gainAtZero } = recursiveProgram(stage)
  if (stage.passes === 1) {
    const y = x.slice()
    runFromSteadyState(program, gainAtZero, y, false)
    return y
  }
  const padding = epochPaddingSamples(stage)
  const padded = reflectOddly(x, padding, padding)
  runFromSteadyState(program, gainAtZero, padded, false)
  runFromSteadyState(program, gainAtZero, padded, true)
  return padded.slice(padding, padding + x.length)
}

function applyFinite(taps: Float64Array, leadSamples: number, x: Float64Array): Float64Array {
  const before = taps.length - 1 - leadSamples
  const offset = x[0]
  const padded = reflectOddly(x, before, leadSamples)
  for (let i = 0; i < padded.length; i++) padded[i] -= offset
  const y = convolveTaps(padded, taps).slice(taps.length - 1, taps.length - 1 + x.length)
  const rest = offset * sum(taps)
  for (let i = 0; i < y.length; i++) y[i] += rest
  return y
}

/** Odd reflection: 2·x[0] − x[k] before the start, 2·x[n − 1] − x[n − 1 − k] after the end. */
function reflectOddly(x: Float64Array, before: number, after: number): Float64Array {
  const last = x.length - 1
  const padded = new Float64Array(before + x.length + after)
  padded.set(x, before)
  for (let k = 1; k <= before; k++) padded[before - k] = 2 * x[0] - x[k]
  for (let k = 1; k <= after; k++) padded[before + last + k] = 2 * x[last] - x[last - k]
  return padded
}

/** One pass in place, started in the steady state times its first sample (the last one if backward). */
function runFromSteadyState(program: Float64Array, gainAtZero: number, values: Float64Array, backward: boolean): void {
  const offset = values[backward ? values.length - 1 : 0]
  if (offset !== 0) for (let i = 0; i < values.length; i++) values[i] -= offset
  runStateVariable(program, new Float64Array(program.length / 3), values, 0, values.length, backward)
  const rest = gainAtZero * offset
  if (rest !== 0) for (let i = 0; i < values.length; i++) values[i] += rest
}

const programs = new WeakMap<Stage, { program: Float64Array; gainAtZero: number }>()

/** Program of one pass and its gain at 0 Hz, made once a stage. */
export function recursiveProgram(stage: Stage): { program: Float64Array; gainAtZero: number } {
  let made = programs.get(stage)
  if (!made) {
    const program = stateVariableProgram(stage.analogue as Float64Array)
    made = { program, gainAtZero: programGainAtZero(program) }
    programs.set(stage, made)
  }
  return made
}

export function sum(values: Float64Array): number {
  let total = 0
  for (let i = 0; i < values.length; i++) total += values[i]
  return total
}
