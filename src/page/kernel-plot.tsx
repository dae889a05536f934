import { useMemo } from 'react'
import { Axis, Clipped, DirectLabel, Dot, type Frame, GridLines, PathArea, PathLine, ZeroLine } from '../plot/index.ts'
import { areaPath, linePath } from '../plot/path.ts'
import { compressedScale, linearScale } from '../plot/scale.ts'
import type { KernelFigure } from '../state/evaluation.ts'
import { envelopeCourse, type KernelRange, type KernelWords, linearWidth, valueDomain } from './kernel-shape.ts'
import { type DrawnPin, PinLine } from './pin-line.tsx'
import { placeWords, type StepEnd } from './kernel-labels.ts'

interface KernelPlotProps {
  kernel: KernelFigure
  pins: readonly DrawnPin[]
  shows: 'impulse response' | 'step response'
  compressed: boolean
  range: KernelRange
  words: KernelWords
  end: StepEnd | null
  frame: Frame
}

/** The curve over lag, with its reach between brackets and what is outside it on the colour of the paper. */
export function KernelPlot({ kernel, pins, shows, compressed, range, words, end, frame }: KernelPlotProps) {
  const { left, right, top, bottom, plotWidth } = frame
  const values = shows === 'impulse response' ? kernel.impulse : kernel.step
  const pinned = useMemo(
    () =>
      pins.map(({ index, name, result }) => ({
        index,
        name,
        values: shows === 'impulse response' ? result.impulse : result.step,
      })),
    [pins, shows],
  )
  const { fromMs, toMs } = range
  const x = useMemo(() => linearScale([fromMs, toMs], [left, right]), [fromMs, toMs, left, right])
  const y = useMemo(() => {
    const first = Math.floor(fromMs / kernel.stepMs) - kernel.fromIndex
    const end = Math.ceil(toMs / kernel.stepMs) - kernel.fromIndex + 1
    const width = compressed ? linearWidth(values) : null
    const domains = [values, ...pinned.map((pin) => pin.values)].map((drawn) => valueDomain(drawn, first, end, width))
    const domain: [number, number] = [
      Math.min(...domains.map(([low]) => low)),
      Math.max(...domains.map(([, high]) => high)),
    ]
    return width === null ? linearScale(domain, [bottom, top]) : compressedScale(domain, [bottom, top], width)
  }, [values, pinned, kernel, compressed, fromMs, toMs, bottom, top])
  const xs = { start: kernel.fromIndex * kernel.stepMs, step: kernel.stepMs }
  const { line, area } = useMemo(() => {
    const xs = { start: kernel.fromIndex * kernel.stepMs, step: kernel.stepMs }
    // a causal kernel comes out of nothing
    const before = xs.start > fromMs ? `M${left},${y.toPixel(0)}H${x.toPixel(xs.start)}` : ''
    const rise = before && values.length > 0 ? `V${y.toPixel(values[0])}` : ''
    return { line: before + rise + linePath(xs, values, x, y), area: areaPath(xs, values, x, y) }
  }, [kernel, values, x, y, fromMs, left])
  const placed = useMemo(() => {
    const course = envelopeCourse(kernel, values, x, y, left, plotWidth)
    const ends = range.reach === null ? [] : [x.toPixel(range.reach.fromMs), x.toPixel(range.reach.toMs)]
    const taken = ends.map((at) => ({ left: at - 3, right: at + 3, top, bottom }))
    const endX = Math.min(right, ends[1] ?? right)
    const endY = y.toPixel(end?.value ?? 0)
    const others = pinned.map((pin) => ({
      name: pin.name,
      course: envelopeCourse(kernel, pin.values, x, y, left, plotWidth),
    }))
    return placeWords({ words, end, endX, endY, limits: { left, right, top, bottom }, course, others, taken })
  }, [range, kernel, values, pinned, words, end, x, y, left, right, top, bottom, plotWidth])
  const outside = range.reach === null ? [] : outsideOf(range.reach, x.toPixel, left, right)
  return (
    <>
      {outside.map(([from, to]) => (
        <rect
          key={from}
          x={from}
          y={top}
          width={to - from}
          height={bottom - top}
          fill="var(--paper)"
          fillOpacity={0.85}
          pointerEvents="none"
        />
      ))}
      <GridLines frame={frame} scale={x} along="x" />
      <GridLines frame={frame} scale={y} along="y" />
      <ZeroLine frame={frame} scale={x} along="x" />
      <ZeroLine frame={frame} scale={y} along="y" />
      <Axis side="bottom" scale={x} at={bottom} title="Lag, ms" />
      <Axis side="left" scale={y} at={left} />
      {range.reach === null ? null : <Brackets reach={range.reach} toPixel={x.toPixel} frame={frame} />}
      <Clipped frame={frame}>
        <PathArea d={area} tone="after" opacity={0.12} />
        {pinned.map((pin) => (
          <PinLine key={pin.index} index={pin.index} xs={xs} ys={pin.values} x={x} y={y} />
        ))}
        <PathLine d={line} tone="after" weight="thin" />
      </Clipped>
      {end ? <Dot x={right} y={y.toPixel(end.value)} tone="after" /> : null}
      {end && placed.end ? (
        <DirectLabel
          x={placed.end.x}
          y={placed.end.y}
          tone="after"
          anchor={placed.end.anchor}
          ground={placed.end.crossed ? 'sheet' : 'none'}
          strong
        >
          {end.words}
        </DirectLabel>
      ) : null}
      {placed.names.map(({ text, x: px, y: py, anchor, crossed }) => (
        <DirectLabel key={text} x={px} y={py} tone="quiet" anchor={anchor} ground={crossed ? 'sheet' : 'none'}>
          {text}
        </DirectLabel>
      ))}
      {placed.lines.map(({ text, strong, x: px, y: py, anchor, crossed }) => (
        <DirectLabel
          key={text}
          x={px}
          y={py}
          tone={strong ? 'ink' : 'quiet'}
          anchor={anchor}
          strong={strong}
          ground={crossed ? 'sheet' : 'none'}
        >
          {text}
        </DirectLabel>
      ))}
    </>
  )
}

/** Upright lines at both ends of the reach, bent inwards at the top, as brackets are. */
function Brackets(props: { reach: { fromMs: number; toMs: number }; toPixel: (ms: number) => number; frame: Frame }) {
  const { reach, toPixel, frame } = props
  const bracket = (ms: number, inwards: number) => {
    const at = Math.round(toPixel(ms) - 0.5) + 0.5
    if (at < frame.left || at > frame.right) return ''
    return `M${at + inwards},${frame.top + 0.5}H${at}V${frame.bottom - 0.5}H${at + inwards}`
  }
  return (
    <path
      d={bracket(reach.fromMs, 5) + bracket(reach.toMs, -5)}
      fill="none"
      stroke="var(--quiet)"
      strokeWidth={1}
      pointerEvents="none"
    />
  )
}

function outsideOf(
  reach: { fromMs: number; toMs: number },
  toPixel: (ms: number) => number,
  left: number,
  right: number,
): [number, number][] {
  const from = Math.max(left, Math.min(right, toPixel(reach.fromMs)))
  const to = Math.max(left, Math.min(right, toPixel(reach.toMs)))
  const strips: [number, number][] = [
    [left, from],
    [to, right],
  ]
  return strips.filter(([a, b]) => b > a)
}
