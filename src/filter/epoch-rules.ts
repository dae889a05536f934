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
  if (stages.length === 0) return x.slice()
  return stages.reduce((y, stage) => applyStage(stage, y), x)
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
  if (x.length === 0) return new Float64Array(0)
  if (stage.taps !== null) return applyFinite(stage.taps, stage.leadSamples, x)
  return stage.passes === 2 ? applyBothWays(stage, x) : applyForward(stage, x)
}

function applyForward(stage: Stage, x: Float64Array): Float64Array {
  const { program, gainAtZero } = recursiveProgram(stage)
  const y = x.slice()
  runStateVariable(program, new Float64Array(program.length / 3), y, 0, y.length, false, x[0])
  return addConstant(y, gainAtZero * x[0])
}

function applyBothWays(stage: Stage, x: Float64Array): Float64Array {
  const { program, gainAtZero } = recursiveProgram(stage)
  const padding = epochPaddingSamples(stage)
  const padded = reflectOddly(x, padding, padding, scratch(x.length + 2 * padding))
  const last = padded.length - 1
  const first = padded[0]
  runStateVariable(program, new Float64Array(program.length / 3), padded, 0, padded.length, false, first)
  // the forward pass still lacks gain·first, which the backward pass would subtract with its own first value
  const turn = padded[last]
  runStateVariable(program, new Float64Array(program.length / 3), padded, 0, padded.length, true, turn)
  return addConstant(padded.slice(padding, padding + x.length), gainAtZero * (turn + gainAtZero * first))
}

function addConstant(values: Float64Array, constant: number): Float64Array {
  if (constant !== 0) for (let i = 0; i < values.length; i++) values[i] += constant
  return values
}

/** Room for one padded epoch at a time, kept because asking for megabytes anew costs as much as filtering them. */
let room = new Float64Array(0)
const LARGEST_ROOM = 2 ** 22

function scratch(length: number): Float64Array {
  if (length > LARGEST_ROOM) return new Float64Array(length)
  if (room.length < length) room = new Float64Array(length)
  return room.subarray(0, length)
}

function applyFinite(taps: Float64Array, leadSamples: number, x: Float64Array): Float64Array {
  const before = taps.length - 1 - leadSamples
  const offset = x[0]
  const padded = reflectOddly(x, before, leadSamples, scratch(before + x.length + leadSamples))
  for (let i = 0; i < padded.length; i++) padded[i] -= offset
  const y = convolveTaps(padded, taps).slice(taps.length - 1, taps.length - 1 + x.length)
  return addConstant(y, offset * sum(taps))
}

/** Odd reflection: 2·x[0] − x[k] before the start, 2·x[n − 1] − x[n − 1 − k] after the end. */
function reflectOddly(x: Float64Array, before: number, after: number, padded: Float64Array): Float64Array {
  const last = x.length - 1
  padded.set(x, before)
  for (let k = 1; k <= before; k++) padded[before - k] = 2 * x[0] - x[k]
  for (let k = 1; k <= after; k++) padded[before + last + k] = 2 * x[last] - x[last - k]
  return padded
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
