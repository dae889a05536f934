/** The change of a row in multiples of its limit, on a square-root scale from 0 to 10 and beyond, with the limit at 1. */
import type { Verdict } from '../state/verdict.ts'

const WIDTH = 200
const MOST = 10
const TICKS = [0, 1, 4, 9]
const x = (multiples: number) => 6 + (WIDTH - 14) * Math.sqrt(Math.min(MOST, multiples) / MOST)

export function MultiplesAxis() {
  return (
    <svg width={WIDTH} height={16} aria-hidden="true" className="multiples">
      {TICKS.map((tick) => (
        <text key={tick} x={x(tick)} y={12} textAnchor="middle" fill="var(--quiet)">
          {tick === 9 ? '9 ×' : tick}
        </text>
      ))}
    </svg>
  )
}

export function MultiplesDot({ verdict }: { verdict: Verdict }) {
  const limit = <line x1={x(1)} x2={x(1)} y1={0} y2={20} stroke="var(--quiet)" strokeWidth={1} />
  if (verdict.kind !== 'kept' && verdict.kind !== 'over')
    return (
      <svg width={WIDTH} height={18} aria-hidden="true" className="multiples">
        {verdict.kind === 'no limit' ? null : limit}
      </svg>
    )
  const tone = verdict.kind === 'kept' ? 'var(--kept)' : 'var(--over)'
  const multiples = verdict.multiples ?? Number.POSITIVE_INFINITY
  const end = x(multiples)
  return (
    <svg width={WIDTH} height={18} aria-hidden="true" className="multiples">
      {limit}
      <line x1={x(0)} x2={end} y1={9} y2={9} stroke={tone} strokeWidth={1.6} />
      {multiples > MOST ? (
        <path d={`M${end - 2},4L${end + 5},9L${end - 2},14Z`} fill={tone} />
      ) : (
        <circle cx={end} cy={9} r={4} fill={tone} />
      )}
    </svg>
  )
}
