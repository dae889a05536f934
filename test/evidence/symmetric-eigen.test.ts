import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { symmetricEigen } from '../../src/evidence/symmetric-eigen.ts'
import { seededRandom } from '../../src/erp/index.ts'

function randomSymmetric(size: number, seed: number): Float64Array {
  const random = seededRandom(seed)
  const m = new Float64Array(size * size)
  for (let i = 0; i < size; i++) for (let j = 0; j <= i; j++) m[i * size + j] = m[j * size + i] = random.normal()
  return m
}

/** Largest departure of Eᵀ·diag·E from the matrix and of E·Eᵀ from the identity. */
function errors(m: Float64Array, size: number): { matrix: number; rows: number } {
  const { values, vectors } = symmetricEigen(m, size)
  let matrix = 0
  let rows = 0
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < size; j++) {
      let back = 0
      let inner = 0
      for (let k = 0; k < size; k++) {
        back += values[k]! * vectors[k * size + i]! * vectors[k * size + j]!
        inner += vectors[i * size + k]! * vectors[j * size + k]!
      }
      matrix = Math.max(matrix, Math.abs(back - m[i * size + j]!))
      rows = Math.max(rows, Math.abs(inner - (i === j ? 1 : 0)))
    }
  }
  return { matrix, rows }
}

describe('exact cases', () => {
  test('2 1 / 1 2 has the eigenvalues 1 and 3', () => {
    const { values } = symmetricEigen(Float64Array.of(2, 1, 1, 2), 2)
    expect(values.slice().sort()[0]).toBeCloseTo(1, 14)
    expect(values.slice().sort()[1]).toBeCloseTo(3, 14)
  })

  test('the second difference of n points has the eigenvalues 2 − 2·cos(kπ/(n + 1))', () => {
    // Source: closed form of the discrete Laplacian (Golub & Van Loan, Matrix Computations, ch. 4.8), from memory.
    const n = 25
    const m = new Float64Array(n * n)
    for (let i = 0; i < n; i++) {
      m[i * n + i] = 2
      if (i > 0) m[i * n + i - 1] = m[(i - 1) * n + i] = -1
    }
    const values = symmetricEigen(m, n).values.slice().sort()
    values.forEach((value, k) => expect(value).toBeCloseTo(2 - 2 * Math.cos(((k + 1) * Math.PI) / (n + 1)), 13))
  })

  test('a diagonal, a zero and a one by one matrix are their own', () => {
    expect([...symmetricEigen(Float64Array.of(5), 1).values]).toEqual([5])
    expect([...symmetricEigen(new Float64Array(16), 4).values]).toEqual([0, 0, 0, 0])
    expect([...symmetricEigen(Float64Array.of(3, 0, 0, -2), 2).values].sort()).toEqual([-2, 3])
  })
})

describe('properties', () => {
  test('Eᵀ·diag·E gives the matrix back and the rows of E are orthonormal', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 30 }), fc.integer({ min: 1, max: 1000 }), (size, seed) => {
        const { matrix, rows } = errors(randomSymmetric(size, seed), size)
        expect(matrix).toBeLessThan(1e-13 * size)
        expect(rows).toBeLessThan(1e-13 * size)
      }),
    )
  })

  test('eigenvalues over twenty powers of ten, as of noise behind a steep low-pass, settle', () => {
    const size = 60
    const { vectors } = symmetricEigen(randomSymmetric(size, 9), size)
    const m = new Float64Array(size * size)
    for (let k = 0; k < size; k++) {
      const value = 10 ** (6 - k / 3)
      for (let i = 0; i < size; i++) {
        for (let j = 0; j < size; j++) m[i * size + j]! += value * vectors[k * size + i]! * vectors[k * size + j]!
      }
    }
    const { matrix, rows } = errors(m, size)
    expect(matrix).toBeLessThan(1e-12 * 1e6)
    expect(rows).toBeLessThan(1e-12)
  })
})

test('a matrix that is not finite is refused with its place', () => {
  expect(() => symmetricEigen(Float64Array.of(1, NaN, NaN, 1), 2)).toThrow(/matrix must be finite, value 1 was NaN/)
})
