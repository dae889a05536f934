/**
 * Second-order sections run in state-variable (trapezoidal) form. A row (c2·σ² + c1·σ + c0)/(σ² + d1·σ + d0) of the
 * bilinear variable is two trapezoidal integrators 1/σ = (1 + z⁻¹)/(1 − z⁻¹) in a loop, with states s1, s2, input v and
 * K = 2/(1 + d1 + d0), P1 = K·(d1 + d0), P2 = K·d0:
 *
 *     u = K·v − P1·s1 − P2·s2      s1' = s1 + u      s2' = s2 + s1 + s1'
 *     y = (c2·u + c1·(s1 + s1') + c0·(s2 + s2'))/2
 *
 * The feedback q = P1·s1 + P2·s2 in the place of s2 makes the shortest chain of dependent operations:
 *
 *     u = K·v − q      s1' = s1 + u      q' = q + E·s1 + F·u      y = U·u + S·s1 + Q·q
 *     E = 2·P2         F = P1 + P2
 *
 * Both states move by small increments where the poles lie near z = 1: with δ = z − 1 the poles are the roots of
 * δ² + F·δ + E, whose rounded coefficients keep the pole, while the direct form's a1 ≈ −2, a2 ≈ 1 lose it.
 * A first-order row is the same with E = S = 0; its s1 is not listened to.
 *
 * Source: the trapezoidal state-variable filter, Zavalishin, The Art of VA Filter Design, ch. 3 to 4.
 */

/** Numbers per section in a program: K E F U S Q. */
export const SECTION_SIZE = 6
/** Runs are cut into pieces of this many samples, after which states too small to matter are set to zero. */
const PIECE = 8192
/** Denormal numbers make processors slow; a state below this has no part in any result. */
const NEGLIGIBLE = 1e-250

/**
 * @param analogue  rows c2 c1 c0 d2 d1 d0 of one stage.
 * @returns  K E F U S Q for each row.
 */
export function stateVariableProgram(analogue: Float64Array): Float64Array {
  const program = new Float64Array(analogue.length)
  const order = balancedOrder(analogue)
  for (let row = 0; row < order.length; row++) {
    const at = 6 * row
    const [c2, c1, c0, d2, d1, d0] = analogue.subarray(6 * order[row], 6 * order[row] + 6)
    if (d2 === 0) {
      const k = 2 / (1 + d0)
      program.set([k, 0, k * d0, (c1 + c0) / 2, 0, c0 / (k * d0)], at)
    } else {
      const k = 2 / (1 + d1 + d0)
      program.set([k, 2 * k * d0, k * (d1 + 2 * d0), (c2 + c1 + c0) / 2, c1 - (c0 * d1) / d0, c0 / (k * d0)], at)
    }
  }
  return program
}

/**
 * Order in which rows run. Those of a wide band-stop gain at 0 Hz what others have lost there, up to a factor of its edges'
 * ratio each: in turns they keep the signal near its size, in their own order it sinks into rounding errors first.
 */
function balancedOrder(analogue: Float64Array): number[] {
  const rows = Array.from({ length: analogue.length / 6 }, (_, row) => row)
  const change = (row: number) => Math.abs(analogue[6 * row + 2] / (analogue[6 * row] * analogue[6 * row + 5]))
  // only where both ends of the spectrum pass each row
  if (rows.some((row) => !(change(row) > 0 && change(row) < Infinity))) return rows
  const sorted = rows.slice().sort((a, b) => change(a) - change(b))
  return rows.map((row) => (row % 2 === 0 ? sorted[row / 2] : sorted[rows.length - 1 - (row - 1) / 2]))
}

/** Gain of a program at 0 Hz: the product of c0/d0, exactly 0 for a high-pass. */
export function programGainAtZero(program: Float64Array): number {
  let gain = 1
  for (let at = 0; at < program.length; at += SECTION_SIZE) gain *= program[at + 5] * program[at]
  return gain
}

/**
 * Runs all sections over values[from], …, values[to − 1] in place.
 *
 * @param states  two numbers a section: read as the starting states and left as the final ones.
 * @param backward  runs from to − 1 down to from.
 * @param offset  is subtracted from every value first.
 */
export function runStateVariable(
  program: Float64Array,
  states: Float64Array,
  values: Float64Array,
  from: number,
  to: number,
  backward: boolean,
  offset = 0,
): void {
  for (let done = 0; done < to - from; done += PIECE) {
    const count = Math.min(PIECE, to - from - done)
    const start = backward ? to - 1 - done : from + done
    const end = backward ? start - count : start + count
    const step = backward ? -1 : 1
    let section = 0
    const sections = program.length / SECTION_SIZE
    for (; section + 1 < sections; section += 2) {
      const run = isHighPair(program, section) ? runHighPair : runPair
      run(program, states, section, values, start, end, step, section === 0 ? offset : 0)
    }
    if (section < sections) runSingle(program, states, section, values, start, end, step, section === 0 ? offset : 0)
    for (let i = 0; i < states.length; i++) if (Math.abs(states[i]) < NEGLIGIBLE) states[i] = 0
  }
}

