/**
 * Real tables, read as they are. They lie outside the project; where they are absent the tests are skipped.
 * Source of the data: UCI Machine Learning Repository, "EEG Database" (Begleiter; posted 1997), subject co2c0000345, 64
 * channels at 256 Hz; PhysioNet, "EEG Motor Movement/Imagery Dataset" 1.0.0 (Schalk et al. 2004), subject S001.
 * The numbers checked were computed with NumPy when the averages were made, and are listed beside the data.
 */

import { existsSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, test } from 'vitest'
import { readTable, type Table, trialsOf, waveformOf } from '../../src/files/index.ts'

const data = process.env.SIDELOBE_DATA ?? '../shared/data'
const uci = join(data, 'uci-vep-dev')
const motor = join(data, 'eegmmi-s001-dev')
for (const folder of [uci, motor]) if (!existsSync(folder)) console.log(`skipped: no recordings in ${folder}`)

function read(path: string): Table {
  const table = readTable(readFileSync(path, 'utf8'))
  if (!table.ok) throw new Error(`${path}: ${table.reason}`)
  return table
}

function extreme(table: Table, channel: string, sign: 1 | -1): [number, number] {
  const { values } = waveformOf(table, table.conditions[0], channel)
  const index = values.reduce((best, v, i) => (sign * v > sign * values[best] ? i : best), 0)
  return [values[index], table.timesMs[index]]
}

describe.skipIf(!existsSync(uci))('tables of the visual ERP of one subject', () => {
  const average = 'co2c0000345_S1obj_average.csv'
  const epochs = 'co2c0000345_S1obj_epochs_6ch.csv'
  const raw = 'raw_trial_co2c0000345_trial0.csv'

  test('the average has 64 channels and the minima that NumPy found', () => {
    const table = read(join(uci, average))
    expect(table).toMatchObject({ layout: 'wide', samplingRateHz: 256, roundingUv: 1e-4 })
    expect(table.channels.length).toBe(64)
    expect(table.timesMs.length).toBe(256)
    expect(table.timesMs[255]).toBe(996.09375)
    for (const [channel, uv, ms] of [
      ['PO7', -23.221, 164.1],
      ['PO8', -19.693, 164.1],
      ['OZ', -18.781, 168.0],
      ['CZ', -10.986, 109.4],
    ] as const) {
      const [value, time] = extreme(table, channel, -1)
      // The table has four decimals, the list three.
      expect(Math.abs(value - uv)).toBeLessThan(0.00051)
      expect(time).toBeCloseTo(ms, 1)
    }
  })

  test('the mean of the 20 trials is the average, to its rounding', () => {
    const table = read(join(uci, epochs))
    expect(table).toMatchObject({ trialsAveraged: 20, roundingUv: 1e-3, samplingRateHz: 256 })
    expect(table.channels).toEqual(['FZ', 'CZ', 'PZ', 'OZ', 'PO7', 'PO8'])
    const mean = read(join(uci, average))
    for (const channel of table.channels) {
      const trials = trialsOf(table, 'condition', channel)
      expect(trials.length).toBe(20)
      const ours = waveformOf(table, 'condition', channel).values
      const theirs = waveformOf(mean, 'condition', channel).values
      ours.forEach((v, i) => {
        expect(Math.abs(v - theirs[i])).toBeLessThanOrEqual(0.5e-4 + 1e-9)
      })
      ours.forEach((v, i) => {
        expect(trials.reduce((sum, t) => sum + t[i], 0) / 20).toBeCloseTo(v, 12)
      })
    }
  })

  test('the untouched file of one trial is read without help: 64 channels of 256 samples at 256 Hz', () => {
    const table = read(join(uci, raw))
    expect(table).toMatchObject({
      layout: 'long',
      samplingRateHz: 256,
      conditions: ['S1 obj'],
      participants: ['c'],
      trials: ['0'],
      roundingUv: 1e-3,
    })
    expect(table.channels.length).toBe(64)
    expect(table.timesMs.length).toBe(256)
    expect([...waveformOf(table, 'S1 obj', 'FP1').values.subarray(0, 3)]).toEqual([3.082, 4.059, 4.547])
    expect([...waveformOf(table, 'S1 obj', 'Y').values.subarray(254)]).toEqual([13.713, 12.248])
    expect(table.guesses.find((g) => g.what === 'timeUnit')).toMatchObject({ value: 's', from: 'inferred' })
    expect(table.warnings.join()).toContain('column 1, sample num, channel, name')
    // The same trial stands in the table of trials, printed to the same decimals.
    const trials = read(join(uci, epochs))
    const single = trials.singles?.find((s) => s.trial === '0' && s.channel === 'PO7')
    expect(single?.values).toEqual(waveformOf(table, 'S1 obj', 'PO7').values)
  })
})

describe.skipIf(!existsSync(motor))('averages of a motor recording', () => {
  test.each([
    ['S001R03_T1T2_average_expected.csv', 53.66, 468.75, -40.673, 162.5],
    ['S001R04_T1T2_average_expected.csv', 43.802, 287.5, -34.465, 712.5],
  ])('%s has the extremes at O1 that NumPy found, and labels without their dots', (file, max, maxMs, min, minMs) => {
    const table = read(join(motor, file))
    expect(table).toMatchObject({ samplingRateHz: 160, roundingUv: 1e-6 })
    expect(table.channels.length).toBe(64)
    expect(table.timesMs.length).toBe(160)
    expect(table.timesMs[0]).toBe(-200)
    const [high, highAt] = extreme(table, 'O1', 1)
    const [low, lowAt] = extreme(table, 'O1..', -1)
    expect(high).toBeCloseTo(max, 3)
    expect(highAt).toBe(maxMs)
    expect(low).toBeCloseTo(min, 3)
    expect(lowAt).toBe(minMs)
  })
})
