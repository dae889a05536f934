import { describe, expect, test } from 'vitest'
import type { Score } from '../../src/erp/score.ts'
import {
  boxesOf,
  filteredWords,
  noWindowWords,
  outsideWords,
  peakHere,
  perHundredMs,
  unfilteredWords,
  weightText,
} from '../../src/page/window-words.ts'
import { DIFFERENCE, startWorkspace } from '../../src/state/workspace.ts'

const mean: Score = { kind: 'mean', fromMs: 80, toMs: 140, polarity: 'negative' }

describe('perHundredMs', () => {
  test('does not depend on the sampling rate: a mean over 60 ms weighs 1.67 per 100 ms', () => {
    for (const stepMs of [1, 2, 4]) {
      const samples = 60 / stepMs
      expect(perHundredMs(new Float64Array(samples).fill(1 / samples), stepMs)[0]).toBeCloseTo(100 / 60, 12)
    }
  })
})

describe('weightText', () => {
  test('has the decimals that tell it from zero', () => {
    expect([46.62, 1.667, -0.0731, -0.0042, 0, 1e-9].map((weight) => weightText(weight, mean))).toEqual([
      '46.6',
      '1.67',
      '−0.07',
      '−0.004',
      '0.00',
      '0.00',
    ])
  })

  test('is a time for an area, whose score is in µV·s', () => {
    expect(weightText(0.1, { ...mean, kind: 'area' })).toBe('0.10 s')
  })
})

describe('peakHere', () => {
  const workspace = startWorkspace()

  test('names the largest component at its peak and nowhere else', () => {
    expect(peakHere(workspace, 400, 1)).toBe('late positivity')
    expect(peakHere(workspace, 401.5, 1)).toBeNull()
    expect(peakHere(workspace, -330, 1)).toBeNull()
  })

  test('names nothing for a difference wave or a recording', () => {
    expect(peakHere({ ...workspace, shown: { ...workspace.shown, chosen: DIFFERENCE } }, 400, 1)).toBeNull()
    const recorded = { kind: 'recorded' as const, fileName: 'a.csv', fileId: '0', reading: {} }
    expect(peakHere({ ...workspace, source: recorded }, 400, 1)).toBeNull()
  })
})

describe('the words', () => {
  test('of the filtered weight go from the fullest to the shortest', () => {
    expect(filteredWords('−0.07', 400, 'late positivity')).toEqual([
      'after the chain: −0.07 under the peak of the late positivity',
      'after the chain: −0.07 at 400 ms',
      '−0.07',
    ])
  })

  test('call the unfiltered window a box only where it is one', () => {
    expect(unfilteredWords(mean)).toBe('unfiltered: a plain box')
    expect(unfilteredWords({ ...mean, kind: 'peak-amplitude' })).toBe('unfiltered: one moment')
  })

  test('say which share lies outside, and on epochs which would', () => {
    expect(outsideWords(0.0474, 'continuous')).toBe('hatched: outside the epoch, 4.7 % of the weight')
    expect(outsideWords(0, 'continuous')).toContain(' 0.0 %')
    expect(outsideWords(0.0001, 'continuous')).toContain('under 0.1 %')
    expect(outsideWords(0.0474, 'epochs')).toBe('unseen share of the score: 4.7 %')
  })

  test('say why there is no window', () => {
    expect(noWindowWords('no peak')).toContain('no peak')
    expect(noWindowWords(120)).toContain('latency')
  })
})

describe('boxesOf', () => {
  test('joins neighbours of equal height and keeps the extent of every sample', () => {
    expect(boxesOf(Float64Array.of(0, 0, 2, 2, 2, 0))).toEqual({ edges: [-0.5, 1.5, 4.5, 5.5], heights: [0, 2, 0] })
  })
})
