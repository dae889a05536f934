/**
 * Texts of opened tables in the browser's own storage, so that a reload finds them again. Only those opened last are kept: they would pile up
 * without end, and the page asks for one that is gone.
 */
import { forget, recall, remember, revise } from './browser-storage.ts'

export const MOST_KEPT_FILES = 12
const LIST_KEY = 'sidelobe.files'

const storageKey = (fileId: string) => `sidelobe.file.${fileId}`

const isList = (value: unknown): value is string[] =>
  Array.isArray(value) && value.every((entry) => typeof entry === 'string')

/** @returns whether a reload will find the file again. */
export async function keepFile(fileId: string, text: string): Promise<boolean> {
  if (!(await remember(storageKey(fileId), text))) return false
  let gone: string[] = []
  await revise(LIST_KEY, (present) => {
    const list = [fileId, ...(isList(present) ? present : []).filter((other) => other !== fileId)]
    gone = list.slice(MOST_KEPT_FILES)
    return list.slice(0, MOST_KEPT_FILES)
  })
  for (const old of gone) await forget(storageKey(old))
  return true
}

/** The text of a file that was kept; undefined where it was not, or is gone. */
export const keptFile = (fileId: string) => recall<string>(storageKey(fileId))
