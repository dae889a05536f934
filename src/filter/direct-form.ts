/**
 * Second-order sections run in direct form, for poles that are far from z = 1, z = −1 and the unit circle. There the
 * rounding of a1 and a2 moves nothing, and the direct form costs two thirds of the state-variable form; elsewhere
 * `state-variable.ts` takes its place.
 *
 * Transposed direct form II with b0 = 1, its gain multiplied once at the end. With c1 = b1 − a1 and c2 = b2 − a2 the states
 * need no output, which makes the shortest chain of dependent operations:
 *
 *     y = v + z0      z0' = c1·v + z1 − a1·z0      z1' = c2·v − a2·z0
 *
 * Source: Oppenheim & Schafer, Discrete-Time Signal Processing, ch. 6 (structures for discrete-time systems).
 */

export interface DirectProgram {
  /** Numbers per section: c1 c2 a1 a2. */
  readonly rows: Float64Array
  readonly gain: number
}

const ROW = 4
/** Smallest 1 + a1 + a2, 1 − a1 + a2 and 1 − a2: rounding is then magnified at most so many times less. */
const FAR = 0.02
/** As in `state-variable.ts`: denormal numbers make processors slow. */
const PIECE = 8192
const NEGLIGIBLE = 1e-250

/**
 * @param sections  rows b0 b1 b2 a0 a1 a2, a0 = 1.
 * @returns  null where a pole is too near, or a row has b0 = 0.
 */
export function directProgram(sections: Float64Array): DirectProgram | null {
  const rows = new Float64Array((sections.length / 6) * ROW)
  let gain = 1
  for (let from = 0, to = 0; from < sections.length; from += 6, to += ROW) {
    const [b0, b1, b2, , a1, a2] = sections.subarray(from, from + 6)
    if (b0 === 0 || Math.min(1 + a1 + a2, 1 - a1 + a2, 1 - a2) < FAR) return null
    rows.set([b1 / b0 - a1, b2 / b0 - a2, a1, a2], to)
    gain *= b0
  }
  return { rows, gain }
}

/**
 * Runs all sections over values[from], …, values[to − 1] in place, from rest or from the steady state of a constant input.
 *
 * @param backward  runs from to − 1 down to from.
 * @param offset    is subtracted from every value first.
 * @param level     what the input, with the offset off, is taken to have been for ever before; 0 is rest.
 */
export function runDirect(
  { rows, gain }: DirectProgram,
  values: Float64Array,
  from: number,
  to: number,
  backward: boolean,
  offset = 0,
  level = 0,
): void {
  const sections = rows.length / ROW
  const states = level === 0 ? new Float64Array(2 * sections) : steadyStates(rows, level)
  const step = backward ? -1 : 1
  for (let done = 0; done < to - from; done += PIECE) {
    const count = Math.min(PIECE, to - from - done)
    const start = backward ? to - 1 - done : from + done
    const end = start + step * count
    for (let section = 0; section < sections; section += 2) {
      const first = section === 0 ? offset : 0
      const scale = section + 2 >= sections ? gain : 1
      if (section + 1 < sections) runPair(rows, states, section, values, start, end, step, first, scale)
      else runSingle(rows, states, section, values, start, end, step, first, scale)
    }
    for (let i = 0; i < states.length; i++) if (Math.abs(states[i]) < NEGLIGIBLE) states[i] = 0
  }
}

/** States that a constant input leaves: y = g·v with g = (1 + b1 + b2)/(1 + a1 + a2), section by section. */
function steadyStates(rows: Float64Array, level: number): Float64Array {
  const states = new Float64Array(rows.length / 2)
  let input = level
  for (let at = 0; at < rows.length; at += ROW) {
    const [c1, c2, a1, a2] = rows.subarray(at, at + ROW)
    const output = (input * (1 + c1 + a1 + c2 + a2)) / (1 + a1 + a2)
    states[at / 2] = output - input
    states[at / 2 + 1] = (c2 + a2) * input - a2 * output
    input = output
  }
  return states
}

function runPair(
  rows: Float64Array,
  states: Float64Array,
  section: number,
  values: Float64Array,
  start: number,
  end: number,
  step: number,
  offset: number,
  gain: number,
): void {
  // states in local variables: in an array they cost three times as much
  const at = section * ROW
  const c1 = rows[at]
  const c2 = rows[at + 1]
  const a1 = rows[at + 2]
  const a2 = rows[at + 3]
  const c1_ = rows[at + 4]
  const c2_ = rows[at + 5]
  const a1_ = rows[at + 6]
  const a2_ = rows[at + 7]
  let z0 = states[2 * section]
  let z1 = states[2 * section + 1]
  let z0_ = states[2 * section + 2]
  let z1_ = states[2 * section + 3]
  for (let i = start; i !== end; i += step) {
    const v = values[i] - offset
    const middle = v + z0
    const next = c1 * v + z1 - a1 * z0
    z1 = c2 * v - a2 * z0
    z0 = next
    values[i] = gain * (middle + z0_)
    const next_ = c1_ * middle + z1_ - a1_ * z0_
    z1_ = c2_ * middle - a2_ * z0_
    z0_ = next_
  }
  states[2 * section] = z0
  states[2 * section + 1] = z1
  states[2 * section + 2] = z0_
  states[2 * section + 3] = z1_
}

function runSingle(
  rows: Float64Array,
  states: Float64Array,
  section: number,
  values: Float64Array,
  start: number,
  end: number,
  step: number,
  offset: number,
  gain: number,
): void {
  const at = section * ROW
  const c1 = rows[at]
  const c2 = rows[at + 1]
  const a1 = rows[at + 2]
  const a2 = rows[at + 3]
  let z0 = states[2 * section]
  let z1 = states[2 * section + 1]
  for (let i = start; i !== end; i += step) {
    const v = values[i] - offset
    values[i] = gain * (v + z0)
    const next = c1 * v + z1 - a1 * z0
    z1 = c2 * v - a2 * z0
    z0 = next
  }
  states[2 * section] = z0
  states[2 * section + 1] = z1
}
