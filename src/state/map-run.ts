/**
 * Trade-off maps as they are computed: coarse first, then every cell, then more draws for scores that are simulated. What was computed is kept
 * by the question's key, so that a map which was seen before stands there at once, and a cancelled one goes on where it was.
 */
import { createStore } from 'zustand/vanilla'
import { BATCH_DRAWS } from '../evidence/simulated-score.ts'
import { type MapCell, mergeCells, planMap, type PreparedMap } from '../evidence/trade-off-map.ts'
import { withEntry } from './kept-entries.ts'
import type { MapSlice } from './map-worker.ts'
import type { MapRequest } from './trade-off.ts'

export interface MapState {
  readonly key: string
  /** By cell; null where not computed yet. Another array with every slice. */
  readonly cells: readonly (MapCell | null)[]
  readonly before: PreparedMap['before'] | null
  /** Cells of the present round that are done, and how many it has. */
  readonly done: number
  readonly total: number
  /** Draws of every simulated score that stand in all cells; 0 for linear scores. */
  readonly draws: number
  readonly status: 'running' | 'complete' | 'cancelled' | 'failed'
  readonly reason: string | null
}

/** The worker's function. `before` asks for the unfiltered scores too, which one worker is enough for. */
export type Slice = (
  key: string,
  question: MapRequest['question'],
  order: readonly number[],
  batches: { from: number; to: number },
  budgetMs: number,
  before: boolean,
  signal: AbortSignal,
) => Promise<MapSlice>

const KEPT_MAPS = 16
const SLICE_MS = 80
/** Draws of the rounds after the first: their errors are half as large each time. */
const ROUNDS: readonly number[] = [4, 16, 40]

export const mapStore = createStore<{ maps: Readonly<Record<string, MapState>> }>(() => ({ maps: {} }))

function keep(state: MapState): void {
  mapStore.setState(({ maps }) => ({ maps: withEntry(maps, state, KEPT_MAPS) }))
}

const emptyMap = ({ key, question }: MapRequest): MapState => {
  const total = question.cutoffsHz.length * question.rollOffs.length
  return {
    ...{ key, total, before: null, done: 0, draws: 0, reason: null },
    cells: new Array<null>(total).fill(null),
    status: 'running',
  }
}

/** Coarse first; then the whole of the row that the desk begins with. */
export function orderOfWork(cutoffs: number, rollOffs: number, row: number): readonly number[] {
  const { order, levelEnds } = planMap(cutoffs, rollOffs)
  const [coarse, rest] = [order.slice(0, levelEnds[0]), order.slice(levelEnds[0])]
  const inRow = (index: number) => Math.floor(index / cutoffs) === row
  return [...coarse, ...rest.filter(inRow), ...rest.filter((index) => !inRow(index))]
}

interface Run {
  /** Slices that are asked for at once; 1 unless said otherwise. */
  readonly workers?: number
  /** Rounds after which a simulated map is left as it is, still running; all of them unless said otherwise. */
  readonly rounds?: number
}

/**
 * Computes a map, or what is left of it, until it is complete or the signal aborts. Cells are handed out in the order of the plan; what comes of them
 * does not hang on how many workers there are.
 */
export async function runMap(request: MapRequest, slice: Slice, signal: AbortSignal, run: Run = {}): Promise<void> {
  const { key, question, simulated } = request
  const { workers = 1, rounds = ROUNDS.length } = run
  let state: MapState = { ...(mapStore.getState().maps[key] ?? emptyMap(request)), status: 'running', reason: null }
  if (state.done === state.total && (!simulated || state.draws >= drawsOf(ROUNDS[ROUNDS.length - 1]))) {
    keep({ ...state, status: 'complete' })
    return
  }
  const order = orderOfWork(question.cutoffsHz.length, question.rollOffs.length, request.row)
  keep(state)
  let keptAt = Date.now()
  try {
    for (let round = 0; round < (simulated ? rounds : 1); round++) {
      const batches = { from: round === 0 ? 0 : ROUNDS[round - 1], to: ROUNDS[round] }
      const wanted = drawsOf(batches.to)
      if (simulated && state.draws >= wanted) continue
      const left = order.filter((index) => !isDone(state.cells[index], wanted))
      // one worker takes all that is left, and does what it has time for
      let share = workers === 1 ? left.length : FIRST_SHARE
      let underWay = 0
      let asked = state.before !== null
      let over = false
      const work = async () => {
        while (left.length > 0 && !over) {
          const given = left.splice(0, share)
          underWay += given.length
          const before = !asked
          asked = true
          const done = await slice(key, question, given, batches, SLICE_MS, before, signal)
          if (signal.aborted) throw new DOMException('the work was cancelled', 'AbortError')
          if (over) return
          const { cells } = done
          underWay -= given.length
          left.unshift(...given.slice(cells.length))
          if (workers > 1) share = cells.length === given.length ? Math.max(share, 2 * given.length) : cells.length + 1
          const next = state.cells.slice()
          for (const cell of cells) {
            const earlier = next[cell.index]
            next[cell.index] = earlier && round > 0 ? mergeCells(earlier, cell) : cell
          }
          const finished = state.total - left.length - underWay
          state = { ...state, before: state.before ?? done.before, cells: next, done: finished }
          // many workers answer more often than there is anything new to see
          if (Date.now() - keptAt < SLICE_MS / 2 && finished < state.total) continue
          keep(state)
          keptAt = Date.now()
        }
      }
      try {
        await Promise.all(Array.from({ length: workers }, work))
      } finally {
        over = true
      }
      state = { ...state, draws: simulated ? wanted : 0 }
      keep(state)
    }
    if (!simulated || rounds >= ROUNDS.length) keep({ ...state, status: 'complete' })
  } catch (error) {
    const cancelled = error instanceof DOMException && error.name === 'AbortError'
    keep({
      ...state,
      status: cancelled ? 'cancelled' : 'failed',
      reason: cancelled ? null : error instanceof Error ? error.message : String(error),
    })
  }
}

/** Cells of the first slice of each worker: few, so that the coarse map comes first. */
const FIRST_SHARE = 4

/**
 * Computes several maps: the first round of each, then the next, so that all of them can be seen soon. Of two that are one map the second stands
 * there at once.
 */
export async function runMaps(
  requests: readonly MapRequest[],
  slice: Slice,
  signal: AbortSignal,
  workers = 1,
): Promise<void> {
  for (let rounds = 1; rounds <= ROUNDS.length; rounds++) {
    for (const request of requests) {
      const state = mapStore.getState().maps[request.key]
      if (rounds > 1 && (!request.simulated || state?.status === 'failed')) continue
      if (!signal.aborted) await runMap(request, slice, signal, { workers, rounds })
    }
  }
  if (!signal.aborted) return
  for (const request of requests) {
    const state = mapStore.getState().maps[request.key] ?? emptyMap(request)
    if (state.status === 'running') keep({ ...state, status: 'cancelled' })
  }
}

const drawsOf = (batches: number) => batches * BATCH_DRAWS

/** Of a simulated score: as many draws as wanted; cells that cannot be realised are done at once. */
function isDone(cell: MapCell | null, draws: number): boolean {
  if (!cell) return false
  const simulated = cell.scores.find((score) => score.simulated !== null)?.simulated
  return !simulated || simulated.every(({ found, missing }) => found + missing >= draws)
}
