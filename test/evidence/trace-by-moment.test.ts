import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { componentAt } from '../../src/erp/component.ts'
import { correctBaseline } from '../../src/erp/baseline.ts'
import { SCENARIOS } from '../../src/erp/scenarios.ts'
import { epochTimesMs, waveformAt } from '../../src/erp/waveform.ts'
import { effectiveWindow } from '../../src/evidence/effective-window.ts'
import { filterBuiltWaveform } from '../../src/evidence/filtered-waveform.ts'
import { neighboursAfter, neighboursBefore } from '../../src/evidence/neighbours.ts'
import type { Stretches } from '../../src/evidence/stretches.ts'
import { traceBack, traceTrust } from '../../src/evidence/trace-back.ts'
import { momentRows, shareDensity, traceByMoment } from '../../src/evidence/trace-by-moment.ts'
import type { TraceInput } from '../../src/evidence/trace-input.ts'
import type { Events, TraceSource } from '../../src/evidence/traced-waveform.ts'
import { isTraced, type Traced, tracedWeights } from '../../src/evidence/traced-weights.ts'
import { applyChain } from '../../src/filter/apply-chain.ts'
import { type Chain, designChain } from '../../src/filter/chain.ts'
import { adjointEpochs } from '../../src/filter/epoch-adjoint.ts'
import { adjointContinuous, runContinuous } from '../../src/filter/stand-alone.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import { chain, signal } from '../filter/arbitrary-chain.ts'
import { baselines, components, epochOf, scores } from './arbitrary-traces.ts'

const N = 260
const extents = fc.constantFrom('continuous' as const, 'epochs' as const)
const sum = (values: Iterable<number>) => [...values].reduce((total, value) => total + value, 0)

const highPass = (cutoffHz: number): StageSpec => ({
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [cutoffHz],
  meaning: 'half-amplitude',
  direction: 'both',
})

/** Waveforms before and after the chain on the epoch, by filtering. */
function filtered(
  some: Chain,
  source: TraceSource,
  timesMs: Float64Array,
  extent: 'continuous' | 'epochs',
): { before: Float64Array; after: Float64Array } {
  if (source.kind === 'recorded') return { before: source.values, after: applyChain(some, source.values, extent) }
  const before = waveformAt(source.components, timesMs)
  const after = filterBuiltWaveform(some, source.components, timesMs, extent)
  const { events = 'alone' } = source
  if (events === 'alone') return { before, after }
  const around = neighboursBefore(source.components, events, timesMs, some.samplingRateHz)
  const aroundAfter = neighboursAfter(some, source.components, events, timesMs, extent)
  return { before: before.map((x, m) => x + around[m]), after: after.map((y, m) => y + aroundAfter[m]) }
}

/** Σ onAfter·y − Σ onBefore·x. */
function forward(traced: Traced, { before, after }: { before: Float64Array; after: Float64Array }): number {
  let value = 0
  for (let m = 0; m < after.length; m++) value += traced.onAfter[m] * after[m]
  if (traced.onBefore) for (let m = 0; m < before.length; m++) value -= traced.onBefore[m] * before[m]
  return value
}

/** What filtering itself leaves out: components end where they have fallen to 1e-12 of their peak, and a value far below that peak has no more digits. */
function rounding(traced: Traced, source: TraceSource): number {
  const largest =
    source.kind === 'built'
      ? sum(source.components.map(({ amplitudeUv }) => Math.abs(amplitudeUv)))
      : Math.max(...source.values.map(Math.abs))
  const weight = sum(traced.onAfter.map(Math.abs)) + sum(traced.onBefore?.map(Math.abs) ?? [])
  return 1e-11 * largest * weight
}

