import type { ReactNode } from 'react'
import { toneColor, toneTextColor } from './tone.ts'
import type { Tone } from './tone.ts'

export type DirectLabelProps = {
  x: number
  /** Middle of the text's height, px. */
  y: number
  tone: Tone
  anchor?: 'start' | 'middle' | 'end'
  /** Semibold. */
  strong?: boolean
  /** The colour of the halo, which is that of the ground under the text; default 'sheet'. */
  ground?: 'sheet' | 'paper' | 'none'
  className?: string
  /** Text or tspans. */
  children: ReactNode
}

/** Text that names a curve where it runs, with a halo in the colour of the ground, so that it can stand on lines. */
export function DirectLabel(props: DirectLabelProps) {
  const { x, y, tone, anchor = 'start', strong = false, ground = 'sheet', className, children } = props
  const halo =
    ground === 'none'
      ? {}
      : { stroke: toneColor(ground), strokeWidth: 3.5, strokeLinejoin: 'round' as const, paintOrder: 'stroke' }
  return (
    <text
      className={['plot-text', 'plot-number', strong && 'plot-strong', className].filter(Boolean).join(' ')}
      x={Math.round(x * 100) / 100}
      y={Math.round((y + 4.5) * 100) / 100}
      textAnchor={anchor}
      pointerEvents="none"
      fill={toneTextColor(tone)}
      {...halo}
    >
      {children}
    </text>
  )
}
