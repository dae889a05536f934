import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { differenceComponents, waveformAt } from '../../src/erp/waveform.ts'
import { filterBuiltWaveform } from '../../src/evidence/filtered-waveform.ts'
import { neighboursAfter } from '../../src/evidence/neighbours.ts'
import { traceByComponent, traceByCondition } from '../../src/evidence/trace-by-component.ts'
import { traceByMoment } from '../../src/evidence/trace-by-moment.ts'
import { traceByStage } from '../../src/evidence/trace-by-stage.ts'
import type { TraceInput } from '../../src/evidence/trace-input.ts'
import { isTraced, tracedWeights } from '../../src/evidence/traced-weights.ts'
import { applyChain } from '../../src/filter/apply-chain.ts'
import { chain, signal } from '../filter/arbitrary-chain.ts'
import { baselines, components, epochOf, scores } from './arbitrary-traces.ts'

const N = 260
const EVENTS = { fromMs: 700, toMs: 1100 }
const weigh = (w: Float64Array | null, v: Float64Array) =>
  w === null ? 0 : v.reduce((sum, value, m) => sum + w[m] * value, 0)
const size = (some: readonly { amplitudeUv: number }[]) =>
  some.reduce((sum, { amplitudeUv }) => sum + Math.abs(amplitudeUv), 0)
const weightOf = (w: Float64Array) => w.reduce((sum, value) => sum + Math.abs(value), 0)

const trials = chain.chain((some) => {
  const timesMs = epochOf(N, some.samplingRateHz)
  return fc.record({
    some: fc.constant(some),
    timesMs: fc.constant(timesMs),
    parts: components(N, 1000 / some.samplingRateHz),
    extent: fc.constantFrom('continuous' as const, 'epochs' as const),
    baseline: baselines(timesMs),
    score: scores(timesMs),
    of: fc.constantFrom('after' as const, 'change' as const),
    inTrain: fc.integer({ min: 0, max: 3 }).map((k) => k === 0),
  })
})

describe('the account by component', () => {
  test('gives each component its own filtered value, and sums to what the account by moment sums to', () => {
    fc.assert(
      fc.property(trials, ({ some, timesMs, parts, extent, baseline, score, of, inTrain }) => {
        const before = waveformAt(parts, timesMs)
        const after = filterBuiltWaveform(some, parts, timesMs, extent)
        const traced = tracedWeights({ score, of, baseline, timesMs, before, after })
        if (!isTraced(traced)) return
        const source = { kind: 'built' as const, components: parts, ...(inTrain ? { events: EVENTS } : {}) }
        const input: TraceInput = { chain: some, extent, timesMs, baseline, source, traced }
        const account = traceByComponent(input)
        const tolerance = 1e-9 * size(parts) * weightOf(traced.onAfter)
        parts.forEach((part, i) => {
          const y = filterBuiltWaveform(some, [part], timesMs, extent)
          const own = weigh(traced.onAfter, y) - weigh(traced.onBefore, waveformAt([part], timesMs))
          expect(Math.abs(account.rows[i].share - own)).toBeLessThanOrEqual(tolerance)
          expect(account.rows[i].name).toBe(part.name)
        })
        expect(account.rows.length).toBe(parts.length + (inTrain ? 1 : 0))
        expect(Math.abs(account.value - traceByMoment(input).value)).toBeLessThanOrEqual(tolerance)
      }),
      { numRuns: 100 },
    )
  })

  test('is refused for a recorded waveform', () => {
    const timesMs = epochOf(N, 250)
    const values = new Float64Array(N)
    const traced = { onAfter: values, onBefore: null } as never
    const input = {
      chain: { samplingRateHz: 250, stages: [] },
      extent: 'epochs' as const,
      timesMs,
      baseline: 'none' as const,
      traced,
    }
    expect(() => traceByComponent({ ...input, source: { kind: 'recorded', values } })).toThrow(
      'source.kind must be built',
    )
  })
})

