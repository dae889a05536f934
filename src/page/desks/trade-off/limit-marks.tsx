/** The limits on a map: outside the allowed region a veil, at each limit a line with its own dash and its name. */
import { memo } from 'react'
import type { LimitName } from '../../../evidence/trade-off-answer.ts'
import { type Corner, DirectLabel, type Frame, type RunsByRow } from '../../../plot/index.ts'
import { Unspoken } from '../../label-text.tsx'
import { type LimitedMap, placedLimits } from './limit-lines.ts'
import type { MapUnit } from './map-words.ts'

const DASH: Record<LimitName, string> = {
  bias: '9 4',
  noise: '2 3',
  totalError: '10 3 2 3',
  latencyShiftMs: '10 3 2 3 2 3',
}

interface LimitMarksProps {
  frame: Frame
  columns: number
  rows: number
  limited: LimitedMap
}

export const LimitMarks = memo(function LimitMarks({ frame, columns, rows, limited }: LimitMarksProps) {
  if (!limited.region) return null
  const px = (value: number) => Math.round(value * 100) / 100
  const x = (column: number) => px(frame.left + (column / columns) * frame.plotWidth)
  const y = (row: number) => px(frame.bottom - (row / rows) * frame.plotHeight)
  const path = (line: readonly Corner[]) => `M${line.map(([column, row]) => `${x(column)},${y(row)}`).join('L')}`
  const whole = `M${frame.left},${frame.top}H${frame.right}V${frame.bottom}H${frame.left}Z`
  return (
    <Unspoken>
      <g pointerEvents="none">
        <path
          className="allowed-region"
          d={`${whole}${boxes(limited.region, x, y)}`}
          fillRule="evenodd"
          fill="var(--sheet)"
          fillOpacity={0.5}
        />
        <path
          className="region-border"
          d={limited.border.map(path).join('')}
          fill="none"
          stroke="var(--kept)"
          strokeWidth={7}
          strokeOpacity={0.45}
          strokeLinejoin="round"
        />
        {limited.limits.map(({ limit, lines }) => {
          const d = lines.map(path).join('')
          return d === '' ? null : (
            <g key={limit} fill="none" strokeLinejoin="round">
              <path d={d} stroke="var(--sheet)" strokeWidth={3.4} strokeOpacity={0.6} />
              <path
                className="limit-line"
                data-limit={limit}
                d={d}
                stroke="var(--ink)"
                strokeWidth={2}
                strokeDasharray={DASH[limit]}
              />
            </g>
          )
        })}
      </g>
    </Unspoken>
  )
})

/** Boxes of the runs, two rows that touch without a seam. */
function boxes(rows: RunsByRow, x: (column: number) => number, y: (row: number) => number): string {
  return rows
    .flatMap((runs, r) => runs.map(({ from, to }) => `M${x(from)},${y(r)}H${x(to)}V${y(r + 1)}H${x(from)}Z`))
    .join('')
}

interface LimitNamesProps extends LimitMarksProps {
  unit: MapUnit
  marks: readonly number[]
  cursor: number
}

/** Above everything else on the map, on a ground of their own, since cells are dark and light. */
export const LimitNames = memo(function LimitNames(props: LimitNamesProps) {
  const { frame, columns, rows, limited, unit, marks, cursor } = props
  return (
    <Unspoken>
      <g pointerEvents="none">
        {placedLimits(limited, frame, columns, rows, unit, marks, cursor).map(
          ({ limit, text, x, y, anchor, width, height }) => (
            <g key={limit}>
              <rect
                x={anchor === 'start' ? x : x - width}
                y={y - height / 2}
                {...{ width, height }}
                rx={2}
                fill="var(--sheet)"
                fillOpacity={0.9}
              />
              <DirectLabel
                className="limit-name"
                x={anchor === 'start' ? x + 4 : x - 4}
                y={y}
                tone="ink"
                anchor={anchor}
                ground="none"
              >
                {text}
              </DirectLabel>
            </g>
          ),
        )}
      </g>
    </Unspoken>
  )
})
