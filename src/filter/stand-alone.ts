import { convolveTaps, support } from './finite-response.ts'
import { requireFinite } from './missing-values.ts'
import type { Stage } from './stage.ts'
import { advance, backwardStart, multiply, type StateSpace, stateSpaceOf } from './state-space.ts'
import { logPoles, runStateVariable, stateVariableProgram } from './state-variable.ts'

/**
 * Application to a waveform that stands alone, zeros before and after it, without padding and without cutting. All stages
 * are linear and time-invariant, so that their passes may change places: the FIR stages run first, then all forward
 * passes as one cascade from rest, then all backward passes. What the forward cascade would still give after the last
 * sample that is wanted puts the backward cascade into a state that is known in closed form (`backwardStart`).
 *
 * Indices are relative to x[0] everywhere here; they may be negative or beyond the waveform.
 */

/** Stages made ready to run alone. */
export interface StandAlone {
  readonly finite: readonly Stage[]
  readonly forward: Float64Array
  readonly backward: Float64Array
  readonly forwardPoles: readonly LogPole[]
  readonly backwardPoles: readonly LogPole[]
  /** Made when first asked for: a causal chain never needs them. */
  readonly spaces: () => { forward: StateSpace; backward: StateSpace; start: Float64Array }
}

/** A pole z with log z = −decay ± j·angle per sample. */
export interface LogPole {
  readonly decay: number
  readonly angle: number
}

/** Output on [from, to), with the states at both ends, from which it goes on without input. */
export interface Stretch {
  readonly values: Float64Array
  readonly from: number
  readonly to: number
  /** State of the forward cascade before sample `to`. */
  readonly forwardState: Float64Array
  /** State of the backward cascade before sample `from − 1`. */
  readonly backwardState: Float64Array
}

/** Input to the recursive passes: FIR stages applied, zeros at both ends cut off. */
export interface FiniteInput {
  readonly values: Float64Array
  readonly start: number
}

/** Longer gaps between the waveform and the wanted samples are crossed by powers of the system matrix. */
const LONG_GAP = 16384
/** More samples than any screen or recording asks for: a sign of a mistake. */
const MOST_SAMPLES = 2 ** 28

/**
 * Output of the stages at samples from … to − 1, where x is followed and preceded by zeros.
 *
 * @param x  waveform, x[0] at index 0.
 * @returns  to − from values; exactly 0 wherever the stages cannot reach.
 * @throws RangeError for NaN or an infinity in x, or a range that is not one.
 */
export function runContinuous(stages: readonly Stage[], x: Float64Array, from: number, to: number): Float64Array {
  requireFinite('x', x)
  requireRange(from, to)
  const system = standAlone(stages)
  const input = finiteInput(system, x)
  const end = input.start + input.values.length
  if (input.values.length === 0 || to === from) return new Float64Array(to - from)

  if (from - end > LONG_GAP && system.forward.length > 0) {
    const { forwardState } = runPasses(system, input, input.start, end)
    const later = advance(system.spaces().forward.d, forwardState, from - end)
    return runPasses(system, { values: new Float64Array(0), start: from }, from, to, later).values
  }
  if (input.start - to > LONG_GAP && system.backward.length > 0) {
    const { backwardState } = runPasses(system, input, input.start, end)
    const values = new Float64Array(to - from)
    const earlier = advance(system.spaces().backward.d, backwardState, input.start - to)
    runStateVariable(system.backward, earlier.slice(), values, 0, values.length, true)
    return values
  }
  if (to <= input.start && system.backward.length === 0) return new Float64Array(to - from)
  if (from >= end && system.forward.length === 0) return new Float64Array(to - from)
  const stretch = runPasses(system, input, Math.min(from, input.start), Math.max(to, end))
  return stretch.values.slice(from - stretch.from, to - stretch.from)
}

/**
 * Weights on unfiltered samples from … to − 1 that give the same number as the weights w on filtered samples: the
 * transpose of `runContinuous`, which is the same stages on reversed time.
 *
 * @param w  weights, w[0] at index 0.
 */
export function adjointContinuous(stages: readonly Stage[], w: Float64Array, from: number, to: number): Float64Array {
  requireFinite('weights', w)
  return runContinuous(stages, w.slice().reverse(), w.length - to, w.length - from).reverse()
}

