/** A phrase that can be changed: a button that opens its editor in the right column. */
import { look, viewStore } from '../state/view.ts'
import { useView } from './hooks.ts'

interface TokenProps {
  id: string
  text: string
  /** What the token is, for a screen reader: the text alone ("1 Hz") does not say. */
  label: string
  off?: boolean | undefined
  /** Id of the message that says what is wrong with it. */
  bad?: string | undefined
  className?: string
}

export function Token({ id, text, label, off, bad, className = '' }: TokenProps) {
  const open = useView((view) => view.open === id)
  return (
    <button
      type="button"
      id={`token-${id}`}
      className={['token', off ? 'off' : '', bad ? 'bad' : '', className].filter(Boolean).join(' ')}
      aria-label={`${text}, ${label}`}
      aria-expanded={open}
      aria-invalid={bad ? true : undefined}
      aria-describedby={bad}
      onClick={() => look({ open: viewStore.getState().open === id ? null : id })}
    >
      {text}
    </button>
  )
}
