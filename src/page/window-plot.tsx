/** What is drawn inside the effective window's frame. */
import { memo, useMemo } from 'react'
import {
  Area,
  Axis,
  Clipped,
  compressedScale,
  type Frame,
  GridLines,
  HatchedZone,
  Line,
  linearScale,
  PathArea,
  PathLine,
  type Scale,
  StaticBand,
  StaticCursor,
  stepPath,
  ticksFor,
  ZeroLine,
} from '../plot/index.ts'
import { type CurveCourse, placesAlong } from '../plot/place-labels.ts'
import type { WindowFigure } from '../state/evaluation.ts'
import type { Workspace } from '../state/workspace.ts'
import { LabelTexts, Unspoken } from './label-text.tsx'
import { type DrawnPin, PinLine } from './pin-line.tsx'
import {
  around,
  courseOf,
  drawnLabels,
  firstThatFits,
  labelSize,
  placesBeside,
  placesOver,
  type WantedText,
} from './placed-labels.ts'
import { type TimeAxis, timeTicks } from './time-axis.ts'
import type { Windows } from './time-bands.tsx'
import { useFrame } from './shared-axis.ts'
import { boxesOf, filteredWords, peakHere, perHundredMs, unfilteredWords, weightText } from './window-words.ts'

interface WindowPlotProps {
  frame: Frame
  window: WindowFigure
  workspace: Workspace
  axis: TimeAxis
  windows: Windows
  cursor: number
  scale: 'compressed' | 'linear'
  pins?: readonly DrawnPin[]
}

const NO_PINS: readonly DrawnPin[] = []

/** Part of the largest weight up to which the compressed scale is about linear. */
const LINEAR_PART = 0.03
/** Room above and below the weights, px. */
const ROOM_PX = 6

/** Up to the largest weights on both sides, zero among them; about linear up to a small part of the largest filtered weight. */
export function weightScale(
  unfiltered: Float64Array,
  filtered: Float64Array,
  kind: 'compressed' | 'linear',
  frame: Pick<Frame, 'top' | 'bottom'>,
  pinned: readonly Float64Array[] = [],
): Scale {
  let low = 0
  let high = 0
  for (const values of [unfiltered, filtered, ...pinned])
    for (const value of values) {
      if (value < low) low = value
      if (value > high) high = value
    }
  if (low === high) high = 1
  const range = [frame.bottom - ROOM_PX, frame.top + ROOM_PX] as const
  return kind === 'linear'
    ? linearScale([low, high], range)
    : compressedScale([low, high], range, LINEAR_PART * (largest(filtered) || 1))
}

function largest(values: Float64Array): number {
  return values.reduce((most, value) => Math.max(most, Math.abs(value)), 0)
}

export function WindowPlot({
  window,
  workspace,
  axis,
  windows,
  cursor,
  scale,
  pins = NO_PINS,
  ...props
}: WindowPlotProps) {
  const frame = useFrame(props.frame)
  const { score } = workspace
  const x = useMemo(() => linearScale([axis.fromMs, axis.toMs], [frame.left, frame.right]), [axis, frame])
  const curves = useMemo(
    () => ({
      startMs: axis.firstMs + window.fromIndex * axis.stepMs,
      unfiltered: perHundredMs(window.unfiltered, axis.stepMs),
      filtered: perHundredMs(window.filtered, axis.stepMs),
      pinned: pins.flatMap(({ index, name, result }) =>
        result.window ? [{ index, name, weights: perHundredMs(result.window, axis.stepMs) }] : [],
      ),
    }),
    [window, pins, axis],
  )
  const { startMs, unfiltered, filtered, pinned } = curves
  const y = useMemo(() => {
    const weights = pinned.map((pin) => pin.weights)
    return weightScale(unfiltered, filtered, scale, frame, weights)
  }, [unfiltered, filtered, pinned, scale, frame])
  const courses = useMemo(
    () =>
      [unfiltered, filtered, ...pinned.map((pin) => pin.weights)].map((values) =>
        courseOf(values, startMs, axis.stepMs, frame, x, y),
      ),
    [unfiltered, filtered, pinned, startMs, axis, frame, x, y],
  )
  const still = useMemo(() => {
    const right = x.toPixel(score.toMs)
    const left = x.toPixel(score.fromMs)
    const places = [0, 1, 2, 3].flatMap((row) => [
      { x: right + 8, y: frame.top + 10 + row * 16, anchor: 'start' as const, cost: row * 8 },
      { x: left - 8, y: frame.top + 10 + row * 16, anchor: 'end' as const, cost: row * 8 + 4 },
    ])
    const wordings = [unfilteredWords(score), 'unfiltered'].map(
      (strong): WantedText => ({ id: 'unfiltered', tone: 'before', rows: [{ strong }], places, maxCost: 30 }),
    )
    const unfilteredLabel = firstThatFits(wordings, (wanted) => drawnLabels([wanted], frame, courses, []))
    const wanted = pinned.map(({ index, name }, i) => pinWish(index, name, courses[2 + i], courses, frame))
    const inTheWay = unfilteredLabel.map((label) => label.box)
    return [...unfilteredLabel, ...drawnLabels(wanted, frame, courses, inTheWay)]
  }, [score, x, frame, pinned, courses])

  const cursorMs = axis.firstMs + cursor * axis.stepMs
  const weight = filtered[cursor - window.fromIndex]
  const dot = { x: x.toPixel(cursorMs), y: y.toPixel(weight) }
  const wordings = filteredWords(weightText(weight, score), cursorMs, peakHere(workspace, cursorMs, axis.stepMs / 2))
  const taken = [...still.map((label) => label.box), around(dot.x, dot.y, 5)]
  const moving = firstThatFits(
    wordings.map((strong, i): WantedText => {
      const text = { id: 'filtered', tone: 'after' as const, rows: [{ strong }] }
      const places = [...placesBeside(dot.x, dot.y, -1), ...placesOver(dot.x, dot.y, labelSize(text).width)]
      return { ...text, places, maxCost: i < wordings.length - 1 ? 34 : undefined }
    }),
    (wanted) => drawnLabels([wanted], frame, courses, taken),
  )
  const band = [x.toPixel(windows.score.fromMs), x.toPixel(windows.score.toMs)] as const
  return (
    <>
      <WindowCurves {...{ frame, x, y, axis, windows, curves }} />
      <StaticCursor frame={frame} scale={x} value={cursorMs} dots={[{ y: dot.y, tone: 'after' }]} />
      <Unspoken>
        <LabelTexts labels={still} band={band} />
        <LabelTexts labels={moving} band={band} />
      </Unspoken>
    </>
  )
}

