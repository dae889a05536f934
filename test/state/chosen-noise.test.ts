import { existsSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, test } from 'vitest'
import { seededRandom } from '../../src/erp/seeded-random.ts'
import { drawNoise, noiseSource } from '../../src/erp/simulate-noise.ts'
import { prepareMap } from '../../src/evidence/trade-off-map.ts'
import { readTable, type Table } from '../../src/files/index.ts'
import { chosenNoise, simulatedTrial, trialsChosen } from '../../src/state/chosen-noise.ts'
import { evaluate } from '../../src/state/evaluate.ts'
import { workspaceOnTable } from '../../src/state/open-table.ts'
import { mapRequest } from '../../src/state/trade-off.ts'
import { DIFFERENCE, startWorkspace, type Workspace } from '../../src/state/workspace.ts'
import { madeUpSource, madeUpTable } from './made-up-table.ts'

/** 40 trials of white noise of 4 µV, 250 Hz, on a small hump. */
function trialsText(): string {
  const random = seededRandom(3, 0)
  const lines = ['trial,time_ms,Cz (µV)']
  for (let trial = 1; trial <= 40; trial++)
    for (let i = 0; i < 250; i++) {
      const ms = -200 + 4 * i
      lines.push([trial, ms, (5 * Math.exp(-(((ms - 380) / 90) ** 2)) + 4 * random.normal()).toFixed(4)].join(','))
    }
  return lines.join('\n')
}

function read(text: string): Table {
  const table = readTable(text)
  if (!table.ok) throw new Error(table.reason)
  return table
}

const on = (table: Table, change: Partial<Workspace> = {}): Workspace => ({
  ...workspaceOnTable(startWorkspace(), madeUpSource, table),
  noiseFrom: 'trials',
  ...change,
})

function evaluated(workspace: Workspace, table: Table) {
  const outcome = evaluate(workspace, table)
  if (!outcome.ok) throw new Error(outcome.problems.map(({ message }) => message).join(' '))
  return outcome.evaluation
}

describe('noise estimated from the trials', () => {
  const table = read(trialsText())

  test('gives the noise of a mean amplitude that σ²Σg²/N gives for white noise', () => {
    // an error of about 1/√(2·degrees of freedom) of a band; the mean over many is far better
    const { precision, noiseOf } = evaluated(on(table, { baseline: 'none' }), table)
    const { score } = on(table)
    const samples = table.timesMs.filter((ms) => ms >= score.fromMs && ms <= score.toMs).length
    const exact = Math.sqrt(16 / samples / 40)
    expect(noiseOf.from).toBe('trials')
    expect(precision?.before).toBeGreaterThan(0.8 * exact)
    expect(precision?.before).toBeLessThan(1.2 * exact)
  })

  test('is the same object for the same trials, and the model where a table has none', () => {
    expect(chosenNoise(on(table), table)).toBe(chosenNoise(on(table), table))
    expect(chosenNoise(on(table, { noiseFrom: 'model' }), table).estimate).toBeNull()
    const averages = madeUpTable()
    expect(chosenNoise(on(averages), averages)).toMatchObject({ estimate: null, passed: 'nothing' })
  })

  test('says which part of a result rests on frequencies that the trials cannot show', () => {
    const low = evaluated(
      on(table, { baseline: 'none', score: { kind: 'mean', fromMs: -200, toMs: 796, polarity: 'positive' } }),
      table,
    )
    const high = evaluated(
      on(table, {
        baseline: 'none',
        chain: [
          {
            design: 'butterworth',
            pass: 'high',
            order: 2,
            cutoffsHz: [8],
            meaning: 'half-amplitude',
            direction: 'both',
          },
        ],
      }),
      table,
    )
    // a mean over the whole trial sees little above 1/T, a high-passed one nothing below 2/T = 2 Hz
    expect(low.noiseOf.extrapolated?.after).toBeGreaterThan(0.2)
    expect(high.noiseOf.extrapolated?.after).toBeLessThan(0.05)
    // the factors of the second rest on what was there before it
    expect(high.noiseOf.extrapolated?.before).toBeGreaterThan(0.2)
    expect(low.noiseOf.extrapolated?.before).toBe(low.noiseOf.extrapolated?.after)
    expect(evaluated(on(table, { noiseFrom: 'model' }), table).noiseOf).toEqual({ from: 'model', extrapolated: null })
  })

  test('is not filtered by stages in the data, which the trials have passed', () => {
    const past = [{ design: 'amplifier' as const, pass: 'low' as const, order: 4, cutoffHz: 20, inData: true }]
    const plain = evaluated(on(table), table).precision
    const withPast = evaluated(on(table, { chain: past }), table).precision
    expect(withPast?.after).toBeCloseTo(plain?.after as number, 10)
  })
})

