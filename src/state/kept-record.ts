/** A workspace as the browser keeps it: with the tab that wrote it, so that two tabs do not overwrite each other silently. */
import { readWorkspace } from './workspace.ts'

export interface Kept {
  workspace: unknown
  tab: string
  /** Milliseconds since 1970; every record of a tab is newer than those that it has seen. */
  savedAt: number
  /** When the newest record of another tab was written that this work goes on from, or that the user has decided against. */
  after?: number
  /** The tab whose work the user has not decided about yet. */
  beside?: string
}

export const isKept = (value: unknown): value is Kept =>
  typeof value === 'object' &&
  value !== null &&
  'workspace' in value &&
  'tab' in value &&
  typeof value.tab === 'string' &&
  'savedAt' in value &&
  typeof value.savedAt === 'number'

/** Whether a record contains another: it was written later by the same tab, or goes on from it. */
export const follows = (later: Kept, earlier: Kept): boolean =>
  later.tab === earlier.tab
    ? later.savedAt >= earlier.savedAt
    : later.beside !== earlier.tab && (later.after ?? 0) >= earlier.savedAt

/** Whether two workspaces say the same, whatever the order of their fields or the version that they were written in. */
export function sameWork(a: unknown, b: unknown): boolean {
  const [one, other] = [readWorkspace(a), readWorkspace(b)]
  return one.ok && other.ok && JSON.stringify(one.workspace) === JSON.stringify(other.workspace)
}
