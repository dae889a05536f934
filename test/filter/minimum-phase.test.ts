import { describe, expect, test } from 'vitest'
import { realTransform } from '../../src/filter/fourier.ts'
import { minimumPhase } from '../../src/filter/minimum-phase.ts'
import { designStage, type WindowedSincSpec } from '../../src/filter/stage.ts'
import { gainOf } from './measure.ts'

const base: WindowedSincSpec = {
  design: 'windowed-sinc',
  pass: 'low',
  cutoffsHz: [30],
  meaning: 'half-amplitude',
  transitionHz: 10,
  window: { name: 'hamming' },
  delay: 'minimum-phase',
}

const cases: [string, number, Partial<WindowedSincSpec>][] = [
  ['a low-pass', 500, {}],
  ['a high-pass', 500, { pass: 'high', cutoffsHz: [1], transitionHz: 1.5 }],
  [
    'a steep high-pass near fs/4',
    100,
    { pass: 'high', cutoffsHz: [30], transitionHz: 2, window: { name: 'blackman' } },
  ],
  ['a band-pass', 500, { pass: 'band', cutoffsHz: [1, 30], transitionHz: 1.5 }],
  ['a band-stop', 500, { pass: 'stop', cutoffsHz: [10, 40], transitionHz: 5, window: { name: 'blackman' } }],
  ['a rectangular window', 250, { transitionHz: 3, window: { name: 'rectangular' } }],
  ['a Kaiser window of 100 dB', 250, { transitionHz: 8, window: { name: 'kaiser', attenuationDb: 100 } }],
  ['a narrow band-stop in many taps', 4096, { pass: 'stop', cutoffsHz: [10, 40], transitionHz: 5 }],
  ['half-power cutoffs', 500, { pass: 'band', cutoffsHz: [4, 40], transitionHz: 3, meaning: 'half-power' }],
]

/** Number of zeros of Σ taps[k]·z⁻ᵏ with |z| > radius, by the turns of the sum around the circle. */
function zerosOutside(taps: Float64Array, radius: number): number {
  const damped = taps.map((tap, k) => tap * radius ** -k)
  const { re, im } = realTransform(damped, 2 ** 18)
  let turned = 0
  for (let k = 1; k < re.length; k++) {
    const cross = re[k - 1] * im[k] - im[k - 1] * re[k]
    turned += Math.atan2(cross, re[k - 1] * re[k] + im[k - 1] * im[k])
  }
  // in 1/z: a zero outside lies inside the circle of 1/z, and each turns the sum once, backwards over half a circle
  return Math.abs(Math.round(turned / -Math.PI))
}

describe.each(cases)('%s', (_, samplingRateHz, change) => {
  const spec = { ...base, ...change }
  const prototype = designStage({ ...spec, delay: 'compensated' }, samplingRateHz)
  const stage = designStage(spec, samplingRateHz)

  test('keeps its number of taps and its amplitude to 1e-5, between the points of any grid', () => {
    expect(stage.taps!.length).toBe(prototype.taps!.length)
    expect(stage.leadSamples).toBe(0)
    for (let i = 0; i <= 1500; i++) {
      const hz = (i / 1500) ** 2 * (samplingRateHz / 2)
      expect(Math.abs(gainOf(stage, hz) - gainOf(prototype, hz))).toBeLessThan(1e-5)
    }
  })

  test('has no zero beyond radius 1.001', () => {
    expect(zerosOutside(stage.taps!, 1.001)).toBe(0)
    // the count can tell: the symmetric kernel has such zeros
    expect(zerosOutside(prototype.taps!, 1.001)).toBeGreaterThan(0)
  })

  test('meets its stated cutoffs', () => {
    const wanted = spec.meaning === 'half-power' ? Math.SQRT1_2 : 0.5
    for (const cutoff of spec.cutoffsHz) expect(Math.abs(gainOf(stage, cutoff) - wanted)).toBeLessThan(1e-6)
  })

  test('is 1 or 0 at 0 Hz to rounding', () => {
    const sum = stage.taps!.reduce((total, tap) => total + tap, 0)
    expect(Math.abs(sum - (spec.pass === 'low' || spec.pass === 'stop' ? 1 : 0))).toBeLessThan(1e-13)
  })

  test('has its energy earlier than the symmetric kernel, at every moment', () => {
    let early = 0
    let symmetric = 0
    stage.taps!.forEach((tap, k) => {
      early += tap * tap
      symmetric += prototype.taps![k] ** 2
      expect(early).toBeGreaterThan(symmetric - 1e-5)
    })
  })
})

test('a kernel of three taps has the closed-form answer', () => {
  // (1 + a/z)(1 + a·z) = a·z + (1 + a²) + a/z; its minimum-phase form of the same amplitude is (1 + a/z)²
  const a = 0.4
  const found = minimumPhase(Float64Array.of(a, 1 + a * a, a), false)
  ;[1, 2 * a, a * a].forEach((tap, k) => expect(found[k]).toBeCloseTo(tap, 10))
})
