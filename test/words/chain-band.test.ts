import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { designChain, type StageSpec, stageCutoffPoints } from '../../src/filter/index.ts'
import { gainAt } from '../../src/filter/stage-response.ts'
import { bounds, chainBand, polesAtEnd } from '../../src/words/chain-band.ts'
import { writeUps } from './random-write-ups.ts'

const stagesOf = (specs: readonly StageSpec[], samplingRateHz = 1000) => designChain(specs, samplingRateHz).stages
const bandOf = (...specs: StageSpec[]) => chainBand(stagesOf(specs), 1000)

const butterworth = (pass: 'low' | 'high' | 'band' | 'stop', ...cutoffsHz: number[]): StageSpec => ({
  ...{ design: 'butterworth', pass, order: 2, cutoffsHz, meaning: 'half-power', direction: 'forward' },
})
const notch: StageSpec = { design: 'notch', frequencyHz: 50, bandwidthHz: 2, harmonics: 2, direction: 'both' }

describe('chainBand', () => {
  test('of no stage is everything', () => {
    expect(bandOf()).toEqual({ lowHz: null, highHz: null, lowHalfAmplitudeHz: null, passes: true })
  })

  test('ends at the stated half-power points of a high-pass, a low-pass and a band-pass', () => {
    expect(bandOf(butterworth('high', 1)).lowHz).toBeCloseTo(1, 9)
    expect(bandOf(butterworth('high', 1)).highHz).toBeNull()
    expect(bandOf(butterworth('low', 100)).highHz).toBeCloseTo(100, 7)
    expect(bandOf(butterworth('low', 100)).lowHz).toBeNull()
    const both = bandOf(butterworth('band', 0.5, 70))
    expect(both.lowHz).toBeCloseTo(0.5, 9)
    expect(both.highHz).toBeCloseTo(70, 7)
  })

  test('has the half-amplitude point of its lower end: 1/√3 of the half-power point for an amplifier of order 1', () => {
    // |H| = r/√(1 + r²) with r = f/fc (A5): 1/2 at r = 1/√3
    const band = bandOf({ design: 'amplifier', pass: 'high', order: 1, cutoffHz: 1 })
    expect(band.lowHz).toBeCloseTo(1, 9)
    expect(band.lowHalfAmplitudeHz).toBeCloseTo(1 / Math.sqrt(3), 5)
    expect(bandOf(butterworth('low', 30)).lowHalfAmplitudeHz).toBeNull()
  })

  test('counts stages in the data, and is not ended by a notch or a band-stop', () => {
    expect(bandOf({ ...butterworth('high', 1), inData: true }).lowHz).toBeCloseTo(1, 9)
    expect(bandOf(notch)).toMatchObject({ lowHz: null, highHz: null, passes: true })
    const dipped = bandOf(butterworth('high', 1), notch, butterworth('stop', 10, 20), butterworth('low', 200))
    expect(dipped.lowHz).toBeCloseTo(1, 1)
    expect(dipped.highHz).toBeCloseTo(200, 0)
  })

  test('says so where the gain never reaches half power', () => {
    expect(bandOf(butterworth('high', 100), butterworth('low', 10)).passes).toBe(false)
  })

  test('ends where the measured gain of all stages together crosses half power for the first and the last time', () => {
    fc.assert(
      fc.property(writeUps, ({ chain, samplingRateHz }) => {
        const specs = chain.map((spec) => ({ ...spec, inData: false }))
        const { stages } = designChain(specs, samplingRateHz)
        const { lowHz, highHz, passes } = chainBand(stages, samplingRateHz)
        const gain = (hz: number) => gainAt(stages, hz)
        // 600 frequencies, evenly on a log scale, and the two ends
        const half = samplingRateHz / 2
        const grid = [0, half, ...Array.from({ length: 600 }, (_, i) => half * 10 ** (-6 + (i / 600) * 5.99))]
        for (const hz of grid) {
          const outside =
            !passes || (lowHz !== null && hz < lowHz * 0.9999) || (highHz !== null && hz > highHz * 1.0001)
          if (outside) expect(gain(hz), `${hz} Hz`).toBeLessThan(Math.SQRT1_2 * (1 + 1e-9))
        }
        for (const hz of [lowHz, highHz]) if (hz !== null) expect(gain(hz)).toBeCloseTo(Math.SQRT1_2, 6)
        if (passes && lowHz === null) expect(gain(0)).toBeGreaterThanOrEqual(Math.SQRT1_2)
        if (passes && highHz === null) expect(gain(half)).toBeGreaterThanOrEqual(Math.SQRT1_2)
      }),
      { numRuns: 150 },
    )
  })
})

describe('polesAtEnd', () => {
  test('gives 6.02 dB per octave each as the roll-off of a stage has it', () => {
    const both: StageSpec = { ...butterworth('high', 1), direction: 'both' } as StageSpec
    for (const spec of [
      both,
      butterworth('high', 1),
      { design: 'amplifier', pass: 'high', order: 3, cutoffHz: 1 } as const,
    ]) {
      const [stage] = stagesOf([spec])
      const { rollOff } = stageCutoffPoints(stage)
      expect(rollOff.kind).toBe('dB/octave')
      if (rollOff.kind === 'dB/octave') expect(polesAtEnd([stage], 'low') * 6.0206).toBeCloseTo(rollOff.value, 3)
      expect(polesAtEnd([stage], 'high')).toBe(0)
    }
  })

  test('counts a band-pass at both ends, and neither a band-stop, a notch nor a finite response', () => {
    const stages = stagesOf([butterworth('band', 1, 30), butterworth('stop', 48, 52), notch])
    expect(polesAtEnd(stages, 'low')).toBe(2)
    expect(polesAtEnd(stages, 'high')).toBe(2)
    const average = stagesOf([{ design: 'moving-average', durationMs: 20, delay: 'causal' }])
    expect(polesAtEnd(average, 'high')).toBe(0)
    expect(bounds(average[0], 'high')).toBe(true)
    expect(bounds(average[0], 'low')).toBe(false)
  })
})
