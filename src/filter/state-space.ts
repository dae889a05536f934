import { SECTION_SIZE } from './state-variable.ts'

/**
 * A cascade of state-variable sections as one linear system, x' = x + D·x + B·v, y = C·x + through·v. D = A − 1 is kept in
 * the place of A, because A is near 1 where poles lie near z = 1, and only D still knows how near.
 *
 * Two states a section, in the order of `runStateVariable`; matrices row by row.
 */
export interface StateSpace {
  readonly size: number
  readonly d: Float64Array
  readonly b: Float64Array
  readonly c: Float64Array
  readonly through: number
}

/** @param program  see `stateVariableProgram`; an empty one passes its input through. */
export function stateSpaceOf(program: Float64Array): StateSpace {
  const size = (program.length / SECTION_SIZE) * 2
  const d = new Float64Array(size * size)
  const b = new Float64Array(size)
  // input of the next section: row·x + through·v
  const row = new Float64Array(size)
  let through = 1
  for (let i = 0; i < size; i += 2) {
    const [k, e, f, u, s, q] = program.subarray((i / 2) * SECTION_SIZE, (i / 2 + 1) * SECTION_SIZE)
    const first = i * size
    const second = first + size
    if (e === 0) d[first + i] = -1
    else {
      for (let j = 0; j < i; j++) d[first + j] = k * row[j]
      d[first + i + 1] = -1
      b[i] = k * through
    }
    for (let j = 0; j < i; j++) d[second + j] = f * k * row[j]
    d[second + i] = e
    d[second + i + 1] = -f
    b[i + 1] = f * k * through

    for (let j = 0; j < i; j++) row[j] *= u * k
    row[i] = s
    row[i + 1] = q - u
    through *= u * k
  }
  return { size, d, b, c: row, through }
}

/** left (rows × inner) times right (inner × columns). Zeros, of which cascades have many, cost nothing. */
export function multiply(left: Float64Array, right: Float64Array, rows: number, inner: number): Float64Array {
  const columns = inner === 0 ? 0 : right.length / inner
  const product = new Float64Array(rows * columns)
  for (let i = 0; i < rows; i++) {
    for (let j = 0; j < inner; j++) {
      const factor = left[i * inner + j]
      if (factor === 0) continue
      for (let k = 0; k < columns; k++) product[i * columns + k] += factor * right[j * columns + k]
    }
  }
  return product
}

/** D of twice as many steps: A² − 1 = 2D + D². */
export function doubled(d: Float64Array, size: number): Float64Array {
  const square = multiply(d, d, size, size)
  for (let i = 0; i < square.length; i++) square[i] += 2 * d[i]
  return square
}

/** State after a step whose matrix is 1 + D. */
export function stepped(d: Float64Array, state: Float64Array): Float64Array {
  const next = multiply(d, state, state.length, state.length)
  for (let i = 0; i < next.length; i++) next[i] += state[i]
  return next
}

/** State after that many steps without input, in a time that grows with the logarithm of the steps. */
export function advance(d: Float64Array, state: Float64Array, steps: number): Float64Array {
  let power = d
  let result = state
  for (let rest = steps; rest >= 1; rest = Math.floor(rest / 2)) {
    if (rest % 2 === 1) result = stepped(power, result)
    if (rest >= 2) power = doubled(power, state.length)
  }
  return result
}

/**
 * Solution X of X = A_b·X·A_f + B_b·C_f: the state in which a backward pass comes out of everything that a forward pass
 * still gives after its input has ended in the state s is X·s. Solved by doubling,
 * X(2m) = X(m) + A_b^m·X(m)·A_f^m (Smith 1968, SIAM J. Appl. Math. 16, 198–201).
 *
 * @param decay  decay per sample of the slowest mode of both passes together.
 * @returns  backward.size rows of forward.size.
 */
export function backwardStart(forward: StateSpace, backward: StateSpace, decay: number): Float64Array {
  let x = multiply(backward.b, forward.c, backward.size, 1)
  let forwardD = forward.d
  let backwardD = backward.d
  for (let m = 1; m * decay < 60; m *= 2) {
    const left = multiply(backwardD, x, backward.size, backward.size)
    for (let i = 0; i < x.length; i++) left[i] += x[i]
    const both = multiply(left, forwardD, backward.size, forward.size)
    x = both.map((value, i) => value + left[i] + x[i])
    forwardD = doubled(forwardD, forward.size)
    backwardD = doubled(backwardD, backward.size)
  }
  return x
}