const trials = chain.chain((some) => {
  const timesMs = epochOf(N, some.samplingRateHz)
  const stepMs = 1000 / some.samplingRateHz
  const events: fc.Arbitrary<Events> = fc.oneof(
    { weight: 3, arbitrary: fc.constant('alone' as const) },
    {
      weight: 1,
      arbitrary: fc
        .tuple(fc.integer({ min: 600, max: 1500 }), fc.constantFrom(0, 300, 900))
        .map(([fromMs, more]) => ({ fromMs, toMs: fromMs + more })),
    },
  )
  const built = fc
    .record({ components: components(N, stepMs), events })
    .map((entry): TraceSource => ({ kind: 'built', ...entry }))
  const recorded = signal(N, N).map((values): TraceSource => ({ kind: 'recorded', values }))
  return fc.record({
    some: fc.constant(some),
    timesMs: fc.constant(timesMs),
    source: fc.oneof({ weight: 3, arbitrary: built }, { weight: 1, arbitrary: recorded }),
    extent: extents,
    baseline: baselines(timesMs),
    score: scores(timesMs),
    of: fc.constantFrom('after' as const, 'change' as const),
    cuts: fc.uniqueArray(fc.integer({ min: 1, max: N - 1 }), { maxLength: 8 }),
  })
})

describe('the shares', () => {
  test('sum to the value to 1e-9 of Σ|g·x| for every design, direction, extent, baseline and score', () => {
    let traces = 0
    fc.assert(
      fc.property(trials, ({ some, timesMs, source, extent: wanted, baseline, score, of, cuts }) => {
        const extent = source.kind === 'recorded' ? 'epochs' : wanted
        const waveforms = filtered(some, source, timesMs, extent)
        const traced = tracedWeights({ score, of, baseline, timesMs, ...waveforms })
        if (!isTraced(traced)) return
        traces++
        const trace = traceByMoment({ chain: some, extent, timesMs, baseline, source, traced }, 20)
        const tolerance = 1e-9 * trace.absoluteSum + rounding(traced, source)
        expect(Math.abs(trace.value - forward(traced, waveforms))).toBeLessThanOrEqual(tolerance)
        const stretches: Stretches = cuts.sort((a, b) => a - b).map((sample) => ({ sample, atMs: timesMs[sample] }))
        for (const partition of [stretches, []]) {
          const rows = momentRows(trace, partition)
          expect(Math.abs(sum(rows.map(({ share }) => share)) - trace.value)).toBeLessThanOrEqual(tolerance)
          expect(Math.abs(rows[rows.length - 1].running - trace.value)).toBeLessThanOrEqual(tolerance)
        }
      }),
      { numRuns: 150 },
    )
    // most draws have a value to trace: the claim is not about nothing
    expect(traces).toBeGreaterThan(60)
  })

  test('do so for an amplifier of 100 s, a high-pass at 0.01 Hz and a steady tone', () => {
    const some = designChain([{ design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.0016 }, highPass(0.01)], 500)
    const { waveform, baseline } = SCENARIOS[0]
    const timesMs = epochTimesMs(500, waveform.epoch)
    const tone = { shape: 'tone', name: 'mains', amplitudeUv: 2, frequencyHz: 50, phaseRad: 0.4 } as const
    const source: TraceSource = { kind: 'built', components: [...waveform.conditions[0].components, tone] }
    const score = { kind: 'mean', fromMs: 300, toMs: 500, polarity: 'positive' } as const
    for (const extent of ['continuous', 'epochs'] as const)
      for (const used of [baseline, 'none' as const]) {
        const waveforms = filtered(some, source, timesMs, extent)
        const traced = tracedWeights({ score, of: 'after', baseline: used, timesMs, ...waveforms }) as Traced
        const trace = traceByMoment({ chain: some, extent, timesMs, baseline: used, source, traced })
        expect(Math.abs(trace.value - forward(traced, waveforms))).toBeLessThanOrEqual(1e-9 * trace.absoluteSum)
      }
  })

  test('keep a recorded waveform’s electrode offset of 20 mV out of every row', () => {
    const some = designChain([highPass(1)], 250)
    const timesMs = epochOf(400, 250)
    const values = timesMs.map((ms) => 6 * Math.exp(-(((ms - 350) / 80) ** 2)) + Math.sin(ms / 30))
    const baseline = { fromMs: -200, toMs: 0 }
    const account = (x: Float64Array) => {
      const traced = tracedWeights({
        score: { kind: 'mean', fromMs: 80, toMs: 140, polarity: 'negative' },
        of: 'after',
        baseline,
        timesMs,
        before: x,
        after: applyChain(some, x, 'epochs'),
      }) as Traced
      const source: TraceSource = { kind: 'recorded', values: x }
      return traceBack({ chain: some, extent: 'epochs', timesMs, baseline, source, traced })
    }
    const plain = account(values)
    const offset = account(values.map((x) => x + 20_000))
    expect(plain.moments.zero).toBe('baseline mean')
    plain.rows.forEach(({ share }, i) => expect(offset.rows[i].share).toBeCloseTo(share, 8))
  })
})

