import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { symmetricAmplitude } from '../../src/filter/kernel-response.ts'
import { stageGroupDelaySeconds } from '../../src/filter/group-delay.ts'
import { designStage, type WindowedSincSpec, type WindowSpec } from '../../src/filter/stage.ts'
import { gainOf } from './measure.ts'
import { windowedSincs } from './random-specs.ts'

const spec = (change: Partial<WindowedSincSpec>): WindowedSincSpec => ({
  design: 'windowed-sinc',
  pass: 'low',
  cutoffsHz: [30],
  meaning: 'design',
  transitionHz: 10,
  window: { name: 'hamming' },
  delay: 'compensated',
  ...change,
})

/**
 * Amplitude of the windowed ideal taps themselves, for a cutoff at fs/4: tables hold for them, while ours are scaled to 1 at
 * 0 Hz. The ideal middle tap is 1/2.
 */
function asTabulated(taps: Float64Array, frequenciesHz: Float64Array, samplingRateHz: number): Float64Array {
  const scale = 0.5 / taps[(taps.length - 1) / 2]
  return symmetricAmplitude(taps, frequenciesHz, samplingRateHz).map((a) => a * scale)
}

describe('the windows', () => {
  // Sources: Ifeachor & Jervis, window table, a copy at learnius.com (seen but for Blackman's ripple; the table is conservative for
  // Hamming); Widmann, Schröger & Maess 2015 (from memory, high). The true values computed with SciPy (derived).
  test.each<[WindowSpec, number, number, number, number, number]>([
    // window, pass deviation, stop dB, width·order, printed stop dB, printed width·order
    [{ name: 'rectangular' }, 0.0895, -20.96, 0.925, -21, 0.9],
    [{ name: 'hann' }, 0.00635, -43.94, 3.125, -44, 3.1],
    [{ name: 'hamming' }, 0.00195, -54.2, 3.333, -53, 3.3],
    [{ name: 'blackman' }, 0.00017, -75.3, 5.59, -74, 5.5],
    [{ name: 'kaiser', attenuationDb: 60 }, 0.001, -59.96, 3.62, -60, 3.6],
    [{ name: 'kaiser', attenuationDb: 80 }, 0.0001, -79.9, 5.01, -80, 5.0],
  ])(
    '%o has the ripple, attenuation and transition of its table',
    (window, deviation, stopDb, width, table, tableWidth) => {
      const fs = 1000
      const stage = designStage(spec({ cutoffsHz: [250], transitionHz: fs / 110, window }), fs)
      const order = stage.taps!.length - 1
      const grid = Float64Array.from({ length: 20001 }, (_, i) => i / 40)
      const amplitude = asTabulated(stage.taps!, grid, fs)
      // the transition is monotone: its edges are the extremes next to the cutoff
      let low = 10000
      while (amplitude[low - 1] > amplitude[low]) low--
      let high = 10000
      while (amplitude[high + 1] < amplitude[high]) high++
      const pass = Math.max(...amplitude.subarray(0, low + 1).map((a) => Math.abs(a - 1)))
      const stop = Math.max(...amplitude.subarray(high).map(Math.abs))
      expect(Math.abs(pass / deviation - 1)).toBeLessThan(0.06)
      expect(Math.abs(20 * Math.log10(stop) - stopDb)).toBeLessThan(0.35)
      expect(Math.abs(20 * Math.log10(stop) - table)).toBeLessThan(1.4)
      const delta = Math.max(pass, stop)
      let from = 10000
      while (Math.abs(amplitude[from] - 1) > delta) from--
      let to = 10000
      while (Math.abs(amplitude[to]) > delta) to++
      const measured = ((grid[to] - grid[from]) / fs) * order
      expect(Math.abs(measured / width - 1)).toBeLessThan(0.025)
      expect(Math.abs(measured / tableWidth - 1)).toBeLessThan(0.05)
    },
  )

  test('the rectangular window overshoots by some 8.95 % whatever its length', () => {
    // Source: Gibbs' phenomenon, standard (from memory, high)
    for (const transitionHz of [30, 10, 3]) {
      const { taps } = designStage(spec({ cutoffsHz: [125], transitionHz, window: { name: 'rectangular' } }), 500)
      const grid = Float64Array.from({ length: 20001 }, (_, i) => i / 80)
      const overshoot = Math.max(...asTabulated(taps!, grid, 500)) - 1
      expect(Math.abs(overshoot - 0.0895)).toBeLessThan(0.003)
    }
  })
})

