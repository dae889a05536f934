import fc from 'fast-check'
import type {
  AmplifierSpec,
  ButterworthSpec,
  MovingAverageSpec,
  NotchSpec,
  Pass,
  StageSpec,
  WindowedSincSpec,
} from '../../src/filter/stage.ts'

/** A specification that can be designed, with a sampling rate for it. */
export interface Specified<Spec extends StageSpec> {
  readonly spec: Spec
  readonly samplingRateHz: number
}

const rate = fc.constantFrom(100, 250, 500, 512, 1000, 2048, 4096)
const pass = fc.constantFrom<Pass>('low', 'high', 'band', 'stop')
const meaning = fc.constantFrom('half-amplitude' as const, 'half-power' as const, 'design' as const)
const direction = fc.constantFrom('forward' as const, 'both' as const)
const part = fc.double({ min: 0, max: 1, noNaN: true })

/** A value between the limits, evenly on a log scale. */
const between = (low: number, high: number, at: number) => low * (high / low) ** at

export const butterworths: fc.Arbitrary<Specified<ButterworthSpec>> = fc
  .record({ samplingRateHz: rate, pass, meaning, direction, order: fc.nat(11), low: part, width: part })
  .map(({ samplingRateHz, pass, meaning, direction, order, low, width }) => {
    const single = pass === 'low' || pass === 'high'
    const first = between(0.01, (single ? 0.45 : 0.35) * samplingRateHz, low)
    const second = between(first * 1.2, 0.45 * samplingRateHz, width)
    const spec: ButterworthSpec = {
      design: 'butterworth',
      pass,
      order: 1 + (single ? order : order % 8),
      cutoffsHz: single ? [first] : [first, second],
      meaning,
      direction,
    }
    return { spec, samplingRateHz }
  })

/** Transitions that keep clear of 0 Hz, half the sampling rate and each other; kernels of at most some 2000 taps. */
export const windowedSincs: fc.Arbitrary<Specified<WindowedSincSpec>> = fc
  .record({
    samplingRateHz: rate,
    pass,
    meaning,
    transition: part,
    place: part,
    gap: part,
    window: fc.oneof(
      fc.constantFrom('rectangular' as const, 'hann' as const, 'hamming' as const, 'blackman' as const).map((name) => ({
        name,
      })),
      fc
        .double({ min: 20, max: 110, noNaN: true })
        .map((attenuationDb) => ({ name: 'kaiser' as const, attenuationDb })),
    ),
    delay: fc.constantFrom('compensated' as const, 'causal' as const),
  })
  .map(({ samplingRateHz, pass, meaning, transition, place, gap, window, delay }) => {
    const transitionHz = between(0.003 * samplingRateHz, 0.06 * samplingRateHz, transition)
    const from = 1.5 * transitionHz
    const to = samplingRateHz / 2 - 1.5 * transitionHz
    const single = pass === 'low' || pass === 'high'
    const first = from + place * (to - from - (single ? 0 : 2 * transitionHz))
    const second = first + 2 * transitionHz + gap * (to - first - 2 * transitionHz)
    const cutoffsHz = single ? [first] : [first, second]
    const spec: WindowedSincSpec = { design: 'windowed-sinc', pass, cutoffsHz, meaning, transitionHz, window, delay }
    return { spec, samplingRateHz }
  })

export const amplifiers: fc.Arbitrary<Specified<AmplifierSpec>> = fc
  .record({
    samplingRateHz: rate,
    pass: fc.constantFrom('low' as const, 'high' as const),
    order: fc.integer({ min: 1, max: 8 }),
    at: part,
  })
  .map(({ samplingRateHz, pass, order, at }) => ({
    spec: { design: 'amplifier', pass, order, cutoffHz: between(0.005, 0.45 * samplingRateHz, at) },
    samplingRateHz,
  }))

export const notches: fc.Arbitrary<Specified<NotchSpec>> = fc
  .record({ samplingRateHz: rate, direction, at: part, width: part, harmonics: fc.nat(3) })
  .map(({ samplingRateHz, direction, at, width, harmonics }) => {
    const frequencyHz = between(0.02 * samplingRateHz, 0.48 * samplingRateHz, at)
    const room = Math.ceil(samplingRateHz / 2 / frequencyHz) - 2
    const bandwidthHz = between(0.005, 0.5, width) * frequencyHz
    return {
      spec: { design: 'notch', frequencyHz, bandwidthHz, harmonics: Math.max(0, Math.min(harmonics, room)), direction },
      samplingRateHz,
    }
  })

export const movingAverages: fc.Arbitrary<Specified<MovingAverageSpec>> = fc
  .record({
    samplingRateHz: rate,
    samples: fc.integer({ min: 2, max: 400 }),
    delay: fc.constantFrom('compensated' as const, 'causal' as const),
  })
  .map(({ samplingRateHz, samples, delay }) => ({
    spec: { design: 'moving-average', durationMs: (1000 * samples) / samplingRateHz, delay },
    samplingRateHz,
  }))

/** Any stage; minimum-phase forms are left to their own tests, since they take longer. */
export const stages: fc.Arbitrary<Specified<StageSpec>> = fc.oneof(
  butterworths,
  windowedSincs,
  amplifiers,
  notches,
  movingAverages,
)
