/**
 * Trade-off maps as they are computed: coarse first, then every cell, then more draws for scores that are simulated. What was computed is kept
 * by the question's key, so that a map which was seen before stands there at once, and a cancelled one goes on where it was.
 */
import { createStore } from 'zustand/vanilla'
import { BATCH_DRAWS } from '../evidence/simulated-score.ts'
import { type MapCell, mergeCells, planMap, type PreparedMap } from '../evidence/trade-off-map.ts'
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

type Slice = (
  key: string,
  question: MapRequest['question'],
  order: readonly number[],
  batches: { from: number; to: number },
  budgetMs: number,
  signal: AbortSignal,
) => Promise<MapSlice>

const KEPT_MAPS = 12
const SLICE_MS = 80
/** Draws of the rounds after the first: their errors are half as large each time. */
const ROUNDS: readonly number[] = [4, 16, 40]

export const mapStore = createStore<{ maps: Readonly<Record<string, MapState>> }>(() => ({ maps: {} }))

function keep(state: MapState): void {
  mapStore.setState(({ maps }) => {
    const others = Object.entries(maps).filter(([key]) => key !== state.key)
    return { maps: Object.fromEntries([...others.slice(1 - KEPT_MAPS), [state.key, state]]) }
  })
}

const emptyMap = ({ key, question }: MapRequest): MapState => {
  const total = question.cutoffsHz.length * question.rollOffs.length
  return {
    ...{ key, total, before: null, done: 0, draws: 0, reason: null },
    cells: new Array<null>(total).fill(null),
    status: 'running',
  }
}

/**
 * Computes a map, or what is left of it, until it is complete or the signal aborts.
 *
 * @param slice the worker's function.
 */
export async function runMap(request: MapRequest, slice: Slice, signal: AbortSignal): Promise<void> {
  const { key, question, simulated } = request
  let state: MapState = { ...(mapStore.getState().maps[key] ?? emptyMap(request)), status: 'running', reason: null }
  if (state.done === state.total && (!simulated || state.draws >= ROUNDS[ROUNDS.length - 1] * BATCH_DRAWS)) {
    keep({ ...state, status: 'complete' })
    return
  }
  const { order } = planMap(question.cutoffsHz.length, question.rollOffs.length)
  keep(state)
  try {
    for (let round = 0; round < (simulated ? ROUNDS.length : 1); round++) {
      const batches = { from: round === 0 ? 0 : ROUNDS[round - 1], to: ROUNDS[round] }
      if (simulated && state.draws >= batches.to * BATCH_DRAWS) continue
      const wanted = drawsOf(batches.to)
      let left = order.filter((index) => !isDone(state.cells[index], wanted))
      while (left.length > 0) {
        const { before, cells } = await slice(key, question, left, batches, SLICE_MS, signal)
        if (signal.aborted) throw new DOMException('the work was cancelled', 'AbortError')
        const next = state.cells.slice()
        for (const cell of cells) {
          const earlier = next[cell.index]
          next[cell.index] = earlier && round > 0 ? mergeCells(earlier, cell) : cell
        }
        left = left.slice(cells.length)
        state = { ...state, before, cells: next, done: state.total - left.length }
        keep(state)
      }
      state = { ...state, draws: simulated ? wanted : 0 }
    }
    keep({ ...state, status: 'complete' })
  } catch (error) {
    const cancelled = error instanceof DOMException && error.name === 'AbortError'
    keep({
      ...state,
      status: cancelled ? 'cancelled' : 'failed',
      reason: cancelled ? null : error instanceof Error ? error.message : String(error),
    })
  }
}

const drawsOf = (batches: number) => batches * BATCH_DRAWS

/** Of a simulated score: as many draws as wanted; cells that cannot be realised are done at once. */
function isDone(cell: MapCell | null, draws: number): boolean {
  if (!cell) return false
  const simulated = cell.scores.find((score) => score.simulated !== null)?.simulated
  return !simulated || simulated.every(({ found, missing }) => found + missing >= draws)
}
