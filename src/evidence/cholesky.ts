/** Lower triangular L with M = L·Lᵀ, row after row, zeros above the diagonal. */
export interface Cholesky {
  readonly size: number
  readonly factor: Float64Array
  /** (largest / smallest diagonal element of L)²: a lower bound of M's condition number that is mostly near it. */
  readonly condition: number
}

/** Worse conditioned matrices are refused: their solutions would have fewer than some four right digits. */
export const WORST_CONDITION = 1e12

/**
 * Cholesky factor of a symmetric positive definite matrix, by rows.
 *
 * @param matrix  size × size values, of which the lower triangle is read; not changed.
 * @throws RangeError for a matrix of another size, with a value that is not finite, that is not positive definite, or whose `condition` is above
 *   `WORST_CONDITION`.
 * @see Golub & Van Loan, Matrix Computations, ch. 4.2.
 */
export function cholesky(matrix: Float64Array, size: number): Cholesky {
  if (matrix.length !== size * size || size < 1) {
    throw new RangeError(`matrix must hold ${size} × ${size} values and at least one, had ${matrix.length}`)
  }
  const l = new Float64Array(size * size)
  let most = 0
  let least = Infinity
  for (let i = 0; i < size; i += 2) {
    const pair = i + 1 < size
    const r0 = i * size
    const r1 = pair ? r0 + size : r0
    for (let j = 0; j < i; j += 2) {
      // rows i, i + 1 against rows j, j + 1; i is even, so that j + 1 < i
      const q0 = j * size
      const q1 = q0 + size
      let s00 = 0
      let s01 = 0
      let s10 = 0
      let s11 = 0
      for (let k = 0; k < j; k++) {
        const u0 = l[r0 + k]
        const u1 = l[r1 + k]
        const v0 = l[q0 + k]
        const v1 = l[q1 + k]
        s00 += u0 * v0
        s01 += u0 * v1
        s10 += u1 * v0
        s11 += u1 * v1
      }
      const d0 = l[q0 + j]
      const d1 = l[q1 + j + 1]
      const e = l[q1 + j]
      const x0 = (matrix[r0 + j] - s00) / d0
      l[r0 + j] = x0
      l[r0 + j + 1] = (matrix[r0 + j + 1] - s01 - x0 * e) / d1
      if (pair) {
        const x1 = (matrix[r1 + j] - s10) / d0
        l[r1 + j] = x1
        l[r1 + j + 1] = (matrix[r1 + j + 1] - s11 - x1 * e) / d1
      }
    }
    for (let row = i; row < (pair ? i + 2 : i + 1); row++) {
      const at = row * size
      for (let j = i; j <= row; j++) {
        const other = j * size
        let s = matrix[at + j]
        for (let k = 0; k < j; k++) s -= l[at + k] * l[other + k]
        if (j < row) l[at + j] = s / l[other + j]
        else {
          if (!(s > 0) || s === Infinity) {
            throw new RangeError(`matrix must be positive definite and finite, pivot ${row} of ${size} was ${s}`)
          }
          const root = Math.sqrt(s)
          l[at + j] = root
          most = Math.max(most, root)
          least = Math.min(least, root)
        }
      }
    }
  }
  const condition = (most / least) ** 2
  if (condition > WORST_CONDITION) {
    throw new RangeError(`the condition of the matrix must be at most ${WORST_CONDITION}, was ${condition}`)
  }
  return { size, factor: l, condition }
}

/** L⁻¹·B in place, B of size × columns values, row after row. */
export function solveLower({ size, factor: l }: Cholesky, b: Float64Array, columns: number): void {
  if (b.length !== size * columns) {
    throw new RangeError(`the right side must hold ${size} × ${columns} values, had ${b.length}`)
  }
  for (let i = 0; i < size; i++) {
    const at = i * columns
    const row = i * size
    let k = 0
    for (; k + 3 < i; k += 4) {
      const c0 = l[row + k]
      const c1 = l[row + k + 1]
      const c2 = l[row + k + 2]
      const c3 = l[row + k + 3]
      const k0 = k * columns
      const k1 = k0 + columns
      const k2 = k1 + columns
      const k3 = k2 + columns
      for (let j = 0; j < columns; j++) b[at + j] -= c0 * b[k0 + j] + c1 * b[k1 + j] + c2 * b[k2 + j] + c3 * b[k3 + j]
    }
    for (; k < i; k++) {
      const c = l[row + k]
      const from = k * columns
      for (let j = 0; j < columns; j++) b[at + j] -= c * b[from + j]
    }
    const inverse = 1 / l[row + i]
    for (let j = 0; j < columns; j++) b[at + j] *= inverse
  }
}

/** L⁻ᵀ·b in place, b one column. */
export function solveUpper({ size, factor: l }: Cholesky, b: Float64Array): void {
  if (b.length !== size) throw new RangeError(`the right side must hold ${size} values, had ${b.length}`)
  for (let i = size - 1; i >= 0; i--) {
    const row = i * size
    const value = b[i] / l[row + i]
    b[i] = value
    for (let k = 0; k < i; k++) b[k] -= value * l[row + k]
  }
}

/**
 * Factor of fewer columns of a positive semidefinite matrix: M ≈ V·Vᵀ, by Cholesky steps on the largest remaining diagonal element
 * until that is below `tolerance` times the largest of M.
 *
 * @returns  V's columns, one after another (`rank` rows of `size` values).
 * @see Higham, Analysis of the Cholesky decomposition of a semi-definite matrix, 1990.
 */
export function choleskyOfLowRank(
  matrix: Float64Array,
  size: number,
  tolerance: number,
): { columns: Float64Array; rank: number } {
  if (matrix.length !== size * size) {
    throw new RangeError(`matrix must hold ${size} × ${size} values, had ${matrix.length}`)
  }
  const rest = Float64Array.from({ length: size }, (_, i) => matrix[i * size + i])
  const limit = tolerance * rest.reduce((most, value) => Math.max(most, value), 0)
  const found: Float64Array[] = []
  while (found.length < size) {
    let pivot = 0
    for (let i = 1; i < size; i++) if (rest[i] > rest[pivot]) pivot = i
    if (!(rest[pivot] > limit)) break
    const column = matrix.slice(pivot * size, (pivot + 1) * size)
    for (const earlier of found) {
      const c = earlier[pivot]
      for (let i = 0; i < size; i++) column[i] -= c * earlier[i]
    }
    const scale = 1 / Math.sqrt(rest[pivot])
    for (let i = 0; i < size; i++) {
      column[i] *= scale
      rest[i] = Math.max(0, rest[i] - column[i] * column[i])
    }
    rest[pivot] = 0
    found.push(column)
  }
  const columns = new Float64Array(found.length * size)
  found.forEach((column, k) => columns.set(column, k * size))
  return { columns, rank: found.length }
}
