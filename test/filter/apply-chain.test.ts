import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { applyChain } from '../../src/filter/apply-chain.ts'
import { designChain } from '../../src/filter/chain.ts'
import { applyEpochs } from '../../src/filter/epoch-rules.ts'
import { runContinuous } from '../../src/filter/stand-alone.ts'
import type { StageSpec, WindowSpec } from '../../src/filter/stage.ts'
import { chain, signal } from './arbitrary-chain.ts'
import { expectClose, largest } from './expect-close.ts'

const butterworth = (
  pass: 'low' | 'high',
  order: number,
  cutoffHz: number,
  direction: 'forward' | 'both' = 'both',
): StageSpec => ({ design: 'butterworth', pass, order, cutoffsHz: [cutoffHz], meaning: 'design', direction })

describe('applyChain', () => {
  test('under the continuous extent lets a waveform stand alone, as long as it is', () => {
    fc.assert(
      fc.property(chain, signal(1, 300), (some, x) => {
        expect(applyChain(some, x, 'continuous')).toEqual(runContinuous(some.stages, x, 0, x.length))
      }),
      { numRuns: 30 },
    )
  })

  test('under the epochs extent runs the amplifier first, alone, and cuts it', () => {
    const amplifier: StageSpec = { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.5 }
    const x = Float64Array.from({ length: 400 }, (_, i) => Math.sin(i / 20) + 2)
    const whole = designChain([amplifier, butterworth('low', 4, 30)], 500)
    const cut = runContinuous(whole.stages.slice(0, 1), x, 0, 400)
    expect(applyChain(whole, x, 'epochs')).toEqual(applyEpochs(whole.stages.slice(1), cut))
  })

  test('leaves out what is switched off and what is in the data', () => {
    const x = Float64Array.from({ length: 400 }, (_, i) => Math.sin(i / 20) + 2)
    const some = designChain(
      [
        { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.5, inData: true },
        { ...butterworth('high', 2, 1), enabled: false },
        butterworth('low', 4, 30),
      ],
      500,
    )
    const alone = designChain([butterworth('low', 4, 30)], 500)
    for (const extent of ['continuous', 'epochs'] as const) {
      expect(applyChain(some, x, extent)).toEqual(applyChain(alone, x, extent))
    }
  })

  test('of no stage copies, also nothing', () => {
    const empty = designChain([], 500)
    for (const extent of ['continuous', 'epochs'] as const) {
      const x = Float64Array.of(1, -2, 3)
      expect(applyChain(empty, x, extent)).toEqual(x)
      expect(applyChain(empty, x, extent)).not.toBe(x)
      expect(applyChain(empty, new Float64Array(0), extent).length).toBe(0)
    }
  })

  test('refuses a missing value by its index and an unknown extent by its name', () => {
    const some = designChain([butterworth('low', 2, 30)], 500)
    const x = new Float64Array(100)
    x[12] = -Infinity
    for (const extent of ['continuous', 'epochs'] as const) {
      expect(() => applyChain(some, x, extent)).toThrow('x[12] must be a finite number, was -Infinity')
    }
    expect(() => applyChain(some, new Float64Array(100), 'whole' as 'epochs')).toThrow(RangeError)
  })

  test('a recording of 300 000 samples keeps its middle whichever extent is chosen', () => {
    const some = designChain([butterworth('high', 4, 0.5), butterworth('low', 4, 30)], 500)
    const x = Float64Array.from({ length: 300_000 }, (_, i) => Math.sin(i / 9) * 10 + Math.sin(i / 3001) * 50)
    const alone = applyChain(some, x, 'continuous')
    const cut = applyChain(some, x, 'epochs')
    expectClose(alone.slice(100_000, 200_000), cut.slice(100_000, 200_000), 1e-9 * largest(x))
  })
})

/** Samples at 500 Hz from 0 on; time in ms is twice the index. */
const at500 = (shape: (ms: number) => number) => Float64Array.from({ length: 1200 }, (_, i) => shape(2 * i))

/** 49 taps at 500 Hz, cutoff 30 Hz. */
function sinc49(window: WindowSpec['name'], transitionHz: number): StageSpec {
  return {
    design: 'windowed-sinc',
    pass: 'low',
    cutoffsHz: [30],
    meaning: 'design',
    transitionHz,
    window: { name: window } as WindowSpec,
    delay: 'compensated',
  }
}

const sincs = [
  ['hamming', (3.3 * 500) / 48.5, 148, 146, 6.19],
  ['blackman', (5.5 * 500) / 48.5, 146, 146, 4.43],
  ['rectangular', (0.9 * 500) / 48.5, 114, 108, 5.37],
] as const

