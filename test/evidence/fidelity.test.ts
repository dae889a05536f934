import { describe, expect, test } from 'vitest'
import type { Limit } from '../../src/erp/figure.ts'
import { correctBaseline } from '../../src/erp/baseline.ts'
import { SCENARIOS } from '../../src/erp/scenarios.ts'
import { epochTimesMs, waveformAt } from '../../src/erp/waveform.ts'
import { fidelityRows, judge, type FidelityInput, type FidelityRow } from '../../src/evidence/fidelity.ts'
import { filterBuiltWaveform } from '../../src/evidence/filtered-waveform.ts'
import { onsetOfBuilt } from '../../src/evidence/onset-of-built.ts'
import { designChain } from '../../src/filter/chain.ts'

const times = epochTimesMs(500, { fromMs: -200, toMs: 800 })
const triangle = (peakMs: number, halfMs: number, a: number) =>
  Float64Array.from(times, (t) => a * Math.max(0, 1 - Math.abs(t - peakMs) / halfMs))
const plus = (x: Float64Array, y: Float64Array) => x.map((v, i) => v + y[i])
const input = (before: Float64Array, after: Float64Array, more: Partial<FidelityInput> = {}): FidelityInput => ({
  timesMs: times,
  before,
  after,
  score: { kind: 'mean', fromMs: 80, toMs: 140, polarity: 'negative' },
  measure: { mean: { fromMs: 250, toMs: 350 }, peak: { fromMs: 150, toMs: 600 }, polarity: 'positive' },
  onsetMs: 205,
  ...more,
})
const row = (rows: FidelityRow[], id: string) => {
  const found = rows.find((r) => r.id === id)
  if (!found) throw new Error(`no row ${id}`)
  return found
}

