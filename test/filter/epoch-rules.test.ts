import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { type Chain, designChain } from '../../src/filter/chain.ts'
import { applyEpochs, epochPaddingSamples } from '../../src/filter/epoch-rules.ts'
import { runContinuous } from '../../src/filter/stand-alone.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import { causalChain, chain, signal } from './arbitrary-chain.ts'
import { runDirectForm } from './brute-force.ts'
import { expectClose, largest } from './expect-close.ts'

const stagesOf = (specs: StageSpec[], samplingRateHz: number) => designChain(specs, samplingRateHz).stages

const butterworth = (
  pass: 'low' | 'high' | 'band' | 'stop',
  order: number,
  cutoffsHz: number[],
  direction: 'forward' | 'both',
): StageSpec => ({ design: 'butterworth', pass, order, cutoffsHz, meaning: 'design', direction })

const sinc = (delay: 'compensated' | 'causal' | 'minimum-phase', pass: 'low' | 'high' = 'low'): StageSpec => ({
  design: 'windowed-sinc',
  pass,
  cutoffsHz: [30],
  meaning: 'design',
  transitionHz: 20,
  window: { name: 'hamming' },
  delay,
})

const noise = (n: number) =>
  Float64Array.from({ length: n }, (_, i) => ((i * 7919 + ((i * i) % 1013)) % 2003) / 1001 - 1)

describe('the two ways of a recursive stage', () => {
  test('forward passes over an odd reflection of 150 samples leave the published difference from the slow sine', () => {
    // Source: SciPy docstring of scipy.signal.filtfilt (seen: 9.1086182e-06), as reported; B29. Two forward stages over the
    // reflected data are its two passes with its steady-state starts.
    const stages = stagesOf([butterworth('low', 8, [125], 'forward')], 2000)
    const slow = Float64Array.from({ length: 2001 }, (_, i) => Math.sin((2 * Math.PI * 5 * i) / 2000))
    const x = slow.map((value, i) => value + Math.sin((2 * Math.PI * 250 * i) / 2000))
    const padded = new Float64Array(2301)
    padded.set(x, 150)
    for (let k = 1; k <= 150; k++) {
      padded[150 - k] = 2 * x[0] - x[k]
      padded[2150 + k] = 2 * x[2000] - x[2000 - k]
    }
    const y = applyEpochs(stages, applyEpochs(stages, padded).reverse()).reverse()
    const difference = largest(slow.map((value, i) => y[150 + i] - value))
    expect(Math.abs(difference - 9.1086182e-6)).toBeLessThan(1e-9)
  })

  test('the odd reflection is as long as SciPy makes it', () => {
    // Source: scipy.signal.sosfiltfilt, 3·(2·sections + 1 − min(b2 = 0, a2 = 0)), as documented
    const padding = (spec: StageSpec) => epochPaddingSamples(stagesOf([spec], 500)[0])
    expect(padding(butterworth('low', 4, [30], 'both'))).toBe(15)
    expect(padding(butterworth('low', 3, [30], 'both'))).toBe(12)
    expect(padding(butterworth('low', 1, [30], 'both'))).toBe(6)
    expect(padding(butterworth('high', 12, [1], 'both'))).toBe(39)
    expect(padding(butterworth('band', 4, [1, 30], 'both'))).toBe(27)
    expect(padding(butterworth('low', 4, [30], 'forward'))).toBe(0)
    expect(padding(sinc('compensated'))).toBe(41)
    expect(padding(sinc('causal'))).toBe(82)
    expect(padding(sinc('minimum-phase'))).toBe(stagesOf([sinc('minimum-phase')], 500)[0].taps!.length - 1)
  })

  test('both ways is pad, forward, backward, trim, each pass from the steady state of its first sample', () => {
    // the second way: a constant that has lasted long enough stands before each pass
    const stages = stagesOf([butterworth('band', 2, [5, 40], 'both')], 500)
    const x = noise(300).map((value) => value + 3)
    const padding = epochPaddingSamples(stages[0])
    const padded = new Float64Array(300 + 2 * padding)
    padded.set(x, padding)
    for (let k = 1; k <= padding; k++) {
      padded[padding - k] = 2 * x[0] - x[k]
      padded[padding + 299 + k] = 2 * x[299] - x[299 - k]
    }
    const settled = (values: Float64Array) => {
      const long = new Float64Array(5000 + values.length).fill(values[0])
      long.set(values, 5000)
      runDirectForm(stages[0].sections as Float64Array, long)
      return long.slice(5000)
    }
    const expected = settled(settled(padded).reverse())
      .reverse()
      .slice(padding, padding + 300)
    expectClose(applyEpochs(stages, x), expected, 1e-11)
  })
})