describe('an onset between 150 and 180 ms through 49 taps at 30 Hz', () => {
  // Source: parameters as in Widmann & Schröger 2012, Front Psychol 3:233 (seen); onset times derived, checked with SciPy; D4
  const ramp = at500((ms) => Math.min(1, Math.max(0, (ms - 150) / 30)))
  const onsetMs = (y: Float64Array) => 2 * y.findIndex((value) => value >= 0.01)

  test('begins at 152 ms unfiltered', () => {
    expect(onsetMs(ramp)).toBe(152)
  })

  test.each(sincs)('%s: one pass and two make it begin earlier', (window, transitionHz, once, twice) => {
    const spec = sinc49(window, transitionHz)
    const one = designChain([spec], 500)
    expect(one.stages[0].taps?.length).toBe(49)
    expect(Math.abs(onsetMs(applyChain(one, ramp, 'continuous')) - once)).toBeLessThanOrEqual(2)
    const two = designChain([spec, spec], 500)
    expect(Math.abs(onsetMs(applyChain(two, ramp, 'continuous')) - twice)).toBeLessThanOrEqual(2)
  })
})

describe('a step at 150 ms through 49 taps at 30 Hz', () => {
  // Source: derived, checked; D6
  const step = at500((ms) => (ms >= 150 ? 1 : 0))

  test.each(sincs)(
    '%s: undershoots before by as much as it overshoots after',
    (window, transitionHz, _1, _2, percent) => {
      const y = applyChain(designChain([sinc49(window, transitionHz)], 500), step, 'continuous').subarray(0, 600)
      expect(Math.abs(-Math.min(...y) * 100 - percent)).toBeLessThan(0.006)
      expect(Math.abs((Math.max(...y) - 1) * 100 - percent)).toBeLessThan(0.006)
      // 24 samples before the step are all that it can reach
      const first = y.findIndex((value) => value !== 0)
      expect(first).toBeGreaterThanOrEqual(51)
      // the Blackman window's own last sample is 0
      expect(first).toBeLessThanOrEqual(52)
    },
  )
})

