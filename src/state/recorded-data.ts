/**
 * Loaded tables. They stand outside the workspace, which names a file by the SHA-256 of its text; here is what was read from it. The text
 * is kept in the browser's own storage, so that a reload finds it again; it goes nowhere else.
 */
import { createStore } from 'zustand/vanilla'
import { courier } from '../jobs/index.ts'
import type { Table, TableRefusal } from '../files/index.ts'
import type { BenchApi } from './bench.worker.ts'
import { keepFile, keptFile } from './kept-files.ts'
import type { Reading, RecordedSource, Workspace } from './workspace.ts'

export type RecordedData = Table

interface Loaded {
  text: string
  /** Results by the reading asked for (as JSON). */
  tables: Record<string, Table>
}

interface DataState {
  files: Record<string, Loaded>
  /** What is being read at present, for the line that says so. */
  reading: { fileName: string; cancel: () => void } | null
}

export const dataStore = createStore<DataState>(() => ({ files: {}, reading: null }))

export const bench = courier<BenchApi>(
  () => new Worker(new URL('./bench.worker.ts', import.meta.url), { type: 'module', name: 'sidelobe' }),
)

const readingKey = (reading: Reading) => JSON.stringify(Object.entries(reading).sort(([a], [b]) => (a < b ? -1 : 1)))

/** The table of a recorded source as it is read at present; null while it has not been read. */
export function recordedData(source: Workspace['source'], files: DataState['files']): RecordedData | null {
  if (source.kind !== 'recorded') return null
  return files[source.fileId]?.tables[readingKey(source.reading)] ?? null
}

async function sha256(text: string): Promise<string> {
  const digest = await crypto.subtle.digest('SHA-256', new TextEncoder().encode(text))
  return Array.from(new Uint8Array(digest), (byte) => byte.toString(16).padStart(2, '0')).join('')
}

async function readWith(
  fileId: string,
  fileName: string,
  text: string,
  reading: Reading,
): Promise<Table | TableRefusal> {
  const control = new AbortController()
  dataStore.setState({ reading: { fileName, cancel: () => control.abort() } })
  try {
    const result = await bench.call('readTable', [text, reading], control.signal)
    if (result.ok)
      dataStore.setState(({ files }) => ({
        files: {
          ...files,
          [fileId]: { text, tables: { ...files[fileId]?.tables, [readingKey(reading)]: result } },
        },
      }))
    return result
  } finally {
    dataStore.setState({ reading: null })
  }
}

/**
 * Reads a file that the user opened or dropped.
 *
 * @returns the source and its table, and whether a reload will find the file again; or the reader's refusal. Nothing on the page has
 * changed yet.
 * @throws DOMException 'AbortError' when the user cancels.
 */
export async function openTable(
  file: { readonly name: string; text(): Promise<string> },
  reading: Reading = {},
): Promise<{ ok: true; source: RecordedSource; table: Table; kept: boolean } | (TableRefusal & { fileName: string })> {
  const text = await file.text()
  const fileId = await sha256(text)
  const table = await readWith(fileId, file.name, text, reading)
  if (!table.ok) return { ...table, fileName: file.name }
  // Without storage the work goes on; only a reload will ask for the file again.
  const kept = await keepFile(fileId, text)
  return { ok: true, source: { kind: 'recorded', fileName: file.name, fileId, reading }, table, kept }
}

/** The text of a file that is at hand; undefined where it is not. */
export async function fileText(fileId: string): Promise<string | undefined> {
  return dataStore.getState().files[fileId]?.text ?? (await keptFile(fileId))
}

/** Reads a file that is at hand in another way ("time is in s"). */
export async function rereadTable(source: RecordedSource, reading: Reading): Promise<Table | TableRefusal | null> {
  const { files } = dataStore.getState()
  const known = files[source.fileId]
  const existing = known?.tables[readingKey(reading)]
  if (existing) return existing
  const text = await fileText(source.fileId)
  if (text === undefined) return null
  return readWith(source.fileId, source.fileName, text, reading)
}
