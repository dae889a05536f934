/**
 * Matrices of this room are Float64Array, row after row. One kernel multiplies them, by inner products of rows: rows lie
 * together in memory, and two by two of them need four loads for four products.
 */

/** Σ a[i·stride…]·b[j·stride…] over `length` terms for every row i of a and j of b: a·bᵀ, rowsA × rowsB values. */
export function rowProducts(
  a: Float64Array,
  rowsA: number,
  b: Float64Array,
  rowsB: number,
  length: number,
): Float64Array {
  if (a.length < rowsA * length || b.length < rowsB * length) {
    throw new RangeError(
      `matrices must hold ${rowsA} and ${rowsB} rows of ${length} values, had ${a.length} and ${b.length} values`,
    )
  }
  const out = new Float64Array(rowsA * rowsB)
  for (let i = 0; i < rowsA; i += 2) {
    for (let j = 0; j < rowsB; j += 2) tile(a, rowsA, b, rowsB, length, i, j, out)
  }
  return out
}

/** a·aᵀ, rows × rows values: half the work. */
export function gramOfRows(a: Float64Array, rows: number, length: number): Float64Array {
  return symmetricProducts(a, a, rows, length)
}

/** a·bᵀ where that is known to be symmetric, rows × rows values: half the work, and symmetric to the last bit. */
export function symmetricProducts(a: Float64Array, b: Float64Array, rows: number, length: number): Float64Array {
  if (a.length < rows * length || b.length < rows * length) {
    throw new RangeError(`matrices must hold ${rows} rows of ${length} values, had ${a.length} and ${b.length} values`)
  }
  const out = new Float64Array(rows * rows)
  for (let i = 0; i < rows; i += 2) for (let j = 0; j <= i; j += 2) tile(a, rows, b, rows, length, i, j, out)
  for (let i = 0; i < rows; i++) for (let j = 0; j < i; j++) out[j * rows + i] = out[i * rows + j]
  return out
}

function tile(
  a: Float64Array,
  rowsA: number,
  b: Float64Array,
  rowsB: number,
  length: number,
  i: number,
  j: number,
  out: Float64Array,
): void {
  const a0 = i * length
  const b0 = j * length
  // the last row of an odd number of rows is taken twice
  const a1 = i + 1 < rowsA ? a0 + length : a0
  const b1 = j + 1 < rowsB ? b0 + length : b0
  let s00 = 0
  let s01 = 0
  let s10 = 0
  let s11 = 0
  for (let k = 0; k < length; k++) {
    const u0 = a[a0 + k]
    const u1 = a[a1 + k]
    const v0 = b[b0 + k]
    const v1 = b[b1 + k]
    s00 += u0 * v0
    s01 += u0 * v1
    s10 += u1 * v0
    s11 += u1 * v1
  }
  const at = i * rowsB + j
  out[at] = s00
  if (b1 !== b0) out[at + 1] = s01
  if (a1 !== a0) {
    out[at + rowsB] = s10
    if (b1 !== b0) out[at + rowsB + 1] = s11
  }
}

/** m·x for a matrix of rows × x.length values. */
export function matrixTimes(m: Float64Array, rows: number, x: Float64Array): Float64Array {
  return rowProducts(m, rows, x, 1, x.length)
}

/** mᵀ·x for a matrix of x.length rows. */
export function transposeTimes(m: Float64Array, columns: number, x: Float64Array): Float64Array {
  const out = new Float64Array(columns)
  for (let i = 0; i < x.length; i++) {
    const value = x[i]
    if (value === 0) continue
    const at = i * columns
    for (let j = 0; j < columns; j++) out[j] += value * m[at + j]
  }
  return out
}

/** Columns as rows. */
export function transposed(m: Float64Array, rows: number, columns: number): Float64Array {
  const out = new Float64Array(rows * columns)
  for (let i = 0; i < rows; i++) for (let j = 0; j < columns; j++) out[j * rows + i] = m[i * columns + j]
  return out
}
