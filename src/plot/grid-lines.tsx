import type { Frame } from './frame.ts'
import type { Scale } from './scale.ts'
import { ticksFor } from './ticks.ts'
import type { Tick } from './ticks.ts'

export type GridLinesProps = {
  frame: Frame
  scale: Scale
  /** The axis whose ticks they continue: 'x' draws upright lines, 'y' flat ones. */
  along: 'x' | 'y'
  /** The ticks of that axis, if not the scale's own. */
  ticks?: readonly Tick[]
}

/** Hair lines across the plot area, one per tick. */
export function GridLines({ frame, scale, along, ticks }: GridLinesProps) {
  const drawn = ticks ?? ticksFor(scale, { lie: along === 'y' ? 'upright' : 'flat' })
  return (
    <path
      className="plot-grid"
      aria-hidden="true"
      pointerEvents="none"
      d={drawn.map((tick) => across(frame, along, tick.pixel)).join('')}
      fill="none"
      stroke="var(--rule)"
      strokeWidth={1}
    />
  )
}

export type ZeroLineProps = {
  frame: Frame
  scale: Scale
  along: 'x' | 'y'
  /** Where the line stands; default 0. */
  value?: number
}

/** The line at zero (or another value); nothing where that lies outside the scale's domain. */
export function ZeroLine({ frame, scale, along, value = 0 }: ZeroLineProps) {
  const [a, b] = scale.domain
  if (!(value >= Math.min(a, b) && value <= Math.max(a, b))) return null
  return (
    <path
      className="plot-zero"
      aria-hidden="true"
      pointerEvents="none"
      d={across(frame, along, scale.toPixel(value))}
      fill="none"
      stroke="var(--quiet)"
      strokeWidth={1}
    />
  )
}

/** A hair line at the nearest half pixel, where it is one pixel wide and sharp. */
function across(frame: Frame, along: 'x' | 'y', pixel: number): string {
  const at = Math.round(pixel - 0.5) + 0.5
  return along === 'x' ? `M${at},${frame.top}V${frame.bottom}` : `M${frame.left},${at}H${frame.right}`
}
