import { useMemo } from 'react'
import { areaPath } from './path.ts'
import type { Xs } from './path.ts'
import type { Scale } from './scale.ts'
import { toneColor } from './tone.ts'
import type { Tone } from './tone.ts'

export type FillProps = {
  tone: Tone
  /** 0..1, default 0.12. */
  opacity?: number
  className?: string
}

/** A filled path whose data were made before, by areaPath or stepPath. */
export function PathArea({ d, tone, opacity = 0.12, className }: FillProps & { d: string }) {
  return (
    <path className={className} d={d} fill={toneColor(tone)} fillOpacity={opacity} stroke="none" pointerEvents="none" />
  )
}

export type AreaProps = FillProps & {
  xs: Xs
  ys: ArrayLike<number>
  x: Scale
  y: Scale
  /** A level or a second curve; default 0. */
  base?: number | ArrayLike<number>
}

/** The area between a curve and a level or a second curve. */
export function Area({ xs, ys, x, y, base = 0, ...fill }: AreaProps) {
  const start = 'step' in xs ? xs.start : Number.NaN
  const step = 'step' in xs ? xs.step : Number.NaN
  const positions = 'step' in xs ? null : xs
  const d = useMemo(
    () => areaPath(positions ?? { start, step }, ys, x, y, base),
    [positions, start, step, ys, x, y, base],
  )
  return <PathArea d={d} {...fill} />
}