describe('noise of a difference, estimated from the trials of its conditions', () => {
  /** White noise of 6 µV in the first condition and of 2 µV in the second, 40 and 60 trials. */
  const text = (conditions: readonly (readonly [string, number, number])[]) => {
    const random = seededRandom(4, 0)
    const lines = ['condition,trial,time_ms,Cz (µV)']
    for (const [condition, sd, trials] of conditions)
      for (let trial = 1; trial <= trials; trial++)
        for (let i = 0; i < 250; i++)
          lines.push([condition, trial, -200 + 4 * i, (sd * random.normal()).toFixed(4)].join(','))
    return lines.join('\n')
  }
  const table = read(
    text([
      ['rare', 6, 40],
      ['frequent', 2, 60],
    ]),
  )
  const difference = (of = table, first = 'rare', second = 'frequent'): Workspace => {
    const { shown } = on(of)
    return on(of, {
      ...{ baseline: 'none', trials: 40 },
      shown: { ...shown, conditions: [DIFFERENCE], difference: { first, second }, chosen: DIFFERENCE },
    })
  }
  const alone = (chosen: string): Workspace => {
    const { shown } = on(table)
    return on(table, { baseline: 'none', trials: 40, shown: { ...shown, conditions: [chosen], chosen } })
  }
  const variance = (workspace: Workspace, of = table) => (evaluated(workspace, of).precision?.before as number) ** 2

  test('is the sum of theirs, each over its trials, whichever comes first', () => {
    const sum = variance(alone('rare')) + variance(alone('frequent'))
    expect(variance(difference()) / sum).toBeCloseTo(1, 2)
    expect(variance(difference(table, 'frequent', 'rare')) / sum).toBeCloseTo(1, 2)
    // (36 + 4)/(samples · N) for white noise; twice the first condition's would be 72
    const { score } = on(table)
    const samples = table.timesMs.filter((ms) => ms >= score.fromMs && ms <= score.toMs).length
    const exact = 40 / samples / 40
    expect(variance(difference())).toBeGreaterThan(0.7 * exact)
    expect(variance(difference())).toBeLessThan(1.3 * exact)
  })

  test('is on the trade-off map what it is in the readout', () => {
    const workspace = difference()
    const outcome = mapRequest(workspace, table)
    if (!outcome.ok) throw new Error(outcome.reason)
    const { request } = outcome
    const { before } = prepareMap(request.question)
    const ofMap = (before[0].varianceOfOneTrial as number) / request.trials
    expect(ofMap / variance(workspace)).toBeCloseTo(1, 4)
  })

  test('names both, and is the same object for the same trials', () => {
    const chosen = chosenNoise(difference(), table)
    expect(chosenNoise(difference(), table)).toBe(chosen)
    expect([chosen.estimate?.trials, chosen.estimateOfSecond?.trials]).toEqual([40, 60])
    expect(trialsChosen(difference(), table).conditions).toEqual(['rare', 'frequent'])
    expect(chosenNoise(alone('rare'), table).estimateOfSecond).toBeNull()
  })

  test('is the first condition’s where the second has a single trial only', () => {
    const few = read(
      text([
        ['rare', 6, 40],
        ['frequent', 2, 1],
      ]),
    )
    const chosen = chosenNoise(difference(few), few)
    expect(chosen.estimateOfSecond).toBeNull()
    expect(chosen.noise).toBe(chosen.estimate?.noise)
    expect(trialsChosen(difference(few), few).conditions).toEqual(['rare'])
  })
})

test('recorded trials give an estimate that evaluates', ({ skip }) => {
  const file = join(process.env.SIDELOBE_DATA ?? '../shared/data', 'uci-vep-dev', 'co2c0000345_S1obj_epochs_6ch.csv')
  if (!existsSync(file)) skip('the recordings are not at hand')
  const table = read(readFileSync(file, 'utf8'))
  const { precision, noiseOf } = evaluated(on(table), table)
  expect(noiseOf.from).toBe('trials')
  expect(precision?.before).toBeGreaterThan(0)
})

test('the simulated trial is that of its seed, minus its mean', () => {
  const { noise } = startWorkspace()
  const trial = simulatedTrial(noise, 500, 1000, 7)
  const [drawn] = drawNoise(noiseSource(noise, 500, 1000), seededRandom(7, 0), 1)
  const mean = drawn.reduce((sum, value) => sum + value, 0) / 1000
  trial.forEach((value, i) => expect(value).toBeCloseTo(drawn[i] - mean, 10))
})
