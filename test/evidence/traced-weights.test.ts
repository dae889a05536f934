import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { correctBaseline } from '../../src/erp/baseline.ts'
import { type Score, scoreOf } from '../../src/erp/score.ts'
import { fidelityRows } from '../../src/evidence/fidelity.ts'
import { isTraced, tracedWeights } from '../../src/evidence/traced-weights.ts'
import { signal } from '../filter/arbitrary-chain.ts'
import { baselines, epochOf, scores } from './arbitrary-traces.ts'

const N = 120
const timesMs = epochOf(N, 250)

describe('the weights of a traced value', () => {
  test('give the readout’s own number, and its change, for every score that is an amplitude or an area', () => {
    fc.assert(
      fc.property(signal(N, N), signal(N, N), baselines(timesMs), scores(timesMs), (before, after, baseline, score) => {
        if (score.kind.endsWith('latency')) return
        const x = scoreOf(correctBaseline(before, timesMs, baseline), timesMs, score)
        const y = scoreOf(correctBaseline(after, timesMs, baseline), timesMs, score)
        for (const of of ['after', 'change'] as const) {
          const traced = tracedWeights({ score, of, baseline, timesMs, before, after })
          const missing = typeof y === 'string' ? y : of === 'change' && typeof x === 'string' ? x : null
          if (missing !== null) {
            expect(traced).toMatchObject({ missing, where: typeof y === 'string' ? 'after' : 'before' })
            continue
          }
          if (!isTraced(traced)) throw new Error(`nothing to trace: ${traced.missing}`)
          const weighed = (w: Float64Array | null, v: Float64Array) =>
            w === null ? 0 : v.reduce((sum, value, m) => sum + w[m] * value, 0)
          const expected = (y as number) - (of === 'change' ? (x as number) : 0)
          expect(weighed(traced.onAfter, after) - weighed(traced.onBefore, before)).toBeCloseTo(expected, 9)
          expect(traced.unit).toBe(score.kind === 'area' ? 'µV·s' : 'µV')
        }
      }),
      { numRuns: 200 },
    )
  })

  test('of a latency are the amplitude at its moment, which they say', () => {
    const y = timesMs.map((ms) => 5 * Math.exp(-(((ms - 150) / 40) ** 2)))
    const shared = { baseline: 'none' as const, timesMs, before: y, after: y, of: 'after' as const }
    for (const kind of ['peak-latency', 'area-latency', 'onset-latency'] as const) {
      const score: Score = { kind, fromMs: 50, toMs: 250, polarity: 'positive' }
      const traced = tracedWeights({ ...shared, score })
      if (!isTraced(traced)) throw new Error('nothing to trace')
      const atMs = scoreOf(y, timesMs, score) as number
      expect(traced.heldFixed).toEqual({ what: 'latency', atMs })
      expect(traced.atMs).toBe(atMs)
      const amplitude = scoreOf(y, timesMs, { kind: 'moment', fromMs: atMs, toMs: atMs, polarity: 'positive' })
      expect(traced.onAfter.reduce((sum, w, m) => sum + w * y[m], 0)).toBeCloseTo(amplitude as number, 12)
      expect(traced.window.fromMs).toBeCloseTo(atMs - 25, 9)
    }
  })

  test('of the strongest false deflection are those of the change at its moment', () => {
    const before = timesMs.map((ms) => 6 * Math.exp(-(((ms - 250) / 30) ** 2)))
    const after = timesMs.map((ms, m) => before[m] - Math.exp(-(((ms - 60) / 40) ** 2)))
    const window = { fromMs: 100, toMs: 300 }
    const row = fidelityRows({
      timesMs,
      before,
      after,
      score: { kind: 'mean', ...window, polarity: 'positive' },
      measure: { mean: window, peak: window, polarity: 'positive' },
      onsetMs: 150,
    }).find(({ id }) => id === 'false-deflection')
    const atMs = row?.label.atMs as number
    const traced = tracedWeights({
      score: { kind: 'moment', fromMs: atMs, toMs: atMs, polarity: 'positive' },
      of: 'change',
      baseline: 'none',
      timesMs,
      before,
      after,
    })
    if (!isTraced(traced)) throw new Error('nothing to trace')
    const value = traced.onAfter.reduce(
      (sum, w, m) => sum + w * after[m] - (traced.onBefore as Float64Array)[m] * before[m],
      0,
    )
    expect(value).toBeCloseTo(row?.change as number, 12)
  })
})
