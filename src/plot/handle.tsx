import { useGesture } from './gesture.ts'
import type { ChangeHandlers } from './gesture.ts'
import type { Scale } from './scale.ts'
import { toneColor } from './tone.ts'
import type { Tone } from './tone.ts'

export type HandleProps = ChangeHandlers<number> & {
  /** The x scale, of any kind. */
  scale: Scale
  value: number
  /** Centre of the circle, px. */
  y: number
  min: number
  max: number
  /**
   * The value some steps away (negative: back), for the keyboard; what it gives is held within min..max.
   * For a cutoff: (v, steps) => v * 1.01 ** steps.
   */
  stepBy: (value: number, steps: number) => number
  /** Rounds a dragged value; default: to three significant digits. */
  snap?: (value: number) => number
  /** What the handle sets, for example "high-pass, half-amplitude cutoff". */
  label: string
  /** A value with its unit, for example "1.00 Hz". */
  valueText: (value: number) => string
  /** Default 'after'. */
  tone?: Tone
  /** Radius, px; default 5.5. */
  radius?: number
}

/** A circle dragged along the x axis, with the keyboard of a slider. */
export function Handle(props: HandleProps) {
  const {
    scale,
    value,
    y,
    min,
    max,
    stepBy,
    snap = threeDigits,
    label,
    valueText,
    tone = 'after',
    radius = 5.5,
  } = props
  const within = (v: number) => Math.max(min, Math.min(max, v))
  const gesture = useGesture<number>({
    value,
    fromDrag: (point, start, startValue) =>
      // a grab without a move leaves the value as it is, whatever digits it has
      point.x === start.x ? startValue : within(snap(scale.fromPixel(scale.toPixel(startValue) + point.x - start.x))),
    fromKey: (key, present) =>
      key.kind === 'end' ? (key.end === 'min' ? min : max) : within(stepBy(present, key.steps)),
    same: Object.is,
    onChange: props.onChange,
    onChangeStart: props.onChangeStart,
    onChangeEnd: props.onChangeEnd,
    onChangeCancel: props.onChangeCancel,
  })
  const cx = Math.round(scale.toPixel(value) * 100) / 100
  const cy = Math.round(y * 100) / 100
  return (
    <g
      className="plot-focus plot-slider plot-resize"
      role="slider"
      aria-label={label}
      aria-orientation="horizontal"
      aria-valuemin={min}
      aria-valuemax={max}
      aria-valuenow={value}
      aria-valuetext={valueText(value)}
      {...gesture}
    >
      <circle className="plot-hit" cx={cx} cy={cy} r={Math.max(13, radius + 6)} fill="none" pointerEvents="all" />
      <circle className="plot-focus-ring" cx={cx} cy={cy} r={radius + 4} fill="none" pointerEvents="none" />
      <circle
        cx={cx}
        cy={cy}
        r={radius}
        fill="var(--sheet)"
        stroke={toneColor(tone)}
        strokeWidth={2}
        pointerEvents="none"
      />
    </g>
  )
}

export type DotProps = {
  x: number
  y: number
  tone: Tone
  /** Radius, px; default 3.5. */
  radius?: number
}

/** A small open circle that marks a point of a curve. */
export function Dot({ x, y, tone, radius = 3.5 }: DotProps) {
  return (
    <circle
      cx={Math.round(x * 100) / 100}
      cy={Math.round(y * 100) / 100}
      r={radius}
      fill="var(--sheet)"
      stroke={toneColor(tone)}
      strokeWidth={1.6}
      pointerEvents="none"
    />
  )
}

function threeDigits(v: number): number {
  return Number(v.toPrecision(3))
}
