/** A running total as bars, one in each row of a table; widths in per cent, so that the style sheet sets the column. */
import { linearScale, type Scale, ticksFor } from '../../../plot/index.ts'

/** From the smallest to the largest that is reached, zero among them, onto 0 to 100 per cent of the column. */
export function runningScale(reached: readonly number[]): Scale {
  const low = Math.min(0, ...reached)
  const high = Math.max(0, ...reached)
  return linearScale(low === high ? [-1, 1] : [low, high], [3, 95])
}

const at = (scale: Scale, value: number) => `${scale.toPixel(value).toFixed(3)}%`
const ticksOf = (scale: Scale) => ticksFor(scale, { count: 3 })
const ROW = 24

/** Part of the column, in per cent, that the title takes. */
const TITLE = 42

/** The ticks of the column, its title at the end that is farther from zero. */
export function RunningAxis({ scale, title }: { scale: Scale; title: string }) {
  const right = scale.toPixel(0) < 50
  const free = (pixel: number) => (right ? pixel < 100 - TITLE : pixel > TITLE)
  return (
    <div className="running-axis">
      <span className={right ? 'running-title on-right' : 'running-title'}>{title}</span>
      <svg className="running" width="100%" height={16} aria-hidden="true">
        {ticksOf(scale)
          .filter(({ pixel }) => free(pixel))
          .map((tick) => (
            <text key={tick.value} x={`${tick.pixel.toFixed(3)}%`} y={12} textAnchor="middle" fill="var(--quiet)">
              {tick.label}
            </text>
          ))}
      </svg>
    </div>
  )
}

interface RunningBarProps {
  scale: Scale
  from: number
  to: number
  look: 'large' | 'small' | 'sum'
  /** A thin line leads to the bar of the next row. */
  leads: boolean
}

export function RunningBar({ scale, from, to, look, leads }: RunningBarProps) {
  const left = Math.min(scale.toPixel(from), scale.toPixel(to))
  const width = Math.abs(scale.toPixel(from) - scale.toPixel(to))
  const tone = look === 'sum' ? 'var(--ink)' : 'var(--after)'
  return (
    <svg className="running" width="100%" height={ROW} aria-hidden="true">
      {ticksOf(scale).map(({ value, pixel }) => (
        <line
          key={value}
          x1={`${pixel.toFixed(3)}%`}
          x2={`${pixel.toFixed(3)}%`}
          y1={0}
          y2={ROW + 1}
          stroke={value === 0 ? 'var(--quiet)' : 'var(--rule)'}
        />
      ))}
      <rect
        x={`${left.toFixed(3)}%`}
        y={6}
        width={`${width.toFixed(3)}%`}
        height={12}
        fill={tone}
        fillOpacity={look === 'small' ? 0.5 : look === 'sum' ? 0.85 : 1}
      />
      <line x1={at(scale, to)} x2={at(scale, to)} y1={6} y2={leads ? ROW + 6 : 18} stroke={tone} strokeWidth={1} />
    </svg>
  )
}
