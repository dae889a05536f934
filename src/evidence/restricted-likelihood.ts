import { gramOfRows, rowProducts } from './row-products.ts'
import { fromTridiagonal, toTridiagonal, type Tridiagonal, tridiagonal } from './symmetric-eigen.ts'

/**
 * Restricted maximum likelihood of two variance components s, a ≥ 0 in y = X·b + n, n of covariance I + s·Λ + a·VVᵀ with Λ
 * diagonal and V of few columns. The negative restricted log-likelihood (without constants, doubled) is
 * log|M| + log|XᵀM⁻¹X| + yᵀPy, P = M⁻¹ − M⁻¹X(XᵀM⁻¹X)⁻¹XᵀM⁻¹.
 *
 * For a given s, G = Vᵀ(I + sΛ)⁻¹V in tridiagonal form makes every a next to free (I + aG is factored in as many steps as V has columns),
 * so that a is searched for on its whole range at each s, and s on its own whole range.
 *
 * @see Patterson & Thompson, Biometrika 58, 545–554, 1971; Harville, J. Am. Stat. Assoc. 72, 320–338, 1977.
 */
export interface VarianceComponents {
  readonly size: number
  /** Diagonal of Λ, not negative. */
  readonly lambda: Float64Array
  /** Columns of V, one after another. */
  readonly columns: Float64Array
  readonly rank: number
  /** Columns of X, one after another: the early component, and the constant. */
  readonly fixed: readonly [Float64Array, Float64Array]
  /** What does not hang on y, for values of s that are asked for again with other y. */
  readonly kept: Map<number, AtScale>
}

/** What a value of s comes to, whatever y. */
interface AtScale {
  readonly inverse: Float64Array
  readonly logDeterminant: number
  /** G = Q·T·Qᵀ. */
  readonly inner: Tridiagonal
  /** Qᵀ·Vᵀ(I + sΛ)⁻¹ times the two columns of X. */
  readonly fixedParts: readonly [Float64Array, Float64Array]
}

/** The estimates, and generalised least squares at them. */
export interface RestrictedFit {
  readonly s: number
  readonly a: number
  /** Coefficients of X's two columns, and their covariance (b₀b₀, b₀b₁, b₁b₁). */
  readonly b: readonly [number, number]
  readonly covariance: readonly [number, number, number]
  /** Coefficient of the second column where the first is left out. */
  readonly withoutFirst: number
}

/** Values of s that are looked at first: decades. */
const SCALES = [0, ...Array.from({ length: 9 }, (_, k) => 10 ** (-4 + k))]
/** Values of a that are looked at first, over 1 by the largest diagonal element of T: half decades. */
const RELATIVE = [0, ...Array.from({ length: 27 }, (_, k) => 10 ** (-3 + k / 2))]

/** @throws RangeError where the first column of X cannot be told from nothing, or from the second. */
export function restrictedFit(problem: VarianceComponents, y: Float64Array): RestrictedFit {
  const at = (s: number, keep: boolean) => bestAt(problem, s, y, keep)
  let best = at(0, true)
  let k = 0
  const trials = SCALES.map((s, i) => {
    const trial = i === 0 ? best : at(s, true)
    if (trial.value < best.value) {
      best = trial
      k = i
    }
    return trial
  })
  if (k > 0) {
    // a minimum in log s between its neighbours
    const low = k === 1 ? SCALES[1] / 100 : SCALES[k - 1]
    const high = k === SCALES.length - 1 ? SCALES[k] * 1e4 : SCALES[k + 1]
    const found = brent(
      (u) => at(Math.exp(u), false),
      Math.log(low),
      Math.log(trials[k].s),
      Math.log(high),
      trials[k],
      1e-5,
    )
    if (found.value < best.value) best = found
  }
  return leastSquares(best)
}

/** Generalised least squares at given s and a. Throws as `restrictedFit`. */
export function fitAt(problem: VarianceComponents, y: Float64Array, s: number, a: number): RestrictedFit {
  return leastSquares(trialsAt(problem, atScale(problem, s, false), s, y)(a))
}

interface Trial {
  readonly value: number
  readonly s: number
  readonly a: number
  /** XᵀM⁻¹X: 00, 01, 11; XᵀM⁻¹y; yᵀM⁻¹y. */
  readonly products: readonly [number, number, number, number, number, number]
}

