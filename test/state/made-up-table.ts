import { readTable, type Table } from '../../src/files/index.ts'
import { workspaceOnTable } from '../../src/state/open-table.ts'
import { type RecordedSource, startWorkspace, type Workspace } from '../../src/state/workspace.ts'

/** A small table of two conditions at two channels, 250 Hz, −200 to 796 ms; the values are invented. */
export function madeUpText(): string {
  const lines = ['condition,time_ms,Cz (µV),PO7 (µV)']
  for (const [condition, size] of [
    ['rare', 6],
    ['frequent', 2],
  ] as const)
    for (let i = 0; i < 250; i++) {
      const ms = -200 + 4 * i
      const late = size * Math.exp(-(((ms - 380) / 90) ** 2))
      const early = -0.4 * size * Math.exp(-(((ms - 120) / 25) ** 2))
      lines.push([condition, ms, (late + 0.3 * early).toFixed(4), (0.5 * late + early + 0.2).toFixed(4)].join(','))
    }
  return lines.join('\n')
}

export function madeUpTable(): Table {
  const table = readTable(madeUpText())
  if (!table.ok) throw new Error(table.reason)
  return table
}

export const madeUpSource: RecordedSource = {
  kind: 'recorded',
  fileName: 'average-2024.csv',
  fileId: 'a'.repeat(64),
  reading: {},
}

export function madeUpWorkspace(): { workspace: Workspace; table: Table } {
  const table = madeUpTable()
  return { workspace: workspaceOnTable(startWorkspace(), madeUpSource, table), table }
}
