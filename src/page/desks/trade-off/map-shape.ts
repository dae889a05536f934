/** Where the cells of a map lie, and how dark they are. */
import { type Frame, logScale, type Scale } from '../../../plot/index.ts'
import type { CellFigures } from '../../../evidence/trade-off-figures.ts'
import { layerValue } from '../../../state/map-figures.ts'
import type { TradeOff } from '../../../state/workspace.ts'

/** Columns are equally wide on the log axis, half a step beyond the first and the last cutoff. */
export function cutoffScale(cutoffsHz: readonly number[], from: number, to: number): Scale {
  const last = cutoffsHz.length - 1
  const half = last === 0 ? 1.1 : (cutoffsHz[last] / cutoffsHz[0]) ** (0.5 / last)
  return logScale([cutoffsHz[0] / half, cutoffsHz[last] * half], [from, to])
}

/** Rows go up with the roll-off. */
export const rowTop = (frame: Pick<Frame, 'bottom' | 'plotHeight'>, row: number, rows: number) =>
  frame.bottom - ((row + 1) * frame.plotHeight) / rows

export interface Shade {
  /** Size that is drawn palest and darkest; null where no cell has the layer's figure. */
  readonly range: readonly [number, number] | null
  /** From 0 to 1 for each cell; null where there is none. */
  readonly of: (cell: CellFigures | null) => number | null
}

/** Sizes over the range they have on this map; a bias or a shift begins at 0. */
export function shadeOf(cells: readonly (CellFigures | null)[], layer: TradeOff['layer']): Shade {
  const sizes = cells.flatMap((cell) => {
    const value = layerValue(cell, layer)
    return value === null ? [] : [Math.abs(value)]
  })
  if (sizes.length === 0) return { range: null, of: () => null }
  const least = layer === 'bias' || layer === 'latency shift' ? 0 : Math.min(...sizes)
  const most = Math.max(...sizes)
  return {
    range: [least, most],
    of: (cell) => {
      const value = layerValue(cell, layer)
      if (value === null) return null
      // a square root, since most of a map is near its small end
      return most > least ? Math.sqrt((Math.abs(value) - least) / (most - least)) : 0
    },
  }
}

/** The cell next to one, as arrow keys go; it stays in the map. */
export function movedCell(index: number, key: string, cutoffs: number, rows: number, far: boolean): number | null {
  const c = index % cutoffs
  const r = Math.floor(index / cutoffs)
  const by = far ? 5 : 1
  const to = (column: number, row: number) =>
    Math.max(0, Math.min(rows - 1, row)) * cutoffs + Math.max(0, Math.min(cutoffs - 1, column))
  switch (key) {
    case 'ArrowLeft':
      return to(c - by, r)
    case 'ArrowRight':
      return to(c + by, r)
    case 'ArrowUp':
      return to(c, r + 1)
    case 'ArrowDown':
      return to(c, r - 1)
    case 'Home':
      return to(0, r)
    case 'End':
      return to(cutoffs - 1, r)
    default:
      return null
  }
}
