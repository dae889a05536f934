import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { designChain } from '../../src/filter/chain.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import {
  addStage,
  canMove,
  duplicateStage,
  moveStage,
  newStage,
  removeStage,
  replaceStage,
  type StageKind,
} from '../../src/state/chain-actions.ts'
import { stages } from '../filter/random-specs.ts'

const kinds = fc.constantFrom<StageKind>('butterworth', 'windowed-sinc', 'amplifier', 'notch', 'moving-average')
const passes = fc.constantFrom('low' as const, 'high' as const, 'band' as const, 'stop' as const)

const amplifiersFirst = (chain: readonly StageSpec[]) =>
  chain.every((spec, i) => i === 0 || spec.design !== 'amplifier' || chain[i - 1].design === 'amplifier')

/** Chains as the page lets them become. */
const orderedChain = fc
  .array(stages, { maxLength: 7 })
  .map((chosen) => chosen.reduce<StageSpec[]>((chain, { spec }) => addStage(chain, spec).chain, []))

describe('newStage', () => {
  test('can be designed at once at any usual sampling rate, and keeps its kind', () => {
    fc.assert(
      fc.property(kinds, passes, fc.constantFrom(20, 100, 106, 160, 256, 500, 1000, 4096), (kind, pass, rate) => {
        const spec = newStage(kind, pass, rate)
        expect(spec.design).toBe(kind)
        expect(designChain([spec], rate).stages).toHaveLength(1)
      }),
      { numRuns: 300 },
    )
  })

  test('is of the pass that was asked for, where its kind has passes', () => {
    for (const pass of ['low', 'high', 'band', 'stop'] as const)
      for (const kind of ['butterworth', 'windowed-sinc'] as const)
        expect(newStage(kind, pass, 500)).toMatchObject({ pass })
    expect(newStage('amplifier', 'low', 500)).toMatchObject({ pass: 'low' })
    expect(newStage('amplifier', 'high', 500)).toMatchObject({ pass: 'high' })
  })
})

describe('the chain', () => {
  test('keeps its amplifier stages first, whatever is added', () => {
    fc.assert(
      fc.property(orderedChain, stages, (chain, { spec }) => {
        const added = addStage(chain, spec)
        expect(amplifiersFirst(added.chain)).toBe(true)
        expect(added.chain[added.index]).toBe(spec)
        expect(removeStage(added.chain, added.index)).toEqual(chain)
      }),
    )
  })

  test('keeps its amplifier stages first, whatever is moved', () => {
    fc.assert(
      fc.property(
        orderedChain,
        fc.array(fc.tuple(fc.nat(6), fc.constantFrom(-1 as const, 1 as const)), { maxLength: 20 }),
        (chain, moves) => {
          let moved = chain
          for (const [index, by] of moves) if (index < moved.length) moved = moveStage(moved, index, by)
          expect(amplifiersFirst(moved)).toBe(true)
          expect(new Set(moved)).toEqual(new Set(chain))
          expect(moved).toHaveLength(chain.length)
        },
      ),
    )
  })

  test('moves a stage by one place and back', () => {
    fc.assert(
      fc.property(orderedChain, fc.nat(6), (chain, index) => {
        fc.pre(index < chain.length && canMove(chain, index, 1))
        const moved = moveStage(chain, index, 1)
        expect(moved[index + 1]).toBe(chain[index])
        expect(moveStage(moved, index + 1, -1)).toEqual(chain)
      }),
    )
  })

  test('has ends beyond which nothing moves', () => {
    const chain = [newStage('butterworth', 'low', 500), newStage('notch', 'low', 500)]
    expect(canMove(chain, 0, -1)).toBe(false)
    expect(canMove(chain, 1, 1)).toBe(false)
    expect(canMove(chain, 0, 1)).toBe(true)
    expect(canMove([newStage('amplifier', 'high', 500), ...chain], 0, 1)).toBe(false)
  })

  test('duplicates a stage beside itself, as a copy that shares nothing with it', () => {
    const chain = [newStage('butterworth', 'low', 500), newStage('notch', 'low', 500)]
    const doubled = duplicateStage(chain, 0)
    expect(doubled).toEqual([chain[0], chain[0], chain[1]])
    expect(doubled[1]).not.toBe(chain[0])
    expect(amplifiersFirst(duplicateStage([newStage('amplifier', 'high', 500), ...chain], 0))).toBe(true)
  })

  test('is never changed in place', () => {
    const chain = Object.freeze([newStage('butterworth', 'low', 500), newStage('notch', 'low', 500)])
    const other = newStage('moving-average', 'low', 500)
    expect(replaceStage(chain, 1, other)).toEqual([chain[0], other])
    expect(removeStage(chain, 0)).toEqual([chain[1]])
    expect(moveStage(chain, 0, -1)).not.toBe(chain)
    expect(addStage(chain, other).index).toBe(2)
    expect(duplicateStage(chain, 1)).toHaveLength(3)
    expect(chain).toHaveLength(2)
  })
})
