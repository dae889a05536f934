/** What the time figure and the effective window have in common: their props, their margins and their cursor. */
import { useMemo } from 'react'
import { type Frame, linearScale, type Point, sampleAt } from '../plot/index.ts'
import type { Evaluation } from '../state/evaluation.ts'
import type { Workspace } from '../state/workspace.ts'
import type { TimeAxis } from './time-axis.ts'
import type { Windows } from './time-bands.tsx'

export interface SharedAxis {
  evaluation: Evaluation
  workspace: Workspace
  caption: () => string
  axis: TimeAxis
  windows: Windows
  /** Sample of the epoch under the cursor. */
  cursor: number
  onCursor: (ms: number) => void
}

/** Room for the axes; the numbers on the left hang into the page's margin. */
export const MARGIN = { top: 6, right: 0, bottom: 24, left: 44 }

/** The sample under the pointer, in ms. */
export function cursorAt(point: Point, frame: Frame, axis: TimeAxis): number {
  const x = linearScale([axis.fromMs, axis.toMs], [frame.left, frame.right])
  return sampleAt(x, point.x, axis.firstMs, axis.lastMs, axis.stepMs)
}

/** The frame as one object for as long as its size stays, so that nothing in it is laid out anew without need. */
export function useFrame(frame: Frame): Frame {
  const { width, height, id, left, top } = frame
  // biome-ignore lint/correctness/useExhaustiveDependencies: these say all that a frame is made of
  return useMemo(() => frame, [width, height, id, left, top])
}