function runPair(
  program: Float64Array,
  states: Float64Array,
  section: number,
  values: Float64Array,
  start: number,
  end: number,
  step: number,
  offset: number,
): void {
  // states in local variables: in an array they cost three times as much
  const at = section * SECTION_SIZE
  const k = program[at]
  const e = program[at + 1]
  const f = program[at + 2]
  const u = program[at + 3]
  const s = program[at + 4]
  const q = program[at + 5]
  const k_ = program[at + 6]
  const e_ = program[at + 7]
  const f_ = program[at + 8]
  const u_ = program[at + 9]
  const s_ = program[at + 10]
  const q_ = program[at + 11]
  let a = states[2 * section]
  let b = states[2 * section + 1]
  let a_ = states[2 * section + 2]
  let b_ = states[2 * section + 3]
  for (let i = start; i !== end; i += step) {
    const move = k * (values[i] - offset) - b
    const middle = s * a + q * b + u * move
    b = b + e * a + f * move
    a += move
    const move_ = k_ * middle - b_
    values[i] = s_ * a_ + q_ * b_ + u_ * move_
    b_ = b_ + e_ * a_ + f_ * move_
    a_ += move_
  }
  states[2 * section] = e === 0 ? 0 : a
  states[2 * section + 1] = b
  states[2 * section + 2] = e_ === 0 ? 0 : a_
  states[2 * section + 3] = b_
}

/** Both sections listen to their first integrator's input alone, as those of a Butterworth high-pass do. */
function isHighPair(program: Float64Array, section: number): boolean {
  const at = section * SECTION_SIZE
  return program[at + 4] === 0 && program[at + 5] === 0 && program[at + 10] === 0 && program[at + 11] === 0
}

/** `runPair` where S = Q = 0 twice: all gains in one, by states in units of their sections' inputs. */
function runHighPair(
  program: Float64Array,
  states: Float64Array,
  section: number,
  values: Float64Array,
  start: number,
  end: number,
  step: number,
  offset: number,
): void {
  const at = section * SECTION_SIZE
  const e = program[at + 1]
  const f = program[at + 2]
  const e_ = program[at + 7]
  const f_ = program[at + 8]
  const unit = program[at]
  const unit_ = unit * program[at + 3] * program[at + 6]
  const gain = unit_ * program[at + 9]
  let a = states[2 * section] / unit
  let b = states[2 * section + 1] / unit
  let a_ = states[2 * section + 2] / unit_
  let b_ = states[2 * section + 3] / unit_
  for (let i = start; i !== end; i += step) {
    const move = values[i] - offset - b
    b = b + e * a + f * move
    a += move
    const move_ = move - b_
    values[i] = gain * move_
    b_ = b_ + e_ * a_ + f_ * move_
    a_ += move_
  }
  states[2 * section] = e === 0 ? 0 : a * unit
  states[2 * section + 1] = b * unit
  states[2 * section + 2] = e_ === 0 ? 0 : a_ * unit_
  states[2 * section + 3] = b_ * unit_
}

function runSingle(
  program: Float64Array,
  states: Float64Array,
  section: number,
  values: Float64Array,
  start: number,
  end: number,
  step: number,
  offset: number,
): void {
  const at = section * SECTION_SIZE
  const k = program[at]
  const e = program[at + 1]
  const f = program[at + 2]
  const u = program[at + 3]
  const s = program[at + 4]
  const q = program[at + 5]
  let a = states[2 * section]
  let b = states[2 * section + 1]
  for (let i = start; i !== end; i += step) {
    const input = k * (values[i] - offset)
    values[i] = s * a + q * b + u * (input - b)
    const next = f * input + e * a + b - f * b
    a = a + input - b
    b = next
  }
  states[2 * section] = e === 0 ? 0 : a
  states[2 * section + 1] = b
}

/**
 * Sum of all outputs that follow from given states without further input, in closed form: each state ends at zero, so
 * that the update equations summed over all time give it section by section.
 */
export function sumOfFreeOutput(program: Float64Array, states: Float64Array): number {
  let input = 0
  for (let at = 0, i = 0; at < program.length; at += SECTION_SIZE, i += 2) {
    const [k, e, f, u, s, q] = program.subarray(at, at + SECTION_SIZE)
    const moves = e === 0 ? -states[i + 1] / f : -states[i]
    const first = e === 0 ? 0 : (f * states[i] - states[i + 1]) / e
    input = u * moves + s * first + q * (k * input - moves)
  }
  return input
}

/**
 * Poles of the rows as log z = −decay ± j·angle per sample, with full relative precision near z = 1.
 *
 * @returns  decay and angle of each pole (one of a conjugate pair), two numbers a pole. decay is Infinity at z = 0.
 */
export function logPoles(analogue: Float64Array): { decay: number; angle: number }[] {
  const poles: { decay: number; angle: number }[] = []
  for (let at = 0; at < analogue.length; at += 6) {
    const [d2, d1, d0] = analogue.subarray(at + 3, at + 6)
    if (d2 === 0) {
      poles.push(logPole(-d0, 0))
      continue
    }
    const square = d1 * d1 - 4 * d0
    if (square < 0) poles.push(logPole(-d1 / 2, Math.sqrt(-square) / 2))
    else {
      // add with like signs, the other root from the product
      const larger = -(d1 + Math.sqrt(square)) / 2
      poles.push(logPole(larger, 0), logPole(d0 / larger, 0))
    }
  }
  return poles
}

/** log z = 2·artanh σ */
function logPole(re: number, im: number): { decay: number; angle: number } {
  const below = (1 - re) ** 2 + im * im
  const change = (4 * re) / below
  // near z = 0 the change of |z|² from 1 is −1 but for rounding, which may pass −1; there |1 + σ| itself is exact
  const decay = -(change < -0.5 ? Math.log(((1 + re) ** 2 + im * im) / below) : Math.log1p(change)) / 2
  const angle = Math.atan2(im, 1 + re) + Math.atan2(im, 1 - re)
  return { decay, angle: 1 + re < 0 && im === 0 ? Math.PI : angle }
}
