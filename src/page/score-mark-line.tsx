import { Dot, PathLine } from '../plot/index.ts'
import { Unspoken } from './label-text.tsx'
import type { DrawnLabel } from './placed-labels.ts'
import type { ScoreMark } from './score-mark.ts'

interface ScoreMarkLineProps {
  kind: ScoreMark['kind']
  fromPx: number
  toPx: number
  y: number
  /** Labels of the figure; that of the score is tied to the mark where it stands away from it. */
  labels: readonly DrawnLabel[]
}

/** Half the height of the line that marks a latency. */
const LATENCY_PX = 13

export function ScoreMarkLine({ kind, fromPx, toPx, y, labels }: ScoreMarkLineProps) {
  const label = labels.find(({ id }) => id === 'score after')
  const tie = label ? tieTo(label, fromPx, toPx, y) : ''
  const d =
    kind === 'level'
      ? `M${fromPx},${y}H${toPx}`
      : kind === 'latency'
        ? `M${fromPx},${y - LATENCY_PX}V${y + LATENCY_PX}`
        : ''
  return (
    <Unspoken className="score-mark">
      {tie ? <PathLine d={tie} tone="ink" weight="hair" /> : null}
      {d ? (
        <>
          <PathLine d={d} tone="sheet" className="score-halo" />
          <PathLine d={d} tone="ink" className="score-line" />
        </>
      ) : null}
      {kind === 'level' ? null : <Dot x={fromPx} y={y} tone="ink" radius={3.5} />}
    </Unspoken>
  )
}

/** A hair line to the nearest corner of a label that does not stand right beside the mark. */
function tieTo({ box }: DrawnLabel, fromPx: number, toPx: number, y: number): string {
  const middle = (box.top + box.bottom) / 2
  const along = box.left < toPx && box.right > fromPx
  if (along || Math.abs(middle - y) < 11) return ''
  const right = box.left >= toPx
  const edge = right ? toPx : fromPx
  const corner = right ? box.left - 2 : box.right + 2
  return `M${edge},${y}L${corner},${middle}`
}
