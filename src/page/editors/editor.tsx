/** The frame of every token editor: in the right column, over the chain table, closed by Escape, never modal. */
import { type ReactNode, useEffect, useRef } from 'react'
import { endGesture } from '../../state/store.ts'
import { look, viewStore } from '../../state/view.ts'

interface EditorProps {
  title: string
  subtitle?: string
  error?: string | undefined
  children: ReactNode
}

export function closeEditor(): void {
  const { open } = viewStore.getState()
  endGesture()
  look({ open: null })
  // The keyboard goes back to the token that opened the editor.
  if (open) document.getElementById(`token-${open}`)?.focus()
}

export function Editor({ title, subtitle, error, children }: EditorProps) {
  const frame = useRef<HTMLElement>(null)
  useEffect(() => {
    const first = frame.current?.querySelector<HTMLElement>(
      '.editor-body :is(input:checked, input:not([type=radio]), select, button)',
    )
    first?.focus({ preventScroll: true })
    if (first instanceof HTMLInputElement && first.type !== 'range' && first.type !== 'radio') first.select()
  }, [])
  return (
    <section
      ref={frame}
      className="editor"
      aria-label={subtitle ? `${title}, ${subtitle}` : title}
      onKeyDown={(event) => {
        if (event.key !== 'Escape') return
        event.stopPropagation()
        closeEditor()
      }}
    >
      <div className="editor-head">
        <h2>{title}</h2>
        {subtitle ? <span className="small quiet">{subtitle}</span> : null}
        <button type="button" className="plain" onClick={closeEditor}>
          Esc closes
        </button>
      </div>
      <div className="editor-body">{children}</div>
      {error ? (
        <p className="field-error" role="alert">
          {error}
        </p>
      ) : null}
    </section>
  )
}
