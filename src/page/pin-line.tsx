/** The lines of pinned chains: quiet and thin, each with dashes of its own, the same in every figure. */
import { useMemo } from 'react'
import { linePath } from '../plot/path.ts'
import type { Scale, Xs } from '../plot/index.ts'
import type { Evaluation, PinnedResult } from '../state/evaluation.ts'
import { shortened } from '../words/index.ts'

/** Apart from one another and from those of the stages, which stand in the same figure. */
const DASHES = ['13 3', '4 2.5', '13 3 1.5 3'] as const

export const pinDash = (index: number) => DASHES[index % DASHES.length]

/** A pin that could be computed, with its place among the pins. */
export interface DrawnPin {
  index: number
  /** As it is written on a figure. */
  name: string
  result: PinnedResult
}

/** Longest name that is written beside a curve, in letters. */
const LONGEST = 28

export function drawnPins({ pins }: Pick<Evaluation, 'pins'>): DrawnPin[] {
  return pins.flatMap((result, index) =>
    'reason' in result ? [] : [{ index, name: shortened(result.name, LONGEST), result }],
  )
}

export function PinPath({ d, index }: { d: string; index: number }) {
  return (
    <path
      className="pin-line"
      d={d}
      fill="none"
      pointerEvents="none"
      stroke="var(--quiet)"
      strokeWidth={1.3}
      strokeDasharray={pinDash(index)}
      strokeLinejoin="round"
    />
  )
}

/** A pinned curve through samples; its path is made anew only when data or scales are other objects. */
export function PinLine(props: { index: number; xs: Xs; ys: ArrayLike<number>; x: Scale; y: Scale }) {
  const { index, xs, ys, x, y } = props
  const start = 'step' in xs ? xs.start : Number.NaN
  const step = 'step' in xs ? xs.step : Number.NaN
  const positions = 'step' in xs ? null : xs
  const d = useMemo(() => linePath(positions ?? { start, step }, ys, x, y), [positions, start, step, ys, x, y])
  return <PinPath d={d} index={index} />
}

/** A piece of the line, beside the name in tables. */
export function PinSample({ index }: { index: number }) {
  return (
    <svg width="28" height="8" aria-hidden="true">
      <line x1="0" x2="28" y1="4" y2="4" stroke="var(--quiet)" strokeWidth={1.3} strokeDasharray={pinDash(index)} />
    </svg>
  )
}
