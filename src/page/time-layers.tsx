/** What the time figure's labels and handles stand on: hatching, grid, windows, curves and axes. Drawn anew only when one of them changes. */
import { Fragment, memo } from 'react'
import {
  Area,
  Axis,
  Clipped,
  type Frame,
  GridLines,
  HatchedZone,
  Line,
  type Scale,
  StaticBand,
  ticksFor,
  type Tone,
  ZeroLine,
} from '../plot/index.ts'
import type { Evaluation } from '../state/evaluation.ts'
import { type DrawnPin, PinLine } from './pin-line.tsx'
import type { ErrorBand } from './error-bands.ts'
import { type TimeAxis, timeTicks } from './time-axis.ts'
import type { Windows } from './time-bands.tsx'

/** The colour of a condition that is not the chosen one: by its place, so that choosing another changes no more than it must. */
export const conditionTone = (place: number): Tone => `condition-${(place % 4) + 1}`

interface PlaneProps {
  frame: Frame
  x: Scale
  y: Scale
}

type GroundsProps = PlaneProps & {
  axis: TimeAxis
  windows: Windows
  unseen: readonly { fromPx: number; toPx: number }[]
}

/** Hatching, grid and windows under the curves. */
export const Grounds = memo(function Grounds({ frame, x, y, axis, windows, unseen }: GroundsProps) {
  const { score, baseline } = windows
  return (
    <>
      <HatchedZone frame={frame} kind="outside" fromPx={frame.left} toPx={x.toPixel(axis.firstMs)} />
      <HatchedZone frame={frame} kind="outside" fromPx={x.toPixel(axis.lastMs)} toPx={frame.right} />
      {unseen.map((part) => (
        <HatchedZone key={part.fromPx} frame={frame} kind="unseen" {...part} />
      ))}
      <GridLines frame={frame} scale={x} along="x" ticks={timeTicks(x).ticks} />
      <GridLines frame={frame} scale={y} along="y" />
      {baseline === 'none' ? null : (
        <StaticBand frame={frame} scale={x} look="light" value={{ from: baseline.fromMs, to: baseline.toMs }} />
      )}
      <StaticBand frame={frame} scale={x} value={{ from: score.fromMs, to: score.toMs }} />
      <ZeroLine frame={frame} scale={y} along="y" />
      <ZeroLine frame={frame} scale={x} along="x" />
    </>
  )
})

type CurvesProps = PlaneProps & {
  axis: TimeAxis
  evaluation: Evaluation
  pins: readonly DrawnPin[]
  /** One standard error on either side of the average. */
  bands: readonly ErrorBand[] | null
  takenOut: boolean
}

export const TimeCurves = memo(function TimeCurves(props: CurvesProps) {
  const { frame, x, y, axis, evaluation, pins, bands, takenOut } = props
  const { curves, chosen } = evaluation
  const main = curves[chosen]
  const on = { xs: { start: axis.firstMs, step: axis.stepMs }, x, y }
  return (
    <Clipped frame={frame}>
      {takenOut ? <Area {...on} ys={main.takenOut} tone="taken-out" /> : null}
      {curves.map(({ name, before, after }, i) =>
        i === chosen ? null : (
          <Fragment key={name}>
            <Line {...on} ys={before} tone={conditionTone(i)} weight="hair" />
            <Line {...on} ys={after} tone={conditionTone(i)} weight="thick" className="condition-after" />
          </Fragment>
        ),
      )}
      {takenOut ? <Line {...on} ys={main.takenOut} tone="taken-out" /> : null}
      {bands?.map(({ lower, upper, tone }) => (
        <Area key={tone} {...on} ys={upper} base={lower} tone={tone} opacity={0.2} />
      ))}
      <Line {...on} ys={main.before} tone="before" />
      {pins.map(({ index, result }) => (
        <PinLine key={index} index={index} {...on} ys={result.after} />
      ))}
      <Line {...on} ys={main.after} tone="after" />
    </Clipped>
  )
})

/** The unit stands above the numbers, so none stands at the very top. */
const UNIT_PX = 18

export const TimeAxes = memo(function TimeAxes({ frame, x, y }: PlaneProps) {
  const ticks = ticksFor(y, { lie: 'upright' }).filter((tick) => tick.pixel > frame.top + UNIT_PX)
  return (
    <>
      <Axis side="bottom" scale={x} at={frame.bottom} {...timeTicks(x)} />
      <Axis side="left" scale={y} at={frame.left} ticks={ticks} title="µV" />
    </>
  )
})
