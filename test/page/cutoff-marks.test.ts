import { describe, expect, test } from 'vitest'
import { designStage, type StageSpec } from '../../src/filter/stage.ts'
import { cutoffMarks, withCutoff } from '../../src/page/cutoff-marks.ts'

const highPass: StageSpec = {
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [1],
  meaning: 'half-amplitude',
  direction: 'both',
}
const sinc: StageSpec = {
  design: 'windowed-sinc',
  pass: 'low',
  cutoffsHz: [30],
  meaning: 'design',
  transitionHz: 7.5,
  window: { name: 'hamming' },
  delay: 'compensated',
}
const band: StageSpec = { ...highPass, pass: 'band', cutoffsHz: [1, 20], meaning: 'half-power' }
const notch: StageSpec = { design: 'notch', frequencyHz: 50, bandwidthHz: 2, harmonics: 2, direction: 'both' }
const amplifier: StageSpec = { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.016 }
const average: StageSpec = { design: 'moving-average', durationMs: 20, delay: 'compensated' }
const axis = { fromHz: 0.01, toHz: 250 }
const marksOf = (...chain: StageSpec[]) => cutoffMarks(chain, 500, axis)

describe('cutoffMarks', () => {
  test('a cutoff is named by its stage and by what it means', () => {
    expect(marksOf(amplifier, highPass, sinc, notch).map(({ label }) => label)).toEqual([
      'amplifier, half-power cutoff',
      'high-pass, half-amplitude cutoff',
      'low-pass, design cutoff',
      'notch, frequency',
    ])
    expect(marksOf(band).map(({ label }) => label)).toEqual([
      'band-pass, lower half-power cutoff',
      'band-pass, upper half-power cutoff',
    ])
  })

  test('stages of one name are told apart by their number', () => {
    expect(marksOf(highPass, highPass).map(({ label }) => label)).toEqual([
      'high-pass (stage 1), half-amplitude cutoff',
      'high-pass (stage 2), half-amplitude cutoff',
    ])
  })

  test('a stage that is off, in the data or without a cutoff has no handle', () => {
    expect(marksOf({ ...highPass, enabled: false }, { ...highPass, inData: true }, average)).toEqual([])
  })

  test('the gain at a cutoff follows from its meaning; a design cutoff does not say it', () => {
    expect(marksOf(highPass, band, sinc, notch).map(({ gain }) => gain)).toEqual([
      0.5,
      Math.SQRT1_2,
      Math.SQRT1_2,
      null,
      0,
    ])
  })

  test('wherever a handle may go, the stage can be designed', () => {
    for (const spec of [highPass, { ...highPass, pass: 'low' as const }, sinc, band, notch, amplifier]) {
      for (const { edge, minHz, maxHz, hz } of marksOf(spec)) {
        expect(minHz).toBeLessThan(hz)
        expect(maxHz).toBeGreaterThan(hz)
        for (const wanted of [minHz, maxHz]) {
          expect(() => designStage(withCutoff(spec, edge, wanted), 500), `${spec.design} at ${wanted}`).not.toThrow()
        }
      }
    }
  })

  test('the cutoffs of a band cannot pass each other', () => {
    const [lower, upper] = marksOf(band)
    expect(lower.maxHz).toBeLessThan(20)
    expect(upper.minHz).toBeGreaterThan(1)
  })

  test('a cutoff beyond the limits keeps its place', () => {
    expect(cutoffMarks([amplifier], 500, { fromHz: 0.1, toHz: 250 })[0].minHz).toBe(0.016)
  })
})

describe('withCutoff', () => {
  test('one cutoff changes and nothing else, and the old stage stays as it was', () => {
    expect(withCutoff(band, 1, 25)).toEqual({ ...band, cutoffsHz: [1, 25] })
    expect(withCutoff(notch, 0, 60)).toEqual({ ...notch, frequencyHz: 60 })
    expect(withCutoff(amplifier, 0, 0.1)).toEqual({ ...amplifier, cutoffHz: 0.1 })
    expect(band.design === 'butterworth' && band.cutoffsHz).toEqual([1, 20])
  })
})
