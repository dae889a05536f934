/**
 * Work that has not reached the browser's database: a page that goes away has no time for it, and one that waits for the user's answer
 * must not write there. It is left, at once, under a name of the tab's own.
 */
import { isKept, type Kept } from './kept-record.ts'

const PREFIX = 'sidelobe.workspace.left'

const keyOf = (tab: string) => `${PREFIX}.${tab}`

export function leaveBehind(record: Kept): void {
  try {
    localStorage.setItem(keyOf(record.tab), JSON.stringify(record))
  } catch {
    // Without storage nothing is kept; that has been said.
  }
}

/** What tabs left behind and nobody has taken up yet. It stays there until it is cleared: a page can go away again at once. */
export function leftBehind(): Kept[] {
  try {
    return Object.keys(localStorage).flatMap((key) => (key.startsWith(PREFIX) ? readLeft(key) : []))
  } catch {
    return []
  }
}

function readLeft(key: string): Kept[] {
  try {
    const record: unknown = JSON.parse(localStorage.getItem(key) ?? 'null')
    return isKept(record) ? [record] : []
  } catch {
    return []
  }
}

/** @param upTo newer work of that tab stays. */
export function clearLeft({ tab, savedAt: upTo }: Pick<Kept, 'tab' | 'savedAt'>): void {
  try {
    for (const key of [keyOf(tab), PREFIX])
      if (readLeft(key).every((record) => record.tab === tab && record.savedAt <= upTo)) localStorage.removeItem(key)
  } catch {
    // Without storage there is nothing to clear.
  }
}
