import fc from 'fast-check'
import type { Baseline } from '../../src/erp/baseline.ts'
import type { Component } from '../../src/erp/component.ts'
import type { Score } from '../../src/erp/score.ts'

/** Random epochs, waveforms, baselines and scores for accounts of values. */

/** In ten thousand steps, none of them so small that products vanish below the smallest number. */
const between = (from: number, to: number) =>
  fc.integer({ min: 0, max: 10_000 }).map((step) => from + ((to - from) * step) / 10_000)

/** An epoch of n samples, a third of them before the event. */
export function epochOf(n: number, samplingRateHz: number): Float64Array {
  const first = -Math.floor(n / 3)
  return Float64Array.from({ length: n }, (_, i) => ((first + i) * 1000) / samplingRateHz)
}

/** Places and widths in samples, so that one generator serves every sampling rate. */
const shared = (n: number) => ({
  amplitudeUv: between(-10, 10),
  latency: between(-0.6 * n, 1.2 * n),
  width: between(4, n / 2),
})

const bounded = (n: number, stepMs: number): fc.Arbitrary<Component> =>
  fc
    .record({
      ...shared(n),
      shape: fc.constantFrom('gaussian', 'asymmetric', 'slow-wave', 'ramp', 'damped-oscillation'),
      riseShare: between(0.05, 0.95),
      edge: between(0.1, 1),
      frequency: between(0.01, 0.2),
    })
    .map(({ shape, latency, width, riseShare, edge, frequency, amplitudeUv }) => {
      const widthMs = width * stepMs
      return {
        shape,
        name: 'some',
        amplitudeUv,
        latencyMs: latency * stepMs,
        widthMs,
        ...(shape === 'slow-wave' ? { edgeMs: edge * widthMs } : {}),
        ...(shape === 'damped-oscillation' ? { frequencyHz: (frequency * 1000) / stepMs } : {}),
        ...(shape === 'gaussian' || shape === 'slow-wave' ? {} : { riseShare }),
      } as Component
    })

const tone = (stepMs: number): fc.Arbitrary<Component> =>
  fc
    .record({ amplitudeUv: between(-3, 3), frequency: between(0.02, 0.4), phaseRad: between(-3, 3) })
    .map(({ frequency, ...rest }) => ({
      shape: 'tone' as const,
      name: 'some',
      frequencyHz: (frequency * 1000) / stepMs,
      ...rest,
    }))

/** One to three components that end and at most one steady tone, with different names. */
export const components = (n: number, stepMs: number): fc.Arbitrary<Component[]> =>
  fc
    .tuple(fc.array(bounded(n, stepMs), { minLength: 1, maxLength: 3 }), fc.array(tone(stepMs), { maxLength: 1 }))
    .map(([some, tones]) => [...some, ...tones].map((component, i) => ({ ...component, name: `component ${i + 1}` })))

/** Baselines and scores by sample, inside an epoch whose times are given. */
export const baselines = (timesMs: Float64Array): fc.Arbitrary<Baseline> =>
  fc.oneof(
    fc.constant('none' as const),
    windows(timesMs).map(([from, to]) => ({ fromMs: timesMs[from], toMs: timesMs[to] })),
  )

export const scores = (timesMs: Float64Array): fc.Arbitrary<Score> =>
  fc
    .record({
      kind: fc.constantFrom(
        'mean' as const,
        'moment' as const,
        'area' as const,
        'peak-amplitude' as const,
        'peak-latency' as const,
        'area-latency' as const,
        'onset-latency' as const,
      ),
      window: windows(timesMs),
      polarity: fc.constantFrom('positive' as const, 'negative' as const),
    })
    .map(({ kind, window: [from, to], polarity }) => {
      const last = kind === 'moment' ? from : to
      return { kind, fromMs: timesMs[from], toMs: timesMs[last], polarity }
    })

function windows(timesMs: Float64Array): fc.Arbitrary<[number, number]> {
  const n = timesMs.length
  return fc.tuple(fc.nat(n - 2), fc.nat(n - 2)).map(([a, b]) => [Math.min(a, b), Math.max(a, b) + 1])
}
