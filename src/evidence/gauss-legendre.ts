/** Nodes in −1..1 and weights of an n-point Gauss–Legendre rule, exact for polynomials to degree 2n − 1. */
export interface QuadratureRule {
  readonly nodes: Float64Array
  readonly weights: Float64Array
}

/**
 * Gauss–Legendre rule by Newton's method on the Legendre polynomial.
 *
 * @param n number of nodes, 1 to 64.
 * @throws RangeError for another n.
 * @see    Press et al., Numerical Recipes, section "Gaussian quadratures and orthogonal polynomials".
 */
export function gaussLegendre(n: number): QuadratureRule {
  if (!Number.isInteger(n) || n < 1 || n > 64) throw new RangeError(`n must be a whole number from 1 to 64, was ${n}`)
  const nodes = new Float64Array(n)
  const weights = new Float64Array(n)
  for (let i = 0; i < n; i++) {
    let z = Math.cos((Math.PI * (n - i - 0.25)) / (n + 0.5))
    let slope = 1
    for (let turn = 0; turn < 20; turn++) {
      let p0 = 1
      let p1 = 0
      for (let k = 0; k < n; k++) {
        const p2 = p1
        p1 = p0
        p0 = ((2 * k + 1) * z * p1 - k * p2) / (k + 1)
      }
      slope = (n * (z * p0 - p1)) / (z * z - 1)
      const step = p0 / slope
      z -= step
      if (Math.abs(step) < 1e-15) break
    }
    nodes[i] = z
    weights[i] = 2 / ((1 - z * z) * slope * slope)
  }
  return { nodes, weights }
}
