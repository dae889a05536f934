/**
 * Keeping every change in the browser's own storage. A record names the tab that wrote it, so that two tabs open on one workspace do
 * not overwrite each other silently: whoever finds the other's record asks first.
 */
import { recall, remember } from './browser-storage.ts'
import { workspaceStore } from './store.ts'
import { readWorkspace, type Workspace } from './workspace.ts'

const STORAGE_KEY = 'sidelobe.workspace'
const LEFT_KEY = 'sidelobe.workspace.left'
const AUTOSAVE_MS = 500

interface Kept {
  workspace: unknown
  tab: string
  savedAt: number
}

export type KeepingState =
  | { kind: 'kept' }
  /** Another tab has written since this one last did. */
  | { kind: 'other tab'; workspace: Workspace }
  /** Nothing can be stored: said once, the work goes on. */
  | { kind: 'no storage' }

const tab = Math.floor(performance.timeOrigin * 1000).toString(36)

/** A page that goes away has no time for the browser's database: what it has not written there yet is left here, at once. */
function leaveBehind(record: Kept): void {
  try {
    localStorage.setItem(LEFT_KEY, JSON.stringify(record))
  } catch {
    // Without storage nothing is kept; that has been said.
  }
}

/** What a page left behind, once; undefined where there is nothing. */
function leftBehind(): unknown {
  try {
    const text = localStorage.getItem(LEFT_KEY)
    if (text === null) return undefined
    localStorage.removeItem(LEFT_KEY)
    return JSON.parse(text)
  } catch {
    return undefined
  }
}

const isRecord = (value: unknown): value is Kept =>
  typeof value === 'object' && value !== null && 'workspace' in value && 'tab' in value && 'savedAt' in value

/** Whether two workspaces say the same; both in the schema's order of fields. */
function same(read: Workspace, mine: Workspace): boolean {
  const result = readWorkspace(mine)
  return result.ok && JSON.stringify(result.workspace) === JSON.stringify(read)
}

/** The newest of what was kept and what was left behind; undefined where there is nothing. */
export async function recallWork(): Promise<{ workspace: unknown; savedAt: number } | undefined> {
  const records = [leftBehind(), await recall<unknown>(STORAGE_KEY)].filter(isRecord)
  return records.sort((a, b) => b.savedAt - a.savedAt)[0]
}

/**
 * From now on keeps every change, at most half a second after it, also while a drag goes on.
 *
 * @param seenAt when the record that this tab started from was written; 0 without one.
 * @param tell   called when the state of keeping changes.
 * @returns resolves the question of two tabs: keep this tab's work from now on.
 */
export function keepChanges(seenAt: number, tell: (state: KeepingState) => void): { keepMine: () => void } {
  let lastSeen = seenAt
  let _timer: ReturnType<typeof setTimeout> | undefined
  let kept: Workspace | null = null
  let asking = false
  let complained = false

  const write = async () => {
    _timer = undefined
    const { workspace } = workspaceStore.getState()
    const present = await recall<unknown>(STORAGE_KEY)
    if (isRecord(present) && present.tab !== tab && present.savedAt > lastSeen) {
      const other = readWorkspace(present.workspace)
      // The last write of this tab before it was reloaded may arrive late: the same work is no question.
      if (other.ok && !same(other.workspace, workspace)) {
        asking = true
        return tell({ kind: 'other tab', workspace: other.workspace })
      }
    }
    const savedAt = Math.max(Date.now(), lastSeen + 1)
    const stored = await remember(STORAGE_KEY, { workspace, tab, savedAt } satisfies Kept)
    if (!stored) {
      if (!complained) tell({ kind: 'no storage' })
      complained = true
      return
    }
    lastSeen = savedAt
    kept = workspace
  }
  const schedule = () => {
    if (!asking) _timer ??= setTimeout(() => void write(), AUTOSAVE_MS)
  }
  workspaceStore.subscribe(schedule)
  schedule()
  globalThis.addEventListener?.('pagehide', () => {
    const { workspace } = workspaceStore.getState()
    if (workspace !== kept && !asking) leaveBehind({ workspace, tab, savedAt: Date.now() })
  })
  return {
    keepMine: () => {
      asking = false
      lastSeen = Date.now()
      tell({ kind: 'kept' })
      schedule()
    },
  }
}
