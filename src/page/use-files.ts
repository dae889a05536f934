/** Opening by button, keyboard and drop; saving; the link. A refused file changes nothing but the line that says why. */
import { type ChangeEvent, type DragEvent, useCallback, useEffect, useRef, useState } from 'react'
import { downloadBlob } from '../plot/index.ts'
import type { KeepingState } from '../state/autosave.ts'
import { type TakenUp, takeUpWork, workspaceFromText, workspaceToFragment, workspaceToText } from '../state/keeping.ts'
import { workspaceOnTable } from '../state/open-table.ts'
import { dataStore, fileText, openTable, recordedData, rereadTable } from '../state/recorded-data.ts'
import { onRefusal, say, workspaceStore } from '../state/store.ts'
import { look } from '../state/view.ts'

export interface Message {
  kind: 'problem' | 'note'
  text: string
  /** What the user can answer, beside dismissing it. */
  answers?: readonly { words: string; run: () => void }[]
}

const MAX_LINK_LENGTH = 8000

/** The question which of two works is kept. It stands until it is answered: meanwhile nothing is overwritten. */
function whichWork(state: Extract<KeepingState, { workspace: unknown }>, taken: () => TakenUp | null): Message {
  const other = state.kind === 'other tab' ? 'the other tab’s work' : 'the work from last time'
  const what =
    state.kind === 'last time'
      ? 'There is other work here from last time.'
      : state.workspace
        ? 'This workspace was changed in another tab meanwhile.'
        : 'Another tab has kept work here that only a newer version of this page can read.'
  const take = { words: `take ${other}`, run: () => void taken()?.takeOther() }
  const keep = { words: 'keep what is on this screen', run: () => taken()?.keepMine() }
  return {
    kind: 'problem',
    text: `${what} Nothing is overwritten until you choose.`,
    answers: state.workspace ? [take, keep] : [keep],
  }
}

/** Said once: where nothing at all is kept, that has been said. */
function tableNotKept(
  table: { kept: boolean; source: { fileName: string } },
  said: { current: boolean },
): Message | null {
  if (table.kept || said.current) return null
  said.current = true
  return {
    kind: 'note',
    text: `This browser has no room to keep the table: after a reload, open ${table.source.fileName} again, or save the workspace with the table inside.`,
  }
}

/** Work that this page cannot read is not thrown away by it. */
function unreadWork({ text, drop }: NonNullable<TakenUp['unread']>, done: () => void): Message {
  const save = () => downloadBlob(new Blob([text], { type: 'application/json' }), 'unread.sidelobe.json')
  return {
    kind: 'note',
    text: 'Work that this page cannot read is kept aside.',
    answers: [
      { words: 'save it as a file', run: save },
      {
        words: 'drop it',
        run: () => {
          drop()
          done()
        },
      },
    ],
  }
}

