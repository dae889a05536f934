/** Opening by button, keyboard and drop; saving; the link. A refused file changes nothing but the line that says why. */
import { type ChangeEvent, type DragEvent, useCallback, useEffect, useRef, useState } from 'react'
import { downloadBlob } from '../plot/index.ts'
import { takeUpWork, workspaceFromText, workspaceToFragment, workspaceToText } from '../state/keeping.ts'
import { workspaceOnTable } from '../state/open-table.ts'
import { openTable } from '../state/recorded-data.ts'
import { say, workspaceStore } from '../state/store.ts'
import { look } from '../state/view.ts'

export interface Message {
  kind: 'problem' | 'note'
  text: string
}

const MAX_LINK_LENGTH = 8000

export function useFiles() {
  const [message, setMessage] = useState<Message | null>(null)
  const [dragging, setDragging] = useState(false)
  const inputRef = useRef<HTMLInputElement>(null)
  const report = useCallback((text: string) => setMessage({ kind: 'problem', text }), [])

  useEffect(() => {
    void takeUpWork(location.hash).then((said) => {
      if (said) report(said)
      if (location.hash) history.replaceState(null, '', location.pathname + location.search)
    })
  }, [report])

  const open = useCallback(
    async (file: File) => {
      try {
        if (file.name.toLowerCase().endsWith('.json')) {
          const result = workspaceFromText(await file.text())
          if (!result.ok) return report(`${file.name} was not opened: ${result.reason}. The work on screen is as it was.`)
          say(() => result.workspace)
          look({ open: null })
          return setMessage(null)
        }
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
        say((w) => workspaceOnTable(w, result.source, result.table))
        look({ open: 'scenario' })
        setMessage(null)
      } catch (error) {
        if (error instanceof DOMException && error.name === 'AbortError')
          return setMessage({ kind: 'note', text: `Reading ${file.name} was cancelled. The work on screen is as it was.` })
        report(`${file.name} could not be read: ${error instanceof Error ? error.message : String(error)}`)
      }
    },
    [report],
  )

  return {
    message,
    report,
    dismiss: () => setMessage(null),
    dragging,
    chooseFile: () => inputRef.current?.click(),
    saveWorkspace: () => {
      const { workspace } = workspaceStore.getState()
      const name = workspace.title.replace(/[^\p{L}\p{N}]+/gu, '-').replace(/^-|-$/g, '') || 'workspace'
      downloadBlob(new Blob([workspaceToText(workspace)], { type: 'application/json' }), `${name}.sidelobe.json`)
    },
    copyLink: async () => {
      const { workspace } = workspaceStore.getState()
      const link = location.origin + location.pathname + workspaceToFragment(workspace)
      if (link.length > MAX_LINK_LENGTH)
        return report('The workspace is too large for a link: save it as a file instead.')
      try {
        await navigator.clipboard.writeText(link)
        const needs = workspace.source.kind === 'recorded' ? ` It holds no data: who opens it needs ${workspace.source.fileName}.` : ''
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