describe('the account by moment', () => {
  const some = designChain(
    [
      { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.5 },
      highPass(1),
      { ...highPass(20), pass: 'low' } as StageSpec,
    ],
    250,
  )
  const timesMs = epochOf(N, 250)
  const baseline = { fromMs: -200, toMs: 0 }
  const score = { kind: 'mean', fromMs: 100, toMs: 200, polarity: 'positive' } as const
  const source: TraceSource = {
    kind: 'built',
    components: [
      { shape: 'ramp', name: 'ramp', amplitudeUv: 5, latencyMs: -300, widthMs: 400, riseShare: 0.7 },
      { shape: 'gaussian', name: 'late', amplitudeUv: 7, latencyMs: 420, widthMs: 200 },
      { shape: 'tone', name: 'hum', amplitudeUv: 1, frequencyHz: 12, phaseRad: 0.3 },
    ],
  }
  const input = (extent: 'continuous' | 'epochs', used: typeof baseline | 'none' = baseline): TraceInput => {
    const traced = tracedWeights({
      score,
      of: 'after',
      baseline: used,
      timesMs,
      ...filtered(some, source, timesMs, extent),
    })
    return { chain: some, extent, timesMs, baseline: used, source, traced: traced as Traced }
  }

  test('weighs every sample as filtering unit impulses one by one does, under both extents', () => {
    const w = input('continuous').traced.onAfter
    const trace = traceByMoment(input('continuous'), 100)
    const one = Float64Array.of(1)
    trace.weights.forEach((g, i) => {
      const at = trace.from + i
      const y = runContinuous(some.stages, one, -at, N - at)
      expect(Math.abs(g - sum(y.map((value, m) => w[m] * value)))).toBeLessThan(1e-12)
    })
    const offline = designChain([highPass(1), { ...highPass(20), pass: 'low' } as StageSpec], 250)
    const g = effectiveWindow(offline, w, 'epochs')
    for (let m = 0; m < N; m++) {
      const impulse = new Float64Array(N)
      impulse[m] = 1
      const y = applyChain(offline, impulse, 'epochs')
      expect(Math.abs(g.values[m - g.start] - sum(y.map((value, n) => w[n] * value)))).toBeLessThan(1e-12)
    }
  })

  test('of epochs gives the moments Aᵀ(g∞ over the epoch) on x, and the padding Σ(g − g∞)·u over it', () => {
    for (const used of [baseline, 'none' as const]) {
      const epochs = input('epochs', used)
      const w = epochs.traced.onAfter
      const [amplifier, ...offline] = some.stages
      const seen = adjointContinuous(offline, w, 0, N)
      const padded = adjointEpochs(offline, w)
      const u = filterBuiltWaveform({ ...some, stages: [amplifier] }, source.components, timesMs, 'continuous')
      // against the baseline mean of x, whose extension is taken out by the amplifier, which stops what is constant
      const trace = traceByMoment(epochs)
      const rows = momentRows(trace, [{ sample: 130, atMs: timesMs[130] }])
      const invented = rows.find(({ kind }) => kind === 'invented')
      expect(invented?.share).toBeCloseTo(sum(u.map((value, m) => (padded[m] - seen[m]) * value)), 10)

      // a hundred seconds of the amplifier's memory, summed sample by sample
      const far = 25_000
      const a = adjointContinuous([amplifier], seen, -far, N)
      const times = Float64Array.from(a, (_, i) => timesMs[0] + (i - far) * 4)
      const x = waveformAt(source.components, times).map((value) => value - trace.zeroUv)
      const share = (from: number, to: number) => sum(x.slice(from, to).map((value, i) => a[from + i] * value))
      expect(rows[0].share).toBeCloseTo(share(0, far), 9)
      expect(rows[1].share).toBeCloseTo(share(far, far + 130), 10)
      expect(rows[2].share).toBeCloseTo(share(far + 130, far + N), 10)
      expect(rows[3].share).toBe(0)
      expect(trace.zero).toBe(used === 'none' ? 'as given' : 'baseline mean')
    }
  })

  test('of a continuous waveform gives a steady tone its share before and after the epoch', () => {
    const trace = traceByMoment(input('continuous'))
    const rows = momentRows(trace, [])
    const w = input('continuous').traced.onAfter
    const far = 40_000
    const g = adjointContinuous(some.stages, w, -far, N + far)
    const times = Float64Array.from(g, (_, i) => timesMs[0] + (i - far) * 4)
    const x = waveformAt(source.components, times).map((value) => value - trace.zeroUv)
    const share = (from: number, to: number) => sum(x.slice(from, to).map((value, i) => g[from + i] * value))
    const weight = (from: number, to: number) => sum(g.slice(from, to))
    expect(rows.map(({ kind }) => kind)).toEqual(['before', 'other', 'after'])
    expect(rows[0].share).toBeCloseTo(share(0, far), 9)
    expect(rows[1].share).toBeCloseTo(share(far, far + N), 10)
    expect(rows[2].share).toBeCloseTo(share(far + N, far + N + far), 9)
    expect(rows[0].weight).toBeCloseTo(weight(0, far), 9)
    expect(rows[2].weight).toBeCloseTo(weight(far + N, far + N + far), 9)
    expect(sum(rows.map((row) => row.weight as number))).toBeCloseTo(0, 12)
  })

  test('draws a density whose area is the share', () => {
    const trace = traceByMoment(input('continuous'), 30)
    const density = shareDensity(trace)
    const rows = momentRows(trace, [])
    // 4 ms steps: µV per 100 ms times 0.04
    expect(sum(density.slice(-trace.from, -trace.from + N)) * 0.04).toBeCloseTo(rows[1].share, 12)
  })

  test('gives no per cent of a value that is about zero', () => {
    const flat: TraceSource = {
      kind: 'built',
      components: [{ shape: 'gaussian', name: 'far', amplitudeUv: 1e-4, latencyMs: 400, widthMs: 100 }],
    }
    const trace = traceByMoment({ ...input('continuous'), source: flat })
    expect(trace.aboutZero).toBe(true)
    for (const row of momentRows(trace, [])) expect(row.percent).toBeNull()
    const zero = traceByMoment({ ...input('continuous'), source: { kind: 'built', components: [] } })
    expect(zero.value).toBe(0)
    expect(momentRows(zero, []).every(({ percent }) => percent === null)).toBe(true)
  })

  test('refuses values, weights and margins that do not fit', () => {
    const good = input('epochs')
    expect(() => traceByMoment({ ...good, source: { kind: 'recorded', values: new Float64Array(3) } })).toThrow(
      RangeError,
    )
    expect(() => traceByMoment(good, -1)).toThrow('marginSamples')
    expect(() => traceByMoment({ ...good, extent: 'half' as 'epochs' })).toThrow('extent')
    expect(() => momentRows(traceByMoment(good), [{ sample: N, atMs: 0 }])).toThrow('stretches[0].sample')
    const nan = { ...good.traced, onAfter: good.traced.onAfter.map(() => NaN) }
    expect(() => traceByMoment({ ...good, traced: nan })).toThrow(RangeError)
  })
})

