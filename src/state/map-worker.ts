/** The worker's part of a trade-off map: one map is kept ready, and computed a slice of time at once, so that it can be drawn while it grows. */
import { computeCell, type MapCell, type MapQuestion, prepareMap, type PreparedMap } from '../evidence/trade-off-map.ts'

let ready: { key: string; prepared: PreparedMap; before: boolean } | null = null

/** Draws of the unfiltered score: the factors of all cells hang on it. */
const DRAWS_BEFORE = 2000

export interface MapSlice {
  /** Null where it was not asked for. */
  readonly before: PreparedMap['before'] | null
  readonly cells: readonly MapCell[]
}

/**
 * Cells from a list until the time is up, at least one.
 *
 * @param key     of the question, so that the next slice finds it ready.
 * @param order   indices of cells, those to be computed first in front.
 * @param batches of simulated draws, from … to − 1.
 * @param before  whether the unfiltered scores are wanted, whose draws take a while: of many workers one computes them.
 * @throws RangeError as `prepareMap`.
 */
export function mapSlice(
  key: string,
  question: MapQuestion,
  order: readonly number[],
  batches: { from: number; to: number },
  budgetMs: number,
  before = true,
): MapSlice {
  if (ready?.key !== key || (before && !ready.before)) {
    ready = null
    ready = { key, prepared: prepareMap(question, before ? DRAWS_BEFORE : 0), before }
  }
  const { prepared } = ready
  const started = Date.now()
  const cells: MapCell[] = []
  for (const index of order) {
    cells.push(computeCell(prepared, index, batches))
    if (Date.now() - started >= budgetMs) break
  }
  return { before: before ? prepared.before : null, cells }
}
