/** The change of a row in multiples of its limit, on a square-root scale from 0 to 10 and beyond, with the limit at 1. */
import type { Verdict } from '../state/verdict.ts'

const MOST = 10
const TICKS = [0, 1, 4, 9]

/** Place of a multiple across the cell, in per cent: the width belongs to the style sheet. */
const place = (multiples: number) => `${(3 + 92 * Math.sqrt(Math.min(MOST, multiples) / MOST)).toFixed(2)}%`

export function MultiplesAxis() {
  return (
    <svg height={16} aria-hidden="true" className="multiples">
      {TICKS.map((tick) => (
        <text key={tick} x={place(tick)} y={12} textAnchor="middle" fill="var(--quiet)">
          {tick === 9 ? '9 ×' : tick}
        </text>
      ))}
    </svg>
  )
}

export function MultiplesDot({ verdict }: { verdict: Verdict }) {
  return (
    <svg height={18} aria-hidden="true" className="multiples">
      {verdict.kind === 'no limit' || verdict.kind === 'other unit' ? null : (
        <line x1={place(1)} x2={place(1)} y1={0} y2={20} stroke="var(--quiet)" strokeWidth={1} />
      )}
      {verdict.kind === 'kept' || verdict.kind === 'over' ? <Mark verdict={verdict} /> : null}
    </svg>
  )
}

function Mark({ verdict }: { verdict: Extract<Verdict, { kind: 'kept' | 'over' }> }) {
  const tone = verdict.kind === 'kept' ? 'var(--kept)' : 'var(--over)'
  const multiples = verdict.multiples ?? Number.POSITIVE_INFINITY
  return (
    <>
      <line x1={place(0)} x2={place(multiples)} y1={9} y2={9} stroke={tone} strokeWidth={1.6} />
      {multiples > MOST ? (
        <svg x={place(multiples)} y={0} width={8} height={18} overflow="visible" role="presentation">
          <path d="M-2,4L5,9L-2,14Z" fill={tone} />
        </svg>
      ) : (
        <circle cx={place(multiples)} cy={9} r={4} fill={tone} />
      )}
    </>
  )
}
