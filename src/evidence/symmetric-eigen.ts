/** A = Eᵀ·diag(values)·E; the rows of E are the eigenvectors. */
export interface SymmetricEigen {
  readonly size: number
  readonly values: Float64Array
  readonly vectors: Float64Array
}

const MOST_SWEEPS = 60

/**
 * Eigenvalues (in no order) and eigenvectors of a symmetric matrix: Householder's reflections to tridiagonal form, then the implicit
 * QL algorithm. Errors are some 1e-16 of the largest eigenvalue.
 *
 * @param matrix  size × size values, row after row; not changed.
 * @throws RangeError for a matrix of another size or with a value that is not finite.
 * @see Golub & Van Loan, Matrix Computations, ch. 8.3; Wilkinson & Reinsch, Handbook for Automatic Computation II, II/2 and II/4.
 */
export function symmetricEigen(matrix: Float64Array, size: number): SymmetricEigen {
  if (matrix.length !== size * size) {
    throw new RangeError(`matrix must hold ${size} × ${size} values, had ${matrix.length}`)
  }
  for (let i = 0; i < matrix.length; i++) {
    if (!Number.isFinite(matrix[i])) throw new RangeError(`matrix must be finite, value ${i} was ${matrix[i]}`)
  }
  const { diagonal, beside, reflectors, scales } = tridiagonal(matrix, size)
  const vectors = reflections(reflectors, size, scales)
  implicitQl(diagonal, beside, vectors, size)
  return { size, values: diagonal, vectors }
}

/** A = Q·T·Qᵀ, T tridiagonal and Q a product of reflections. */
export interface Tridiagonal {
  readonly size: number
  readonly diagonal: Float64Array
  /** beside[k] lies between diagonal[k] and diagonal[k + 1]. */
  readonly beside: Float64Array
  /** Row k holds the vector of reflection k, from k + 1 on, and `scales` its factor 2/vᵀv. */
  readonly reflectors: Float64Array
  readonly scales: Float64Array
}

/** Householder's reduction alone, where T serves as well as eigenvalues. The matrix must be finite and is not changed. */
export function tridiagonal(matrix: Float64Array, size: number): Tridiagonal {
  const reflectors = matrix.slice()
  const diagonal = new Float64Array(size)
  const beside = new Float64Array(size)
  const scales = tridiagonalise(reflectors, size, diagonal, beside)
  return { size, diagonal, beside, reflectors, scales }
}

/** Qᵀ·v. */
export function toTridiagonal(t: Tridiagonal, v: Float64Array): Float64Array {
  const out = v.slice()
  for (let k = 0; k < t.size; k++) reflect(t, k, out)
  return out
}

/** Q·v. */
export function fromTridiagonal(t: Tridiagonal, v: Float64Array): Float64Array {
  const out = v.slice()
  for (let k = t.size - 1; k >= 0; k--) reflect(t, k, out)
  return out
}

function reflect({ size, reflectors, scales }: Tridiagonal, k: number, v: Float64Array): void {
  if (scales[k] === 0) return
  const row = k * size
  let inner = 0
  for (let i = k + 1; i < size; i++) inner += reflectors[row + i] * v[i]
  inner *= scales[k]
  for (let i = k + 1; i < size; i++) v[i] -= inner * reflectors[row + i]
}

