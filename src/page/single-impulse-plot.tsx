import {
  Axis,
  DirectLabel,
  Dot,
  type Frame,
  GridLines,
  linearScale,
  PathArea,
  PathLine,
  ticksAt,
  ZeroLine,
} from '../plot/index.ts'
import { numberText } from '../plot/number-text.ts'

interface SingleImpulsePlotProps {
  shows: 'impulse response' | 'step response'
  /** Height of the impulse per second, or of the step. */
  value: number
  fromMs: number
  toMs: number
  /** What the figure says instead of a reach. */
  words: { strong: string; quiet: string }
  frame: Frame
}

/** The kernel of a chain that does nothing: one sample, drawn as a stem. */
export function SingleImpulsePlot({ shows, value, fromMs, toMs, words, frame }: SingleImpulsePlotProps) {
  const { left, right, top, bottom } = frame
  const x = linearScale([fromMs, toMs], [left, right])
  const y = linearScale([-0.15 * value, 1.2 * value], [bottom, top])
  const ticks = ticksAt(y, [0, value], (v) => numberText(v))
  const [zero, peak, middle] = [y.toPixel(0), y.toPixel(value), x.toPixel(0)]
  const step = shows === 'step response'
  return (
    <>
      <GridLines frame={frame} scale={x} along="x" />
      <GridLines frame={frame} scale={y} along="y" ticks={ticks} />
      <ZeroLine frame={frame} scale={x} along="x" />
      <ZeroLine frame={frame} scale={y} along="y" />
      <Axis side="bottom" scale={x} at={bottom} title="Lag, ms" />
      <Axis side="left" scale={y} at={left} ticks={ticks} />
      {step ? <PathArea d={`M${middle},${zero}V${peak}H${right}V${zero}Z`} tone="after" /> : null}
      <PathLine
        d={`M${left},${zero}H${middle}V${peak}${step ? `H${right}` : `M${middle},${zero}H${right}`}`}
        tone="after"
        weight="thin"
      />
      {step ? null : <Dot x={middle} y={peak} tone="after" />}
      <DirectLabel x={middle + 14} y={(zero + peak) / 2 - 9} tone="ink" ground="none" strong>
        {words.strong}
      </DirectLabel>
      <DirectLabel x={middle + 14} y={(zero + peak) / 2 + 8} tone="quiet" ground="none">
        {words.quiet}
      </DirectLabel>
    </>
  )
}
