/** Phase or group delay of the whole chain over frequency, where it lets something through. */
import { useMemo } from 'react'
import { Axis, Clipped, DirectLabel, type Frame, GridLines, PathLine, ZeroLine } from '../plot/index.ts'
import { linePath } from '../plot/path.ts'
import type { Scale } from '../plot/scale.ts'
import { ticksAt, ticksFor } from '../plot/ticks.ts'
import type { FrequencyFigure } from '../state/evaluation.ts'
import { axisTitle, DRAWN_GAIN, type Pieces } from './frequency-scale.ts'

interface FrequencyPhaseProps {
  frequency: FrequencyFigure
  shows: 'phase' | 'group delay'
  frame: Frame
  x: Scale
  y: Scale
  pieces: Pieces
}

export function FrequencyPhase({ frequency, shows, frame, x, y, pieces }: FrequencyPhaseProps) {
  const { bottom, left, right } = frame
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
  const place = useMemo(() => emptiest(pieces.hz, pieces.values, x, y, left, right, flat), [pieces, x, y, left, right, flat])
  return (
    <>
      <Unheard frequency={frequency} frame={frame} x={x} />
      <GridLines frame={frame} scale={x} along="x" />
      <GridLines frame={frame} scale={y} along="y" ticks={ticks} />
      <ZeroLine frame={frame} scale={y} along="y" />
      <Axis side="bottom" scale={x} at={bottom} title={axisTitle(x.domain[0], x.domain[1], frame.plotWidth)} />
      <Axis side="left" scale={y} at={left} ticks={ticks} />
      <Clipped frame={frame}>
        <PathLine d={path} tone="after" />
      </Clipped>
      <DirectLabel x={place.x} y={place.y} tone="after" anchor="middle" strong>
        {words}
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

/** Where the label stands: over the middle of the line if that is flat, else in the corner farther from it. */
function emptiest(hz: number[], values: number[], x: Scale, y: Scale, left: number, right: number, flat: boolean) {
  const [bottom, top] = y.range
  const seen = hz.map((f, i) => [x.toPixel(f), y.toPixel(values[i])] as const).filter(([, py]) => Number.isFinite(py))
  if (seen.length === 0) return { x: (left + right) / 2, y: (top + bottom) / 2 }
  const middle = (seen[0][0] + seen[seen.length - 1][0]) / 2
  const within = Math.min(right - 130, Math.max(left + 130, middle))
  if (flat) return { x: within, y: y.toPixel(0) - 14 }
  const rooms = [left + 60, within, right - 60].flatMap((px) =>
    [top + 14, bottom - 14].map((py) => {
      const near = seen.filter(([sx]) => Math.abs(sx - px) < 50).map(([, sy]) => Math.abs(sy - py))
      return { x: px, y: py, room: Math.min(200, ...near) }
    }),
  )
  return rooms.reduce((best, room) => (room.room > best.room ? room : best))
}
