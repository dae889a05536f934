/** By stage: what each stage alone, and the chain up to each stage, makes of the value. */
import type { Tracing } from '../../../state/evaluate-trace.ts'
import { fixed, shareWords, signed, stageName, stageSummary } from '../../../words/index.ts'
import { stageDash } from '../../stage-dash.ts'
import { TableHead } from '../table-head.tsx'
import { RunningAxis, RunningBar, runningScale } from './running-bars.tsx'
import { Cell, Columns } from './shares-table.tsx'

interface StageTableProps {
  tracing: Tracing
  asked: string
  csv: () => string
}

export function StageTable({ tracing, asked, csv }: StageTableProps) {
  const { unit, before, rows, value } = tracing.stages
  const scale = runningScale([before, value, ...rows.map(({ upTo }) => upTo)])
  const most = Math.max(...rows.map(({ step }) => Math.abs(step)))
  const decimals = unit === 'µV' ? 2 : 3
  return (
    <>
      <TableHead
        title="By stage"
        told={stageSummary(tracing.stages)}
        what="the account by stage"
        fileName="trace-back-stages"
        csv={csv}
      />
      <div className="scroll-x">
        <table className="desk-table stages">
          <caption className="visually-hidden">What each stage makes of the value</caption>
          <Columns />
          <thead>
            <tr>
              <th scope="col">stage</th>
              <th scope="col">stage alone</th>
              <th scope="col">change alone</th>
              <th scope="col">chain up to here</th>
              <th scope="col">step</th>
              <th scope="col" className="running-cell">
                <RunningAxis scale={scale} title={`stage after stage, ${unit}`} />
              </th>
            </tr>
          </thead>
          <tbody>
            <tr>
              <th scope="row">before any filter</th>
              <Cell>{null}</Cell>
              <Cell>{null}</Cell>
              <Cell unit={unit}>{fixed(before, decimals)}</Cell>
              <Cell>{null}</Cell>
              <td className="running-cell">
                <RunningBar scale={scale} from={0} to={before} look="small" leads={rows.length > 0} />
              </td>
            </tr>
            {rows.map((row) => {
              const large = most > 0 && Math.abs(row.step) >= 0.5 * most
              return (
                <tr key={row.index} className={large ? 'large' : undefined}>
                  <th scope="row">
                    <svg width="28" height="8" aria-hidden="true">
                      <line
                        x1="0"
                        x2="28"
                        y1="4"
                        y2="4"
                        stroke="var(--ink)"
                        strokeWidth={1.3}
                        strokeDasharray={stageDash(row.index)}
                      />
                    </svg>
                    {stageName(row.spec)}
                  </th>
                  <Cell unit={unit}>{fixed(row.alone, decimals)}</Cell>
                  <Cell unit={unit}>{signed(row.alone - before, decimals)}</Cell>
                  <Cell unit={unit}>{fixed(row.upTo, decimals)}</Cell>
                  <Cell unit={unit}>{signed(row.step, decimals)}</Cell>
                  <td className="running-cell">
                    <RunningBar
                      scale={scale}
                      from={row.upTo - row.step}
                      to={row.upTo}
                      look={large ? 'large' : 'small'}
                      leads
                    />
                  </td>
                </tr>
              )
            })}
            <tr className="sum">
              <th scope="row">Whole chain: {asked}</th>
              <Cell>{null}</Cell>
              <Cell>{null}</Cell>
              <Cell unit={unit}>{fixed(value, decimals)}</Cell>
              <Cell unit={unit}>{signed(value - before, decimals)}</Cell>
              <td className="running-cell">
                <RunningBar scale={scale} from={0} to={value} look="sum" leads={false} />
                <span className="visually-hidden">{shareWords(value, unit)}</span>
              </td>
            </tr>
          </tbody>
        </table>
      </div>
    </>
  )
}