describe('fidelityRows', () => {
  // before: a triangle of 8 µV at 300 ms; after: half as large and 20 ms later, after a false dip of −2 µV at 100 ms
  const before = triangle(300, 100, 8)
  const after = plus(triangle(320, 100, 4), triangle(100, 40, -2))
  const rows = fidelityRows(input(before, after))

  test('come in the readout’s order, grouped by their question', () => {
    expect(rows.map((r) => [r.group, r.id])).toEqual([
      ['score', 'score'],
      ['size', 'mean-amplitude'],
      ['size', 'peak-amplitude'],
      ['size', 'signed-area'],
      ['time', 'peak-latency'],
      ['time', 'area-latency'],
      ['time', 'onset-latency'],
      ['false activity', 'false-deflection'],
    ])
    expect(rows.map((r) => r.unit)).toEqual(['µV', 'µV', 'µV', 'µV·s', 'ms', 'ms', 'ms', 'µV'])
  })

  test('of a halved and moved triangle are what geometry says', () => {
    expect(row(rows, 'peak-latency')).toMatchObject({
      before: 300,
      after: 320,
      change: 20,
      percent: null,
      percentOf: null,
    })
    // half base times height: 0.8 and 0.4 µV·s
    const area = row(rows, 'signed-area')
    expect(area.before).toBeCloseTo(0.8, 12)
    expect(area.after).toBeCloseTo(0.4, 12)
    expect(area.percent).toBeCloseTo(-50, 9)
    expect(area.percentOf).toBe('before')
    expect(row(rows, 'area-latency').change).toBeCloseTo(20, 9)
    // the same shape moved by whole samples: its onset moves with it
    expect(row(rows, 'onset-latency').change).toBeCloseTo(20, 9)
    expect(row(rows, 'peak-amplitude').percent).toBeCloseTo(-50, 9)
    // 51 samples, mean of 8(1 − |t|/100) over ±50
    expect(row(rows, 'mean-amplitude').before).toBeCloseTo(8 * (1 - (2 * 2 * (25 * 26)) / 2 / 51 / 100), 9)
  })

  test('give the score in per cent of the largest value where it was next to nothing before', () => {
    const score = row(rows, 'score')
    expect(score.before).toBe(0)
    expect(score.after).toBeLessThan(-0.9)
    expect(score.percentOf).toBe('largest')
    expect(score.percent).toBeCloseTo((100 * (score.change as number)) / 8, 9)
  })

  test('the 20 % rule changes sides exactly there', () => {
    const at = (level: number) => {
      const x = plus(
        triangle(300, 100, 10),
        Float64Array.from(times, (t) => (t >= 80 && t <= 140 ? level : 0)),
      )
      return row(
        fidelityRows(
          input(
            x,
            x.map((v) => v / 2),
          ),
        ),
        'score',
      )
    }
    expect(at(1.999)).toMatchObject({ percentOf: 'largest' })
    expect(at(1.999).percent).toBeCloseTo(-9.995, 9)
    expect(at(2.001)).toMatchObject({ percentOf: 'before' })
    expect(at(2.001).percent).toBeCloseTo(-50, 9)
    // a negative score that shrinks has a negative per cent too
    expect(at(-4).percent).toBeCloseTo(-50, 9)
    expect(at(-4).change).toBeCloseTo(2, 9)
  })

  test('the strongest false deflection is y − x where it is largest before the onset', () => {
    const found = row(rows, 'false-deflection')
    expect(found.label.atMs).toBe(100)
    expect(found.before).toBe(0)
    expect(found.after).toBeCloseTo(-2, 12)
    expect(found.change).toBeCloseTo(-2, 12)
    // what differs after the onset, by 4 µV and more, does not count
    const late = fidelityRows(input(before, plus(after, triangle(100, 40, 1.9)), { onsetMs: 150 }))
    expect(Math.abs(row(late, 'false-deflection').change as number)).toBeLessThan(0.2)
  })

  test('the false deflection says so where the onset is not given, or where nothing came before it', () => {
    const withOnset = (onsetMs: number | 'no onset' | null) =>
      row(fidelityRows(input(before, after, { onsetMs })), 'false-deflection')
    expect(withOnset(null)).toMatchObject({
      before: 'onset not given',
      after: 'onset not given',
      change: null,
      percent: null,
    })
    expect(withOnset('no onset').before).toBe('no onset')
    expect(withOnset(-200).before).toBe('nothing before the onset')
    expect(withOnset(5000).change).not.toBeNull()
    expect(() => withOnset(NaN)).toThrow(/onsetMs must be a finite number/)
  })

  test('tell why a value is missing', () => {
    const flat = new Float64Array(times.length)
    const gone = fidelityRows(input(before, flat))
    expect(row(gone, 'peak-amplitude')).toMatchObject({ after: 'no peak', change: null, percent: null })
    expect(row(gone, 'area-latency').after).toBe('no area')
    expect(row(gone, 'onset-latency').after).toBe('no peak')
    expect(row(gone, 'signed-area').percent).toBeCloseTo(-100, 12)
    expect(row(fidelityRows(input(flat, flat)), 'score')).toMatchObject({ change: 0, percent: null })
  })

  test('refuse values that are not finite and windows outside the epoch', () => {
    const broken = after.slice()
    broken[5] = Infinity
    expect(() => fidelityRows(input(before, broken))).toThrow(/y\[5\].* was Infinity/)
    expect(() =>
      fidelityRows(
        input(before, after, {
          measure: { mean: { fromMs: 0, toMs: 10 }, peak: { fromMs: 0, toMs: 900 }, polarity: 'positive' },
        }),
      ),
    ).toThrow(/score window must lie in the epoch/)
  })
})

describe('judge', () => {
  const rows = fidelityRows(input(triangle(300, 100, 8), plus(triangle(320, 100, 4), triangle(100, 40, -2))))
  test('counts the change in multiples of the limit, whatever its sign', () => {
    expect(judge(row(rows, 'peak-latency'), { value: 10, unit: 'ms' })).toEqual({ kept: false, multiples: 2 })
    expect(judge(row(rows, 'peak-latency'), { value: 20, unit: 'ms' })).toEqual({ kept: true, multiples: 1 })
    const deflection = judge(row(rows, 'false-deflection'), { value: 0.5, unit: 'µV' })
    expect(deflection.kept).toBe(false)
    expect(deflection.multiples).toBeCloseTo(4, 9)
    expect(judge(row(rows, 'signed-area'), { value: 60, unit: '%' }).kept).toBe(true)
    expect(judge(row(rows, 'signed-area'), { value: 40, unit: '%' }).kept).toBe(false)
  })

  test('a figure that is gone is over every limit; one that never was cannot be judged', () => {
    const peak = row(rows, 'peak-amplitude')
    const limit: Limit = { value: 100, unit: 'µV' }
    expect(judge({ ...peak, after: 'no peak', change: null }, limit)).toEqual({ kept: false, multiples: null })
    expect(judge({ ...peak, before: 'no peak', change: null }, limit)).toEqual({ kept: null, multiples: null })
  })

  test('a limit of 0 keeps no change only', () => {
    const peak = row(rows, 'peak-amplitude')
    expect(judge({ ...peak, change: 0 }, { value: 0, unit: 'µV' })).toEqual({ kept: true, multiples: 0 })
    expect(judge(peak, { value: 0, unit: 'µV' })).toEqual({ kept: false, multiples: null })
  })

  test('refuses a limit in another unit, or none', () => {
    expect(() => judge(row(rows, 'peak-latency'), { value: 10, unit: 'µV' })).toThrow(
      /limit.unit must be ms for peak-latency, was µV/,
    )
    expect(() => judge(row(rows, 'peak-latency'), { value: 10, unit: '%' })).toThrow(/limit.unit must be ms/)
    expect(() => judge(row(rows, 'score'), { value: 10, unit: 'ms' })).toThrow(/limit.unit must be µV or %/)
    expect(() => judge(row(rows, 'score'), { value: -1, unit: 'µV' })).toThrow(/limit.value .* was -1/)
    expect(() => judge(row(rows, 'score'), { value: NaN, unit: 'µV' })).toThrow(RangeError)
  })
})

