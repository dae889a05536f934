/** Claims: statements about the filter in a fixed form, each computed, answered, and told what would change the answer. */
import { useMemo, useRef, useState } from 'react'
import { useStore } from 'zustand'
import {
  addingClaim,
  CLAIM_FORMS,
  conditionNames,
  filteredBeforeOf,
  namingClaims,
  statingFilteredBefore,
  statingRunOn,
} from '../../../state/claims.ts'
import { dataStore, recordedData } from '../../../state/recorded-data.ts'
import { endGesture, say } from '../../../state/store.ts'
import { look } from '../../../state/view.ts'
import { MAX_CLAIMS, type Workspace } from '../../../state/workspace.ts'
import { claimFormName } from '../../../words/index.ts'
import { Choice, WordButton } from '../../fields.tsx'
import { Editor } from '../../editors/editor.tsx'
import { useView } from '../../hooks.ts'
import { Token } from '../../token.tsx'
import type { DeskProps } from '../desks.tsx'
import { ClaimCard } from './claim-card.tsx'
import './claims.css'
import { DossierPart, type FigureSource } from './dossier-part.tsx'
import { TextField } from './text-field.tsx'
import { type FocusNext, useFocusNext } from './use-focus-next.ts'

export function ClaimsDesk({ workspace, shown, caption }: DeskProps) {
  const { evaluation } = shown
  const { claims, source } = workspace
  const data = useStore(dataStore, (store) => recordedData(source, store.files))
  const conditions = useMemo(() => conditionNames(workspace, data), [workspace, data])
  // the figures of the cards, for the dossier
  const figures = useRef(new Map<number, FigureSource>())
  const desk = useRef<HTMLDivElement>(null)
  const focusNext = useFocusNext(desk)
  if (!evaluation) return null
  const { samplingRateHz } = evaluation
  return (
    <div className="desk claims-desk" ref={desk}>
      <div className="grid">
        <div>
          <p className="desk-question">
            {claims.list.length === 0
              ? 'Is a statement about this filter true? Put it in a fixed form: it is computed, answered, and told what would change the answer.'
              : 'Are these statements about the filter true?'}
          </p>
          {source.kind === 'recorded' ? <FilteredBefore workspace={workspace} /> : null}
        </div>
        <div className="side desk-side">
          {source.kind === 'recorded' ? <FilteredBeforeEditor workspace={workspace} /> : null}
          {source.kind === 'recorded' ? <RunOnEditor workspace={workspace} /> : null}
          <TextField
            label="title of the claims"
            hint="the paper or review that they are from"
            value={claims.title}
            onChange={(title) => say(namingClaims(title), 'claims-title')}
            onEnd={endGesture}
          />
        </div>
      </div>
      {claims.list.map((claim, place) => (
        <ClaimCard
          key={claim.id}
          {...{ claim, workspace, data, samplingRateHz, conditions, caption, focusNext }}
          number={place + 1}
          count={claims.list.length}
          figures={figures.current}
        />
      ))}
      <AddClaim {...{ workspace, focusNext }} />
      {claims.list.length > 0 ? <DossierPart {...{ workspace, evaluation, data }} figures={figures.current} /> : null}
    </div>
  )
}

const FILTERED_BEFORE = 'claim-filtered-before'

/** Whether the stages in the data are all that a recording has passed: only the user can know. */
function FilteredBefore({ workspace }: { workspace: Workspace }) {
  const filteredBefore = filteredBeforeOf(null, workspace)
  return (
    <p className="small claim-about of-desk">
      What this recording had passed before it was loaded is{' '}
      <Token
        id={FILTERED_BEFORE}
        className="small"
        text={filteredBefore === 'as stated' ? 'all stated in the protocol line' : 'not known in full'}
        label="what the recording had passed"
      />
      {filteredBefore === 'as stated'
        ? '.'
        : ': claims that speak of the unfiltered waveform cannot be told before it is.'}
      {workspace.chain.some(({ inData, enabled }) => inData && enabled !== false) ? (
        <>
          {' '}
          Its stages in the data ran on{' '}
          <Token
            id={RUN_ON}
            className="small"
            text={RUN_ON_TEXT[workspace.extent]}
            label="what the stages in the data ran on"
          />
          .
        </>
      ) : null}
    </p>
  )
}

const RUN_ON = 'claim-run-on'
const RUN_ON_TEXT = { continuous: 'the continuous recording', epochs: 'the cut-out epochs' } as const

function RunOnEditor({ workspace }: { workspace: Workspace }) {
  const open = useView((view) => view.open === RUN_ON)
  if (!open) return null
  return (
    <Editor title="Before it was loaded" subtitle="what the stages in the data ran on">
      <Choice
        stacked
        label="what the stages in the data ran on"
        value={workspace.extent}
        options={[
          { value: 'continuous', text: RUN_ON_TEXT.continuous, hint: 'they saw what lies outside the epoch' },
          { value: 'epochs', text: RUN_ON_TEXT.epochs, hint: 'what lies outside was invented by padding' },
        ]}
        onChange={(extent) => say(statingRunOn(extent))}
      />
      <p className="quiet">Only claims about what the filter alone can make depend on it.</p>
    </Editor>
  )
}

function FilteredBeforeEditor({ workspace }: { workspace: Workspace }) {
  const open = useView((view) => view.open === FILTERED_BEFORE)
  if (!open) return null
  return (
    <Editor title="Before it was loaded" subtitle="what the recording had passed">
      <Choice
        stacked
        label="what the recording had passed"
        value={filteredBeforeOf(null, workspace)}
        options={[
          {
            value: 'as stated',
            text: 'only the stages that the protocol line says were in the data',
            hint: 'none, if it says none',
          },
          { value: 'not known', text: 'not known in full' },
        ]}
        onChange={(value) => say(statingFilteredBefore(value))}
      />
    </Editor>
  )
}

function AddClaim({ workspace, focusNext }: { workspace: Workspace; focusNext: FocusNext }) {
  const [asked, setAsked] = useState(false)
  const open = asked || workspace.claims.list.length === 0
  const data = useStore(dataStore, (store) => recordedData(workspace.source, store.files))
  const full = workspace.claims.list.length >= MAX_CLAIMS
  const few = conditionNames(workspace, data).length < 2
  if (full) return <p className="small quiet">{MAX_CLAIMS} claims are as many as one dossier holds.</p>
  return (
    <section className="add-claim" aria-label="add a claim">
      {open ? (
        <>
          <p className="small quiet">A claim about …</p>
          <ul>
            {CLAIM_FORMS.map((form) => {
              const impossible = form === 'effect' && few
              return (
                <li key={form}>
                  <WordButton
                    disabled={impossible}
                    onPress={() => {
                      say(addingClaim(form, data))
                      setAsked(false)
                      look({ open: null })
                      focusNext((desk) =>
                        Array.from(desk.querySelectorAll('.claim')).at(-1)?.querySelector<HTMLElement>('.token'),
                      )
                    }}
                  >
                    {claimFormName(form)}
                  </WordButton>
                  {impossible ? <span className="quiet small"> needs two conditions</span> : null}
                </li>
              )
            })}
          </ul>
        </>
      ) : (
        <WordButton
          onPress={() => {
            setAsked(true)
            focusNext((desk) => desk.querySelector<HTMLElement>('.add-claim button'))
          }}
        >
          + add a claim
        </WordButton>
      )}
    </section>
  )
}
