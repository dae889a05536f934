import { bandHitAreas, moveBandByKey, moveBandTo } from './band-move.ts'
import type { BandLimits, BandPart, BandValue } from './band-move.ts'
import type { Frame } from './frame.ts'
import { useGesture } from './gesture.ts'
import type { ChangeHandlers } from './gesture.ts'
import type { Scale } from './scale.ts'

export type BandLook = {
  frame: Frame
  /** The x scale. */
  scale: Scale
  value: BandValue
  /** 'strong' with solid edges (the score window), 'light' with dotted ones (the baseline window). Default 'strong'. */
  look?: 'strong' | 'light'
}

/** A band that is only shown, for the figures that share the time axis of the one in which it is dragged. */
export function StaticBand({ frame, scale, value, look = 'strong' }: BandLook) {
  const a = scale.toPixel(value.from)
  const b = scale.toPixel(value.to)
  const left = Math.min(a, b)
  return (
    <g className={`plot-band plot-band-${look}`} aria-hidden="true" pointerEvents="none">
      <rect
        x={px(left)}
        y={frame.top}
        width={px(Math.abs(b - a))}
        height={frame.plotHeight}
        fill="var(--band)"
        fillOpacity={look === 'strong' ? 0.9 : 0.45}
      />
      <path
        d={`M${px(a)},${frame.top}V${frame.bottom}M${px(b)},${frame.top}V${frame.bottom}`}
        fill="none"
        stroke="var(--band-edge, var(--quiet))"
        strokeWidth={1}
        strokeDasharray={look === 'strong' ? undefined : '2 3'}
      />
    </g>
  )
}

export type BandProps = BandLook &
  BandLimits &
  ChangeHandlers<BandValue> & {
    /** What the band is, for example "score window"; names the group and its three sliders. */
    label: string
    /** A value with its unit, for example "80 ms". */
    valueText: (value: number) => string
    /** Where the handles stand, as a fraction of the plot height from the top; default 0.4. */
    handleAt?: number
    /** False leaves out the coloured ground, for a StaticBand that was drawn under the curves. Default true. */
    ground?: boolean
  }

/**
 * A window on the x axis that is dragged and resized. Both edges and the body are sliders: arrow keys move by one step, with shift by
 * ten, Home and End to the limits. Escape during a drag puts it back.
 */
export function Band(props: BandProps) {
  const { frame, scale, value, look = 'strong', label, valueText, ground = true, min, max } = props
  const areas = bandHitAreas(scale.toPixel(value.from), scale.toPixel(value.to))
  return (
    <g role="group" aria-label={label}>
      {ground && <StaticBand frame={frame} scale={scale} value={value} look={look} />}
      <BandSlider
        band={props}
        part="body"
        area={areas.body}
        name={`${label}, whole`}
        now={value.from}
        min={min}
        max={Math.max(min, max - (value.to - value.from))}
        text={`${valueText(value.from)} to ${valueText(value.to)}`}
      />
      <BandSlider
        band={props}
        part="from"
        area={areas.from}
        name={`${label}, start`}
        now={value.from}
        min={min}
        max={value.to}
        text={valueText(value.from)}
      />
      <BandSlider
        band={props}
        part="to"
        area={areas.to}
        name={`${label}, end`}
        now={value.to}
        min={value.from}
        max={max}
        text={valueText(value.to)}
      />
    </g>
  )
}

type BandSliderProps = {
  band: BandProps
  part: BandPart
  /** Left and right of the hit area. */
  area: [number, number]
  name: string
  /** What assistive technology is told. */
  now: number
  min: number
  max: number
  text: string
}

const PILL_WIDTH = 7
const PILL_HEIGHT = 22

function BandSlider({ band, part, area, name, now, min, max, text }: BandSliderProps) {
  const { frame, scale, value, handleAt = 0.4 } = band
  const gesture = useGesture<BandValue>({
    value,
    fromDrag: (point, start, startValue) => {
      // the part keeps its distance from the pointer, so that taking hold of it does not move it
      const held = scale.toPixel(part === 'to' ? startValue.to : startValue.from)
      return moveBandTo(startValue, part, scale.fromPixel(held + point.x - start.x), band)
    },
    fromKey: (key, present) => moveBandByKey(present, part, key, band),
    same: (a, b) => a.from === b.from && a.to === b.to,
    onChange: band.onChange,
    onChangeStart: band.onChangeStart,
    onChangeEnd: band.onChangeEnd,
    onChangeCancel: band.onChangeCancel,
  })
  const edgePx = scale.toPixel(now)
  const middle = frame.top + frame.plotHeight * handleAt
  const ends = [scale.toPixel(value.from), scale.toPixel(value.to)]
  return (
    <g
      className={`plot-focus plot-slider ${part === 'body' ? 'plot-grab' : 'plot-resize'}`}
      role="slider"
      aria-label={name}
      aria-orientation="horizontal"
      aria-valuemin={min}
      aria-valuemax={max}
      aria-valuenow={now}
      aria-valuetext={text}
      {...gesture}
    >
      <rect
        className="plot-hit"
        x={px(area[0])}
        y={frame.top}
        width={px(area[1] - area[0])}
        height={frame.plotHeight}
        fill="none"
        pointerEvents="all"
      />
      {part === 'body' ? (
        <rect
          className="plot-focus-ring"
          x={px(Math.min(...ends))}
          y={frame.top + 1}
          width={px(Math.abs(ends[1] - ends[0]))}
          height={Math.max(0, frame.plotHeight - 2)}
          fill="none"
          pointerEvents="none"
        />
      ) : (
        <>
          <rect
            className="plot-focus-ring"
            x={px(edgePx - PILL_WIDTH / 2 - 3)}
            y={px(middle - PILL_HEIGHT / 2 - 3)}
            width={PILL_WIDTH + 6}
            height={PILL_HEIGHT + 6}
            rx={PILL_WIDTH / 2 + 3}
            fill="none"
            pointerEvents="none"
          />
          <rect
            className="plot-pill"
            x={px(edgePx - PILL_WIDTH / 2)}
            y={px(middle - PILL_HEIGHT / 2)}
            width={PILL_WIDTH}
            height={PILL_HEIGHT}
            rx={PILL_WIDTH / 2}
            fill="var(--sheet)"
            stroke="var(--band-edge, var(--quiet))"
            strokeWidth={1.2}
            pointerEvents="none"
          />
        </>
      )}
    </g>
  )
}

function px(v: number): number {
  return Math.round(v * 100) / 100
}
