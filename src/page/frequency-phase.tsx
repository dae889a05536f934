/** Phase or group delay of the whole chain over frequency, where it lets something through. */
import { type ReactNode, useMemo } from 'react'
import { Axis, Clipped, DirectLabel, type Frame, GridLines, PathLine, ZeroLine } from '../plot/index.ts'
import { textWidth } from '../plot/axis-layout.ts'
import { linePath } from '../plot/path.ts'
import { placeLabels, placesAlong } from '../plot/place-labels.ts'
import type { Scale } from '../plot/scale.ts'
import { ticksAt, ticksFor } from '../plot/ticks.ts'
import type { FrequencyFigure } from '../state/evaluation.ts'
import { courseOf } from './curve-course.ts'
import type { Pieces } from './frequency-pieces.ts'
import { axisTitle } from './frequency-words.ts'
import { DRAWN_GAIN } from './gain-axis.ts'
import { PinLine, PinPath } from './pin-line.tsx'

interface FrequencyPhaseProps {
  frequency: FrequencyFigure
  shows: 'phase' | 'group delay'
  frame: Frame
  x: Scale
  y: Scale
  pieces: Pieces
  pinned: readonly { index: number; name: string; pieces: Pieces }[]
  /** Drawn over the curve: the cursor. */
  children: ReactNode
}

export function FrequencyPhase({ frequency, shows, frame, x, y, pieces, pinned, children }: FrequencyPhaseProps) {
  const { bottom, left, right, top } = frame
  const path = useMemo(() => linePath(pieces.hz, pieces.values, x, y), [pieces, x, y])
  const ticks = shows === 'phase' ? ticksAt(y, [-180, -90, 0, 90, 180]) : ticksFor(y, { lie: 'upright' })
  const drawn = pieces.values.filter(Number.isFinite)
  const flat = drawn.length > 0 && drawn.every((value) => Math.abs(value) < 1e-6)
  const words =
    drawn.length === 0
      ? 'the gain exceeds 1 % nowhere'
      : flat
        ? shows === 'phase'
          ? 'whole chain: zero-phase'
          : 'whole chain: no delay at any frequency'
        : 'whole chain'
  const place = useMemo(() => {
    const limits = { left, right, top, bottom }
    const size = { width: textWidth(words) * 1.06, height: 15 }
    const heights = courseOf(pieces.hz, pieces.values, x, y, left, right - left)
    // towards the middle of what is drawn, above the curve rather than below it
    const seen = Array.from(heights.keys()).filter((column) => Number.isFinite(heights[column]))
    const middle = seen.length > 0 ? (seen[0] + seen[seen.length - 1]) / 2 : (right - left) / 2
    const along = placesAlong(
      heights,
      size,
      left,
      (column, side) => Math.abs(column - middle) / 60 + (side > 0 ? 0.5 : 0),
    )
    const anywhere = { x: (left + right) / 2, y: (top + bottom) / 2, anchor: 'middle' as const, cost: 100 }
    const [found] = placeLabels([{ ...size, places: [...along, anywhere] }], {
      limits,
      courses: [{ heights, weight: 3 }],
    })
    return found
  }, [pieces, words, x, y, left, right, top, bottom])
  return (
    <>
      <Unheard frequency={frequency} frame={frame} x={x} />
      <GridLines frame={frame} scale={x} along="x" />
      <GridLines frame={frame} scale={y} along="y" ticks={ticks} />
      <ZeroLine frame={frame} scale={y} along="y" />
      <Axis side="bottom" scale={x} at={bottom} title={axisTitle(x)} />
      <Axis side="left" scale={y} at={left} ticks={ticks} />
      <Clipped frame={frame}>
        {pinned.map((pin) => (
          <PinLine key={pin.index} index={pin.index} xs={pin.pieces.hz} ys={pin.pieces.values} x={x} y={y} />
        ))}
        <PathLine d={path} tone="after" />
      </Clipped>
      {pinned.map((pin, row) => (
        <PinKey key={pin.index} index={pin.index} name={pin.name} right={right - 6} y={top + 10 + 16 * row} />
      ))}
      {place ? (
        <DirectLabel
          x={place.x}
          y={place.y}
          tone="after"
          anchor={place.anchor}
          ground={place.crossed ? 'sheet' : 'none'}
          strong
        >
          {words}
        </DirectLabel>
      ) : null}
      {children}
    </>
  )
}

/** Phases of zero-phase chains lie on one another: their names stand in a corner, each with a piece of its line. */
function PinKey({ index, name, right, y }: { index: number; name: string; right: number; y: number }) {
  const end = right - textWidth(name) * 1.06 - 6
  return (
    <>
      <PinPath d={`M${end - 30},${y}H${end}`} index={index} />
      <DirectLabel x={right} y={y} tone="quiet" anchor="end" ground="sheet">
        {name}
      </DirectLabel>
    </>
  )
}

/** Strips where next to nothing gets through, in the colour of the paper, so that the missing line explains itself. */
function Unheard({ frequency: { hz, gain }, frame, x }: { frequency: FrequencyFigure; frame: Frame; x: Scale }) {
  const strips: [number, number][] = []
  for (let i = 0; i < hz.length; i++) {
    if (gain[i] >= DRAWN_GAIN) continue
    const from = i
    while (i + 1 < hz.length && gain[i + 1] < DRAWN_GAIN) i++
    strips.push([Math.max(frame.left, x.toPixel(hz[from])), Math.min(frame.right, x.toPixel(hz[i]))])
  }
  return strips
    .filter(([from, to]) => to > from)
    .map(([from, to]) => (
      <rect
        key={from}
        x={from}
        y={frame.top}
        width={to - from}
        height={frame.plotHeight}
        fill="var(--paper)"
        fillOpacity={0.8}
        pointerEvents="none"
      />
    ))
}