/** Every a at one s. */
function trialsAt(problem: VarianceComponents, scale: AtScale, s: number, y: Float64Array): (a: number) => Trial {
  const { inverse, inner, fixedParts } = scale
  const { size, fixed, rank, columns } = problem
  const weighted = new Float64Array(size)
  for (let i = 0; i < size; i++) weighted[i] = inverse[i] * y[i]
  const p2 = toTridiagonal(inner, rowProducts(columns, rank, weighted, 1, size))
  const [p0, p1] = fixedParts
  const raw = [
    product(inverse, fixed[0], fixed[0]),
    product(inverse, fixed[0], fixed[1]),
    product(inverse, fixed[1], fixed[1]),
    dot(fixed[0], weighted),
    dot(fixed[1], weighted),
    dot(y, weighted),
  ] as const
  return (a) => {
    let [x00, x01, x11, x0y, x1y, yy] = raw
    let logDeterminant = scale.logDeterminant
    if (a > 0) {
      // I + aT = L·D·Lᵀ, one row after another, with z = L⁻¹·p for the three columns
      let pivot = 1
      let [z0, z1, z2] = [0, 0, 0]
      let determinant = 1
      for (let r = 0; r < rank; r++) {
        const off = r === 0 ? 0 : a * inner.beside[r - 1]
        const l = off / pivot
        pivot = 1 + a * inner.diagonal[r] - l * off
        z0 = p0[r] - l * z0
        z1 = p1[r] - l * z1
        z2 = p2[r] - l * z2
        const taken = a / pivot
        x00 -= taken * z0 * z0
        x01 -= taken * z0 * z1
        x11 -= taken * z1 * z1
        x0y -= taken * z0 * z2
        x1y -= taken * z1 * z2
        yy -= taken * z2 * z2
        determinant *= pivot
        if (determinant > 1e200) {
          logDeterminant += Math.log(determinant)
          determinant = 1
        }
      }
      logDeterminant += Math.log(determinant)
    }
    const determinant = x00 * x11 - x01 * x01
    const explained = (x11 * x0y * x0y - 2 * x01 * x0y * x1y + x00 * x1y * x1y) / determinant
    const value = logDeterminant + Math.log(determinant) + yy - explained
    return { value, s, a, products: [x00, x01, x11, x0y, x1y, yy] }
  }
}

function bestAt(problem: VarianceComponents, s: number, y: Float64Array, keep: boolean): Trial {
  const scale = atScale(problem, s, keep)
  const trialAt = trialsAt(problem, scale, s, y)
  let largest = 0
  for (const value of scale.inner.diagonal) largest = Math.max(largest, value)
  let best = trialAt(0)
  if (largest === 0) return best
  let k = 0
  RELATIVE.forEach((relative, i) => {
    const trial = i === 0 ? best : trialAt(relative / largest)
    if (trial.value < best.value) {
      best = trial
      k = i
    }
  })
  if (k === 0) return best
  const at = RELATIVE[k] / largest
  const low = k === 1 ? at / 100 : RELATIVE[k - 1] / largest
  const high = k === RELATIVE.length - 1 ? at * 1e4 : RELATIVE[k + 1] / largest
  const found = brent((u) => trialAt(Math.exp(u)), Math.log(low), Math.log(at), Math.log(high), best, 1e-8)
  return found.value < best.value ? found : best
}

function atScale(problem: VarianceComponents, s: number, keep: boolean): AtScale {
  const known = problem.kept.get(s)
  if (known) return known
  const { size, lambda, columns, rank, fixed } = problem
  const inverse = new Float64Array(size)
  let logDeterminant = 0
  for (let i = 0; i < size; i++) {
    inverse[i] = 1 / (1 + s * lambda[i])
    logDeterminant += Math.log1p(s * lambda[i])
  }
  const roots = inverse.map(Math.sqrt)
  const weighted = new Float64Array(rank * size)
  for (let r = 0; r < rank; r++)
    for (let i = 0; i < size; i++) weighted[r * size + i] = roots[i] * columns[r * size + i]
  const inner = tridiagonal(gramOfRows(weighted, rank, size), rank)
  const turned = (x: Float64Array) => {
    const rooted = x.map((value, i) => roots[i] * value)
    return toTridiagonal(inner, rowProducts(weighted, rank, rooted, 1, size))
  }
  const made: AtScale = { inverse, logDeterminant, inner, fixedParts: [turned(fixed[0]), turned(fixed[1])] }
  if (keep) problem.kept.set(s, made)
  return made
}

