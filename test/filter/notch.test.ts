import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { notchDesignBandwidthHz } from '../../src/filter/notch.ts'
import { designStage, type NotchSpec } from '../../src/filter/stage.ts'
import { gainOf, rowsOf } from './measure.ts'
import { notches } from './random-specs.ts'

const mains: NotchSpec = { design: 'notch', frequencyHz: 50, bandwidthHz: 2, harmonics: 0, direction: 'forward' }

test('a notch has the coefficients of iirnotch', () => {
  // Source: SciPy 1.17, iirnotch(50, 25, fs=500) (computed)
  const [row] = rowsOf(designStage(mains, 500).sections)
  const wanted = [
    0.9875889380903247, -1.5979524687435611, 0.9875889380903247, 1, -1.5979524687435611, 0.9751778761806493,
  ]
  row.forEach((value, i) => expect(Math.abs(value - wanted[i])).toBeLessThan(4e-15))
})

describe('any notch', () => {
  test('is 0 at its frequency and harmonics, and 1 at 0 Hz', () => {
    fc.assert(
      fc.property(notches, ({ spec, samplingRateHz }) => {
        const stage = designStage(spec, samplingRateHz)
        for (let k = 1; k <= spec.harmonics + 1; k++) expect(gainOf(stage, k * spec.frequencyHz)).toBeLessThan(1e-10)
        expect(gainOf(stage, 0)).toBeCloseTo(1, 12)
        expect(rowsOf(stage.sections).length).toBe(spec.harmonics + 1)
        for (const [, , , , , a2] of rowsOf(stage.sections)) expect(Math.abs(a2)).toBeLessThan(1)
      }),
      { seed: 50 },
    )
  })

  test('without harmonics has the stated −3 dB width as applied, in both directions', () => {
    fc.assert(
      fc.property(notches, ({ spec, samplingRateHz }) => {
        const stage = designStage({ ...spec, harmonics: 0 }, samplingRateHz)
        // edges: product of their tangents Ω0², difference of their angles the width
        const g = Math.tan((Math.PI * spec.frequencyHz) / samplingRateHz)
        const b = Math.tan((Math.PI * spec.bandwidthHz) / samplingRateHz) * (1 + g * g)
        const upper = b / 2 + Math.hypot(g, b / 2)
        const edges = [(g * g) / upper, upper].map((t) => (samplingRateHz / Math.PI) * Math.atan(t))
        expect((edges[1] - edges[0]) / spec.bandwidthHz).toBeCloseTo(1, 9)
        for (const edge of edges) expect(gainOf(stage, edge)).toBeCloseTo(Math.SQRT1_2, 9)
      }),
      { seed: 51 },
    )
  })
})

test('a notch that runs both ways is designed narrower, else its −3 dB width would be the −6 dB one', () => {
  expect(notchDesignBandwidthHz(mains, 500)).toBe(2)
  const both = notchDesignBandwidthHz({ ...mains, direction: 'both' }, 500)
  expect(both / 2).toBeCloseTo(Math.sqrt(Math.SQRT2 - 1), 3)
  const uncorrected = gainOf(designStage({ ...mains, direction: 'forward' }, 500), 51) ** 2
  expect(uncorrected).toBeLessThan(0.52)
})

test.each<[Partial<NotchSpec>, string]>([
  [{ frequencyHz: 0 }, 'frequencyHz must lie between 0 and 250 (half the sampling rate), was 0'],
  [{ bandwidthHz: -1 }, 'bandwidthHz must lie between 0 and 250 (half the sampling rate), was -1'],
  [{ harmonics: 4 }, 'harmonics must stay below 250 (half the sampling rate): at most 3 of 50 Hz, was 4'],
  [{ harmonics: 1.5 }, 'harmonics must be a whole number from 0 to 100, was 1.5'],
  [{ harmonics: 1, bandwidthHz: 60 }, 'bandwidthHz must be smaller than the distance of the harmonics (50), was 60'],
])('a notch with %o is refused', (change, message) => {
  expect(() => designStage({ ...mains, ...change }, 500)).toThrow(message)
})
