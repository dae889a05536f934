import { describe, expect, test } from 'vitest'
import { designChain } from '../../src/filter/chain.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import {
  envelopeCourse,
  kernelRange,
  kernelWords,
  lagText,
  linearWidth,
  valueDomain,
} from '../../src/page/kernel-shape.ts'
import type { Evaluation, ReachMs } from '../../src/state/evaluation.ts'

const lowPass: StageSpec = {
  design: 'butterworth',
  pass: 'low',
  order: 4,
  cutoffsHz: [30],
  meaning: 'half-amplitude',
  direction: 'both',
}
const amplifier: StageSpec = { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.016 }

/** An evaluation as far as the kernel figure reads it: samples of 2 ms. */
function evaluation(chain: StageSpec[], reach: ReachMs, from: number, samples: number): Evaluation {
  const nothing = new Float64Array(samples)
  const part: Pick<Evaluation, 'chain' | 'reach' | 'amplifierReach' | 'kernel' | 'pins'> = {
    chain: designChain(chain, 500),
    reach,
    amplifierReach: chain.includes(amplifier) ? { beforeMs: 0, afterMs: 46_000 } : null,
    pins: [],
    kernel: { stepMs: 2, fromIndex: from, impulse: nothing, step: nothing },
  }
  return part as Evaluation
}

describe('kernelRange', () => {
  test('the reach is drawn with a little room, where the curve is long enough', () => {
    const range = kernelRange(evaluation([lowPass], { beforeMs: 100, afterMs: 100 }, -200, 401))
    expect(range.fromMs).toBeCloseTo(-116, 9)
    expect(range.toMs).toBeCloseTo(116, 9)
    expect(range.whole).toBe(true)
  })

  test('a curve shorter than the reach is drawn as far as it goes, and that is said', () => {
    const data = evaluation([lowPass], { beforeMs: 100, afterMs: 300 }, -100, 150)
    const range = kernelRange(data)
    expect(range).toMatchObject({ toMs: 98, whole: false })
    expect(kernelWords(data, range)).toEqual({
      reach: 'reach −100 to 300 ms',
      more: ['99 % of the absolute area', 'drawn −132 to 98 ms'],
    })
  })

  test('a causal kernel begins at zero, with some room before it', () => {
    const data = evaluation([{ ...lowPass, direction: 'forward' }], { beforeMs: 0, afterMs: 200 }, 0, 200)
    const range = kernelRange(data)
    expect(range.fromMs).toBeLessThan(0)
    expect(range.whole).toBe(true)
    expect(kernelWords(data, range)?.reach).toBe('reach 0 to 200 ms')
  })

  test('the amplifier’s tail is left aside where other stages run, and is the reach where none does', () => {
    const both = evaluation([amplifier, lowPass], { beforeMs: 100, afterMs: 100 }, -200, 401)
    expect(kernelWords(both, kernelRange(both))).toEqual({
      reach: 'reach −100 to 100 ms',
      more: ['99 %, amplifier aside'],
    })
    const alone = evaluation([amplifier], { beforeMs: 0, afterMs: 0 }, 0, 401)
    expect(kernelWords(alone, kernelRange(alone))?.reach).toBe('reach 0 to 46000 ms')
  })

  test('without a stage that runs here there is no reach to speak of', () => {
    for (const chain of [[], [{ ...lowPass, inData: true }], [{ ...lowPass, enabled: false }]]) {
      const data = evaluation(chain, { beforeMs: 0, afterMs: 0 }, -10, 21)
      expect(kernelRange(data).reach).toBeNull()
      expect(kernelWords(data, kernelRange(data))).toBeNull()
    }
  })
})

describe('linearWidth', () => {
  test('an impulse beside long, low lobes leaves the lobes visible', () => {
    const values = new Float64Array(2001).fill(-0.25)
    values[1000] = 500
    expect(linearWidth(values)).toBeGreaterThan(0.15)
    expect(linearWidth(values)).toBeLessThan(0.3)
  })

  test('a smooth hill is hardly compressed', () => {
    const values = Float64Array.from({ length: 201 }, (_, i) => 40 * Math.exp(-(((i - 100) / 25) ** 2)))
    expect(linearWidth(values)).toBeGreaterThan(40 / 4)
    expect(linearWidth(values)).toBeLessThanOrEqual(40 / 3)
  })

  test('it grows with the curve, whatever its sign', () => {
    const values = Float64Array.from({ length: 201 }, (_, i) => Math.sin(i) * Math.exp(-i / 30))
    expect(linearWidth(values.map((v) => -8 * v))).toBeCloseTo(8 * linearWidth(values), 9)
  })

  test('nothing at all has a width, too', () => {
    expect(linearWidth(new Float64Array(10))).toBe(1)
    expect(linearWidth(new Float64Array(0))).toBe(1)
  })
})

describe('valueDomain', () => {
  test('zero and every drawn value lie within, with room', () => {
    for (const width of [null, 0.5]) {
      const [low, high] = valueDomain([99, -2, 5, 99], 1, 3, width)
      expect(low).toBeLessThan(-2)
      expect(high).toBeGreaterThan(5)
      expect(high).toBeLessThan(99)
    }
    expect(valueDomain([0, 0], 0, 2, null)).toEqual([-1, 1])
  })
})

test('lags are whole milliseconds, and tenths where they are short', () => {
  expect([844, -844.4, 4.5, 4, 0].map(lagText)).toEqual(['844', '−844', '4.5', '4', '0'])
})

test('the course of an oscillation faster than the columns leaves no height between its peaks free', () => {
  const values = Float64Array.from({ length: 4000 }, (_, i) => (i % 2 === 0 ? 1 : -1))
  const x = { fromPixel: (pixel: number) => pixel * 10 }
  const y = { toPixel: (value: number) => 50 - 40 * value }
  const course = envelopeCourse({ fromIndex: 0, stepMs: 1 }, values, x, y, 0, 300)
  for (let i = 0; i < 300; i++) expect([course[i], course[i + 1]].sort((a, b) => a - b)).toEqual([10, 90])
})
