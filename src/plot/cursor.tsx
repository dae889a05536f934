import { textWidth } from './axis-layout.ts'
import { DirectLabel } from './direct-label.tsx'
import type { Frame } from './frame.ts'
import { useGesture } from './gesture.ts'
import { Dot } from './handle.tsx'
import { layoutLabels } from './label-layout.ts'
import type { Scale } from './scale.ts'
import type { Tone } from './tone.ts'

/** A curve's value under the cursor. */
export type CursorDot = {
  /** Height of the curve there, px; not finite: no dot and no label. */
  y: number
  tone: Tone
  /** Name of the curve, semibold; without name and text only the dot is drawn. */
  name?: string
  /** Its value, for example "7.90 µV". */
  text?: string
  /** Distance of the label from the line, px; default 12. */
  dx?: number
}

export type CursorLook = {
  frame: Frame
  /** The x scale. */
  scale: Scale
  value: number
  /** Up to three or so; labels move apart where they would cover each other. */
  dots?: readonly CursorDot[]
  /** Beside the top of the line, for example "400 ms". */
  label?: string
  /** Centre of that label, px; default 9 below the plot's top. */
  labelY?: number
}

const LABEL_HEIGHT = 17

/** The cursor's line, dots and labels without keyboard, for figures that follow another one's cursor. */
export function StaticCursor({ frame, scale, value, dots = [], label, labelY = frame.top + 9 }: CursorLook) {
  const x = scale.toPixel(value)
  if (!(x >= frame.left - 0.5 && x <= frame.right + 0.5)) return null
  const at = Math.round(x * 100) / 100
  const seen = dots.filter((dot) => Number.isFinite(dot.y))
  const labelled = seen.filter((dot) => dot.name !== undefined || dot.text !== undefined)
  const widths = labelled.map((dot) => textWidth(`${dot.name ?? ''} ${dot.text ?? ''}`) + (dot.dx ?? 12))
  // all labels change sides together, so that they stay one list
  const side = x + Math.max(0, ...widths) > frame.right && x - Math.max(0, ...widths) >= frame.left ? -1 : 1
  const heights = layoutLabels(
    labelled.map((dot) => ({ wanted: dot.y, height: LABEL_HEIGHT })),
    { top: frame.top, bottom: frame.bottom },
  )
  const labelLeft = label !== undefined && x - textWidth(label) - 7 >= frame.left
  return (
    <g className="plot-cursor" aria-hidden="true" pointerEvents="none">
      <path
        d={`M${at},${frame.top}V${frame.bottom}`}
        fill="none"
        stroke="var(--ink)"
        strokeWidth={1}
        strokeDasharray="1.5 3"
      />
      {label !== undefined && (
        <DirectLabel x={labelLeft ? x - 7 : x + 7} y={labelY} tone="ink" anchor={labelLeft ? 'end' : 'start'}>
          {label}
        </DirectLabel>
      )}
      {seen.map((dot, i) => (
        <Dot key={i} x={x} y={dot.y} tone={dot.tone} />
      ))}
      {labelled.map((dot, i) => (
        <DirectLabel
          key={i}
          x={x + side * (dot.dx ?? 12)}
          y={heights[i]}
          tone={dot.tone}
          anchor={side > 0 ? 'start' : 'end'}
        >
          {dot.name !== undefined && <tspan className="plot-strong">{dot.name}</tspan>}
          {dot.name !== undefined && dot.text !== undefined && ' '}
          {dot.text}
        </DirectLabel>
      ))}
    </g>
  )
}

export type CursorProps = CursorLook & {
  min: number
  max: number
  /** One step of the arrow keys: the sampling interval. */
  step: number
  /** Name of the slider, for example "cursor". */
  name: string
  /** What is read there, with units, for assistive technology: "400 ms: before 7.90 µV, after 4.58 µV". */
  valueText: string
  onChange: (value: number) => void
  onChangeStart?: () => void
  onChangeEnd?: () => void
}

/**
 * A cursor that can be focused and moved by keys. It has no pointer area of its own, which would lie over the bands: it follows the
 * pointer through FigureFrame's onHover, from which the page sets its value (see sampleAt).
 */
export function Cursor(props: CursorProps) {
  const { frame, scale, value, min, max, step, name, valueText } = props
  const within = (v: number) => Math.max(min, Math.min(max, v))
  const gesture = useGesture<number>({
    value,
    fromDrag: (_point, _start, startValue) => startValue,
    fromKey: (key, present) =>
      key.kind === 'end' ? (key.end === 'min' ? min : max) : within(present + key.steps * step),
    same: Object.is,
    onChange: props.onChange,
    onChangeStart: props.onChangeStart,
    onChangeEnd: props.onChangeEnd,
  })
  const x = Math.round(scale.toPixel(value) * 100) / 100
  return (
    <g
      className="plot-focus plot-slider"
      role="slider"
      aria-label={name}
      aria-orientation="horizontal"
      aria-valuemin={min}
      aria-valuemax={max}
      aria-valuenow={value}
      aria-valuetext={valueText}
      tabIndex={gesture.tabIndex}
      onKeyDown={gesture.onKeyDown}
      onKeyUp={gesture.onKeyUp}
      onBlur={gesture.onBlur}
    >
      <rect
        className="plot-focus-ring"
        x={x - 3}
        y={frame.top + 1}
        width={6}
        height={Math.max(0, frame.plotHeight - 2)}
        fill="none"
        pointerEvents="none"
      />
      <StaticCursor {...props} />
    </g>
  )
}

/**
 * The value of the sample nearest to a pixel: where the cursor stands for a pointer there.
 *
 * @param min   value of the first sample.
 * @param max   value of the last sample.
 * @param step  sampling interval, above 0.
 */
export function sampleAt(scale: Scale, pixel: number, min: number, max: number, step: number): number {
  const last = Math.round((max - min) / step)
  const index = Math.max(0, Math.min(last, Math.round((scale.fromPixel(pixel) - min) / step)))
  return min + index * step
}
