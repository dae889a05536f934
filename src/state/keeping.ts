/** Keeping the workspace: as a file, as a link, and by itself in the browser's own storage. */
import { strFromU8, strToU8, Unzlib, zlibSync } from 'fflate'
import { recall, remember } from './browser-storage.ts'
import { say, workspaceStore } from './store.ts'
import { readWorkspace, type Workspace } from './workspace.ts'

const STORAGE_KEY = 'sidelobe.workspace'
const LEFT_KEY = 'sidelobe.workspace.left'
const LINK_PREFIX = '#w='
const AUTOSAVE_MS = 500
/** No workspace is that large; a longer fragment is hostile or broken. */
const MAX_LINK_BYTES = 2_000_000
const MAX_FRAGMENT_LENGTH = 200_000
/** Bytes that are unpacked at a time; they become at most some thousand times as many. */
const UNPACKED_AT_A_TIME = 1024

type Result = ReturnType<typeof readWorkspace>

export function workspaceToText(workspace: Workspace): string {
  return `${JSON.stringify(workspace, null, 2)}\n`
}

export function workspaceFromText(text: string): Result {
  try {
    return readWorkspace(JSON.parse(text))
  } catch (error) {
    return { ok: false, reason: `this is no workspace file: ${error instanceof Error ? error.message : String(error)}` }
  }
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

/** A page that goes away has no time for the browser's database: what it has not written there yet is left here, at once. */
function leaveBehind(workspace: Workspace): void {
  try {
    localStorage.setItem(LEFT_KEY, JSON.stringify(workspace))
  } catch {
    // Without storage nothing is kept.
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

/**
 * Takes up the workspace of the link, else the one that was kept, and from then on keeps every change.
 *
 * @returns what is to be said about it, or null.
 */
export async function takeUpWork(fragment: string): Promise<string | null> {
  const linked = workspaceFromFragment(fragment)
  const found = leftBehind() ?? (await recall<unknown>(STORAGE_KEY))
  const stored = found === undefined ? null : readWorkspace(found)
  let said: string | null = null
  if (stored?.ok) start(stored.workspace)
  if (linked?.ok) say(() => linked.workspace)
  else if (linked) said = linked.reason
  else if (stored && !stored.ok) said = `What was kept from last time could not be read (${stored.reason}).`

  let timer: ReturnType<typeof setTimeout> | undefined
  let kept: Workspace | null = stored?.ok || linked?.ok ? null : workspaceStore.getState().workspace
  const write = () => {
    timer = undefined
    const { workspace } = workspaceStore.getState()
    void remember(STORAGE_KEY, workspace).then(() => {
      kept = workspace
    })
  }
  if (stored?.ok || linked?.ok) write()
  workspaceStore.subscribe(() => {
    timer ??= setTimeout(write, AUTOSAVE_MS)
  })
  globalThis.addEventListener?.('pagehide', () => {
    const { workspace } = workspaceStore.getState()
    if (workspace !== kept) leaveBehind(workspace)
  })
  return said
}

/** The kept workspace is where undo begins. */
function start(workspace: Workspace): void {
  say(() => workspace)
  workspaceStore.temporal.getState().clear()
}
