/** What the trade-off desk reads off a map: the figures of its cells, its limits, its front. */
import { scoreUnit } from '../erp/score.ts'
import { paretoFront } from '../evidence/pareto-front.ts'
import { simulatedFigures } from '../evidence/simulated-score.ts'
import {
  keepsLimits,
  type LimitVerdict,
  type TradeOffAnswer,
  tradeOffAnswer,
  type TradeOffLimits,
} from '../evidence/trade-off-answer.ts'
import {
  type CellFigures,
  cellFigures,
  type FiguresQuestion,
  type OverWaveforms,
} from '../evidence/trade-off-figures.ts'
import type { MapCell } from '../evidence/trade-off-map.ts'
import { tableToCsv } from '../files/index.ts'
import { candidateWords, protocolLine, protocolText } from '../words/index.ts'
import type { MapState } from './map-run.ts'
import { protocolOf } from './protocol.ts'
import { filterInChain, type MapRequest } from './trade-off.ts'
import type { TradeOff, Workspace } from './workspace.ts'

export interface MapFigures {
  /** By cell; null where not computed yet. */
  readonly cells: readonly (CellFigures | null)[]
  /** Indices of filters that no other beats in both bias and noise, by ascending size of the bias. */
  readonly front: readonly number[]
  /** Whether each cell keeps every limit. */
  readonly kept: readonly boolean[]
  /** Whether any of the waveforms has the score before filtering; true while nothing is computed. */
  readonly scoredBefore: boolean
}

export function overWaveforms(request: MapRequest, over: TradeOff['over']): OverWaveforms {
  return request.question.waveforms.length === 1 ? 0 : over
}

/** A cell's figures as they were last asked for: a map that grows asks for the same ones with every slice. */
const keptFigures = new WeakMap<MapCell, { before: unknown; asked: FiguresQuestion; figures: CellFigures }>()

function figuresOf(
  question: MapRequest['question'],
  before: NonNullable<MapState['before']>,
  cell: MapCell,
  asked: FiguresQuestion,
): CellFigures {
  const kept = keptFigures.get(cell)
  const names = ['latency', 'trials', 'largest', 'over'] as const
  if (kept?.before === before && names.every((name) => Object.is(kept.asked[name], asked[name]))) return kept.figures
  const figures = cellFigures({ question, before }, cell, asked)
  keptFigures.set(cell, { before, asked, figures })
  return figures
}

/** @throws RangeError as `cellFigures` and `keepsLimits`. */
export function mapFigures(
  request: MapRequest,
  state: MapState | undefined,
  over: TradeOff['over'],
  limits: TradeOffLimits,
): MapFigures {
  const { question, latency, trials, largest } = request
  const count = question.cutoffsHz.length * question.rollOffs.length
  const before = state?.before ?? null
  const asked = { score: 0, latency, trials, largest, over: overWaveforms(request, over) }
  const cells =
    state && before
      ? state.cells.map((cell) => cell && figuresOf(question, before, cell, asked))
      : new Array<null>(count).fill(null)
  const verdicts = cells.map((cell) => cell && keepsLimits(cell, limits))
  return {
    cells,
    front: paretoFront(cells.map((cell) => cell ?? { bias: null, noise: null })),
    kept: verdicts.map((verdict) => verdict?.kept === true),
    scoredBefore: before === null || before[0].after.some((value) => !Number.isNaN(value)),
  }
}

export type { CellFigures, TradeOffLimits }

/** A filter against the limits in force. */
export const verdictOnLimits = (cell: CellFigures, limits: TradeOffLimits): LimitVerdict => keepsLimits(cell, limits)

/** What the row of a cell answers; null while nothing of it is computed. */
export function answerOfRow(
  figures: MapFigures,
  row: number,
  columns: number,
  limits: TradeOffLimits,
): TradeOffAnswer | null {
  const cells = figures.cells.slice(row * columns, (row + 1) * columns).filter((cell) => cell !== null)
  if (cells.length === 0) return null
  const usable = cells.filter(({ error }) => error === null)
  // the first filter of a row often fails for a reason of its own: the one in the middle speaks for all
  if (usable.length === 0) return { kind: 'nothing', reason: cells[Math.floor(cells.length / 2)].error as string }
  if (!figures.scoredBefore) return { kind: 'nothing', reason: 'before any filter there is no such score' }
  if (usable.every(({ bias }) => bias === null))
    return { kind: 'nothing', reason: 'no filter of this row leaves this score in every waveform' }
  return tradeOffAnswer(cells, limits)
}

/** The row to begin with: the second, unless none of its filters can be used and those of another can. */
export function firstRow(figures: MapFigures, columns: number, rows: number): number {
  const order = [Math.min(1, rows - 1), ...Array.from({ length: rows }, (_, row) => row)]
  const usable = (row: number) => {
    const known = figures.cells.slice(row * columns, (row + 1) * columns).filter((cell) => cell !== null)
    return known.length === 0 || known.some(({ error }) => error === null)
  }
  return order.find(usable) ?? order[0]
}

