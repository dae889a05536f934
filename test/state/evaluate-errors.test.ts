import { describe, expect, test } from 'vitest'
import { seededRandom } from '../../src/erp/seeded-random.ts'
import { readTable, type Table } from '../../src/files/index.ts'
import { evaluate } from '../../src/state/evaluate.ts'
import { workspaceOnTable } from '../../src/state/open-table.ts'
import { DIFFERENCE, startWorkspace, type Workspace } from '../../src/state/workspace.ts'
import { madeUpSource, madeUpTable } from './made-up-table.ts'

const TRIALS = 60

/** White noise of 4 µV in condition a and 8 µV in condition b, 250 Hz. */
function trialsTable(trials = TRIALS, samples = 200): Table {
  const random = seededRandom(11, 0)
  const lines = ['condition,trial,time_ms,Cz (µV)']
  for (const [condition, sd] of [
    ['a', 4],
    ['b', 8],
  ] as const)
    for (let trial = 1; trial <= trials; trial++)
      for (let i = 0; i < samples; i++)
        lines.push([condition, trial, -200 + 4 * i, (sd * random.normal()).toFixed(4)].join(','))
  const table = readTable(lines.join('\n'))
  if (!table.ok) throw new Error(table.reason)
  return table
}

const lowPass: Workspace['chain'] = [
  { design: 'butterworth', pass: 'low', order: 2, cutoffsHz: [20], meaning: 'half-amplitude', direction: 'both' },
]

function errorsOf(table: Table, change: Partial<Workspace>) {
  const workspace = { ...workspaceOnTable(startWorkspace(), madeUpSource, table), ...change }
  const outcome = evaluate(workspace, table)
  if (!outcome.ok) throw new Error(outcome.problems.map(({ message }) => message).join(' '))
  return outcome.evaluation.standardErrors
}

const mean = (values: Float64Array) => values.reduce((sum, value) => sum + value, 0) / values.length
const of = (chosen: string, table: Table): Workspace['shown'] => ({
  conditions: chosen === DIFFERENCE ? ['a', 'b'] : [chosen],
  difference: chosen === DIFFERENCE ? { first: 'a', second: 'b' } : null,
  chosen,
  channel: table.channels[0],
})

describe('the standard error of a recorded average', () => {
  const table = trialsTable()

  test('is σ/√N for white noise, within what 200 samples scatter', () => {
    const errors = errorsOf(table, { baseline: 'none', shown: of('a', table), chain: [] })
    const exact = 4 / Math.sqrt(TRIALS)
    expect(mean(errors!.before) / exact).toBeCloseTo(1, 1)
    expect(errors!.after).toEqual(errors!.before)
  })

  test('of a difference wave is the root of the two conditions’ squares', () => {
    const one = errorsOf(table, { shown: of('a', table), chain: lowPass })!
    const other = errorsOf(table, { shown: of('b', table), chain: lowPass })!
    const both = errorsOf(table, { shown: of(DIFFERENCE, table), chain: lowPass })!
    both.before.forEach((value, i) => expect(value).toBeCloseTo(Math.hypot(one.before[i], other.before[i]), 12))
    both.after!.forEach((value, i) => expect(value).toBeCloseTo(Math.hypot(one.after![i], other.after![i]), 12))
  })

  test('is smaller behind a low-pass by the root of the noise’s power that it lets through', () => {
    const errors = errorsOf(table, { baseline: 'none', shown: of('a', table), chain: lowPass })!
    // Σh² of the filter, from Parseval over its squared gain: about 0.14 at 20 of 125 Hz
    const ratio = mean(errors.after!.map((value) => value ** 2)) / mean(errors.before.map((value) => value ** 2))
    expect(ratio).toBeGreaterThan(0.1)
    expect(ratio).toBeLessThan(0.2)
  })

  test('is left out where a table has averages only, and behind the chain where the trials are too many for a frame', () => {
    expect(errorsOf(madeUpTable(), {})).toBeNull()
    const many = trialsTable(320, 200)
    const errors = errorsOf(many, { shown: of('a', many), chain: lowPass })!
    expect(errors.before).toHaveLength(200)
    expect(errors.after).toBeNull()
  })
})