describe('FIR stages', () => {
  const x = noise(200)
  const written = (at: number) => (at < 0 ? 2 * x[0] - x[-at] : at > 199 ? 2 * x[199] - x[398 - at] : x[at])

  test.each(['compensated', 'causal', 'minimum-phase'] as const)('%s: the sum over reflected samples', (delay) => {
    const [stage] = stagesOf([sinc(delay)], 500)
    const taps = stage.taps as Float64Array
    const expected = x.map((_, n) => taps.reduce((sum, tap, k) => sum + tap * written(n + stage.leadSamples - k), 0))
    expectClose(applyEpochs([stage], x), expected, 1e-13)
  })

  test('a compensated moving average of two samples takes half of each neighbour', () => {
    const stages = stagesOf([{ design: 'moving-average', durationMs: 4, delay: 'compensated' }], 500)
    expectClose(applyEpochs(stages, Float64Array.of(0, 4, 0, 8)), Float64Array.of(0, 2, 3, 8), 1e-15)
  })
})

describe('any chain', () => {
  test('linearity', () => {
    fc.assert(
      fc.property(chain, signal(220, 220), signal(220, 220), ({ stages }, a, b) => {
        const mixed = a.map((value, i) => 3 * value - 0.7 * b[i])
        const ya = applyEpochs(stages, a)
        const yb = applyEpochs(stages, b)
        const expected = ya.map((value, i) => 3 * value - 0.7 * yb[i])
        expectClose(applyEpochs(stages, mixed), expected, 3e-11 * (1 + largest(a) + largest(b)))
      }),
      { numRuns: 60 },
    )
  })

  test('causality: after silence at the start, a causal chain is exactly 0 until the waveform begins', () => {
    // Source: Rousselet 2012, Front Psychol 3:131, for the statement (seen); D7. The silence is as long as the padding that
    // reflects the waveform into what lies before the epoch.
    fc.assert(
      fc.property(causalChain, signal(1, 100), ({ stages }, x) => {
        const silence = stages.reduce((sum, stage) => sum + epochPaddingSamples(stage), 1)
        const later = new Float64Array(silence + 10 + x.length)
        later.set(x, silence + 10)
        const y = applyEpochs(stages, later)
        expect(y.subarray(0, silence + 10).every((value) => value === 0)).toBe(true)
      }),
      { numRuns: 60 },
    )
  })

  test('a constant comes out as the constant times the gain at 0 Hz, offline', () => {
    fc.assert(
      fc.property(chain, ({ stages }) => {
        const offline = stages.filter(({ spec }) => spec.design !== 'amplifier')
        const gain = offline.reduce((product, stage) => product * gainAtZero(stage), 1)
        const y = applyEpochs(offline, new Float64Array(250).fill(1))
        expectClose(y, new Float64Array(250).fill(gain), 1e-11)
      }),
    )
  })

  test('an electrode offset of 20 mV leaves nothing after a high-pass', () => {
    const offset = new Float64Array(600).fill(20_000)
    for (const direction of ['forward', 'both'] as const) {
      for (const [order, cutoff] of [
        [1, 0.1],
        [4, 0.1],
        [8, 0.01],
        [12, 1],
      ]) {
        expect(largest(applyEpochs(stagesOf([butterworth('high', order, [cutoff], direction)], 500), offset))).toBe(0)
        const band = butterworth('band', Math.min(order, 8), [cutoff, 40], direction)
        expect(largest(applyEpochs(stagesOf([band], 500), offset))).toBe(0)
      }
    }
    for (const delay of ['compensated', 'causal', 'minimum-phase'] as const) {
      // rounding of the taps' sum times 20 mV, in µV
      expect(largest(applyEpochs(stagesOf([sinc(delay, 'high')], 500), offset))).toBeLessThan(1e-10)
    }
  })

  test('an offset under the waveform changes a high-pass output by rounding only', () => {
    const stages = stagesOf([butterworth('high', 4, [0.1], 'both')], 500)
    const x = noise(1000)
    expectClose(
      applyEpochs(
        stages,
        x.map((value) => value + 20_000),
      ),
      applyEpochs(stages, x),
      // the sum x + 20 000 is itself rounded to 4e-12
      2e-11,
    )
  })

  test('amplifier stages run alone and are cut', () => {
    const stages = stagesOf([{ design: 'amplifier', pass: 'high', order: 1, cutoffHz: 1 }], 500)
    const x = noise(300).map((value) => value + 5)
    expect(applyEpochs(stages, x)).toEqual(runContinuous(stages, x, 0, 300))
  })

  test('no stage gives a copy, and the argument is never changed', () => {
    const x = noise(200)
    const before = x.slice()
    const y = applyEpochs([], x)
    expect(y).toEqual(x)
    expect(y).not.toBe(x)
    for (const specs of [[sinc('causal')], [butterworth('high', 2, [1], 'both'), sinc('compensated')]]) {
      applyEpochs(stagesOf(specs, 500), x)
      expect(x).toEqual(before)
    }
  })

  test('two results do not share memory', () => {
    const stages = stagesOf([butterworth('low', 2, [30], 'both')], 500)
    const first = applyEpochs(stages, noise(100))
    const kept = first.slice()
    applyEpochs(stages, new Float64Array(100).fill(7))
    expect(first).toEqual(kept)
  })
})