/** Every cell with what is known of it: those not computed yet are shown as the nearest that is, so that a coarse map is complete. */
export function nearestComputed(figures: MapFigures, cutoffs: number, rollOffs: number): (CellFigures | null)[] {
  const { cells } = figures
  if (cells.every((cell) => cell !== null)) return cells.slice()
  const known = cells.flatMap((cell) => (cell ? [cell] : []))
  return cells.map((cell, index) => {
    if (cell || known.length === 0) return cell
    const c = index % cutoffs
    const r = Math.floor(index / cutoffs)
    let nearest: CellFigures | null = null
    let least = Number.POSITIVE_INFINITY
    for (const other of known) {
      const distance = Math.abs(other.cutoffIndex - c) / cutoffs + (2 * Math.abs(other.rollOffIndex - r)) / rollOffs
      if (distance < least) {
        least = distance
        nearest = other
      }
    }
    return nearest
  })
}

/** A layer's value in a cell; null where it has none. */
export function layerValue(cell: CellFigures | null, layer: TradeOff['layer']): number | null {
  if (!cell) return null
  switch (layer) {
    case 'bias':
      return cell.bias
    case 'noise':
      return cell.noise
    case 'total error':
      return cell.totalError
    case 'equal-trials factor':
      return cell.equalTrialsFactor
    case 'latency shift':
      return cell.latencyShiftMs
  }
}

/** The simulation's own standard error of a cell's noise, for one waveform; null for exact figures. */
export function noiseError(state: MapState | undefined, index: number): number | null {
  const simulated = state?.cells[index]?.scores[0]?.simulated
  if (simulated?.length !== 1) return null
  return simulatedFigures(simulated[0], null, null)?.noise.standardError ?? null
}

/** The cell of the filter that stands in the chain, if its cutoff and roll-off lie on the map's grid; the nearest cutoff of its row. */
export function cellInChain(workspace: Workspace, request: MapRequest): number | null {
  const filter = filterInChain(workspace)
  if (!filter) return null
  const { cutoffsHz, rollOffs } = request.question
  const row = rollOffs.indexOf(filter.rollOff)
  if (row < 0 || filter.cutoffHz < 0.98 * cutoffsHz[0] || filter.cutoffHz > 1.02 * cutoffsHz[cutoffsHz.length - 1])
    return null
  const apart = (hz: number) => Math.abs(Math.log(hz / filter.cutoffHz))
  const nearest = cutoffsHz.reduce((best, hz, i) => (apart(hz) < apart(cutoffsHz[best]) ? i : best), 0)
  return row * cutoffsHz.length + nearest
}

/** The filter of all rows that keeps the limits and has the least total error; that none keeps them is known of a whole map only. */
export function bestOfAllRows({ cells, kept }: MapFigures): CellFigures | 'none' | 'not known' {
  let best: CellFigures | null = null
  cells.forEach((cell, i) => {
    if (!cell || !kept[i] || cell.totalError === null) return
    if (best === null || cell.totalError < (best.totalError as number)) best = cell
  })
  if (best !== null) return best
  return kept.includes(true) || cells.includes(null) ? 'not known' : 'none'
}

/** The maps as a table, a line a filter, with full digits and the sentence that it belongs to. Several maps have a column for the kind of filter. */
export function mapCsv(maps: readonly { figures: MapFigures; request: MapRequest }[], workspace: Workspace): string {
  const unit = scoreUnit(workspace.score.kind)
  const several = maps.length > 1
  const rollOffs = maps.map(({ request }) =>
    request.question.candidate.design === 'butterworth' ? 'order of one pass' : 'transition width (Hz)',
  )
  const header = [
    ...(several ? ['kind of filter'] : []),
    ...['cutoff (Hz)', [...new Set(rollOffs)].join(' or ')],
    ...[`bias (${unit})`, `noise (${unit})`, `total error (${unit})`],
    ...['precision factor', 'equal-trials factor', 'latency shift (ms)'],
    ...['keeps the limits', 'on the front', 'problem'],
  ]
  const cell = (value: number | null) => (value === null ? '' : value)
  const lines = maps.flatMap(({ figures, request }) => {
    const front = new Set(figures.front)
    const kind = candidateWords(request.question.candidate)
    return figures.cells.flatMap((of, i) =>
      of === null
        ? []
        : [
            [
              ...(several ? [kind] : []),
              ...[of.cutoffHz, of.rollOff, cell(of.bias), cell(of.noise), cell(of.totalError)],
              ...[cell(of.precisionFactor), cell(of.equalTrialsFactor), cell(of.latencyShiftMs)],
              ...[figures.kept[i] ? 'yes' : 'no', front.has(i) ? 'yes' : 'no', of.error ?? ''],
            ],
          ],
    )
  })
  const words = protocolText(protocolLine(protocolOf(workspace, maps[0].request.question.samplingRateHz)))
  const last = ['protocol', words, ...Array<string>(header.length - 2).fill('')]
  return tableToCsv(header, [...lines, last])
}
