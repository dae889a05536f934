import { layoutBottomAxis, layoutLeftAxis } from './axis-layout.ts'
import type { Scale } from './scale.ts'
import { ticksFor } from './ticks.ts'
import type { Tick } from './ticks.ts'

export type AxisProps = {
  side: 'bottom' | 'left'
  scale: Scale
  /** Bottom: y of the plot area's lower edge; left: x of its left edge. */
  at: number
  /** Ticks to draw instead of the scale's own few. */
  ticks?: readonly Tick[]
  /** Quantity and unit, for example "Time, ms"; on the left only the unit fits. */
  title?: string
}

/** Labels of an axis, without a line: the grid and the zero line carry it. */
export function Axis({ side, scale, at, ticks, title }: AxisProps) {
  const drawn = ticks ?? ticksFor(scale, { lie: side === 'left' ? 'upright' : 'flat' })
  const layout = (side === 'left' ? layoutLeftAxis : layoutBottomAxis)(drawn, scale.range, at, title)
  return (
    <g className="plot-axis plot-text plot-number" aria-hidden="true" pointerEvents="none" fill="var(--quiet)">
      {layout.labels.map((label, i) => (
        <text key={i} x={px(label.x)} y={px(label.y)} textAnchor={label.anchor}>
          {label.text}
        </text>
      ))}
      {layout.title && (
        <text
          className="plot-axis-title"
          x={px(layout.title.x)}
          y={px(layout.title.y)}
          textAnchor={layout.title.anchor}
        >
          {layout.title.text}
        </text>
      )}
    </g>
  )
}

function px(v: number): number {
  return Math.round(v * 100) / 100
}
