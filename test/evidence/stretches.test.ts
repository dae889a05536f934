import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { correctBaseline } from '../../src/erp/baseline.ts'
import { SCENARIOS } from '../../src/erp/scenarios.ts'
import { epochTimesMs, waveformAt } from '../../src/erp/waveform.ts'
import { defaultStretches, nameStretch, type StretchMarks } from '../../src/evidence/default-stretches.ts'
import { largeComponents } from '../../src/evidence/large-components.ts'
import {
  checkStretches,
  moveBoundary,
  removeBoundary,
  splitStretch,
  type Stretches,
} from '../../src/evidence/stretches.ts'
import type { TraceSource } from '../../src/evidence/traced-waveform.ts'
import { baselines, components, epochOf, scores } from './arbitrary-traces.ts'

const { waveform, baseline, score } = SCENARIOS[0]
const times = epochTimesMs(waveform.samplingRateHz, waveform.epoch)

function marksOf(
  source: TraceSource,
  timesMs: Float64Array,
  window: { fromMs: number; toMs: number },
  used: StretchMarks['baseline'],
): StretchMarks {
  const x = source.kind === 'built' ? waveformAt(source.components, timesMs) : source.values
  const large = largeComponents(source, timesMs, correctBaseline(x, timesMs, used))
  return { timesMs, baseline: used, window, components: large }
}

const built: TraceSource = { kind: 'built', components: waveform.conditions[0].components }

describe('the stretches that an account begins with', () => {
  test('of the built scenario are the baseline, the score window and the two halves of the late positivity, and what lies between', () => {
    const stretches = defaultStretches(marksOf(built, times, score, baseline))
    expect(stretches.map(({ atMs }) => atMs)).toEqual([-200, 0, 80, 140, 250, 400, 550])
    // the samples of a window are all its own: the one at 0 ms is the baseline's, the one at 140 ms the score's
    expect(stretches.map(({ sample }) => times[sample])).toEqual([-200, 2, 80, 142, 250, 400, 550])
  })

  test('are found in recorded data by its largest peaks', () => {
    const x = waveformAt(waveform.conditions[0].components, times)
    const stretches = defaultStretches(marksOf({ kind: 'recorded', values: x }, times, score, baseline))
    expect(stretches.map(({ atMs }) => atMs)).toEqual([-200, 0, 80, 140, 250, 400, 550])
    expect(
      largeComponents(
        { kind: 'recorded', values: new Float64Array(times.length) },
        times,
        new Float64Array(times.length),
      ),
    ).toEqual([])
  })

  test('keep the score window whole where it meets a component', () => {
    const stretches = defaultStretches(marksOf(built, times, { fromMs: 300, toMs: 500 }, baseline))
    expect(stretches.map(({ atMs }) => atMs)).toEqual([-200, 0, 250, 300, 500, 550])
  })

  test('part the epoch in order, with every stretch named, whatever windows overlap or touch its edges', () => {
    const epoch = epochOf(200, 250)
    fc.assert(
      fc.property(
        components(200, 4),
        scores(epoch),
        baselines(epoch),
        fc.boolean(),
        (some, { fromMs, toMs }, used, recorded) => {
          const bounded = some.filter(({ shape }) => shape !== 'tone')
          const source: TraceSource = recorded
            ? { kind: 'recorded', values: waveformAt(bounded, epoch) }
            : { kind: 'built', components: some }
          const marks = marksOf(source, epoch, { fromMs, toMs }, used)
          const stretches = defaultStretches(marks)
          expect(() => checkStretches(stretches, epoch.length)).not.toThrow()
          const limits = [0, ...stretches.map(({ sample }) => sample), epoch.length]
          const names = limits.slice(1).map((to, i) => nameStretch(marks, limits[i], to))
          const whole = names.filter(({ kind, whole }) => kind === 'score' && whole)
          expect(whole.length).toBe(1)
          for (const { sample, atMs } of stretches) expect(Math.abs(epoch[sample] - atMs)).toBeLessThanOrEqual(4 + 1e-9)
        },
      ),
      { numRuns: 200 },
    )
  })
})

describe('boundaries', () => {
  const some: Stretches = [
    { sample: 50, atMs: times[50] },
    { sample: 100, atMs: times[100] },
  ]

  test('are added at the nearest sample, once, and only inside the epoch', () => {
    expect(splitStretch(some, times, times[70] + 0.9).map(({ sample }) => sample)).toEqual([50, 70, 100])
    expect(splitStretch(some, times, times[100] + 0.4)).toBe(some)
    expect(splitStretch(some, times, -5000)).toBe(some)
    expect(splitStretch(some, times, NaN)).toBe(some)
  })

  test('move to the nearest sample and never onto a neighbour or out of the epoch', () => {
    fc.assert(
      fc.property(
        fc.uniqueArray(fc.integer({ min: 1, max: 699 }), { minLength: 1, maxLength: 9 }),
        fc.nat(),
        fc.double({ noNaN: true }),
        (samples, pick, toMs) => {
          const stretches = samples.sort((a, b) => a - b).map((sample) => ({ sample, atMs: times[sample] }))
          const index = pick % stretches.length
          const moved = moveBoundary(stretches, index, times, toMs)
          expect(() => checkStretches(moved, times.length)).not.toThrow()
          expect(moved.length).toBe(stretches.length)
          moved.forEach((boundary, i) => {
            if (i !== index) expect(boundary).toBe(stretches[i])
            expect(boundary.atMs).toBe(times[boundary.sample])
          })
        },
      ),
    )
    expect(moveBoundary(some, 0, times, times[80] + 0.7)[0].sample).toBe(80)
    expect(moveBoundary(some, 0, times, times[300])[0].sample).toBe(99)
    expect(moveBoundary(some, 1, times, Infinity)[1].sample).toBe(times.length - 1)
  })

  test('are taken away', () => {
    expect(removeBoundary(some, 0)).toEqual([some[1]])
    expect(() => removeBoundary(some, 2)).toThrow('index must be that of a boundary')
    expect(() => moveBoundary(some, 0, times, NaN)).toThrow(RangeError)
  })

  test('that are no partition are refused', () => {
    expect(() => checkStretches([some[1], some[0]], 700)).toThrow('stretches[1].sample must lie after 100')
    expect(() => checkStretches([{ sample: 0, atMs: 0 }], 700)).toThrow('stretches[0].sample')
    expect(() => checkStretches([{ sample: 1.5, atMs: 0 }], 700)).toThrow(RangeError)
  })
})