describe('a late positivity of 10 µV at 400 ms, SD 80 ms, 1000 Hz', () => {
  // on −2000 … 9999 ms
  const start = -2000
  const pulse = Float64Array.from({ length: 12_000 }, (_, i) => 10 * Math.exp(-(((start + i - 400) / 80) ** 2) / 2))
  const filtered = (specs: StageSpec[]) => applyChain(designChain(specs, 1000), pulse, 'continuous')
  const peak = (y: Float64Array) => y.indexOf(Math.max(...y)) + start
  const lowestAfter = (y: Float64Array, from: number) => y.indexOf(Math.min(...y.subarray(from - start)), from - start)

  test.each([
    [0.1, 4.857, 366, -3.584, 557],
    [0.3, 7.461, 384, -3.089, 611],
    [1, 9.085, 394, -1.501, 669],
    [3, 9.676, 398, -0.598, 716],
    [10, 9.901, 399, -0.193, 763],
  ])('an amplifier of %f s: smaller, earlier, and a later negativity', (seconds, size, latency, lowest, lowestMs) => {
    // Source: model for Duncan-Johnson & Donchin 1979 (direction only, from memory); numbers derived, checked; D14
    const y = filtered([{ design: 'amplifier', pass: 'high', order: 1, cutoffHz: 1 / (2 * Math.PI * seconds) }])
    expect(Math.abs(Math.max(...y) - size)).toBeLessThan(0.001)
    expect(Math.abs(peak(y) - latency)).toBeLessThanOrEqual(1)
    const at = lowestAfter(y, 400)
    expect(Math.abs(y[at] - lowest)).toBeLessThan(0.001)
    expect(Math.abs(at + start - lowestMs)).toBeLessThanOrEqual(1)
  })

  test.each([
    [0.1, 9.555, -0.435, 56, -0.434],
    [0.3, 8.677, -1.165, 118, -1.147],
    [0.5, 7.831, -1.67, 149, -1.535],
    [1, 5.93, -2.16, 193, -1.323],
    [2, 3.211, -1.69, 235, -0.01],
  ])('a zero-phase high-pass at %f Hz makes a negativity before it', (cutoffHz, size, lowest, lowestMs, at80) => {
    // Source: mechanism of Acunzo, MacKenzie & van Rossum 2012, J Neurosci Methods 209:212–218; numbers derived, checked; D15
    const y = filtered([butterworth('high', 2, cutoffHz)])
    expect(Math.abs(Math.max(...y) - size)).toBeLessThan(0.001)
    expect(peak(y)).toBe(400)
    const before = y.subarray(0, 400 - start)
    const at = before.indexOf(Math.min(...before))
    expect(Math.abs(y[at] - lowest)).toBeLessThan(0.001)
    expect(Math.abs(at + start - lowestMs)).toBeLessThanOrEqual(1)
    expect(Math.abs(y[80 - start] - at80)).toBeLessThan(0.001)
  })

  test.each([
    [0.1, 9.157, 395, -1.54, 686],
    [0.3, 7.727, 385, -3.593, 628],
    [0.5, 6.572, 377, -4.737, 598],
    [1, 4.522, 360, -5.513, 553],
    [2, 2.391, 337, -4.309, 505],
  ])('a causal high-pass at %f Hz makes one after it, and none before', (cutoffHz, size, latency, lowest, lowestMs) => {
    // Source: derived, checked; D16
    const y = filtered([butterworth('high', 2, cutoffHz, 'forward')])
    expect(Math.abs(Math.max(...y) - size)).toBeLessThan(0.001)
    expect(Math.abs(peak(y) - latency)).toBeLessThanOrEqual(1)
    const at = lowestAfter(y, 400)
    expect(Math.abs(y[at] - lowest)).toBeLessThan(0.001)
    expect(Math.abs(at + start - lowestMs)).toBeLessThanOrEqual(1)
    // before the pulse has begun (7 SD) there is nothing
    expect(Math.min(...y.subarray(0, 100 - start))).toBeGreaterThan(-0.001)
  })

  test.each([
    [0.1, -0.4455, -0.435],
    [0.05, -0.2227, -0.221],
  ])('beside it the undershoot at %f Hz stays below the closed form for low cutoffs', (cutoffHz, bound, simulated) => {
    // Source: impulse response of 1 − (two-pass gain) at 0, −S·2·fc·(π/2n)/sin(π/2n), S the pulse's area; derived; D17.
    // Simulated values from SciPy's sosfilt forward and backward with 200 s of zeros on both sides (−0.43471, −0.22105)
    const area = 10 * 0.08 * Math.sqrt(2 * Math.PI)
    const closed = (-area * 2 * cutoffHz * (Math.PI / 4)) / Math.sin(Math.PI / 4)
    expect(Math.abs(closed - bound)).toBeLessThan(1e-4)
    const y = filtered([butterworth('high', 2, cutoffHz)])
    const lowest = Math.min(...y)
    expect(lowest).toBeGreaterThan(closed)
    expect(Math.abs(lowest - simulated)).toBeLessThan(0.001)
  })
})

describe('a low-pass takes from a pulse what the product of cutoff and SD says', () => {
  // Source: derived, checked at these cutoffs and widths, tolerance 0.001; D18
  const left = (both: boolean) => (both ? [0.4885, 0.7669, 0.9511, 0.9955] : [0.5965, 0.8489, 0.9732, 0.9977])
  for (const cutoffHz of [5, 10, 20, 40]) {
    for (const sdMs of [10, 20, 40]) {
      const index = Math.round(Math.log2((cutoffHz * sdMs) / 100))
      if (index < 0 || index > 3) continue
      test(`${cutoffHz} Hz, ${sdMs} ms`, () => {
        const pulse = Float64Array.from({ length: 3000 }, (_, i) => Math.exp(-(((i - 1000) / sdMs) ** 2) / 2))
        for (const direction of ['both', 'forward'] as const) {
          const y = applyChain(designChain([butterworth('low', 2, cutoffHz, direction)], 1000), pulse, 'continuous')
          const size = Math.max(...y)
          expect(Math.abs(size - left(direction === 'both')[index])).toBeLessThan(0.001)
          if (direction === 'both') expect(y.indexOf(size)).toBe(1000)
          else expect(y.indexOf(size)).toBeGreaterThan(1000)
        }
      })
    }
  }

  test.each([
    [20, 12, 11.24],
    [30, 8, 7.48],
  ])(
    'one pass at %i Hz delays a slow pulse by %i ms, near its delay at 0 Hz of %f ms',
    (cutoffHz, sampled, delayMs) => {
      const pulse = Float64Array.from({ length: 4000 }, (_, i) => Math.exp(-(((i - 1000) / 40) ** 2) / 2))
      const y = applyChain(designChain([butterworth('low', 2, cutoffHz, 'forward')], 1000), pulse, 'continuous')
      const delay = y.indexOf(Math.max(...y)) - 1000
      expect(Math.abs(delay - sampled)).toBeLessThanOrEqual(1)
      expect(Math.abs(delay - delayMs)).toBeLessThanOrEqual(1)
    },
  )
})
