/** The tables of the trace-back desk as files, with full digits and the protocol line that the numbers belong to. */
import { tableToCsv } from '../files/index.ts'
import { momentRowWords, protocolLine, protocolText, stageName } from '../words/index.ts'
import type { Tracing } from './evaluate-trace.ts'
import { protocolOf } from './protocol.ts'
import type { Workspace } from './workspace.ts'

const protocolWords = (workspace: Workspace, samplingRateHz: number) =>
  protocolText(protocolLine(protocolOf(workspace, samplingRateHz)))

/** Open ends and rows that are no moments have no number. */
const cell = (value: number | null) => (value === null || !Number.isFinite(value) ? '' : value)

/**
 * The account by moment, then its sum, and beside it the share of weight on samples outside the data.
 *
 * @param asked the value that is traced: "the score after".
 */
export function sharesCsv(
  { traced, back, trust }: Tracing,
  asked: string,
  workspace: Workspace,
  rateHz: number,
): string {
  const { moments, rows } = back
  const header = ['stretch', 'from (ms)', 'to (ms)', 'waveform, mean (µV)', 'weight', 'share', 'unit']
  header.push('of the value (%)', 'running total')
  const wide = (...cells: (string | number)[]) => [...cells, ...Array<string>(header.length - cells.length).fill('')]
  const lines = rows.map((row) => [
    momentRowWords(row, traced),
    cell(row.fromMs),
    cell(row.toMs),
    cell(row.meanUv),
    cell(row.weight),
    row.share,
    traced.unit,
    cell(row.percent),
    row.running,
  ])
  const weight = rows.reduce((sum, row) => sum + (row.weight ?? 0), 0)
  const percent = moments.aboutZero ? '' : 100
  return tableToCsv(header, [
    ...lines,
    [`sum: ${asked}`, '', '', '', weight, moments.value, traced.unit, percent, moments.value],
    wide('share of the weight on samples outside the data, not summed', '', '', '', trust.unseenShare),
    wide('zero of the waveform', moments.zero, '', moments.zeroUv),
    wide('protocol', protocolWords(workspace, rateHz)),
  ])
}

/** The value before any stage, what each stage alone and the chain up to it make of it. */
export function stagesCsv({ traced, stages }: Tracing, asked: string, workspace: Workspace, rateHz: number): string {
  const header = ['stage', 'alone', 'chain up to here', 'step', 'unit']
  const lines = stages.rows.map((row) => [stageName(row.spec), row.alone, row.upTo, row.step, traced.unit])
  return tableToCsv(header, [
    ['before any stage', '', stages.before, '', traced.unit],
    ...lines,
    [asked, '', stages.value, '', traced.unit],
    ['protocol', protocolWords(workspace, rateHz), '', '', ''],
  ])
}
