import { describe, expect, test } from 'vitest'
import type { FidelityRow } from '../../src/evidence/fidelity.ts'
import { verdictOf } from '../../src/state/verdict.ts'

const row: FidelityRow = {
  id: 'mean-amplitude',
  group: 'size',
  label: { figure: 'mean', window: { fromMs: 0, toMs: 100 } },
  unit: 'µV',
  before: 4,
  after: 3,
  change: -1,
  percent: -25,
  percentOf: 'before',
}

describe('verdictOf', () => {
  test.each<[string, FidelityRow, Parameters<typeof verdictOf>[1], ReturnType<typeof verdictOf>]>([
    ['a change within the limit is kept', row, { value: 2, unit: 'µV' }, { kind: 'kept', multiples: 0.5 }],
    ['a change equal to the limit is kept', row, { value: 1, unit: 'µV' }, { kind: 'kept', multiples: 1 }],
    ['a change beyond it is over', row, { value: 0.5, unit: 'µV' }, { kind: 'over', multiples: 2 }],
    [
      'a limit in per cent is held against the per cent',
      row,
      { value: 10, unit: '%' },
      { kind: 'over', multiples: 2.5 },
    ],
    ['no limit is none', row, undefined, { kind: 'no limit' }],
    [
      'a limit in another unit limits nothing, and is named',
      row,
      { value: 5, unit: 'ms' },
      { kind: 'other unit', unit: 'ms' },
    ],
    [
      'a latency has no per cent',
      { ...row, unit: 'ms', percent: null, percentOf: null },
      { value: 5, unit: '%' },
      { kind: 'other unit', unit: '%' },
    ],
    [
      'what is not there after the chain is gone',
      { ...row, after: 'no peak', change: null, percent: null, percentOf: null },
      { value: 1, unit: 'µV' },
      { kind: 'gone' },
    ],
    [
      'what was not there before it cannot be judged',
      { ...row, before: 'no peak', change: null, percent: null, percentOf: null },
      { value: 1, unit: 'µV' },
      { kind: 'unknown' },
    ],
    [
      'no change at all is kept in per cent of nothing',
      { ...row, before: 0, after: 0, change: 0, percent: null, percentOf: null },
      { value: 10, unit: '%' },
      { kind: 'kept', multiples: 0 },
    ],
    [
      'any change is over in per cent of nothing',
      { ...row, before: 0, after: 1, change: 1, percent: null, percentOf: null },
      { value: 10, unit: '%' },
      { kind: 'over', multiples: null },
    ],
  ])('%s', (_, entry, limit, verdict) => {
    expect(verdictOf(entry, limit)).toEqual(verdict)
  })
})
