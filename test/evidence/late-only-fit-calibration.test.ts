import { readFileSync } from 'node:fs'
import { describe, expect, test } from 'vitest'
import { actingStages, actOn } from '../../src/evidence/acting-stages.ts'
import { CALIBRATION, type CalibrationRow, fitLateOnly } from '../../src/evidence/index.ts'
import { raisedCosine } from '../../src/evidence/late-only-model.ts'
import { calibrate, drawsOf, modelOf } from '../calibration/calibrate.ts'
import { EARLY, SAMPLES, SETTINGS } from '../calibration/settings.ts'

/** Draws of a setting in this run: 400 are a calibration (npm run calibrate), some are enough to see that nothing has broken. */
const DRAWS = Number(process.env.SIDELOBE_CALIBRATION_DRAWS ?? 40)
const setting = (id: string) => SETTINGS.find((one) => one.id === id)!

const { rows } = JSON.parse(readFileSync(new URL('../calibration/calibration.json', import.meta.url), 'utf8')) as {
  rows: CalibrationRow[]
}

/** Largest count that a rate passes at a chance of 0.1 %: Poisson-like scatter about the allowed mean. */
const most = (rate: number, draws: number) => rate * draws + 3.3 * Math.sqrt(rate * (1 - rate) * draws)

describe('committed calibration', () => {
  test('it has every setting that has been run with its number of draws', () => {
    expect(rows.length).toBeGreaterThan(0)
    for (const row of rows) {
      expect(SETTINGS.map(({ id }) => id)).toContain(row.id)
      expect(row.draws).toBeGreaterThanOrEqual(100)
      expect(Object.values(row.verdicts).reduce((sum, count) => sum + count)).toBe(row.draws)
    }
  })

  test('the page shows the same rows', () => {
    expect(CALIBRATION).toEqual(rows)
  })

  test('as assumed, false alarms are at most 7 %, 4 standard errors are found in at least 90 %, the interval covers in 92 to 99.5 %', () => {
    for (const row of rows.filter(({ kind }) => kind === 'as assumed')) {
      expect(row.falseAlarms, row.title).toBeLessThanOrEqual(0.07)
      expect(row.found, row.title).toBeGreaterThanOrEqual(0.9)
      expect(row.covered, row.title).toBeGreaterThanOrEqual(0.92)
      expect(row.covered, row.title).toBeLessThanOrEqual(0.995)
    }
  })

  test('in every misspecified setting false alarms are at most 13 %', () => {
    for (const row of rows.filter(({ kind }) => kind === 'misspecified')) {
      expect(row.falseAlarms, row.title).toBeLessThanOrEqual(0.13)
    }
  })

  test('a causal chain never gets "it can"', () => {
    for (const row of rows.filter(({ kind }) => kind === 'causal')) expect(row.verdicts['it can'], row.title).toBe(0)
  })
})

describe(`${DRAWS} seeded draws`, () => {
  const seed = 77

  test('as assumed and misspecified, rates lie where the calibration has them', { timeout: 600_000 }, () => {
    const assumed = calibrate(setting('as-assumed'), DRAWS, seed)
    expect(assumed.falseAlarms * DRAWS).toBeLessThanOrEqual(most(0.07, DRAWS))
    expect((1 - assumed.found) * DRAWS).toBeLessThanOrEqual(most(0.1, DRAWS))
    expect((1 - assumed.covered) * DRAWS).toBeLessThanOrEqual(most(0.08, DRAWS))
    expect(Math.abs(Math.log(assumed.noiseScale))).toBeLessThan(0.2)
    for (const id of ['scale-2', 'alpha+onset']) {
      const row = calibrate(setting(id), DRAWS, seed)
      expect(row.falseAlarms * DRAWS, row.title).toBeLessThanOrEqual(most(0.13, DRAWS))
    }
  })

  test('a causal chain never gets "it can"', { timeout: 600_000 }, () => {
    expect(calibrate(setting('causal'), Math.ceil(DRAWS / 2), seed).verdicts['it can']).toBe(0)
  })

  test('fits with a true early component are the shifted fits that the rates rest on', () => {
    const { chain, options, model } = modelOf(setting('as-assumed'))
    const first = options.timesMs.findIndex((t) => t >= EARLY.fromMs)
    const last = options.timesMs.findLastIndex((t) => t <= EARLY.toMs)
    const e = raisedCosine(options.timesMs, EARLY, first, last)
    const ke = actOn(actingStages(chain, 'continuous'), e, first, SAMPLES)
    let seen = 0
    for (const y of drawsOf(setting('as-assumed'), seed)) {
      const without = fitLateOnly(model, y)
      const shifted = fitLateOnly(
        model,
        y.map((value, i) => value + 5 * ke[i]!),
      )
      expect(shifted.beta - without.beta).toBeCloseTo(5, 3)
      expect(shifted.standardError).toBeCloseTo(without.standardError, 3)
      if (++seen === 3) break
    }
  })
})
