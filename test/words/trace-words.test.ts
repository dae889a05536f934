import { describe, expect, test } from 'vitest'
import type { MomentRow } from '../../src/evidence/trace-by-moment.ts'
import type { StageTrace } from '../../src/evidence/trace-by-stage.ts'
import type { Traced } from '../../src/evidence/traced-weights.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import {
  heldFixedWords,
  momentRowWords,
  notTracedWords,
  stageSummary,
  tracedPhrase,
  traceQuestion,
  trustWords,
  zeroWords,
} from '../../src/words/trace-words.ts'

const mean = { kind: 'mean', fromMs: 80, toMs: 140, polarity: 'negative' } as const
const traced = (more: Partial<Traced> = {}): Traced => ({
  score: mean,
  of: 'after',
  unit: 'µV',
  onAfter: new Float64Array(0),
  onBefore: null,
  heldFixed: null,
  window: mean,
  atMs: null,
  ...more,
})
const row = (more: Partial<MomentRow>): MomentRow => ({
  kind: 'other',
  whole: false,
  component: null,
  fromMs: 0,
  toMs: 80,
  from: 0,
  to: 0,
  meanUv: 0,
  weight: 0,
  share: 0,
  percent: 0,
  running: 0,
  ...more,
})

describe('the question', () => {
  test('asks for the value by the phrase that can be changed', () => {
    const { before, phrase, after } = traceQuestion(-1.194, 'µV', tracedPhrase('score', traced()))
    expect(before + phrase + after).toBe('Where do the −1.19 µV of the score after come from?')
  })

  test('names every figure that can be traced, a latency by its amplitude', () => {
    expect(tracedPhrase('score', traced({ of: 'change' }))).toBe('the change of the score')
    expect(tracedPhrase('peak-amplitude', traced())).toBe('the peak amplitude after')
    expect(tracedPhrase('peak-latency', traced())).toBe('the amplitude at the peak latency after')
    expect(tracedPhrase('false-deflection', traced({ of: 'change' }))).toBe('the strongest false deflection')
    const moment = { kind: 'moment', fromMs: 180, toMs: 180, polarity: 'positive' } as const
    expect(tracedPhrase('moment', traced({ score: moment, atMs: 180 }))).toBe('the value at 180 ms after')
    expect(tracedPhrase('score', traced({ score: { ...mean, kind: 'onset-latency' } }))).toBe(
      'the amplitude at the onset latency after',
    )
  })

  test('says why there is nothing to trace', () => {
    expect(notTracedWords({ missing: 'no peak', where: 'after' })).toBe(
      'There is nothing to trace: the waveform has no peak in this window after the chain.',
    )
  })
})

describe('notes', () => {
  test('say what is held fixed, and that a latency is traced by its amplitude', () => {
    expect(heldFixedWords(traced())).toBeNull()
    expect(heldFixedWords(traced({ heldFixed: { what: 'peak', atMs: 402.4 } }))).toBe(
      'The moment of the peak, 402.4 ms, is held fixed.',
    )
    expect(heldFixedWords(traced({ heldFixed: { what: 'latency', atMs: 320 } }))).toBe(
      'A latency is no sum over the waveform: what is traced is the amplitude at its moment, 320 ms, which is held fixed.',
    )
    expect(heldFixedWords(traced({ heldFixed: { what: 'area', atMs: null } }))).toBe(
      'The area is that of the negative samples of 80 to 140 ms, which are held fixed.',
    )
  })

  test('say which zero was used', () => {
    expect(zeroWords({ zero: 'baseline mean' })).toContain('taken against its baseline mean; the weights sum to zero')
    expect(zeroWords({ zero: 'as given' })).toContain('taken as it is')
  })

  test('warn where the unseen share exceeds the threshold, and only there', () => {
    const trust = { unseenShare: 0.234, threshold: 0.1, exceeded: true, outsideEpoch: 0.234 }
    expect(trustWords(trust)).toBe(
      'The value cannot be trusted: 23 % of its weight falls on samples outside the data, more than the 10 % that are allowed.',
    )
    expect(trustWords({ ...trust, unseenShare: 0.047, exceeded: false })).toBe(
      '4.7 % of its weight falls on samples outside the data.',
    )
    expect(trustWords({ ...trust, unseenShare: 0, exceeded: false })).not.toContain('trusted')
  })
})

test('rows are named by their stretch', () => {
  expect(momentRowWords(row({ kind: 'before', toMs: -400 }), traced())).toBe('before −400 ms')
  expect(momentRowWords(row({ kind: 'baseline', fromMs: -200, toMs: 0, whole: true }), traced())).toBe(
    '−200 to 0 ms, the baseline',
  )
  expect(momentRowWords(row({ kind: 'score', fromMs: 80, toMs: 140, whole: true }), traced())).toBe(
    '80 to 140 ms, the score window',
  )
  expect(momentRowWords(row({ kind: 'score', fromMs: 80, toMs: 100 }), traced())).toBe(
    '80 to 100 ms, in the score window',
  )
  expect(momentRowWords(row({ kind: 'after', fromMs: 1000 }), traced())).toBe('after 1000 ms')
  expect(momentRowWords(row({ kind: 'invented' }), traced())).toBe('invented by the padding')
})

describe('the sentence on stages', () => {
  const highPass: StageSpec = {
    design: 'butterworth',
    pass: 'high',
    order: 2,
    cutoffsHz: [1],
    meaning: 'half-amplitude',
    direction: 'both',
  }
  const lowPass: StageSpec = { ...highPass, pass: 'low', cutoffsHz: [30] }
  const trace = (steps: number[]): StageTrace => {
    let value = 0.05
    const rows = steps.map((step, index) => {
      value += step
      return { index, spec: index === 0 ? highPass : lowPass, alone: 0.05 + step, upTo: value, step }
    })
    return { before: 0.05, rows, value, unit: 'µV' }
  }

  test('blames the stage that moves the value most', () => {
    expect(stageSummary(trace([-1.24, 0.002]))).toBe(
      'The Butterworth high-pass moves the value most, by −1.24 µV; alone it makes −1.19 µV of 0.05 µV.',
    )
    expect(stageSummary(trace([0.01, 0.4]))).toContain('The Butterworth low-pass moves the value most, by +0.40 µV')
    expect(stageSummary(trace([-1.24]))).toBe('The Butterworth high-pass moves the value from 0.05 µV to −1.19 µV.')
    expect(stageSummary(trace([0.001, -0.001]))).toContain('No stage moves the value by 0.005 µV or more')
    expect(stageSummary(trace([]))).toBe('No stage is applied here.')
  })
})
