import { tableToCsv } from '../files/index.ts'
import { protocolLine, protocolText, rowWords } from '../words/index.ts'
import type { Evaluation } from './evaluation.ts'
import { protocolOf } from './protocol.ts'
import { verdictOf } from './verdict.ts'
import type { Workspace } from './workspace.ts'

/** The readout with full digits, one row per figure, and the protocol line that the numbers belong to. */
export function readoutCsv(evaluation: Evaluation, workspace: Workspace): string {
  const header = [
    'figure',
    'where',
    'unit',
    'before',
    'after',
    'change',
    'change in per cent',
    'per cent of',
    'limit',
    'limit unit',
    'kept',
  ]
  const rows = evaluation.rows.map((row) => {
    const { name, where } = rowWords(row)
    const limit = workspace.limits[row.id]
    return [
      name,
      where,
      row.unit,
      row.before,
      row.after,
      row.change ?? '',
      row.percent ?? '',
      row.percentOf ?? '',
      limit?.value ?? '',
      limit?.unit ?? '',
      verdictOf(row, limit).kind,
    ]
  })
  const { precision } = evaluation
  if (precision)
    rows.push(
      [
        `noise of the score, ${workspace.trials} ${workspace.trials === 1 ? 'trial' : 'trials'}`,
        '',
        precision.unit,
        precision.before,
        precision.after,
        precision.change,
        '',
        '',
        '',
        '',
        '',
      ],
      ['precision factor', '', '', '', finite(precision.precisionFactor), '', '', '', '', '', ''],
      ['equal-trials factor', '', '', '', finite(precision.equalTrialsFactor), '', '', '', '', '', ''],
    )
  const line = protocolText(protocolLine(protocolOf(workspace, evaluation.samplingRateHz)))
  return tableToCsv(header, [...rows, ['protocol', line, '', '', '', '', '', '', '', '', '']])
}

/** A filter that leaves no noise has an infinite factor. */
const finite = (value: number | string) => (typeof value === 'string' || Number.isFinite(value) ? value : String(value))
