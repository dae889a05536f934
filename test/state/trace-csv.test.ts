import Papa from 'papaparse'
import { describe, expect, test } from 'vitest'
import { evaluate } from '../../src/state/evaluate.ts'
import { evaluateTrace, type Tracing } from '../../src/state/evaluate-trace.ts'
import { protocolOf } from '../../src/state/protocol.ts'
import { sharesCsv, stagesCsv } from '../../src/state/trace-csv.ts'
import { SCENARIOS, type Workspace, workspaceOf } from '../../src/state/workspace.ts'
import { momentRowWords, protocolLine, protocolText, stageName } from '../../src/words/index.ts'

function traced(workspace: Workspace): Tracing {
  const outcome = evaluate(workspace, null)
  if (!outcome.ok) throw new Error(outcome.problems[0].message)
  const found = evaluateTrace(workspace, outcome.evaluation, null)
  if (!found.ok) throw new Error(found.reason)
  return found.tracing
}

function cellsOf(csv: string): string[][] {
  const { data, errors } = Papa.parse<string[]>(csv, { skipEmptyLines: true })
  expect(errors).toEqual([])
  return data
}

const asNumber = (cell: string) => (cell === '' ? null : Number(cell) + 0)
/** As it is printed: nothing for an open end, and no sign on a zero. */
const finite = (value: number | null) => (value === null || !Number.isFinite(value) ? null : value + 0)

const cases = SCENARIOS.flatMap((scenario) =>
  (['continuous', 'epochs'] as const).map((extent) => [scenario.id, { ...workspaceOf(scenario), extent }] as const),
)

describe('the account as CSV', () => {
  test.each(cases)('by moment reads back to the very numbers: %s', (_, workspace) => {
    const tracing = traced(workspace)
    const { rows, moments } = tracing.back
    const [header, ...lines] = cellsOf(sharesCsv(tracing, 'the score after', workspace, 500))
    const column = (name: string) => header.indexOf(name)
    rows.forEach((row, i) => {
      const value = (name: string) => asNumber(lines[i][column(name)])
      expect(lines[i][0].replace(/^'/, '')).toBe(momentRowWords(row, tracing.traced))
      expect(value('from (ms)')).toBe(finite(row.fromMs))
      expect(value('to (ms)')).toBe(finite(row.toMs))
      expect(value('waveform, mean (µV)')).toBeCloseTo(row.meanUv ?? 0, 12)
      expect(value('weight')).toBe(finite(row.weight))
      expect(value('share')).toBe(row.share + 0)
      expect(value('of the value (%)')).toBe(finite(row.percent))
      expect(value('running total')).toBe(row.running + 0)
    })
    const sum = lines[rows.length]
    expect(sum[0]).toBe('sum: the score after')
    expect(Number(sum[column('share')])).toBe(moments.value)
    const unseen = lines.find(([name]) => name.startsWith('share of the weight on samples outside the data'))
    expect(Number(unseen?.[column('weight')])).toBe(tracing.trust.unseenShare)
    expect(lines.at(-1)?.slice(0, 2)).toEqual(['protocol', protocolText(protocolLine(protocolOf(workspace, 500)))])
  })

  test.each(cases)('by stage reads back to the very numbers: %s', (_, workspace) => {
    const tracing = traced(workspace)
    const [, before, ...lines] = cellsOf(stagesCsv(tracing, 'the score after', workspace, 500))
    expect(Number(before[2])).toBe(tracing.stages.before)
    tracing.stages.rows.forEach((row, i) => {
      const [name, alone, upTo, step, unit] = lines[i]
      expect(name).toBe(stageName(row.spec))
      expect([alone, upTo, step].map(Number)).toEqual([row.alone + 0, row.upTo + 0, row.step + 0])
      expect(unit).toBe(tracing.traced.unit)
    })
    expect(Number(lines[tracing.stages.rows.length][2])).toBe(tracing.stages.value)
  })

  test('a value about zero has no per cent', () => {
    const first = workspaceOf(SCENARIOS[0])
    const flat = {
      ...first,
      chain: [],
      trace: { ...first.trace, question: { kind: 'row', row: 'score', of: 'change' } },
    }
    const tracing = traced(flat as Workspace)
    expect(tracing.back.moments.aboutZero).toBe(true)
    const [header, ...lines] = cellsOf(sharesCsv(tracing, 'the change of the score', flat as Workspace, 500))
    const at = header.indexOf('of the value (%)')
    expect(lines.map((line) => line[at]).filter((cell) => cell !== '')).toEqual([])
  })
})
