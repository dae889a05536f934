import { describe, expect, test, vi } from 'vitest'
import { memoised } from '../../src/state/memo.ts'

describe('memoised', () => {
  test('computes once for the same arguments, and hands back the very result', () => {
    const compute = vi.fn((a: object, b: number) => ({ a, b }))
    const remembered = memoised(compute)
    const key = {}
    expect(remembered(key, Number.NaN)).toBe(remembered(key, Number.NaN))
    expect(compute).toHaveBeenCalledTimes(1)
  })

  test('computes again for equal objects that are not the same', () => {
    const compute = vi.fn((a: object) => ({ a }))
    const remembered = memoised(compute)
    remembered({})
    remembered({})
    expect(compute).toHaveBeenCalledTimes(2)
  })

  test('forgets the result that was asked for longest ago', () => {
    const compute = vi.fn((a: number) => [a])
    const remembered = memoised(compute, 2)
    const first = remembered(1)
    remembered(2)
    expect(remembered(1)).toBe(first)
    remembered(3)
    expect(remembered(1)).toBe(first)
    expect(compute).toHaveBeenCalledTimes(3)
    remembered(2)
    expect(compute).toHaveBeenCalledTimes(4)
  })

  test('tells a missing argument from one that is there', () => {
    const remembered = memoised((a: number, b?: number) => [a, b ?? 0])
    expect(remembered(1)).toEqual([1, 0])
    expect(remembered(1, 5)).toEqual([1, 5])
    expect(remembered(1)).toEqual([1, 0])
  })

  test('does not remember an error', () => {
    let fails = true
    const remembered = memoised((a: number) => {
      if (fails) throw new RangeError('no')
      return a
    })
    expect(() => remembered(1)).toThrow(RangeError)
    fails = false
    expect(remembered(1)).toBe(1)
  })
})