function leastSquares({ s, a, products }: Trial): RestrictedFit {
  const [x00, x01, x11, x0y, x1y] = products
  const determinant = x00 * x11 - x01 * x01
  // rounding leaves some 1e-12 of the products
  if (!(determinant > 1e-10 * x00 * x11)) {
    throw new RangeError(
      'the chain must let something of the early window through that is not constant, let nothing through',
    )
  }
  return {
    s,
    a,
    b: [(x11 * x0y - x01 * x1y) / determinant, (x00 * x1y - x01 * x0y) / determinant],
    covariance: [x11 / determinant, -x01 / determinant, x00 / determinant],
    withoutFirst: x1y / x11,
  }
}

/** M⁻¹·v with M = I + sΛ + aVVᵀ. */
export function solveComponents(problem: VarianceComponents, s: number, a: number, v: Float64Array): Float64Array {
  const { inverse, inner } = atScale(problem, s, false)
  const { size, columns, rank } = problem
  const out = new Float64Array(size)
  for (let i = 0; i < size; i++) out[i] = inverse[i] * v[i]
  if (a === 0) return out
  const parts = toTridiagonal(inner, rowProducts(columns, rank, out, 1, size))
  // (I + aT)⁻¹ by its factors
  const pivots = new Float64Array(rank)
  for (let r = 0; r < rank; r++) {
    const off = r === 0 ? 0 : a * inner.beside[r - 1]
    pivots[r] = 1 + a * inner.diagonal[r] - (r === 0 ? 0 : (off * off) / pivots[r - 1])
    if (r > 0) parts[r] -= (off / pivots[r - 1]) * parts[r - 1]
  }
  for (let r = rank - 1; r >= 0; r--) {
    parts[r] = (parts[r] - (r + 1 < rank ? a * inner.beside[r] * parts[r + 1] : 0)) / pivots[r]
  }
  const back = fromTridiagonal(inner, parts)
  for (let q = 0; q < rank; q++) {
    for (let i = 0; i < size; i++) out[i] -= a * back[q] * inverse[i] * columns[q * size + i]
  }
  return out
}

/**
 * Minimum between two limits by parabolas and golden sections.
 *
 * @see Brent, Algorithms for Minimization without Derivatives, 1973, ch. 5.
 */
function brent(
  f: (u: number) => Trial,
  low: number,
  middle: number,
  high: number,
  atMiddle: Trial,
  tolerance: number,
): Trial {
  const golden = (3 - Math.sqrt(5)) / 2
  let [a, b] = [low, high]
  let [x, w, v] = [middle, middle, middle]
  let [fx, fw, fv] = [atMiddle, atMiddle, atMiddle]
  let step = 0
  let before = 0
  for (let round = 0; round < 60; round++) {
    const centre = (a + b) / 2
    if (Math.abs(x - centre) <= 2 * tolerance - (b - a) / 2) break
    let parabolic = false
    if (Math.abs(before) > tolerance) {
      const r = (x - w) * (fx.value - fv.value)
      let q = (x - v) * (fx.value - fw.value)
      let p = (x - v) * q - (x - w) * r
      q = 2 * (q - r)
      if (q > 0) p = -p
      else q = -q
      if (Math.abs(p) < Math.abs((q * before) / 2) && p > q * (a - x) && p < q * (b - x)) {
        before = step
        step = p / q
        const u = x + step
        if (u - a < 2 * tolerance || b - u < 2 * tolerance) step = x < centre ? tolerance : -tolerance
        parabolic = true
      }
    }
    if (!parabolic) {
      before = x < centre ? b - x : a - x
      step = golden * before
    }
    const u = x + (Math.abs(step) >= tolerance ? step : step > 0 ? tolerance : -tolerance)
    const fu = f(u)
    if (fu.value <= fx.value) {
      if (u < x) b = x
      else a = x
      ;[v, fv, w, fw, x, fx] = [w, fw, x, fx, u, fu]
    } else {
      if (u < x) a = u
      else b = u
      if (fu.value <= fw.value || w === x) [v, fv, w, fw] = [w, fw, u, fu]
      else if (fu.value <= fv.value || v === x || v === w) [v, fv] = [u, fu]
    }
  }
  return fx
}

function product(weights: Float64Array, a: Float64Array, b: Float64Array): number {
  let sum = 0
  for (let i = 0; i < a.length; i++) sum += weights[i] * a[i] * b[i]
  return sum
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i]
  return sum
}
