import { type ScoreKind, scoreLinearity } from '../erp/score.ts'
import { tableToCsv } from '../files/index.ts'
import { protocolLine, protocolText, rowWords } from '../words/index.ts'
import type { NoiseRow } from '../evidence/precision.ts'
import type { Evaluation } from './evaluation.ts'
import { protocolOf } from './protocol.ts'
import type { SimulatedNoise } from './simulated-noise.ts'
import { verdictOf } from './verdict.ts'
import type { Workspace } from './workspace.ts'

/**
 * The readout with full digits, one row per figure, and the protocol line that the numbers belong to.
 *
 * @param simulated noise of a score that has no formula for it, as far as it is simulated.
 */
export function readoutCsv(evaluation: Evaluation, workspace: Workspace, simulated?: SimulatedNoise | null): string {
  const pins = evaluation.pins.flatMap((pin, place) => ('reason' in pin ? [] : [{ ...pin, place }]))
  const header = [
    'figure',
    'where',
    'unit',
    'before',
    'after',
    ...pins.map((pin) => `after the pinned ${pin.name}`),
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
      ...pins.map(({ rows }) => rows.find(({ id }) => id === row.id)?.after ?? ''),
      row.change ?? '',
      row.percent ?? '',
      row.percentOf ?? '',
      limit?.value ?? '',
      limit?.unit ?? '',
      verdictOf(row, limit).kind.replace('other unit', 'limit in another unit'),
    ]
  })
  const { precision } = evaluation
  const trialWords = `${workspace.trials} ${workspace.trials === 1 ? 'trial' : 'trials'}`
  const factorRow = (name: string, factor: (row: NoiseRow) => number | string) => [
    name,
    '',
    '',
    '',
    precision ? finite(factor(precision)) : '',
    ...pins.map((pin) => (pin.precision ? finite(factor(pin.precision)) : '')),
    ...Array<string>(6).fill(''),
  ]
  if (precision)
    rows.push(
      [
        `noise of the score, ${trialWords}${heldFixed(workspace.score.kind) ? ', held fixed' : ''}`,
        '',
        precision.unit,
        precision.before,
        precision.after,
        ...pins.map((pin) => pin.precision?.after ?? ''),
        precision.change,
        '',
        '',
        '',
        '',
        '',
      ],
      factorRow('precision factor', ({ precisionFactor }) => precisionFactor),
      factorRow('equal-trials factor', ({ equalTrialsFactor }) => equalTrialsFactor),
    )
  if (simulated) {
    const { before, after, unit, draws, precisionFactor } = simulated
    const empty = (count: number) => Array<string>(count).fill('')
    const name = `noise of the score, ${trialWords}, ${draws} simulated averages`
    const noPins = empty(pins.length)
    rows.push(
      [name, '', unit, before.value, after.value, ...noPins, after.value - before.value, ...empty(5)],
      ['standard error of that noise', '', unit, before.standardError, after.standardError, ...noPins, ...empty(6)],
    )
    if (precisionFactor)
      rows.push(['precision factor, simulated', '', '', '', precisionFactor.value, ...noPins, ...empty(6)])
  }
  const line = protocolText(protocolLine(protocolOf(workspace, evaluation.samplingRateHz)))
  const chains = pins.map(({ name, place }) => {
    const { chain, extent } = workspace.pins[place]
    const withIt = protocolOf({ ...workspace, chain, extent }, evaluation.samplingRateHz)
    return [`pinned ${name}`, protocolText(protocolLine(withIt))]
  })
  const notes = [['protocol', line], ...chains].map((note) => [...note, ...Array<string>(header.length - 2).fill('')])
  return tableToCsv(header, [...rows, ...notes])
}

const heldFixed = (kind: ScoreKind) => scoreLinearity(kind) === 'held fixed'

/** A filter that leaves no noise has an infinite factor. */
const finite = (value: number | string) => (typeof value === 'string' || Number.isFinite(value) ? value : String(value))
