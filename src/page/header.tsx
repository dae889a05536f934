import { redo, undo } from '../state/store.ts'
import { look } from '../state/view.ts'
import { useHistory, useView } from './hooks.ts'
import { Token } from './token.tsx'

interface HeaderProps {
  title: string
  kind: string
  onOpen: () => void
  onSave: () => void
  onNew: () => void
  onCopyLink: () => void
}

export function Header({ title, kind, onOpen, onSave, onNew, onCopyLink }: HeaderProps) {
  const { canUndo, canRedo } = useHistory()
  const theme = useView((view) => view.theme)
  const polarity = useView((view) => view.polarity)
  const help = useView((view) => view.help)
  return (
    <header className="header">
      <h1>Sidelobe</h1>
      <div className="in-use">
        <Token id="scenario" text={title} label="scenario or file in use" className="small" />
        <span className="small quiet">{kind}</span>
      </div>
      <nav aria-label="workspace and page">
        <span className="set">
          <Plain onPress={undo} disabled={!canUndo} hint="Ctrl+Z">
            Undo
          </Plain>
          <Plain onPress={redo} disabled={!canRedo} hint="Ctrl+Shift+Z">
            Redo
          </Plain>
        </span>
        <span className="set">
          <span className="quiet">Workspace</span>
          <Plain onPress={onOpen} hint="Ctrl+O">
            Open
          </Plain>
          <Plain id="token-save" onPress={onSave} hint="Ctrl+S saves at once">
            Save
          </Plain>
          <Plain onPress={onNew}>New</Plain>
        </span>
        <Plain onPress={onCopyLink}>Copy link</Plain>
        <span className="set">
          <button
            type="button"
            className="plain token"
            aria-label={`Theme: ${theme}`}
            onClick={() => look({ theme: theme === 'light' ? 'dark' : 'light' })}
          >
            {theme === 'light' ? 'Light' : 'Dark'}
          </button>
          <button
            type="button"
            className="plain token"
            aria-label={`Polarity: positive ${polarity}`}
            onClick={() => look({ polarity: polarity === 'up' ? 'down' : 'up' })}
          >
            {polarity === 'up' ? 'Positive up' : 'Negative up'}
          </button>
        </span>
        <button type="button" className="plain" aria-expanded={help} onClick={() => look({ help: !help })}>
          Help
        </button>
      </nav>
    </header>
  )
}

function Plain(props: { id?: string; onPress: () => void; disabled?: boolean; hint?: string; children: string }) {
  return (
    <button
      type="button"
      id={props.id}
      className="plain"
      onClick={props.onPress}
      disabled={props.disabled}
      title={props.hint}
    >
      {props.children}
    </button>
  )
}
