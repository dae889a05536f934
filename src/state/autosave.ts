/**
 * Keeping every change in the browser's own storage. A record names the tab that wrote it, so that two tabs open on one workspace do
 * not overwrite each other silently: whoever finds the other's record asks first. Until there is an answer the work of this tab is left
 * beside the other's, so that a closed or crashed tab comes back with the same question.
 */
import { forget, recall, remember, revise } from './browser-storage.ts'
import { follows, isKept, type Kept, sameWork } from './kept-record.ts'
import { clearLeft, leaveBehind, leftBehind } from './left-behind.ts'
import { say, workspaceStore } from './store.ts'
import { readWorkspace, type Workspace } from './workspace.ts'

const STORAGE_KEY = 'sidelobe.workspace'
const UNREAD_KEY = 'sidelobe.workspace.unread'
const AUTOSAVE_MS = 500

export type KeepingState =
  | { kind: 'kept' }
  /** Other work is kept than that on the screen: another tab has written it since, or it is from last time. Null: a page of another version wrote it. */
  | { kind: 'other tab' | 'last time'; workspace: Workspace | null }
  /** Nothing can be stored: said once, the work goes on. */
  | { kind: 'no storage' }

const tab = Math.floor(performance.timeOrigin * 1000).toString(36)

export interface Recalled {
  /** The newest record that can be read. */
  newest: Kept
  workspace: Workspace
  /** Other work that the newest does not contain. */
  other: Kept | null
  /** Records that nothing more is to be asked about. */
  settled: readonly Kept[]
}

/** What was kept and what was left behind; `recalled` is null where there is nothing that can be read, `unread` is what cannot be. */
export async function recallWork(): Promise<{ recalled: Recalled | null; unread: Kept | null }> {
  const stored = await recall<unknown>(STORAGE_KEY)
  const all = [...(isKept(stored) ? [stored] : []), ...leftBehind()].sort((a, b) => b.savedAt - a.savedAt)
  const records = all.filter((record) => readWorkspace(record.workspace).ok)
  const unread = all.find((record) => !records.includes(record)) ?? null
  const newest = records[0]
  const read = readWorkspace(newest?.workspace)
  if (!read.ok) return { recalled: null, unread }
  const undecided = records.filter(
    (record, i) =>
      i > 0 &&
      !records.slice(0, i).some((later) => follows(later, record)) &&
      !sameWork(record.workspace, newest.workspace),
  )
  const settled = records.filter((record) => !undecided.includes(record))
  return { recalled: { newest, workspace: read.workspace, other: undecided[0] ?? null, settled }, unread }
}

/** Puts work that cannot be read (a newer page's, for example) out of the way of being overwritten. */
export const setAside = ({ workspace }: Kept): Promise<boolean> => remember(UNREAD_KEY, workspace)

/** Work that was set aside; undefined where there is none. */
export const recallUnread = (): Promise<unknown> => recall<unknown>(UNREAD_KEY)

export const dropUnread = (): Promise<boolean> => forget(UNREAD_KEY)

/** How the question which of two works is kept can be answered. */
export interface Answers {
  keepMine: () => void
  /** Takes the other's work on the screen, as it is by now; what stood there is one undo away. */
  takeOther: () => Promise<void>
}

/** What a tab starts from. */
export interface KeepingStart {
  /** When the record that its work goes on from was written; 0 without one. */
  seenAt: number
  /** Work that is to be decided about first. */
  other?: Kept | null
  settled?: readonly Kept[]
}

/**
 * From now on keeps every change, at most half a second after it, also while a drag goes on.
 *
 * @param tell  called when the state of keeping changes.
 */
export function keepChanges(start: KeepingStart, tell: (state: KeepingState) => void): Answers {
  let seen = start.seenAt
  let written = 0
  let waiting = false
  let writing = false
  let kept: Workspace | null = null
  let asked: Kept | null = null
  let complained = false
  let settled = [...(start.settled ?? [])]

  const present = (): Kept & { workspace: Workspace } => ({
    workspace: workspaceStore.getState().workspace,
    tab,
    savedAt: Math.max(Date.now(), seen + 1, written + 1),
    after: seen,
    ...(asked ? { beside: asked.tab } : {}),
  })
  const ask = (other: Kept, kind: 'other tab' | 'last time') => {
    asked = other
    leaveBehind(present())
    const read = readWorkspace(other.workspace)
    tell({ kind, workspace: read.ok ? read.workspace : null })
  }
  const write = async () => {
    const mine = present()
    let other: Kept | null = null
    const stored = await revise(STORAGE_KEY, (found) => {
      if (!isKept(found) || found.tab === tab || found.savedAt <= seen) return mine
      // The last write of this tab before it was reloaded may arrive late: the same work is no question.
      if (sameWork(found.workspace, mine.workspace))
        return { ...mine, savedAt: Math.max(mine.savedAt, found.savedAt + 1) }
      other = found
      return found
    })
    if (other) return ask(other, 'other tab')
    if (!stored) {
      if (!complained) tell({ kind: 'no storage' })
      complained = true
      return
    }
    written = mine.savedAt
    kept = mine.workspace
    for (const record of [...settled, mine]) clearLeft(record)
    settled = []
  }
  const turn = async () => {
    waiting = false
    if (asked) return leaveBehind(present())
    if (writing) return schedule()
    writing = true
    await write()
    writing = false
  }
  const schedule = () => {
    if (!waiting) setTimeout(() => void turn(), AUTOSAVE_MS)
    waiting = true
  }
  const decide = (other: Kept) => {
    asked = null
    seen = Math.max(seen, other.savedAt)
    settled.push(other)
    tell({ kind: 'kept' })
    schedule()
  }

  workspaceStore.subscribe(schedule)
  if (start.other) ask(start.other, 'last time')
  else schedule()
  globalThis.addEventListener?.('pagehide', () => {
    if (workspaceStore.getState().workspace !== kept) leaveBehind(present())
  })
  return {
    keepMine: () => {
      if (!asked) return
      if (!readWorkspace(asked.workspace).ok) void setAside(asked)
      decide(asked)
    },
    takeOther: async () => {
      if (!asked) return
      const now = await recall<unknown>(STORAGE_KEY)
      const other = isKept(now) && now.tab === asked.tab && now.savedAt > asked.savedAt ? now : asked
      const read = readWorkspace(other.workspace)
      if (!read.ok) return
      say(() => read.workspace)
      decide(other)
    },
  }
}