describe('the scenarios, filtered', () => {
  const results = SCENARIOS.map((s) => {
    const timesMs = epochTimesMs(s.waveform.samplingRateHz, s.waveform.epoch)
    const components = s.waveform.conditions.find((c) => c.name === s.condition)?.components ?? []
    const chain = designChain(s.chain, s.waveform.samplingRateHz)
    const before = correctBaseline(waveformAt(components, timesMs), timesMs, s.baseline)
    const after = correctBaseline(filterBuiltWaveform(chain, components, timesMs, s.extent), timesMs, s.baseline)
    const rows = fidelityRows({
      timesMs,
      before,
      after,
      score: s.score,
      measure: s.measure,
      onsetMs: onsetOfBuilt(components, timesMs),
    })
    return { s, rows, judged: (id: keyof typeof s.limits) => judge(row(rows, id), s.limits[id] as Limit) }
  })
  const [latePositivity, slowWave, smeared, delayed, steady] = results

  test('every limit fits its row', () => {
    for (const { s, judged } of results) {
      for (const id of Object.keys(s.limits)) expect(() => judged(id as keyof typeof s.limits)).not.toThrow()
    }
  })

  test('a late positivity makes a false early negativity', () => {
    // values by SciPy's butter, firwin, sosfilt and long zero padding: −1.183 at 80–140 ms, peak 4.545
    expect(row(latePositivity.rows, 'score').before).toBeCloseTo(0.056, 3)
    expect(row(latePositivity.rows, 'score').after).toBeCloseTo(-1.183, 2)
    expect(row(latePositivity.rows, 'peak-amplitude').after).toBeCloseTo(4.545, 2)
    expect(row(latePositivity.rows, 'onset-latency').after).toBeCloseTo(320.2, 0)
    expect(latePositivity.judged('false-deflection').kept).toBe(false)
    expect(latePositivity.judged('peak-latency').kept).toBe(true)
  })

  test('a high-pass eats the slow wave', () => {
    const score = row(slowWave.rows, 'score')
    expect(Math.abs(score.after as number)).toBeLessThan(0.6 * Math.abs(score.before as number))
    expect(slowWave.judged('score').kept).toBe(false)
  })

  test('a zero-phase low-pass moves the onset forward in time, before anything happened', () => {
    const onset = row(smeared.rows, 'score')
    expect(onset.change).toBeLessThan(-10)
    expect(smeared.judged('score').kept).toBe(false)
    expect(smeared.judged('false-deflection').kept).toBe(false)
  })

  test('a causal low-pass delays the peak and leaves the time before the onset alone', () => {
    expect(row(delayed.rows, 'score').change).toBeGreaterThan(15)
    expect(delayed.judged('false-deflection').kept).toBe(true)
  })

  test('a notch takes steady interference out of the sharp peak at little cost', () => {
    // the noise-free peak alone is 7.5 µV, less what its neighbours take away
    const { s } = steady
    const timesMs = epochTimesMs(s.waveform.samplingRateHz, s.waveform.epoch)
    const clean = s.waveform.conditions[0].components.filter((c) => c.shape !== 'tone')
    const truth = Math.max(...correctBaseline(waveformAt(clean, timesMs), timesMs, s.baseline))
    const peak = row(steady.rows, 'score')
    expect(Math.abs((peak.before as number) - truth)).toBeGreaterThan(0.5)
    expect(Math.abs((peak.after as number) - truth)).toBeLessThan(0.25)
  })
})
