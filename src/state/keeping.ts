/** The workspace as a file and as a link, and taking it up again. Keeping it by itself is in `autosave.ts`. */
import { strFromU8, strToU8, Unzlib, zlibSync } from 'fflate'
import {
  type Answers,
  dropUnread,
  type KeepingStart,
  type KeepingState,
  keepChanges,
  recallUnread,
  recallWork,
  setAside,
} from './autosave.ts'
import { sameWork } from './kept-record.ts'
import { say, workspaceStore } from './store.ts'
import { readWorkspace, SCENARIOS, type Workspace, workspaceOf } from './workspace.ts'

const LINK_PREFIX = '#w='
/** No workspace is that large; a longer fragment is hostile or broken. */
const MAX_LINK_BYTES = 2_000_000
const MAX_FRAGMENT_LENGTH = 200_000
/** Bytes that are unpacked at a time; they become at most some thousand times as many. */
const UNPACKED_AT_A_TIME = 1024

type Result = ReturnType<typeof readWorkspace>

/** The text of a loaded table, where the user wants it to travel inside the workspace file. */
export interface EnclosedTable {
  fileName: string
  text: string
}

/** A workspace file: the workspace, and the table that it is about if the user says so. */
export function workspaceToText(workspace: Workspace, table: EnclosedTable | null = null): string {
  return `${JSON.stringify(table ? { ...workspace, enclosed: table } : workspace, null, 2)}\n`
}

/** @returns the workspace and what was enclosed, or a sentence that names the first field that is wrong. */
export function workspaceFromText(
  text: string,
): { ok: true; workspace: Workspace; enclosed: EnclosedTable | null } | { ok: false; reason: string } {
  let value: unknown
  try {
    value = JSON.parse(text)
  } catch (error) {
    return { ok: false, reason: `this is no workspace file: ${error instanceof Error ? error.message : String(error)}` }
  }
  const result = readWorkspace(value)
  if (!result.ok) return result
  const enclosed = (value as { enclosed?: unknown }).enclosed
  if (enclosed === undefined) return { ...result, enclosed: null }
  if (!isEnclosed(enclosed))
    return {
      ok: false,
      reason: 'this is no workspace that the page can read: enclosed: a table has a fileName and a text',
    }
  return { ...result, enclosed: { fileName: enclosed.fileName, text: enclosed.text } }
}

function isEnclosed(value: unknown): value is EnclosedTable {
  if (typeof value !== 'object' || value === null) return false
  const { fileName, text } = value as Partial<Record<keyof EnclosedTable, unknown>>
  return typeof fileName === 'string' && typeof text === 'string'
}

/** The part of an address behind `#`: compressed, and never sent to a server by any browser. */
export function workspaceToFragment(workspace: Workspace): string {
  const bytes = zlibSync(strToU8(JSON.stringify(workspace)), { level: 9 })
  let binary = ''
  for (const byte of bytes) binary += String.fromCharCode(byte)
  return LINK_PREFIX + btoa(binary).replaceAll('+', '-').replaceAll('/', '_').replace(/=+$/, '')
}

/** The workspace in an address's fragment; null where there is none. */
export function workspaceFromFragment(fragment: string): Result | null {
  if (!fragment.startsWith(LINK_PREFIX)) return null
  try {
    if (fragment.length > MAX_FRAGMENT_LENGTH) throw new RangeError('the fragment is too long')
    const base64 = fragment.slice(LINK_PREFIX.length).replaceAll('-', '+').replaceAll('_', '/')
    const bytes = Uint8Array.from(atob(base64), (letter) => letter.charCodeAt(0))
    return readWorkspace(JSON.parse(strFromU8(unpacked(bytes))))
  } catch {
    return { ok: false, reason: 'the link is damaged or was cut off: ask for it again, or for the workspace file' }
  }
}

/** Piece by piece, so that a small fragment that would unpack to gigabytes is given up early. @throws for what is damaged or too large. */
function unpacked(bytes: Uint8Array): Uint8Array {
  const whole = new Uint8Array(MAX_LINK_BYTES)
  let length = 0
  let ended = false
  const stream = new Unzlib((piece, last) => {
    whole.set(piece, length)
    length += piece.length
    ended = last
  })
  for (let from = 0; from < bytes.length; from += UNPACKED_AT_A_TIME)
    stream.push(bytes.subarray(from, from + UNPACKED_AT_A_TIME), from + UNPACKED_AT_A_TIME >= bytes.length)
  if (!ended) throw new RangeError('the fragment ends too early')
  return whole.subarray(0, length)
}

export interface TakenUp extends Answers {
  /** What is to be said about it, or null. */
  said: string | null
  /** Work that was kept and cannot be read by this page, as JSON: it is kept aside until it is dropped. */
  unread: { text: string; drop: () => void } | null
}

/**
 * Takes up the workspace of the link, else the one that was kept, and from then on keeps every change.
 *
 * @param tell called when keeping meets other work, from another tab or from last time, or cannot keep.
 */
export async function takeUpWork(
  fragment: string,
  tell: (state: KeepingState) => void = () => undefined,
): Promise<TakenUp> {
  const first = workspaceStore.getState().workspace
  const linked = workspaceFromFragment(fragment)
  const { recalled, unread } = await recallWork()
  if (unread) await setAside(unread)
  let from: KeepingStart = { seenAt: unread?.savedAt ?? 0 }
  if (recalled) {
    const { newest, workspace, other, settled } = recalled
    from = { seenAt: newest.savedAt, other, settled }
    // Where storage is slow the user may have begun already.
    const begun = workspaceStore.getState().workspace !== first
    if (!begun) start(workspace)
    // Neither a link nor what was begun may take the place of work from last time without being asked.
    const onScreen = linked?.ok ? linked.workspace : workspaceStore.getState().workspace
    if ((begun || linked?.ok) && !isUntouched(workspace) && !sameWork(onScreen, workspace))
      from = { seenAt: 0, other: newest }
  }
  if (linked?.ok) say(() => linked.workspace)
  const aside = unread?.workspace ?? (await recallUnread())
  let said: string | null = null
  if (linked && !linked.ok) said = linked.reason
  else if (unread) said = `What was kept from last time could not be read (${reasonOf(unread.workspace)}).`
  return {
    said,
    unread: aside === undefined ? null : { text: `${JSON.stringify(aside, null, 2)}\n`, drop: () => void dropUnread() },
    ...keepChanges(from, tell),
  }
}

function reasonOf(workspace: unknown): string {
  const result = readWorkspace(workspace)
  return result.ok ? '' : result.reason
}

/** A scenario as it comes: nothing would be lost. */
const isUntouched = (workspace: Workspace) => SCENARIOS.some((scenario) => sameWork(workspaceOf(scenario), workspace))

/** The kept workspace is where undo begins. */
function start(workspace: Workspace): void {
  say(() => workspace)
  workspaceStore.temporal.getState().clear()
}
