import { type DirectProgram, directProgram, runDirect } from './direct-form.ts'
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
 * @param x    epoch.
 * @param out  where the result goes, if not into a new array; may be x itself.
 * @returns  as many values.
 * @throws RangeError for NaN or an infinity in x, an epoch not longer than a stage's padding, whose `spec` the error
 *         carries, or an `out` of another length.
 */
export function applyEpochs(
  stages: readonly Stage[],
  x: Float64Array,
  out: Float64Array = new Float64Array(x.length),
): Float64Array {
  requireFinite('x', x)
  requireSameLength(out, x)
  for (const stage of stages) requireRoom(stage, x.length)
  if (stages.length === 0) out.set(x)
  for (let i = 0; i < stages.length; i++) applyStage(stages[i], i === 0 ? x : out, out)
  return out
}

/** @throws RangeError unless a given output has room for exactly the input's samples. */
export function requireSameLength(out: Float64Array, x: Float64Array): void {
  if (out.length !== x.length) throw new RangeError(`out must hold ${x.length} samples as x does, had ${out.length}`)
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

function applyStage(stage: Stage, x: Float64Array, out: Float64Array): void {
  if (x.length === 0) return
  if (stage.spec.design === 'amplifier') out.set(runContinuous([stage], x, 0, x.length))
  else if (stage.taps !== null) applyFinite(stage.taps, stage.leadSamples, x, out)
  else if (stage.passes === 2) applyBothWays(stage, x, out)
  else applyForward(stage, x, out)
}

function applyForward(stage: Stage, x: Float64Array, out: Float64Array): void {
  const program = recursiveProgram(stage)
  const first = x[0]
  out.set(x)
  runPass(program, out, false, first)
  const constant = program.gainAtZero * first
  if (constant !== 0) for (let i = 0; i < out.length; i++) out[i] += constant
}

function applyBothWays(stage: Stage, x: Float64Array, out: Float64Array): void {
  const program = recursiveProgram(stage)
  const padding = epochPaddingSamples(stage)
  const padded = reflectOddly(x, padding, padding, scratch(x.length + 2 * padding))
  const first = padded[0]
  // the forward pass leaves out what the first sample gives for ever; the backward pass takes it in again
  const missing = program.gainAtZero * first
  runPass(program, padded, false, first)
  runPass(program, padded, true, -missing, padded[padded.length - 1] + missing)
  out.set(padded.subarray(padding, padding + x.length))
}

/** Room for one padded epoch at a time, kept because asking for megabytes anew costs as much as filtering them. */
let room = new Float64Array(0)
const LARGEST_ROOM = 2 ** 22

function scratch(length: number): Float64Array {
  if (length > LARGEST_ROOM) return new Float64Array(length)
  if (room.length < length) room = new Float64Array(length)
  return room.subarray(0, length)
}

function applyFinite(taps: Float64Array, leadSamples: number, x: Float64Array, out: Float64Array): void {
  const before = taps.length - 1 - leadSamples
  const offset = x[0]
  const padded = reflectOddly(x, before, leadSamples, scratch(before + x.length + leadSamples))
  for (let i = 0; i < padded.length; i++) padded[i] -= offset
  const y = convolveTaps(padded, taps)
  const constant = offset * sum(taps)
  for (let i = 0; i < out.length; i++) out[i] = y[taps.length - 1 + i] + constant
}

/** Odd reflection: 2·x[0] − x[k] before the start, 2·x[n − 1] − x[n − 1 − k] after the end. */
function reflectOddly(x: Float64Array, before: number, after: number, padded: Float64Array): Float64Array {
  const last = x.length - 1
  padded.set(x, before)
  for (let k = 1; k <= before; k++) padded[before - k] = 2 * x[0] - x[k]
  for (let k = 1; k <= after; k++) padded[before + last + k] = 2 * x[last] - x[last - k]
  return padded
}

/** One pass of a recursive stage, made ready to run from rest. */
export interface RecursiveProgram {
  readonly stateVariable: Float64Array
  /** null where only the state-variable form is exact. */
  readonly direct: DirectProgram | null
  readonly gainAtZero: number
}

const programs = new WeakMap<Stage, RecursiveProgram>()

/** Program of one pass and its gain at 0 Hz, made once a stage. */
export function recursiveProgram(stage: Stage): RecursiveProgram {
  let made = programs.get(stage)
  if (!made) {
    const stateVariable = stateVariableProgram(stage.analogue as Float64Array)
    const direct = directProgram(stage.sections as Float64Array)
    made = { stateVariable, direct, gainAtZero: programGainAtZero(stateVariable) }
    programs.set(stage, made)
  }
  return made
}

/**
 * One pass over all values, in place.
 *
 * @param offset  is subtracted from every value first.
 * @param level   what the input, with the offset off, is taken to have been for ever before; 0 is rest.
 */
export function runPass(
  { direct, stateVariable, gainAtZero }: RecursiveProgram,
  values: Float64Array,
  backward: boolean,
  offset = 0,
  level = 0,
): void {
  if (direct !== null) {
    runDirect(direct, values, 0, values.length, backward, offset, level)
    return
  }
  // a steady state of 20 mV would cost these states the digits that they are there for
  const states = new Float64Array(stateVariable.length / 3)
  runStateVariable(stateVariable, states, values, 0, values.length, backward, offset + level)
  const constant = gainAtZero * level
  if (constant !== 0) for (let i = 0; i < values.length; i++) values[i] += constant
}

export function sum(values: Float64Array): number {
  let total = 0
  for (let i = 0; i < values.length; i++) total += values[i]
  return total
}