describe('epochs that are too short', () => {
  test('are refused by the stage that needs more', () => {
    const stages = stagesOf([butterworth('high', 4, [1], 'both')], 500)
    expect(applyEpochs(stages, noise(16)).length).toBe(16)
    expect(() => applyEpochs(stages, noise(15))).toThrow(
      expect.objectContaining({
        name: 'RangeError',
        message: 'butterworth high 1 Hz needs 16 samples, the epoch has 15',
        spec: stages[0].spec,
      }),
    )
    expect(() => applyEpochs(stagesOf([sinc('compensated')], 500), noise(41))).toThrow(
      'windowed-sinc low 30 Hz needs 42 samples, the epoch has 41',
    )
    expect(() => applyEpochs(stagesOf([sinc('causal')], 500), noise(82))).toThrow('needs 83 samples, the epoch has 82')
    expect(applyEpochs(stagesOf([sinc('causal')], 500), noise(83)).length).toBe(83)
  })

  test('one sample, or none, is enough for a forward stage', () => {
    const stages = stagesOf([butterworth('low', 4, [30], 'forward')], 500)
    expect(applyEpochs(stages, Float64Array.of(3))[0]).toBeCloseTo(3, 12)
    expect(applyEpochs(stages, new Float64Array(0)).length).toBe(0)
  })

  test('a missing value is refused by its index', () => {
    const stages = stagesOf([butterworth('low', 4, [30], 'both')], 500)
    const x = noise(100)
    x[37] = NaN
    expect(() => applyEpochs(stages, x)).toThrow('x[37] must be a finite number, was NaN')
  })
})

function gainAtZero(stage: Chain['stages'][number]): number {
  if (stage.taps) return stage.taps.reduce((sum, tap) => sum + tap, 0)
  const sections = stage.sections as Float64Array
  let gain = 1
  for (let at = 0; at < sections.length; at += 6) {
    const [b0, b1, b2, , a1, a2] = sections.subarray(at, at + 6)
    gain *= (b0 + b1 + b2) / (1 + a1 + a2)
  }
  return gain ** stage.passes
}