/** A pinned window is named along its curve, where it runs apart from the others. */
function pinWish(
  index: number,
  name: string,
  own: CurveCourse,
  courses: readonly CurveCourse[],
  frame: Frame,
): WantedText {
  const text = { id: `pin ${index}`, tone: 'quiet' as const, rows: [{ plain: name }] }
  const rivals = courses.filter((course) => course !== own)
  const costAt = (column: number) =>
    2 * (10 - Math.min(10, ...rivals.map(({ heights }) => Math.abs(heights[column] - own.heights[column]))))
  return { ...text, places: placesAlong(own.heights, labelSize(text), frame.left, costAt), maxCost: 40 }
}

interface WindowCurvesProps {
  frame: Frame
  x: Scale
  y: Scale
  axis: TimeAxis
  windows: Windows
  curves: {
    startMs: number
    unfiltered: Float64Array
    filtered: Float64Array
    pinned: { index: number; name: string; weights: Float64Array }[]
  }
}

const WindowCurves = memo(function WindowCurves({ frame, x, y, axis, windows, curves }: WindowCurvesProps) {
  const { score, baseline } = windows
  const { startMs, unfiltered, filtered, pinned } = curves
  const box = useMemo(() => {
    const { edges, heights } = boxesOf(unfiltered)
    return stepPath(
      edges.map((edge) => startMs + edge * axis.stepMs),
      heights,
      x,
      y,
    )
  }, [unfiltered, startMs, axis, x, y])
  // the strip is low: two or three numbers
  const ticks = ticksFor(y, y.kind === 'linear' ? { count: 3 } : { lie: 'upright' })
  const on = { xs: { start: startMs, step: axis.stepMs }, x, y }
  return (
    <>
      <HatchedZone frame={frame} kind="outside" fromPx={frame.left} toPx={x.toPixel(axis.firstMs)} />
      <HatchedZone frame={frame} kind="outside" fromPx={x.toPixel(axis.lastMs)} toPx={frame.right} />
      <GridLines frame={frame} scale={x} along="x" ticks={timeTicks(x).ticks} />
      <GridLines frame={frame} scale={y} along="y" ticks={ticks} />
      {baseline === 'none' ? null : (
        <StaticBand frame={frame} scale={x} look="light" value={{ from: baseline.fromMs, to: baseline.toMs }} />
      )}
      <StaticBand frame={frame} scale={x} value={{ from: score.fromMs, to: score.toMs }} />
      <ZeroLine frame={frame} scale={y} along="y" />
      <ZeroLine frame={frame} scale={x} along="x" />
      <Clipped frame={frame}>
        <PathArea d={box} tone="quiet" opacity={0.1} />
        <Area {...on} ys={filtered} tone="after" />
        <PathLine d={box} tone="before" weight="hair" />
        {pinned.map(({ index, weights }) => (
          <PinLine key={index} index={index} {...on} ys={weights} />
        ))}
        <Line {...on} ys={filtered} tone="after" className="window-filtered" />
      </Clipped>
      <Axis side="left" scale={y} at={frame.left} ticks={ticks} />
    </>
  )
})