export function useFiles() {
  const [message, setMessage] = useState<Message | null>(null)
  const [question, setQuestion] = useState<Message | null>(null)
  const [unread, setUnread] = useState<Message | null>(null)
  const [looking, setLooking] = useState(true)
  const storageSaid = useRef(false)
  const [dragging, setDragging] = useState(false)
  const inputRef = useRef<HTMLInputElement>(null)
  const report = useCallback((text: string) => setMessage({ kind: 'problem', text }), [])

  useEffect(() => {
    onRefusal((fault) => report(`This was not taken, since it could not be kept: ${fault}.`))
    let taken: TakenUp | null = null
    const tell = (state: KeepingState) => {
      if (state.kind === 'no storage') {
        storageSaid.current = true
        report(
          'This browser keeps nothing (its storage is full or shut off): save the workspace as a file before you leave.',
        )
      } else setQuestion(state.kind === 'kept' ? null : whichWork(state, () => taken))
    }
    void takeUpWork(location.hash, tell).then((work) => {
      taken = work
      setLooking(false)
      if (work.said) report(work.said)
      if (work.unread) setUnread(unreadWork(work.unread, () => setUnread(null)))
      if (location.hash) history.replaceState(null, '', location.pathname + location.search)
    })
  }, [report])

  const open = useCallback(
    async (file: File) => {
      try {
        if (file.name.toLowerCase().endsWith('.json')) {
          const result = workspaceFromText(await file.text())
          if (!result.ok)
            return report(`${file.name} was not opened: ${sentence(result.reason)} The work on screen is as it was.`)
          const { enclosed, workspace } = result
          let notKept: Message | null = null
          if (enclosed && workspace.source.kind === 'recorded') {
            const named = { name: enclosed.fileName, text: () => Promise.resolve(enclosed.text) }
            const table = await openTable(named, workspace.source.reading)
            if (!table.ok || table.source.fileId !== workspace.source.fileId)
              return report(
                `${file.name} was not opened: the table inside is damaged. The work on screen is as it was.`,
              )
            notKept = tableNotKept(table, storageSaid)
          }
          setMessage(notKept)
          say(() => workspace)
          return look({ open: null })
        }
        // before reading: afterwards the file is at hand, and no longer waited for
        const { source } = workspaceStore.getState().workspace
        const waiting = source.kind === 'recorded' && !recordedData(source, dataStore.getState().files) ? source : null
        const result = await openTable(file)
        if (!result.ok) {
          const where = [
            result.line === undefined ? '' : `line ${result.line}`,
            result.column === undefined ? '' : `column “${result.column}”`,
          ]
            .filter(Boolean)
            .join(', ')
          return report(
            `${file.name} was not opened${where ? ` (${where})` : ''}: ${sentence(result.reason)} ${sentence(result.todo ?? '')} The work on screen is as it was.`,
          )
        }
        if (waiting && waiting.fileId === result.source.fileId) {
          // The very file that the workspace asks for: everything that was said about it stands.
          const table = await rereadTable(waiting, waiting.reading)
          if (table?.ok) return setMessage(tableNotKept(result, storageSaid))
        }
        setMessage(
          waiting
            ? {
                kind: 'note',
                text: `${file.name} is not the file that this workspace was made on (${waiting.fileName}): its content differs. It was opened as new data; undo brings the workspace back.`,
              }
            : tableNotKept(result, storageSaid),
        )
        say((w) => workspaceOnTable(w, result.source, result.table))
        look({ open: 'scenario' })
      } catch (error) {
        if (error instanceof DOMException && error.name === 'AbortError')
          return setMessage({
            kind: 'note',
            text: `Reading ${file.name} was cancelled. The work on screen is as it was.`,
          })
        report(`${file.name} could not be read: ${error instanceof Error ? error.message : String(error)}`)
      }
    },
    [report],
  )

  return {
    /** What is to be read above the figures; what waits for an answer comes first, and stays. */
    messages: [question, unread, message].filter((entry) => entry !== null),
    report,
    /** Whether the browser is still asked for the work that it kept: what stands there may give way to it. */
    lookingForWork: looking,
    dismiss: () => setMessage(null),
    dragging,
    chooseFile: () => inputRef.current?.click(),
    /** Saves under a name, with the loaded table inside if the user says so. */
    saveWorkspace: async (fileName?: string, encloseTable = false) => {
      const { workspace } = workspaceStore.getState()
      const name = (fileName ?? workspace.title).replace(/[^\p{L}\p{N}]+/gu, '-').replace(/^-|-$/g, '') || 'workspace'
      const { source } = workspace
      const text = encloseTable && source.kind === 'recorded' ? await fileText(source.fileId) : undefined
      const enclosed = text !== undefined && source.kind === 'recorded' ? { fileName: source.fileName, text } : null
      if (encloseTable && !enclosed)
        return report('The table is not at hand: open the file again before saving it inside.')
      downloadBlob(
        new Blob([workspaceToText(workspace, enclosed)], { type: 'application/json' }),
        `${name}.sidelobe.json`,
      )
    },
    copyLink: async () => {
      const { workspace } = workspaceStore.getState()
      const link = location.origin + location.pathname + workspaceToFragment(workspace)
      if (link.length > MAX_LINK_LENGTH)
        return report('The workspace is too large for a link: save it as a file instead.')
      try {
        await navigator.clipboard.writeText(link)
        const needs =
          workspace.source.kind === 'recorded'
            ? ` It holds no data: who opens it needs ${workspace.source.fileName}.`
            : ''
        setMessage({ kind: 'note', text: `The link to this workspace is copied.${needs}` })
      } catch {
        history.replaceState(null, '', workspaceToFragment(workspace))
        setMessage({ kind: 'note', text: 'The browser did not allow copying: the link stands in the address line.' })
      }
    },
    input: {
      ref: inputRef,
      type: 'file',
      hidden: true,
      accept: '.csv,.tsv,.txt,.json,text/csv,text/tab-separated-values,application/json',
      'aria-label': 'open a table or a workspace',
      onChange: (event: ChangeEvent<HTMLInputElement>) => {
        const file = event.target.files?.[0]
        event.target.value = ''
        if (file) void open(file)
      },
    },
    dragOver: (event: DragEvent) => {
      if (!event.dataTransfer.types.includes('Files')) return
      event.preventDefault()
      setDragging(true)
    },
    dragLeave: (event: DragEvent) => {
      if (event.relatedTarget === null) setDragging(false)
    },
    drop: (event: DragEvent) => {
      event.preventDefault()
      setDragging(false)
      const { files } = event.dataTransfer
      if (files.length > 1) return report('Several files were dropped: drop one at a time.')
      if (files[0]) void open(files[0])
    },
  }
}

function sentence(words: string): string {
  const trimmed = words.trim()
  if (trimmed === '') return ''
  const capital = trimmed.charAt(0).toUpperCase() + trimmed.slice(1)
  return /[.!?]$/.test(capital) ? capital : `${capital}.`
}
