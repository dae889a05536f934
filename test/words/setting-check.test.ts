import { describe, expect, test } from 'vitest'
import { designChain, type StageSpec } from '../../src/filter/index.ts'
import { chainBand } from '../../src/words/chain-band.ts'
import {
  highCorner,
  type Looked,
  lowCorner,
  lowCornerOfUnsaidGain,
  noNotch,
  orderAtMost,
  slopeAtMost,
} from '../../src/words/setting-check.ts'

function looked(specs: readonly StageSpec[], unknown = { low: false, high: false }): Looked {
  const { stages } = designChain(specs, 1000)
  return {
    all: stages,
    amplifiers: stages.filter(({ spec }) => spec.design === 'amplifier'),
    band: chainBand(stages, 1000),
    halfRateHz: 500,
    unknown,
  }
}
const UNKNOWN = { low: true, high: true }
const band: StageSpec = {
  ...{
    design: 'butterworth',
    pass: 'band',
    order: 2,
    cutoffsHz: [0.5, 70],
    meaning: 'half-power',
    direction: 'forward',
  },
}

describe('a requirement', () => {
  test('on a corner is kept between its limits, both included', () => {
    expect(lowCorner(looked([band]), 0.5, 1).verdict).toBe('kept')
    expect(lowCorner(looked([band]), 0.1, 0.5).verdict).toBe('kept')
    expect(highCorner(looked([band]), 70, 100).verdict).toBe('kept')
    expect(highCorner(looked([band]), 30, 70).verdict).toBe('kept')
  })

  test('on a corner that is missed says on which side and by how much, in numbers too', () => {
    expect(lowCorner(looked([band]), 0, 0.1).byHowMuch?.value).toBeCloseTo(0.4, 9)
    expect(lowCorner(looked([band]), 1, 2).byHowMuch?.words).toBe('0.5 Hz below 1 Hz')
    expect(highCorner(looked([band]), 100, 200).byHowMuch?.value).toBeCloseTo(30, 6)
    expect(highCorner(looked([band]), 10, 30).byHowMuch?.words).toBe('40 Hz above 30 Hz')
  })

  test('is not decided where an unknown amplifier could still change it, and is where it could not', () => {
    // a further filter can only raise the lower corner and lower the upper one
    expect(lowCorner(looked([band], UNKNOWN), 0, 0.1).verdict).toBe('not kept')
    expect(lowCorner(looked([band], UNKNOWN), 1, 2).verdict).toBe('cannot be told')
    expect(lowCorner(looked([band], UNKNOWN), 0, 1).verdict).toBe('cannot be told')
    expect(highCorner(looked([band], UNKNOWN), 100, 200).verdict).toBe('not kept')
    expect(highCorner(looked([band], UNKNOWN), 10, 30).verdict).toBe('cannot be told')
    expect(highCorner(looked([band], UNKNOWN), 10, 100).verdict).toBe('cannot be told')
    expect(slopeAtMost(looked([band], UNKNOWN), 'low', 12).verdict).toBe('cannot be told')
    expect(orderAtMost(looked([band], UNKNOWN), 'low', 1).verdict).toBe('not kept')
    expect(orderAtMost(looked([band], UNKNOWN), 'low', 2).verdict).toBe('cannot be told')
    expect(noNotch(looked([band], UNKNOWN)).verdict).toBe('cannot be told')
  })

  test('on a cutoff of unsaid gain is decided only where half power and half amplitude agree', () => {
    const twice: StageSpec = { ...band, pass: 'high', cutoffsHz: [0.1], meaning: 'half-amplitude', direction: 'both' }
    const verdict = (toHz: number, unknown?: Looked['unknown']) =>
      lowCornerOfUnsaidGain(looked([twice], unknown), toHz).verdict
    expect(verdict(0.13)).toBe('kept')
    expect(verdict(0.1)).toBe('cannot be told')
    expect(verdict(0.09)).toBe('not kept')
    expect(verdict(0.09, UNKNOWN)).toBe('not kept')
    expect(verdict(0.13, UNKNOWN)).toBe('cannot be told')
    expect(lowCornerOfUnsaidGain(looked([]), 0.1)).toMatchObject({ verdict: 'kept', found: 'no high-pass' })
  })
})