describe('the nominal cutoff', () => {
  test('is the half-amplitude point at fs/4 exactly, and closely elsewhere', () => {
    // Source: standard, e.g. Oppenheim & Schafer; Widmann et al. 2015 (from memory, high); values of scaled taps computed with SciPy
    const quarter = designStage(spec({ cutoffsHz: [125] }), 500)
    expect(asTabulated(quarter.taps!, Float64Array.of(125), 500)[0]).toBeCloseTo(0.5, 12)
    const cases = [
      [48, 30, 500, 0.4978],
      [100, 30, 500, 0.5005],
      [412, 5, 1000, 0.4969],
    ]
    for (const [order, cutoff, fs, gain] of cases) {
      const stage = designStage(spec({ cutoffsHz: [cutoff], transitionHz: (3.3 * fs) / (order + 0.5) }), fs)
      expect(stage.taps!.length).toBe(order + 1)
      expect(Math.abs(gainOf(stage, cutoff) - gain)).toBeLessThan(6e-5)
    }
  })

  test('is solved for, so that half-amplitude and half-power are met to 1e-6', () => {
    fc.assert(
      fc.property(windowedSincs, ({ spec, samplingRateHz }) => {
        if (spec.meaning === 'design') return
        const wanted = spec.meaning === 'half-amplitude' ? 0.5 : Math.SQRT1_2
        const stage = designStage(spec, samplingRateHz)
        spec.cutoffsHz.forEach((cutoff) => {
          expect(Math.abs(gainOf(stage, cutoff) - wanted)).toBeLessThan(1e-9)
          const around = [1 - 1e-6, 1 + 1e-6].map((factor) => gainOf(stage, cutoff * factor) - wanted)
          expect(around[0] * around[1]).toBeLessThan(0)
        })
      }),
      { seed: 30, numRuns: 200 },
    )
  })
})

describe('any windowed sinc', () => {
  test('is symmetric, with an odd number of taps', () => {
    fc.assert(
      fc.property(windowedSincs, ({ spec, samplingRateHz }) => {
        const { taps, leadSamples, passes } = designStage(spec, samplingRateHz)
        expect(taps!.length % 2).toBe(1)
        expect([...taps!].reverse()).toEqual([...taps!])
        expect(leadSamples).toBe(spec.delay === 'compensated' ? (taps!.length - 1) / 2 : 0)
        expect(passes).toBe(1)
      }),
      { seed: 31 },
    )
  })

  test('is 1 at 0 Hz as a low-pass or band-stop, and 0 as a high-pass or band-pass', () => {
    fc.assert(
      fc.property(windowedSincs, ({ spec, samplingRateHz }) => {
        const wanted = spec.pass === 'low' || spec.pass === 'stop' ? 1 : 0
        expect(Math.abs(gainOf(designStage(spec, samplingRateHz), 0) - wanted)).toBeLessThan(1e-13)
      }),
      { seed: 32 },
    )
  })

  test('delays every frequency by half its order, or not at all when compensated', () => {
    // Source: linear phase, standard
    fc.assert(
      fc.property(windowedSincs, ({ spec, samplingRateHz }) => {
        const stage = designStage(spec, samplingRateHz)
        const wanted = spec.delay === 'causal' ? (stage.taps!.length - 1) / 2 / samplingRateHz : 0
        expect([...stageGroupDelaySeconds(stage, Float64Array.of(0, 1, samplingRateHz / 3))]).toEqual([
          wanted,
          wanted,
          wanted,
        ])
      }),
      { seed: 33 },
    )
  })

  test('of 49 taps reaches 24 samples, 48 ms at 500 Hz, before an event', () => {
    // Source: linear phase, standard (derived)
    const stage = designStage(spec({ transitionHz: 34 }), 500)
    expect(stage.taps!.length).toBe(49)
    expect((1000 * stage.leadSamples) / 500).toBe(48)
  })
})

describe('a windowed sinc that cannot be designed', () => {
  // Source of the rule: Widmann, Schröger & Maess 2015 (from memory, high)
  test.each<[Partial<WindowedSincSpec>, string, RegExp]>([
    [
      { cutoffsHz: [1], transitionHz: 2 },
      'transitionHz',
      /must keep the transition above 0 Hz: 2 about its centre at 1 Hz reaches from 0 to 2 Hz/,
    ],
    [
      { cutoffsHz: [0.5], transitionHz: 2 },
      'transitionHz',
      /above 0 Hz: 2 about its centre at 0.5 Hz reaches from -0.5 to 1.5 Hz/,
    ],
    [
      { cutoffsHz: [240], transitionHz: 30 },
      'transitionHz',
      /below 250 Hz \(half the sampling rate\): 30 about its centre at 240 Hz/,
    ],
    [{ pass: 'band', cutoffsHz: [1, 30], transitionHz: 3 }, 'transitionHz', /above 0 Hz/],
    [{ pass: 'high', cutoffsHz: [1], transitionHz: 1.9, meaning: 'half-power' }, 'transitionHz', /above 0 Hz/],
    [
      { pass: 'high', cutoffsHz: [1], transitionHz: 1.7, meaning: 'half-power', window: { name: 'rectangular' } },
      'transitionHz',
      /must be narrow enough for the gain to pass half-power at cutoffsHz \[1\], was 1.7/,
    ],
    [{ transitionHz: 0 }, 'transitionHz', /must be a positive number, was 0/],
    [{ transitionHz: NaN }, 'transitionHz', /must be a positive number, was NaN/],
    [{ transitionHz: 1e-4 }, 'transitionHz', /asks for 16500001 taps; a kernel must not have more than 1048576/],
    [{ cutoffsHz: [251] }, 'cutoffsHz', /cutoffsHz\[0\] must lie between 0 and 250/],
    [{ delay: 'none' as never }, 'delay', /delay must be one of compensated, causal, minimum-phase, was "none"/],
  ])('%o is refused in words', (change, field, message) => {
    let error: unknown
    try {
      designStage(spec(change), 500)
    } catch (caught) {
      error = caught
    }
    expect(error).toBeInstanceOf(RangeError)
    expect(error).toMatchObject({ field })
    expect((error as Error).message).toMatch(message)
  })
})
