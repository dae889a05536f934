import type { CellFigures } from './trade-off-figures.ts'

/** The largest sizes that the user accepts, each ≥ 0, in the figure's unit. */
export interface TradeOffLimits {
  readonly bias?: number
  readonly noise?: number
  readonly totalError?: number
  readonly latencyShiftMs?: number
}

export type LimitName = keyof TradeOffLimits

const NAMES: readonly LimitName[] = ['bias', 'noise', 'totalError', 'latencyShiftMs']

/** A cell against the limits. */
export interface LimitVerdict {
  readonly kept: boolean
  /** The limit that is used up most, and the figure's size over it; null without limits, or where a limited figure is missing. */
  readonly tightest: { readonly limit: LimitName; readonly size: number; readonly multiples: number } | null
}

/**
 * Whether a filter keeps every limit. One whose figure is missing, or that cannot be realised, keeps none. A size equal to the limit is kept.
 *
 * @throws RangeError for a limit that is negative or not a number.
 */
export function keepsLimits(cell: CellFigures, limits: TradeOffLimits): LimitVerdict {
  let tightest: LimitVerdict['tightest'] = null
  if (cell.error !== null) return { kept: false, tightest }
  for (const limit of NAMES) {
    const most = limits[limit]
    if (most === undefined) continue
    if (!(most >= 0)) throw new RangeError(`the limit of ${limit} must be a number of at least 0, was ${most}`)
    const value = cell[limit]
    if (value === null) return { kept: false, tightest: null }
    const size = Math.abs(value)
    const multiples = size === 0 ? 0 : size / most
    if (tightest === null || multiples > tightest.multiples) tightest = { limit, size, multiples }
  }
  // 0.1 + 0.2 against 0.3 is a matter of rounding, not of the filter
  return { kept: tightest === null || tightest.multiples <= 1 + 1e-9, tightest }
}

/** Cells of one roll-off that follow each other along the cutoffs. */
export interface CutoffRun {
  readonly first: CellFigures
  readonly last: CellFigures
}

/** What a row of the map (one roll-off, all cutoffs) answers. */
export type TradeOffAnswer =
  | {
      readonly kind: 'some' | 'all'
      /** Runs of cutoffs that keep the limits, ascending. */
      readonly allowed: readonly CutoffRun[]
      /** Of those, the one with the least total error, and all allowed ones within 5 % of it; null where no total error is known. */
      readonly best: CellFigures | null
      readonly close: readonly CutoffRun[]
      readonly lowestHz: number
      readonly highestHz: number
      /** Of the row: could not be realised, applied or measured. */
      readonly left: number
    }
  | {
      readonly kind: 'none'
      /** The cell that violates least (its worst limit in multiples), and that limit. */
      readonly least: CellFigures
      readonly tightest: NonNullable<LimitVerdict['tightest']>
      readonly lowestHz: number
      readonly highestHz: number
      readonly left: number
    }
  | { readonly kind: 'nothing'; readonly reason: string }

/** Neighbours of the best are those whose total error is at most this much larger. */
export const CLOSE = 0.05

/**
 * The allowed region of one row and what lies in it.
 *
 * @param row cells of one roll-off; sorted by cutoff here.
 * @throws RangeError as `keepsLimits`, or for cells of different roll-offs.
 */
export function tradeOffAnswer(row: readonly CellFigures[], limits: TradeOffLimits): TradeOffAnswer {
  const other = row.find((cell) => cell.rollOffIndex !== row[0].rollOffIndex)
  if (other) throw new RangeError(`row must be of one roll-off (${row[0].rollOff}), also had ${other.rollOff}`)
  const sorted = row.slice().sort((a, b) => a.cutoffHz - b.cutoffHz)
  const verdicts = sorted.map((cell) => keepsLimits(cell, limits))
  const limited = NAMES.filter((name) => limits[name] !== undefined)
  const measured = sorted.filter((cell) => cell.error === null && limited.every((name) => cell[name] !== null))
  if (measured.length === 0) {
    const failed = sorted.find((cell) => cell.error !== null)
    return { kind: 'nothing', reason: failed?.error ?? 'no filter leaves this score in every waveform' }
  }
  const extent = {
    lowestHz: measured[0].cutoffHz,
    highestHz: measured[measured.length - 1].cutoffHz,
    left: sorted.length - measured.length,
  }
  const kept = sorted.map((cell, i) => verdicts[i].kept && measured.includes(cell))
  if (!kept.includes(true)) {
    let least: { cell: CellFigures; tightest: NonNullable<LimitVerdict['tightest']> } | null = null
    sorted.forEach((cell, i) => {
      const { tightest } = verdicts[i]
      if (tightest && (least === null || violatesLess(tightest, least.tightest))) least = { cell, tightest }
    })
    const { cell, tightest } = least as unknown as {
      cell: CellFigures
      tightest: NonNullable<LimitVerdict['tightest']>
    }
    return { kind: 'none', least: cell, tightest, ...extent }
  }
  let best: CellFigures | null = null
  sorted.forEach((cell, i) => {
    if (!kept[i] || cell.totalError === null) return
    if (best === null || cell.totalError < (best.totalError as number)) best = cell
  })
  const found = best as CellFigures | null
  const close =
    found === null
      ? []
      : runsOf(
          sorted,
          (cell, i) =>
            kept[i] &&
            cell.totalError !== null &&
            cell.totalError <= (1 + CLOSE) * (found.totalError as number) * (1 + 1e-12),
        )
  const all = measured.every((cell) => kept[sorted.indexOf(cell)])
  return { kind: all ? 'all' : 'some', allowed: runsOf(sorted, (_, i) => kept[i]), best: found, close, ...extent }
}

/** Of two violations of a limit of 0, which are infinite multiples, the smaller size. */
function violatesLess(a: { multiples: number; size: number }, b: { multiples: number; size: number }): boolean {
  return a.multiples < b.multiples || (a.multiples === b.multiples && a.size < b.size)
}

function runsOf(cells: readonly CellFigures[], keeps: (cell: CellFigures, i: number) => boolean): CutoffRun[] {
  const runs: CutoffRun[] = []
  let first = -1
  for (let i = 0; i <= cells.length; i++) {
    const inside = i < cells.length && keeps(cells[i], i)
    if (inside && first < 0) first = i
    if (!inside && first >= 0) {
      runs.push({ first: cells[first], last: cells[i - 1] })
      first = -1
    }
  }
  return runs
}