/** Leaves the reflections' vectors in the rows of `a` (row k from k + 1 on); returns their factors 2/vᵀv. */
function tridiagonalise(a: Float64Array, n: number, diagonal: Float64Array, beside: Float64Array): Float64Array {
  const scales = new Float64Array(n)
  const p = new Float64Array(n)
  for (let k = 0; k < n; k++) {
    const row = k * n
    diagonal[k] = a[row + k]
    if (k === n - 1) break
    let square = 0
    for (let i = k + 2; i < n; i++) square += a[row + i] * a[row + i]
    const first = a[row + k + 1]
    if (square === 0) {
      beside[k] = first
      continue
    }
    const length = Math.sqrt(first * first + square)
    const image = first > 0 ? -length : length
    beside[k] = image
    a[row + k + 1] = first - image
    const scale = 2 / (square + (first - image) ** 2)
    scales[k] = scale
    // A ← H·A·H = A − v·wᵀ − w·vᵀ on what remains
    let inner = 0
    for (let i = k + 1; i < n; i++) {
      const at = i * n
      let s0 = 0
      let s1 = 0
      let j = k + 1
      for (; j + 1 < n; j += 2) {
        s0 += a[at + j] * a[row + j]
        s1 += a[at + j + 1] * a[row + j + 1]
      }
      if (j < n) s0 += a[at + j] * a[row + j]
      p[i] = scale * (s0 + s1)
      inner += p[i] * a[row + i]
    }
    const half = (scale * inner) / 2
    for (let i = k + 1; i < n; i++) p[i] -= half * a[row + i]
    for (let i = k + 1; i < n; i++) {
      const at = i * n
      const v = a[row + i]
      const w = p[i]
      for (let j = k + 1; j < n; j++) a[at + j] -= v * p[j] + w * a[row + j]
    }
  }
  return scales
}

/** Qᵀ with A = Q·T·Qᵀ. Row r of Qᵀ is Q's column r, which all reflections have worked on. */
function reflections(a: Float64Array, n: number, scales: Float64Array): Float64Array {
  // rows of Qᵀ: Qᵀ ← Qᵀ·H_k for k from the last to the first would work on columns; Q ← H_k·Q works on rows
  const q = new Float64Array(n * n)
  for (let i = 0; i < n; i++) q[i * n + i] = 1
  const sums = new Float64Array(n)
  for (let k = n - 2; k >= 0; k--) {
    if (scales[k] === 0) continue
    const row = k * n
    sums.fill(0)
    for (let i = k + 1; i < n; i++) {
      const v = a[row + i]
      const at = i * n
      for (let j = k + 1; j < n; j++) sums[j] += v * q[at + j]
    }
    for (let i = k + 1; i < n; i++) {
      const v = scales[k] * a[row + i]
      const at = i * n
      for (let j = k + 1; j < n; j++) q[at + j] -= v * sums[j]
    }
  }
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < i; j++) {
      const kept = q[i * n + j]
      q[i * n + j] = q[j * n + i]
      q[j * n + i] = kept
    }
  }
  return q
}

function implicitQl(d: Float64Array, e: Float64Array, z: Float64Array, n: number): void {
  // rounding has left so much of the whole matrix everywhere; less than that never settles among eigenvalues near 0
  let norm = 0
  for (let i = 0; i < n; i++) norm = Math.max(norm, Math.abs(d[i]) + Math.abs(e[i]))
  const negligible = Number.EPSILON * norm
  for (let l = 0; l < n; l++) {
    for (let sweep = 0; ; sweep++) {
      let m = l
      for (; m < n - 1; m++) {
        if (Math.abs(e[m]) <= negligible) break
      }
      if (m === l) break
      if (sweep === MOST_SWEEPS) throw new RangeError(`eigenvalue ${l} of ${n} has not settled`)
      let g = (d[l + 1] - d[l]) / (2 * e[l])
      let r = Math.hypot(g, 1)
      g = d[m] - d[l] + e[l] / (g + (g >= 0 ? r : -r))
      let s = 1
      let c = 1
      let p = 0
      let i = m - 1
      for (; i >= l; i--) {
        const f = s * e[i]
        const b = c * e[i]
        r = Math.hypot(f, g)
        e[i + 1] = r
        if (r === 0) {
          d[i + 1] -= p
          e[m] = 0
          break
        }
        s = f / r
        c = g / r
        g = d[i + 1] - p
        r = (d[i] - g) * s + 2 * c * b
        p = s * r
        d[i + 1] = g + p
        g = c * r - b
        const low = i * n
        const high = low + n
        for (let k = 0; k < n; k++) {
          const upper = z[high + k]
          const lower = z[low + k]
          z[high + k] = s * lower + c * upper
          z[low + k] = c * lower - s * upper
        }
      }
      if (r === 0 && i >= l) continue
      d[l] -= p
      e[l] = g
      e[m] = 0
    }
  }
}
