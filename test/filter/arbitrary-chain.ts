import fc from 'fast-check'
import { type Chain, designChain } from '../../src/filter/chain.ts'
import type { StageSpec } from '../../src/filter/stage.ts'

/** Random stages and chains of every design, with kernels short enough for a brute-force comparison. */

/** Signals in steps of 0.01 µV up to 50 µV: none so small that products of them vanish below the smallest number. */
export const signal = (minLength: number, maxLength: number) =>
  fc
    .array(fc.integer({ min: -5000, max: 5000 }), { minLength, maxLength })
    .map((values) => Float64Array.from(values, (value) => value / 100))

export const samplingRateHz = fc.constantFrom(100, 250, 500, 1000)

const between = (from: number, to: number) => fc.double({ min: from, max: to, noNaN: true })

/** All frequencies as parts of the sampling rate. */
const amplifier = fc.record({
  design: fc.constant('amplifier' as const),
  pass: fc.constantFrom('low' as const, 'high' as const),
  order: fc.integer({ min: 1, max: 4 }),
  cutoffHz: between(0.008, 0.3),
})

const butterworth = fc
  .record({
    design: fc.constant('butterworth' as const),
    pass: fc.constantFrom('low' as const, 'high' as const, 'band' as const, 'stop' as const),
    order: fc.integer({ min: 1, max: 4 }),
    low: between(0.008, 0.2),
    ratio: between(1.5, 2.2),
    meaning: fc.constantFrom('half-amplitude' as const, 'half-power' as const, 'design' as const),
    direction: fc.constantFrom('forward' as const, 'both' as const),
  })
  .map(({ low, ratio, ...spec }) => ({
    ...spec,
    cutoffsHz: spec.pass === 'low' || spec.pass === 'high' ? [low] : [low, low * ratio],
  }))

const windowedSinc = fc
  .record({
    design: fc.constant('windowed-sinc' as const),
    pass: fc.constantFrom('low' as const, 'high' as const, 'band' as const, 'stop' as const),
    low: between(0.08, 0.2),
    width: between(0.12, 0.2),
    transitionHz: between(0.04, 0.1),
    window: fc.constantFrom(
      { name: 'rectangular' as const },
      { name: 'hann' as const },
      { name: 'hamming' as const },
      { name: 'blackman' as const },
      { name: 'kaiser' as const, attenuationDb: 60 },
    ),
    delay: fc.constantFrom('compensated' as const, 'causal' as const, 'minimum-phase' as const),
  })
  .map(({ low, width, ...spec }) => ({
    ...spec,
    cutoffsHz: spec.pass === 'low' || spec.pass === 'high' ? [low] : [low, low + width],
    meaning: 'design' as const,
  }))

const notch = fc.record({
  design: fc.constant('notch' as const),
  frequencyHz: between(0.08, 0.2),
  bandwidthHz: between(0.008, 0.03),
  harmonics: fc.integer({ min: 0, max: 1 }),
  direction: fc.constantFrom('forward' as const, 'both' as const),
})

const movingAverage = fc.record({
  design: fc.constant('moving-average' as const),
  durationMs: fc.integer({ min: 2, max: 30 }),
  delay: fc.constantFrom('compensated' as const, 'causal' as const),
})

const offline = fc.oneof(butterworth, windowedSinc, notch, movingAverage)

/** Parts of the sampling rate to Hz, samples to milliseconds. */
function scaled(spec: StageSpec, rate: number): StageSpec {
  switch (spec.design) {
    case 'amplifier':
      return { ...spec, cutoffHz: spec.cutoffHz * rate }
    case 'butterworth':
      return { ...spec, cutoffsHz: spec.cutoffsHz.map((f) => f * rate) }
    case 'windowed-sinc':
      return { ...spec, cutoffsHz: spec.cutoffsHz.map((f) => f * rate), transitionHz: spec.transitionHz * rate }
    case 'notch':
      return { ...spec, frequencyHz: spec.frequencyHz * rate, bandwidthHz: spec.bandwidthHz * rate }
    case 'moving-average':
      return { ...spec, durationMs: (spec.durationMs * 1000) / rate }
  }
}

const build = (rate: number, specs: StageSpec[]): Chain =>
  designChain(
    specs.map((spec) => scaled(spec, rate)),
    rate,
  )

/** A chain of up to two amplifier stages and up to three offline stages, possibly empty. */
export const chain: fc.Arbitrary<Chain> = fc
  .tuple(samplingRateHz, fc.array(amplifier, { maxLength: 2 }), fc.array(offline, { maxLength: 3 }))
  .map(([rate, first, then]) => build(rate, [...first, ...then]))

/** A chain of one stage. */
export const singleStage: fc.Arbitrary<Chain> = fc
  .tuple(samplingRateHz, fc.oneof(amplifier, offline))
  .map(([rate, spec]) => build(rate, [spec]))

/** A chain without anything that looks ahead. */
export const causalChain: fc.Arbitrary<Chain> = fc
  .tuple(samplingRateHz, fc.array(amplifier, { maxLength: 2 }), fc.array(offline, { minLength: 1, maxLength: 3 }))
  .map(([rate, first, then]) =>
    build(rate, [
      ...first,
      ...then.map((spec): StageSpec => {
        if (spec.design === 'butterworth' || spec.design === 'notch') return { ...spec, direction: 'forward' }
        return spec.delay === 'compensated' ? { ...spec, delay: 'causal' } : spec
      }),
    ]),
  )

/** A chain whose every stage is zero-phase. */
export const zeroPhaseChain: fc.Arbitrary<Chain> = fc
  .tuple(samplingRateHz, fc.array(offline, { minLength: 1, maxLength: 3 }))
  .map(([rate, stages]) =>
    build(
      rate,
      stages.map((spec): StageSpec => {
        if (spec.design === 'butterworth' || spec.design === 'notch') return { ...spec, direction: 'both' }
        return { ...spec, delay: 'compensated' }
      }),
    ),
  )
