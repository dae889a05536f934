import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { cholesky, choleskyOfLowRank, solveLower, solveUpper, WORST_CONDITION } from '../../src/evidence/cholesky.ts'
import { gramOfRows } from '../../src/evidence/row-products.ts'
import { seededRandom } from '../../src/erp/index.ts'

function randomRows(rows: number, columns: number, seed: number): Float64Array {
  const random = seededRandom(seed)
  return Float64Array.from({ length: rows * columns }, () => random.normal())
}

describe('exact cases', () => {
  test('4 2 / 2 5 has the factor 2 0 / 1 2', () => {
    const { factor, condition } = cholesky(Float64Array.of(4, 2, 2, 5), 2)
    expect([...factor]).toEqual([2, 0, 1, 2])
    expect(condition).toBe(1)
  })

  test('one number has its root', () => {
    expect([...cholesky(Float64Array.of(9), 1).factor]).toEqual([3])
  })
})

describe('properties', () => {
  test('L·Lᵀ gives the matrix back, and the two solutions its inverse times the right side', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 40 }), fc.integer({ min: 1, max: 1000 }), (size, seed) => {
        const m = gramOfRows(randomRows(size, size + 3, seed), size, size + 3)
        const made = cholesky(m, size)
        const back = gramOfRows(made.factor, size, size)
        for (let i = 0; i < m.length; i++) expect(Math.abs(back[i]! - m[i]!)).toBeLessThan(1e-12 * size)
        const x = randomRows(size, 1, seed + 1)
        const b = new Float64Array(size)
        for (let i = 0; i < size; i++) for (let j = 0; j < size; j++) b[i]! += m[i * size + j]! * x[j]!
        solveLower(made, b, 1)
        solveUpper(made, b)
        for (let i = 0; i < size; i++) expect(Math.abs(b[i]! - x[i]!)).toBeLessThan(1e-13 * made.condition * size * 100)
      }),
    )
  })

  test('several right sides are solved as each by itself', () => {
    const m = gramOfRows(randomRows(9, 12, 3), 9, 12)
    const made = cholesky(m, 9)
    const b = randomRows(9, 5, 4)
    const together = b.slice()
    solveLower(made, together, 5)
    for (let j = 0; j < 5; j++) {
      const alone = Float64Array.from({ length: 9 }, (_, i) => b[i * 5 + j]!)
      solveLower(made, alone, 1)
      for (let i = 0; i < 9; i++) expect(together[i * 5 + j]).toBeCloseTo(alone[i]!, 12)
    }
  })

  test('a matrix of rank r has a factor of r columns', () => {
    const rows = randomRows(30, 7, 5)
    const m = gramOfRows(rows, 30, 7)
    const { columns, rank } = choleskyOfLowRank(m, 30, 1e-10)
    expect(rank).toBe(7)
    for (let i = 0; i < 30; i++) {
      for (let j = 0; j < 30; j++) {
        let sum = 0
        for (let r = 0; r < rank; r++) sum += columns[r * 30 + i]! * columns[r * 30 + j]!
        expect(Math.abs(sum - m[i * 30 + j]!)).toBeLessThan(1e-9)
      }
    }
  })
})

describe('errors', () => {
  test('a matrix that is not positive definite is refused with its pivot', () => {
    expect(() => cholesky(Float64Array.of(1, 2, 2, 1), 2)).toThrow(/positive definite and finite, pivot 1 of 2 was -3/)
    expect(() => cholesky(Float64Array.of(1, 0, 0, NaN), 2)).toThrow(/pivot 1 of 2 was NaN/)
  })

  test('a matrix of a condition above the worst is refused with it', () => {
    expect(WORST_CONDITION).toBe(1e12)
    expect(() => cholesky(Float64Array.of(1, 0, 0, 1e-13), 2)).toThrow(/condition of the matrix must be at most/)
    expect(cholesky(Float64Array.of(1, 0, 0, 1e-11), 2).condition).toBeCloseTo(1e11, -3)
  })
})
