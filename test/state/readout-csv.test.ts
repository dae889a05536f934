import Papa from 'papaparse'
import { describe, expect, test } from 'vitest'
import { SCENARIOS } from '../../src/erp/scenarios.ts'
import { evaluate } from '../../src/state/evaluate.ts'
import type { Evaluation } from '../../src/state/evaluation.ts'
import { protocolOf } from '../../src/state/protocol.ts'
import { readoutCsv } from '../../src/state/readout-csv.ts'
import { type Workspace, workspaceOf } from '../../src/state/workspace.ts'
import { protocolLine, protocolText } from '../../src/words/index.ts'

function evaluated(workspace: Workspace): Evaluation {
  const outcome = evaluate(workspace, null)
  if (!outcome.ok) throw new Error(outcome.problems[0].message)
  return outcome.evaluation
}

function cellsOf(workspace: Workspace, evaluation = evaluated(workspace)): string[][] {
  const { data, errors } = Papa.parse<string[]>(readoutCsv(evaluation, workspace), { skipEmptyLines: true })
  expect(errors).toEqual([])
  return data
}

const backTo = (cell: string) => (cell === '' ? null : Number.isNaN(Number(cell)) ? cell : Number(cell))

describe('the readout as CSV', () => {
  test.each(SCENARIOS.map((scenario) => [scenario.id, workspaceOf(scenario)] as const))(
    'of %s reads back to the very numbers',
    (_, workspace) => {
      const evaluation = evaluated(workspace)
      const [header, ...rows] = cellsOf(workspace, evaluation)
      const column = (name: string) => header.indexOf(name)
      evaluation.rows.forEach((row, i) => {
        const value = (name: string) => backTo(rows[i][column(name)])
        expect(value('before')).toBe(row.before)
        expect(value('after')).toBe(row.after)
        expect(value('change')).toBe(row.change)
        expect(value('change in per cent')).toBe(row.percent)
        expect(value('per cent of')).toBe(row.percentOf)
        expect(value('unit')).toBe(row.unit)
        expect(value('limit')).toBe(workspace.limits[row.id]?.value ?? null)
      })
      const noise = rows[evaluation.rows.length]
      if (evaluation.precision) {
        const held = ['peak-amplitude', 'area'].includes(workspace.score.kind) ? ', held fixed' : ''
        expect(noise[0]).toBe(`noise of the score, ${workspace.trials} trials${held}`)
        expect(Number(noise[column('before')])).toBe(evaluation.precision.before)
        expect(Number(noise[column('after')])).toBe(evaluation.precision.after)
      }
      const line = protocolText(protocolLine(protocolOf(workspace, evaluation.samplingRateHz)))
      expect(rows.at(-1)?.slice(0, 2)).toEqual(['protocol', line])
    },
  )

  test('of a latency holds what was simulated, with the simulation’s own error, and fills every column', () => {
    const workspace: Workspace = {
      ...workspaceOf(SCENARIOS[0]),
      score: { kind: 'peak-latency', fromMs: 200, toMs: 700, polarity: 'positive' },
    }
    const evaluation = evaluated(workspace)
    const simulated = {
      unit: 'ms' as const,
      before: { value: 26.9, standardError: 0.3 },
      after: { value: 27.5, standardError: 0.31 },
      precisionFactor: { value: 0.957, standardError: 0.03 },
      draws: 4000,
      missing: 0,
    }
    const { data } = Papa.parse<string[]>(readoutCsv(evaluation, workspace, simulated), { skipEmptyLines: true })
    expect(new Set(data.map((row) => row.length)).size).toBe(1)
    const rowOf = (name: string) => data.find(([first]) => first.startsWith(name)) ?? []
    expect(rowOf('noise of the score, 40 trials, 4000 simulated averages').slice(2, 6)).toEqual([
      'ms',
      '26.9',
      '27.5',
      String(27.5 - 26.9),
    ])
    expect(rowOf('standard error of that noise').slice(3, 5)).toEqual(['0.3', '0.31'])
    expect(rowOf('precision factor')[4]).toBe('0.957')
  })

  test('says one trial, and a factor that is infinite or no number, in words', () => {
    const quiet = { ...workspaceOf(SCENARIOS[0]), trials: 1 }
    quiet.noise = { kind: 'model', exponent: 0, levelAt1HzUv2PerHz: 0, flatBelowHz: 1, whiteUv2PerHz: 0, lines: [] }
    const rows = cellsOf(quiet)
    expect(rows.map(([name]) => name)).toContain('noise of the score, 1 trial')
    const evaluation = evaluated(workspaceOf(SCENARIOS[1]))
    const precision = evaluation.precision && {
      ...evaluation.precision,
      precisionFactor: Infinity,
      equalTrialsFactor: Infinity,
    }
    const infinite = cellsOf(workspaceOf(SCENARIOS[1]), { ...evaluation, precision })
    expect(infinite.find(([name]) => name === 'equal-trials factor')).toContain('Infinity')
  })
})
