/** Write-up: the methods paragraph, what a report must state, published settings, the chain as code, and the figures. */
import { useDeferredValue, useMemo, useRef } from 'react'
import { useStore } from 'zustand'
import type { Evaluation } from '../../../state/evaluation.ts'
import { isHeavy } from '../../../state/evaluation-cost.ts'
import { dataStore, recordedData } from '../../../state/recorded-data.ts'
import type { Workspace } from '../../../state/workspace.ts'
import { writeUpFacts, writeUpWords } from '../../../state/write-up.ts'
import { askForWords } from '../../../state/write-up-bench.ts'
import type { WriteUpFacts } from '../../../words/index.ts'
import { WordButton } from '../../fields.tsx'
import type { DeskProps } from '../desks.tsx'
import { ChecklistTable, countWords } from './checklist-table.tsx'
import { CodePart } from './code-part.tsx'
import { ParagraphPart } from './paragraph-part.tsx'
import { SettingsTable } from './settings-table.tsx'
import { SheetPart } from './sheet-part.tsx'
import { type Answer, useAnswer } from './use-answer.ts'
import './write-up.css'

export function WriteUpDesk({ workspace, shown }: DeskProps) {
  const { evaluation, of, stale, problems } = shown
  if (!evaluation || !of) return null
  return <Written {...{ workspace, of, evaluation, stale }} faulty={problems.length > 0} />
}

interface WrittenProps {
  workspace: Workspace
  of: Workspace
  evaluation: Evaluation
  stale: boolean
  /** The sentence says what cannot be: the write-up is that of the last one that could. */
  faulty: boolean
}

function Written({ workspace, of, evaluation, stale, faulty }: WrittenProps) {
  const { statements } = workspace
  const present = useMemo(() => writeUpFacts({ ...of, statements }, evaluation), [of, statements, evaluation])
  // figures go first while a cutoff is dragged
  const facts = useDeferredValue(present)
  const { value, stale: old, failure } = useWords(facts, of)
  const waiting = stale || old || facts !== present
  return (
    <div className={waiting ? 'desk write-up-desk stale' : 'desk write-up-desk'} aria-busy={waiting}>
      <p className="desk-question">How do I report this?</p>
      {faulty ? (
        <p className="small over" role="status">
          What the protocol line says now cannot be: below is still the write-up of what it said before.
        </p>
      ) : null}
      {failure ? (
        <p className="small over" role="alert">
          The write-up could not be made: {failure}
        </p>
      ) : null}
      {value ? (
        <>
          <p className="remark summary" role="status">
            Of what recommendations ask a paper to report about filters: {countWords(value.checklist)}.
          </p>
          <Contents />
          <div className="grid">
            <ParagraphPart paragraph={value.paragraph} stale={stale || old} />
            <SheetPart title={of.title || facts.waveform} stale={stale} />
          </div>
          <ChecklistTable words={value} workspace={workspace} />
          <SettingsTable words={value} />
        </>
      ) : failure ? null : (
        <p className="remark" role="status">
          Working …
        </p>
      )}
      <CodePart facts={facts} old={stale} />
    </div>
  )
}

const PARTS = ['Reporting checklist', 'Published settings', 'Code'] as const

/** The desk is long: its parts below the paragraph, to go there. */
function Contents() {
  const goTo = (name: string) => {
    const part = document.querySelector<HTMLElement>(`.write-up-part[aria-label="${name}"]`)
    part?.scrollIntoView({ block: 'start' })
    part?.focus({ preventScroll: true })
  }
  return (
    <p className="small write-up-contents">
      <span className="quiet">further down:</span>
      {PARTS.map((name) => (
        <WordButton key={name} label={`go to ${name}`} onPress={() => goTo(name)}>
          {name.toLowerCase()}
        </WordButton>
      ))}
    </p>
  )
}

/** The words: at once where they are quick, from the worker where designing the chain would hold up the page. */
function useWords(
  facts: WriteUpFacts,
  of: Workspace,
): Pick<Answer<ReturnType<typeof writeUpWords>>, 'value' | 'stale' | 'failure'> {
  const data = useStore(dataStore, (state) => recordedData(of.source, state.files))
  const heavy = useMemo(() => isHeavy(of, data), [of, data])
  const direct = useMemo(() => (heavy ? null : writeUpWords(facts)), [heavy, facts])
  const answer = useAnswer(heavy ? JSON.stringify(facts) : null, (signal) => askForWords(facts, signal))
  const last = useRef(direct)
  if (direct) last.current = direct
  else if (answer.value && !answer.stale) last.current = answer.value
  // what was said last stays, dimmed, while the worker writes
  return direct ? { value: direct, stale: false, failure: null } : { ...answer, value: last.current }
}