describe('the account by condition', () => {
  test('of a difference wave sums to the value of the difference, built or recorded', () => {
    fc.assert(
      fc.property(
        trials,
        signal(N, N),
        signal(N, N),
        ({ some, timesMs, parts, extent, baseline, score, of }, first, second) => {
          const minus = parts.map((part) => ({ ...part, amplitudeUv: part.amplitudeUv / 3 }))
          const difference = differenceComponents({ name: 'a', components: parts }, { name: 'b', components: minus })
          const built = {
            before: waveformAt(difference, timesMs),
            after: filterBuiltWaveform(some, difference, timesMs, extent),
            sources: [parts, minus].map((some) => ({ kind: 'built' as const, components: some })),
            extent,
          }
          const values = first.map((value, m) => value - second[m])
          const recorded = {
            before: values,
            after: applyChain(some, values, 'epochs'),
            sources: [first, second].map((some) => ({ kind: 'recorded' as const, values: some })),
            extent: 'epochs' as const,
          }
          for (const wave of [built, recorded]) {
            const traced = tracedWeights({ score, of, baseline, timesMs, ...wave })
            if (!isTraced(traced)) continue
            const input: TraceInput = {
              chain: some,
              extent: wave.extent,
              timesMs,
              baseline,
              source: wave.sources[0],
              traced,
            }
            const account = traceByCondition(input, [
              { name: 'a', sign: 1, source: wave.sources[0] },
              { name: 'b', sign: -1, source: wave.sources[1] },
            ])
            const value = weigh(traced.onAfter, wave.after) - weigh(traced.onBefore, wave.before)
            expect(Math.abs(account.value - value)).toBeLessThanOrEqual(
              1e-9 * (size(parts) + 100) * weightOf(traced.onAfter) + 1e-12,
            )
          }
        },
      ),
      { numRuns: 60 },
    )
  })
})

describe('the account by stage', () => {
  test('gives what each stage alone and the chain up to each stage makes of the value', () => {
    fc.assert(
      fc.property(
        trials,
        signal(N, N),
        ({ some, timesMs, parts, extent: wanted, baseline, score, of, inTrain }, values) => {
          const asBuilt = wanted === 'continuous' || inTrain
          const extent = asBuilt ? wanted : 'epochs'
          const source = asBuilt
            ? { kind: 'built' as const, components: parts, ...(inTrain ? { events: EVENTS } : {}) }
            : { kind: 'recorded' as const, values }
          const under = (stages: typeof some.stages) => {
            if (source.kind === 'recorded') return applyChain({ ...some, stages }, values, 'epochs')
            const y = filterBuiltWaveform({ ...some, stages }, parts, timesMs, extent)
            if (!inTrain) return y
            const around = neighboursAfter({ ...some, stages }, parts, EVENTS, timesMs, extent)
            return y.map((value, m) => value + around[m])
          }
          const before = under([])
          const after = under(some.stages)
          const traced = tracedWeights({ score, of, baseline, timesMs, before, after })
          if (!isTraced(traced)) return
          const account = traceByStage({ chain: some, extent, timesMs, baseline, source, traced })
          const value = (stages: typeof some.stages) =>
            weigh(traced.onAfter, under(stages)) - weigh(traced.onBefore, before)
          // fixed to the waveform, not to the value: a stage alone may make far more of it than the chain
          const tolerance = 1e-8 * (size(parts) + 50) * weightOf(traced.onAfter)
          expect(Math.abs(account.before - value([]))).toBeLessThanOrEqual(tolerance)
          expect(account.rows.length).toBe(some.stages.length)
          let running = account.before
          account.rows.forEach((row, i) => {
            expect(Math.abs(row.alone - value([some.stages[i]]))).toBeLessThanOrEqual(tolerance)
            expect(Math.abs(row.upTo - value(some.stages.slice(0, i + 1)))).toBeLessThanOrEqual(tolerance)
            running += row.step
            expect(running).toBeCloseTo(row.upTo, 9)
            expect(row.index).toBe(i)
          })
          expect(account.value).toBe(account.rows.at(-1)?.upTo ?? account.before)
        },
      ),
      { numRuns: 60 },
    )
  })
})
