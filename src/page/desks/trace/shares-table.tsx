/** The account by moment as a table: a row per stretch, the running total drawn as bars. */
import { type ReactNode, useRef } from 'react'
import type { Tracing } from '../../../state/evaluate-trace.ts'
import { fixed, momentRowWords, shareWords, signed } from '../../../words/index.ts'
import { WordButton } from '../../fields.tsx'
import { TableHead } from '../table-head.tsx'
import { isLarge, largestShare } from './moment-shape.ts'
import { RunningAxis, RunningBar, runningScale } from './running-bars.tsx'
import { useStretches } from './use-stretches.ts'

interface SharesTableProps {
  tracing: Tracing
  /** "the score after" */
  asked: string
  /** The stretches are the user's own. */
  own: boolean
  csv: () => string
  marked: number | null
  onMark: (row: number | null) => void
}

export function SharesTable({ tracing, asked, own, csv, marked, onMark }: SharesTableProps) {
  const title = useRef<HTMLHeadingElement>(null)
  const { traced, back } = tracing
  const { rows, stretches, moments } = back
  const edit = useStretches(stretches, moments.timesMs)
  const scale = runningScale(rows.map(({ running }) => running))
  const largest = largestShare(rows)
  const decimals = traced.unit === 'µV' ? 3 : 4
  const weight = rows.reduce((sum, row) => sum + (row.weight ?? 0), 0)
  const weightDecimals = traced.unit === 'µV' ? 2 : 3
  return (
    <>
      <TableHead
        title="Shares"
        titleRef={title}
        told="split and join stretches here, move their boundaries in the figure"
        what="the shares"
        fileName="trace-back-shares"
        csv={csv}
      >
        {own ? (
          <WordButton
            onPress={() => {
              edit.suggested()
              // its own button goes with it
              title.current?.focus()
            }}
          >
            back to the suggested stretches
          </WordButton>
        ) : null}
      </TableHead>
      <div className="scroll-x">
        <table className="desk-table shares">
          <caption className="visually-hidden">Shares of {asked}, stretch by stretch, with their running total</caption>
          <Columns />
          <thead>
            <tr>
              <th scope="col">stretch</th>
              <th scope="col">waveform, mean</th>
              <th scope="col">weight</th>
              <th scope="col">share</th>
              <th scope="col">of the value</th>
              <th scope="col" className="running-cell">
                <RunningAxis scale={scale} title={`running total, ${traced.unit}`} />
              </th>
            </tr>
          </thead>
          <tbody>
            {rows.map((row, i) => {
              const name = momentRowWords(row, traced)
              const stretch = row.kind === 'before' || i === 0 ? -1 : i - 1
              const inEpoch = stretch >= 0 && stretch <= stretches.length
              return (
                <tr
                  key={i}
                  className={[isLarge(row, largest) ? 'large' : '', i === marked ? 'marked' : '']
                    .filter(Boolean)
                    .join(' ')}
                  onPointerEnter={() => onMark(i)}
                  onPointerLeave={() => onMark(null)}
                  onFocus={() => onMark(i)}
                  onBlur={() => onMark(null)}
                >
                  <th scope="row">
                    {name}
                    {inEpoch ? (
                      <span className="row-actions">
                        {row.to - row.from > 1 ? (
                          <WordButton
                            label={`split ${name}`}
                            onPress={() => edit.split(moments.timesMs[Math.floor((row.from + row.to) / 2)])}
                          >
                            split
                          </WordButton>
                        ) : null}
                        {stretches.length === 0 ? null : stretch < stretches.length ? (
                          <WordButton label={`join ${name} with the next stretch`} onPress={() => edit.remove(stretch)}>
                            join
                          </WordButton>
                        ) : (
                          <WordButton
                            label={`join ${name} with the stretch before`}
                            onPress={() => edit.remove(stretch - 1)}
                          >
                            join
                          </WordButton>
                        )}
                      </span>
                    ) : null}
                  </th>
                  <Cell unit="µV">{row.meanUv === null ? null : fixed(row.meanUv, 2)}</Cell>
                  <Cell unit={traced.unit === 'µV' ? undefined : 's'}>
                    {row.weight === null ? null : signed(row.weight, weightDecimals)}
                  </Cell>
                  <Cell unit={traced.unit}>{signed(row.share, decimals)}</Cell>
                  <Cell unit="%">{row.percent === null ? null : fixed(row.percent, 0)}</Cell>
                  <td className="running-cell">
                    <RunningBar
                      scale={scale}
                      from={row.running - row.share}
                      to={row.running}
                      look={isLarge(row, largest) ? 'large' : 'small'}
                      leads
                    />
                  </td>
                </tr>
              )
            })}
            <tr className="sum">
              <th scope="row">Sum: {asked}</th>
              <Cell>{null}</Cell>
              <Cell unit={traced.unit === 'µV' ? undefined : 's'}>{signed(weight, weightDecimals)}</Cell>
              <Cell unit={traced.unit}>{signed(moments.value, decimals)}</Cell>
              <Cell unit="%">{moments.aboutZero ? null : '100'}</Cell>
              <td className="running-cell">
                <RunningBar scale={scale} from={0} to={moments.value} look="sum" leads={false} />
                <span className="visually-hidden">{shareWords(moments.value, traced.unit)}</span>
              </td>
            </tr>
          </tbody>
        </table>
      </div>
    </>
  )
}

export function Columns() {
  return (
    <colgroup>
      <col className="col-name" />
      <col className="col-1" />
      <col className="col-2" />
      <col className="col-3" />
      <col className="col-4" />
      <col className="col-bar" />
    </colgroup>
  )
}

/** A number with its unit; a dash where there is none. */
export function Cell({ children, unit }: { children: ReactNode; unit?: string | undefined }) {
  if (children === null) return <td className="none">–</td>
  return (
    <td>
      {children}
      <span className="unit">{unit ?? ''}</span>
    </td>
  )
}
