import { useMemo } from 'react'
import { linePath } from './path.ts'
import type { Xs } from './path.ts'
import type { Scale } from './scale.ts'
import { toneColor } from './tone.ts'
import type { Tone } from './tone.ts'

export type Weight = 'hair' | 'thin' | 'thick'
export type Dash = 'solid' | 'dashed' | 'dotted' | 'dash-dot'

export type StrokeProps = {
  tone: Tone
  /** Default: thick for 'after', else thin. */
  weight?: Weight
  /** Default: dashed for 'taken-out', else solid. */
  dash?: Dash
  className?: string
}

const WIDTH_PX: Record<Weight, number> = { hair: 1, thin: 1.5, thick: 2.8 }
const DASHES: Record<Dash, string | undefined> = {
  solid: undefined,
  dashed: '6 3',
  dotted: '1.5 3',
  'dash-dot': '7 3 1.5 3',
}

/** A stroked path whose data were made before, by linePath or stepPath. */
export function PathLine({ d, tone, weight, dash, className }: StrokeProps & { d: string }) {
  return (
    <path
      className={className}
      d={d}
      fill="none"
      pointerEvents="none"
      stroke={toneColor(tone)}
      strokeWidth={WIDTH_PX[weight ?? (tone === 'after' ? 'thick' : 'thin')]}
      strokeDasharray={DASHES[dash ?? (tone === 'taken-out' ? 'dashed' : 'solid')]}
      strokeLinejoin="round"
      // round ends would close the gaps between dots
      strokeLinecap={dash === 'dotted' || dash === 'dash-dot' ? 'butt' : 'round'}
    />
  )
}

export type LineProps = StrokeProps & { xs: Xs; ys: ArrayLike<number>; x: Scale; y: Scale }

/** A curve through samples. The path is made anew only when data or scales are other objects (or another start and step). */
export function Line({ xs, ys, x, y, ...stroke }: LineProps) {
  const start = 'step' in xs ? xs.start : Number.NaN
  const step = 'step' in xs ? xs.step : Number.NaN
  const positions = 'step' in xs ? null : xs
  const d = useMemo(() => linePath(positions ?? { start, step }, ys, x, y), [positions, start, step, ys, x, y])
  return <PathLine d={d} {...stroke} />
}
