import { gramOfRows, rowProducts } from './row-products.ts'
import { symmetricEigen } from './symmetric-eigen.ts'

/**
 * Restricted maximum likelihood of two variance components s, a ≥ 0 in y = X·b + n, n of covariance I + s·Λ + a·VVᵀ with Λ
 * diagonal and V of few columns. The negative restricted log-likelihood (without constants, doubled) is
 * log|M| + log|XᵀM⁻¹X| + yᵀPy, P = M⁻¹ − M⁻¹X(XᵀM⁻¹X)⁻¹XᵀM⁻¹.
 *
 * For a given s the eigenvalues of Vᵀ(I + sΛ)⁻¹V make every a next to free, so that a is searched for on its whole range at each s, and s on
 * its own whole range.
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
  readonly mu: Float64Array
  readonly vectors: Float64Array
  /** Vᵀ(I + sΛ)⁻¹ in the eigenvectors' coordinates times the two columns of X. */
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
/** Values of a that are looked at first, over 1/μ of the largest eigenvalue: half decades. */
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
  const { inverse, mu, fixedParts, vectors } = scale
  const { size, fixed, rank, columns } = problem
  const weighted = new Float64Array(size)
  for (let i = 0; i < size; i++) weighted[i] = inverse[i] * y[i]
  const ofY = rowProducts(vectors, rank, rowProducts(columns, rank, weighted, 1, size), 1, rank)
  const parts = [fixedParts[0], fixedParts[1], ofY]
  const raw = [
    product(inverse, fixed[0], fixed[0]),
    product(inverse, fixed[0], fixed[1]),
    product(inverse, fixed[1], fixed[1]),
    dot(fixed[0], weighted),
    dot(fixed[1], weighted),
    dot(y, weighted),
  ]
  const pairs = [
    [0, 0],
    [0, 1],
    [1, 1],
    [0, 2],
    [1, 2],
    [2, 2],
  ].map(([i, j]) => Float64Array.from({ length: rank }, (_, r) => parts[i][r] * parts[j][r]))
  return (a) => {
    const products = raw.slice() as [number, number, number, number, number, number]
    let logDeterminant = scale.logDeterminant
    if (a > 0) {
      for (let r = 0; r < rank; r++) {
        const taken = a / (1 + a * mu[r])
        logDeterminant += Math.log1p(a * mu[r])
        for (let p = 0; p < 6; p++) products[p] -= taken * pairs[p][r]
      }
    }
    const [x00, x01, x11, x0y, x1y, yy] = products
    const determinant = x00 * x11 - x01 * x01
    const explained = (x11 * x0y * x0y - 2 * x01 * x0y * x1y + x00 * x1y * x1y) / determinant
    return { value: logDeterminant + Math.log(determinant) + yy - explained, s, a, products }
  }
}

function bestAt(problem: VarianceComponents, s: number, y: Float64Array, keep: boolean): Trial {
  const scale = atScale(problem, s, keep)
  const { mu } = scale
  const trialAt = trialsAt(problem, scale, s, y)
  let largest = 0
  for (let r = 0; r < mu.length; r++) largest = Math.max(largest, mu[r])
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
  const inner = gramOfRows(weighted, rank, size)
  const { values, vectors } = symmetricEigen(inner, rank)
  const turned = (x: Float64Array) => {
    const rooted = x.map((value, i) => roots[i] * value)
    return rowProducts(vectors, rank, rowProducts(weighted, rank, rooted, 1, size), 1, rank)
  }
  const made: AtScale = {
    inverse,
    logDeterminant,
    mu: values.map((value) => Math.max(0, value)),
    vectors,
    fixedParts: [turned(fixed[0]), turned(fixed[1])],
  }
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
  const { inverse, mu, vectors } = atScale(problem, s, false)
  const { size, columns, rank } = problem
  const out = new Float64Array(size)
  for (let i = 0; i < size; i++) out[i] = inverse[i] * v[i]
  if (a === 0) return out
  const parts = rowProducts(vectors, rank, rowProducts(columns, rank, out, 1, size), 1, rank)
  for (let r = 0; r < rank; r++) parts[r] *= a / (1 + a * mu[r])
  const back = new Float64Array(rank)
  for (let r = 0; r < rank; r++) for (let q = 0; q < rank; q++) back[q] += parts[r] * vectors[r * rank + q]
  for (let q = 0; q < rank; q++) {
    for (let i = 0; i < size; i++) out[i] -= back[q] * inverse[i] * columns[q * size + i]
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
