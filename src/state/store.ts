/**
 * One store: the workspace and its history. `say` is the only way to change it. Changes that share a group and follow one another (a
 * drag, typing in one field, repeated arrow keys) are one step of undo, until `endGesture` or a pause. The store never holds what could
 * not be read again: after a reload such work would be lost.
 */
import { temporal } from 'zundo'
import { createStore } from 'zustand/vanilla'
import { startWorkspace, whyUnreadable, type Workspace } from './workspace.ts'

export const HISTORY_STEPS = 400
/** Changes of one group that are further apart than this are two steps, as for two separate presses of an arrow key. */
const GROUP_PAUSE_MS = 1500

interface WorkspaceState {
  workspace: Workspace
}

let open: { group: string; at: number } | null = null
let asked: string | undefined
/** A pointer or a key is held down: however long it rests, what follows belongs to the same step. */
let held = false

function continuesGesture(): boolean {
  const now = Date.now()
  const continues = asked !== undefined && open?.group === asked && (held || now - open.at < GROUP_PAUSE_MS)
  open = asked === undefined ? null : { group: asked, at: now }
  return continues
}

export const workspaceStore = createStore<WorkspaceState>()(
  temporal(() => ({ workspace: startWorkspace() }), {
    limit: HISTORY_STEPS,
    equality: (past, present) => past.workspace === present.workspace,
    handleSet: (record) => (past, replace, current, delta) => {
      // The library's types give `record` two parameters; what it hands over takes the four that it is called with.
      if (!continuesGesture()) (record as (...step: unknown[]) => void)(past, replace, current, delta)
    },
  }),
)

let refused: (fault: string) => void = () => undefined

/** @param listener told why a change was not taken: the field and its fault. */
export function onRefusal(listener: (fault: string) => void): void {
  refused = listener
}

/**
 * Changes the workspace. With a `group`, consecutive changes of that group are one step of undo. A change that the workspace's schema
 * refuses leaves everything as it was, and is told to the listener.
 */
export function say(change: (workspace: Workspace) => Workspace, group?: string): void {
  const { workspace } = workspaceStore.getState()
  const next = change(workspace)
  if (next === workspace) return
  const fault = whyUnreadable(next)
  if (fault !== null) return refused(fault)
  asked = group
  workspaceStore.setState({ workspace: next })
}

/** A drag or a held key begins: all its changes are one step of undo. */
export function beginGesture(): void {
  open = null
  held = true
}

/** Ends a drag or a burst of typing: the next change is a step of its own. */
export function endGesture(): void {
  open = null
  held = false
}

export function undo(): void {
  endGesture()
  workspaceStore.temporal.getState().undo()
}

export function redo(): void {
  endGesture()
  workspaceStore.temporal.getState().redo()
}

/** A drag that was broken off leaves neither a change nor a step of undo. */
export function cancelGesture(): void {
  const changed = open !== null
  endGesture()
  if (!changed) return
  const { pastStates } = workspaceStore.temporal.getState()
  const before = pastStates[pastStates.length - 1]
  if (!before) return
  const { temporal } = workspaceStore
  temporal.getState().pause()
  workspaceStore.setState(before)
  temporal.getState().resume()
  temporal.setState({ pastStates: pastStates.slice(0, -1) })
}
