/** The desks under the readout: each answers one question, one is open at a time. */
import type { ReactNode } from 'react'
import type { Workspace } from '../../state/workspace.ts'
import { useView } from '../hooks.ts'
import { OnDesk } from '../sheet-figures.ts'
import type { Shown } from '../use-evaluation.ts'
import './desks.css'
import { closeDesk, DESKS_ID, type DeskId, openDesk } from './open-desk.ts'
import { ClaimsDesk } from './claims/claims-desk.tsx'
import { TraceDesk } from './trace/trace-desk.tsx'
import { TradeOffDesk } from './trade-off/trade-off-desk.tsx'
import { WriteUpDesk } from './write-up/write-up-desk.tsx'

export interface DeskProps {
  /** The workspace of the sentence. */
  workspace: Workspace
  /** What is drawn, which may lag behind it. */
  shown: Shown
  /** Names filter, data and score for a saved figure. */
  caption: () => string
}

interface Desk {
  id: DeskId
  title: string
  question: string
  Body: (props: DeskProps) => ReactNode
}

/** A desk is listed when it works. */
const DESKS: readonly Desk[] = [
  { id: 'trace', title: 'Trace-back', question: 'Where does this value come from?', Body: TraceDesk },
  { id: 'trade-off', title: 'Trade-off', question: 'Which cutoff and roll-off should I use?', Body: TradeOffDesk },
  { id: 'claims', title: 'Claims', question: 'Is this statement about the filter true?', Body: ClaimsDesk },
  { id: 'write-up', title: 'Write-up', question: 'How do I report this?', Body: WriteUpDesk },
]

export function Desks(props: DeskProps) {
  const open = useView((view) => view.desk)
  const desk = DESKS.find(({ id }) => id === open)
  return (
    <section className="desks" id={DESKS_ID} aria-label="Desks">
      <div className="desk-strip">
        {DESKS.map(({ id, title, question }) => (
          <button
            key={id}
            type="button"
            className={id === open ? 'desk-tab open' : 'desk-tab'}
            aria-expanded={id === open}
            aria-label={`${title}: ${question}`}
            onClick={() => (id === open ? closeDesk() : openDesk(id))}
          >
            <span className="desk-title">{title}</span>
            <span className="desk-asks">{question}</span>
          </button>
        ))}
      </div>
      <OnDesk value={true}>{desk ? <desk.Body {...props} /> : null}</OnDesk>
    </section>
  )
}