describe('the built scenario', () => {
  const { waveform, chain: specs, baseline, score } = SCENARIOS[0]
  const timesMs = epochTimesMs(waveform.samplingRateHz, waveform.epoch)
  const source: TraceSource = { kind: 'built', components: waveform.conditions[0].components }
  const accountAt = (cutoffHz: number, extent: 'continuous' | 'epochs') => {
    const changed = specs.map((spec) => (spec.design === 'butterworth' ? { ...spec, cutoffsHz: [cutoffHz] } : spec))
    const some = designChain(changed, waveform.samplingRateHz)
    const traced = tracedWeights({ score, of: 'after', baseline, timesMs, ...filtered(some, source, timesMs, extent) })
    const input: TraceInput = { chain: some, extent, timesMs, baseline, source, traced: traced as Traced }
    return { ...traceBack(input), trust: traceTrust(input) }
  }

  test('has its false deflection at 80–140 ms from the late positivity, the two halves of its stretch giving more than 90 %', () => {
    const { rows, components: parts, moments } = accountAt(1, 'continuous')
    const halves = rows.filter(({ kind }) => kind === 'component')
    expect(halves.map(({ fromMs, toMs }) => [fromMs, toMs])).toEqual([
      [250, 400],
      [400, 550],
    ])
    expect(sum(halves.map(({ percent }) => percent as number))).toBeGreaterThan(90)
    expect(moments.value).toBeLessThan(-1.1)
    expect(parts?.rows[0].percent).toBeGreaterThan(95)
    expect(Math.abs((parts?.value as number) - moments.value)).toBeLessThan(1e-9 * moments.absoluteSum)
  })

  test('has it from its own window with a 0.1 Hz high-pass', () => {
    const { rows } = accountAt(0.1, 'continuous')
    const own = rows.find(({ kind }) => kind === 'score')
    expect(own?.percent).toBeGreaterThan(90)
    expect(own?.percent).toBeLessThan(110)
  })

  test('is trusted on the whole axis and, below 10 % unseen, as epochs', () => {
    expect(accountAt(1, 'continuous').trust).toMatchObject({ unseenShare: 0, exceeded: false })
    expect(accountAt(1, 'continuous').trust.outsideEpoch).toBeGreaterThan(0.03)
    const epochs = accountAt(1, 'epochs').trust
    expect(epochs.unseenShare).toBeGreaterThan(0.03)
    expect(epochs.exceeded).toBe(false)
    expect(() => traceTrust({} as TraceInput, 2)).toThrow('threshold')
  })
})

test('a baseline-corrected waveform and a raw one have the same account', () => {
  const { waveform, baseline, score } = SCENARIOS[0]
  const timesMs = epochTimesMs(500, waveform.epoch)
  const some = designChain([highPass(1)], 500)
  const x = sum2(waveform.conditions[0].components.map((c) => componentAt(c, timesMs)))
  const account = (values: Float64Array) => {
    const traced = tracedWeights({
      score,
      of: 'change',
      baseline,
      timesMs,
      before: values,
      after: applyChain(some, values, 'epochs'),
    })
    const source: TraceSource = { kind: 'recorded', values }
    return traceBack({ chain: some, extent: 'epochs', timesMs, baseline, source, traced: traced as Traced })
  }
  const raw = account(x)
  const corrected = account(correctBaseline(x, timesMs, baseline))
  expect(corrected.moments.value).toBeCloseTo(raw.moments.value, 12)
  expect(corrected.unfiltered).toBeCloseTo(0, 12)
  expect(corrected.stretches).toEqual(raw.stretches)
})

function sum2(parts: Float64Array[]): Float64Array {
  return parts.reduce((total, part) => total.map((value, i) => value + part[i]))
}
