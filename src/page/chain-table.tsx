/** Per stage its line style, half-amplitude, half-power and roll-off; then the whole chain's reach and unseen share. */
import type { ReactNode } from 'react'
import type { Evaluation, ReachMs } from '../state/evaluation.ts'
import { fixed } from '../words/index.ts'
import { stageDash } from './stage-dash.ts'

function reachText({ beforeMs, afterMs }: ReachMs): string {
  const long = Math.max(beforeMs, afterMs) >= 10_000
  return long
    ? `${fixed(-beforeMs / 1000, 1)} to ${fixed(afterMs / 1000, 1)} s`
    : `${fixed(-beforeMs, 0)} to ${fixed(afterMs, 0)} ms`
}

export function ChainTable({ evaluation, children }: { evaluation: Evaluation; children?: ReactNode }) {
  const { table, reach, amplifierReach, unseenShare } = evaluation
  const unseen = unseenShare === null ? '' : `, unseen share ${fixed(unseenShare * 100, 1)} %`
  return (
    <table className="plain-table chain-table">
      <caption className="visually-hidden">The chain, stage by stage</caption>
      <thead>
        <tr>
          <th scope="col">
            <h2>Chain</h2>
          </th>
          <th scope="col">half-amplitude</th>
          <th scope="col">half-power</th>
          <th scope="col">roll-off</th>
        </tr>
      </thead>
      <tbody>
        {table.map((row) => (
          <tr key={row.index} className={row.inData ? 'past' : undefined} title={row.remark ?? undefined}>
            <td>
              <Sample dash={stageDash(row.index)} />
              {row.name}
              {row.inData ? ', in the data' : ''}
            </td>
            <td>{row.halfAmplitude}</td>
            <td>{row.halfPower}</td>
            <td>{row.rollOff}</td>
          </tr>
        ))}
        {table
          .filter((row) => row.remark !== null)
          .map((row) => (
            <tr key={`remark-${row.index}`} className="past">
              <td colSpan={4} className="remark-cell">
                {row.remark}
              </td>
            </tr>
          ))}
        {amplifierReach ? (
          <tr>
            <td>amplifier’s tail</td>
            <td colSpan={3}>reach {reachText(amplifierReach)}</td>
          </tr>
        ) : null}
        <tr className="total">
          <td>
            <Sample whole />
            whole chain
          </td>
          <td colSpan={3}>
            {table.some((row) => !row.inData) ? `reach ${reachText(reach)}${unseen}` : 'no filter is applied'}
          </td>
        </tr>
      </tbody>
      {children}
    </table>
  )
}

function Sample({ dash, whole }: { dash?: string | undefined; whole?: boolean }) {
  return (
    <svg width="28" height="8" aria-hidden="true">
      <line
        x1="0"
        x2="28"
        y1="4"
        y2="4"
        stroke={whole ? 'var(--after)' : 'var(--ink)'}
        strokeWidth={whole ? 3 : 1.3}
        strokeDasharray={dash}
      />
    </svg>
  )
}