/** @throws RangeError unless from ≤ to are whole numbers no absurd distance apart. */
export function requireRange(from: number, to: number): void {
  if (!Number.isSafeInteger(from)) throw new RangeError(`from must be a whole number of samples, was ${from}`)
  if (!Number.isSafeInteger(to)) throw new RangeError(`to must be a whole number of samples, was ${to}`)
  if (to < from) throw new RangeError(`to must not lie before from (${from}), was ${to}`)
  if (to - from > MOST_SAMPLES) throw new RangeError(`to − from must be at most ${MOST_SAMPLES}, was ${to - from}`)
}

/** Applies the FIR stages; `start` is the index of the first value relative to x[0]. */
export function finiteInput(system: StandAlone, x: Float64Array): FiniteInput {
  const { from, to } = support(x)
  let values = x.subarray(from, to)
  let start = from
  for (const { taps, leadSamples } of system.finite) {
    values = convolveTaps(values, taps as Float64Array)
    start -= leadSamples
  }
  return { values, start }
}

/**
 * Runs the recursive passes on [from, to), which must hold the input.
 *
 * @param forwardStart  state of the forward cascade before `from`; at rest where absent.
 */
export function runPasses(
  system: StandAlone,
  input: FiniteInput,
  from: number,
  to: number,
  forwardStart?: Float64Array,
): Stretch {
  const values = new Float64Array(to - from)
  values.set(input.values, input.start - from)
  const forwardState = forwardStart ? forwardStart.slice() : new Float64Array(system.forward.length / 3)
  runStateVariable(system.forward, forwardState, values, forwardStart ? 0 : input.start - from, values.length, false)
  let backwardState = new Float64Array(0)
  if (system.backward.length > 0) {
    const { backward, forward, start } = system.spaces()
    backwardState = multiply(start, forwardState, backward.size, forward.size) as Float64Array<ArrayBuffer>
    runStateVariable(system.backward, backwardState, values, 0, values.length, true)
  }
  return { values, from, to, forwardState, backwardState }
}

/** Systems by their first stage, so that they go when it goes: a slider makes new stages at every step. */
const kept = new WeakMap<Stage, { stages: readonly Stage[]; system: StandAlone }[]>()
const KEPT_PER_STAGE = 8

/** The stages made ready, once for the same stages. */
export function standAlone(stages: readonly Stage[]): StandAlone {
  if (stages.length === 0) return prepare(stages)
  let entries = kept.get(stages[0])
  if (!entries) kept.set(stages[0], (entries = []))
  const found = entries.find((e) => e.stages.length === stages.length && e.stages.every((s, i) => s === stages[i]))
  if (found) return found.system
  const system = prepare(stages)
  entries.unshift({ stages: stages.slice(), system })
  if (entries.length > KEPT_PER_STAGE) entries.pop()
  return system
}

function prepare(stages: readonly Stage[]): StandAlone {
  const finite = stages.filter((stage) => stage.taps !== null)
  const recursive = stages.filter((stage) => stage.analogue !== null)
  const twice = recursive.filter((stage) => stage.passes === 2)
  const programs = (some: readonly Stage[]) =>
    concatenate(some.map((stage) => stateVariableProgram(stage.analogue as Float64Array)))
  const poles = (some: readonly Stage[]) => some.flatMap((stage) => logPoles(stage.analogue as Float64Array))
  const forward = programs(recursive)
  const backward = programs(twice)
  const forwardPoles = poles(recursive)
  const backwardPoles = poles(twice)
  let spaces: ReturnType<StandAlone['spaces']> | null = null
  return {
    finite,
    forward,
    backward,
    forwardPoles,
    backwardPoles,
    spaces: () => {
      if (spaces === null) {
        const forwardSpace = stateSpaceOf(forward)
        const backwardSpace = stateSpaceOf(backward)
        const decay = slowest(forwardPoles) + slowest(backwardPoles)
        const start = backwardSpace.size === 0 ? new Float64Array(0) : backwardStart(forwardSpace, backwardSpace, decay)
        spaces = { forward: forwardSpace, backward: backwardSpace, start }
      }
      return spaces
    },
  }
}

function slowest(poles: readonly LogPole[]): number {
  return poles.reduce((least, { decay }) => Math.min(least, decay), Infinity)
}

function concatenate(parts: readonly Float64Array[]): Float64Array {
  const whole = new Float64Array(parts.reduce((length, part) => length + part.length, 0))
  let at = 0
  for (const part of parts) {
    whole.set(part, at)
    at += part.length
  }
  return whole
}
