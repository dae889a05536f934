/** What the user states in words: a token in its row of the checklist, with the field under it. */
import { useEffect, useRef, useState } from 'react'
import { endGesture, say } from '../../../state/store.ts'
import { MAX_STATEMENT, stating } from '../../../state/write-up.ts'
import { STATEMENT_FIELDS, type StatementField } from '../../../words/index.ts'
import { closeEditor } from '../../editors/editor.tsx'
import { WordButton } from '../../fields.tsx'
import { useView } from '../../hooks.ts'
import { Token } from '../../token.tsx'

interface StatementProps {
  field: StatementField
  /** What the user has said; '' where nothing. */
  said: string
}

const nameOf = (field: StatementField) => STATEMENT_FIELDS.find((entry) => entry.field === field)?.name ?? field

export function Statement({ field, said }: StatementProps) {
  const id = `write-up-${field}`
  const open = useView((view) => view.open === id)
  const label = said === '' ? `statement of ${nameOf(field)}` : `${nameOf(field)}, your words`
  return (
    <>
      <Token id={id} className="small" text={said === '' ? 'state it' : said} label={label} />
      {open ? <StatementArea key={field} field={field} said={said} /> : null}
    </>
  )
}

function StatementArea({ field, said }: StatementProps) {
  const [draft, setDraft] = useState(said)
  const last = useRef(said)
  const area = useRef<HTMLTextAreaElement>(null)
  // What changed elsewhere (undo) replaces what stands in the field; what is typed here does not fight the typing.
  useEffect(() => {
    if (said === last.current) return
    last.current = said
    setDraft(said)
  }, [said])
  useEffect(() => {
    area.current?.focus({ preventScroll: true })
    area.current?.select()
  }, [])
  const change = (text: string) => {
    setDraft(text)
    last.current = text.trim() === '' ? '' : text
    say((workspace) => stating(workspace, field, text), `statement:${field}`)
  }
  return (
    <div className="statement">
      <label className="visually-hidden" htmlFor={`statement-${field}`}>
        {nameOf(field)}
      </label>
      <textarea
        ref={area}
        id={`statement-${field}`}
        rows={2}
        maxLength={MAX_STATEMENT}
        autoComplete="off"
        placeholder={nameOf(field)}
        value={draft}
        onChange={(event) => change(event.target.value)}
        onBlur={endGesture}
        onKeyDown={(event) => {
          // what is typed belongs to the field, undo of typing included
          const ends = event.key === 'Escape' || event.key === 'Enter'
          event.stopPropagation()
          if (!ends) return
          event.preventDefault()
          closeEditor()
        }}
      />
      <p className="small quiet">
        It stands in the paragraph at once. Enter or Esc closes. <WordButton onPress={closeEditor}>done</WordButton>
      </p>
    </div>
  )
}
