import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { furtherData } from '../../src/evidence/further-data.ts'
import { unseenShare } from '../../src/evidence/unseen-share.ts'
import { designChain } from '../../src/filter/chain.ts'
import { chain } from '../filter/arbitrary-chain.ts'

const weights = new Float64Array(100).fill(1 / 20, 60, 80)

describe('furtherData', () => {
  test('brings the unseen share down to the threshold, and half as much further does not', () => {
    let asked = 0
    fc.assert(
      fc.property(chain, fc.constantFrom(0.01, 0.05, 0.1), (some, threshold) => {
        const further = furtherData(some, weights, threshold)
        if (further === null) throw new Error('every kernel here ends')
        const share = (before: number, after: number) => unseenShare(some, weights, -before, 100 + after)
        // sums of long tails are right to 1e-3 of themselves
        expect(share(further.before, further.after)).toBeLessThan(threshold * 1.01 + 1e-6)
        if (share(0, 0) <= threshold) {
          expect(further).toEqual({ before: 0, after: 0 })
          return
        }
        asked++
        expect(share(Math.floor(further.before / 2), Math.floor(further.after / 2))).toBeGreaterThan(threshold)
      }),
      { numRuns: 100 },
    )
    expect(asked).toBeGreaterThan(10)
  })

  test('asks a causal filter for earlier data only', () => {
    const some = designChain(
      [{ design: 'butterworth', pass: 'high', order: 1, cutoffsHz: [0.5], meaning: 'design', direction: 'forward' }],
      100,
    )
    const further = furtherData(some, weights, 0.02)
    expect(further?.before).toBeGreaterThan(10)
    expect(further?.after).toBe(0)
  })

  test('is none where no length would do', () => {
    const some = designChain(
      [{ design: 'butterworth', pass: 'high', order: 1, cutoffsHz: [1e-6], meaning: 'design', direction: 'both' }],
      100,
    )
    expect(furtherData(some, weights, 1e-4)).toBeNull()
  })

  test('refuses a threshold that is no share', () => {
    expect(() => furtherData(designChain([], 100), weights, 2)).toThrow(RangeError)
  })
})
