/** The editors of the claims desk: one for every token of a claim's sentence and of the line under it. */
import { useState } from 'react'
import type { ClaimForm, ClaimRow, ShownClaim, Varied } from '../../evidence/claims/claim.ts'
import type { CutoffMeaning } from '../../filter/stage.ts'
import {
  chainOfClaim,
  changingClaim,
  claimScoreUnit,
  isShownForm,
  SHOWN_FORMS,
  shownToBegin,
  takenOf,
  variedChoices,
  variedOf,
} from '../../state/claims.ts'
import { namesOfPins } from '../../state/pin-actions.ts'
import type { RecordedData } from '../../state/recorded-data.ts'
import { say } from '../../state/store.ts'
import type { Claim, Workspace } from '../../state/workspace.ts'
import { claimFormName, claimRowUnit, exact, variedWords } from '../../words/index.ts'
import { Choice, NumberField, WindowFields } from '../fields.tsx'
import { Editor } from './editor.tsx'

interface ClaimEditorProps {
  claim: Claim
  /** Place in the list, from 1. */
  number: number
  /** The token's part: "amount", "inner:window", "chain" … */
  part: string
  workspace: Workspace
  data: RecordedData | null
  samplingRateHz: number
  conditions: readonly string[]
  /** Why the claim cannot be answered as it stands. */
  error: string | undefined
}

export function ClaimEditor(props: ClaimEditorProps) {
  const { claim, number, part, error } = props
  const title = `Claim ${number}`
  const change = (next: Partial<Claim>) =>
    say(
      changingClaim(claim.id, (present) => ({ ...present, ...next })),
      `claim:${claim.id}:${part}`,
    )
  if (part === 'chain') return <ChainOfClaim {...{ ...props, title, change }} />
  if (part === 'taken') return <TakenOfClaim {...{ ...props, title, change }} />
  if (part === 'varied') return <VariedOfClaim {...{ ...props, title, change }} />
  const inner = part.startsWith('inner:')
  const { says } = claim
  const outer = (form: ClaimForm) => change({ says: form as Claim['says'] })
  if (!inner)
    return (
      <Editor title={title} subtitle={PART_TITLE[part] ?? part} error={error}>
        <FormPart {...props} form={says} set={outer} />
      </Editor>
    )
  const shown = says.form === 'twin' ? says.shows : says.form === 'meaning' ? says.conclusion : null
  if (!shown) return null
  const setInner = (form: ClaimForm) => {
    if (!isShownForm(form.form)) return
    if (says.form === 'twin') outer({ ...says, shows: form as ShownClaim })
    if (says.form === 'meaning') outer({ ...says, conclusion: form as ShownClaim })
  }
  const own = part.slice('inner:'.length)
  return (
    <Editor title={title} subtitle={PART_TITLE[own] ?? own} error={error}>
      <FormPart {...props} part={own} form={shown} set={setInner} />
      <InnerForm {...props} form={shown} set={setInner} />
    </Editor>
  )
}

const PART_TITLE: Record<string, string> = {
  row: 'what is changed',
  relation: 'at least or at most',
  amount: 'how much is claimed',
  unit: 'unit of the amount',
  window: 'window',
  first: 'first condition',
  second: 'second condition',
  says: 'what is said of the effect',
  least: 'smallest effect that counts',
  direction: 'earlier or later',
  hz: 'frequency',
  amplitude: 'amplitude in single trials',
  locked: 'locked to the event or not',
  below: 'amplitude claimed',
  twin: 'which other version',
  stated: 'meaning as stated',
  other: 'the other meaning',
  onset: 'onset of the activity',
  slack: 'how much earlier it may begin',
}

const ROWS: readonly ClaimRow[] = [
  'score',
  'mean-amplitude',
  'peak-amplitude',
  'signed-area',
  'peak-latency',
  'area-latency',
  'onset-latency',
]

const ROW_TEXT: Record<ClaimRow, string> = {
  score: 'the score of the protocol line',
  'mean-amplitude': 'mean amplitude',
  'peak-amplitude': 'peak amplitude',
  'signed-area': 'signed area',
  'peak-latency': 'peak latency',
  'area-latency': 'fractional-area latency',
  'onset-latency': 'onset latency',
}

const MEANING_TEXT: Record<CutoffMeaning, string> = {
  'half-amplitude': 'half-amplitude (−6 dB), as applied',
  'half-power': 'half-power (−3 dB), as applied',
  design: 'design cutoff of one pass',
}

type FormPartProps = Omit<ClaimEditorProps, 'claim' | 'number' | 'error'> & {
  form: ClaimForm
  set: (form: ClaimForm) => void
}

const plain = <T extends string>(...values: T[]) => values.map((value) => ({ value, text: value }))

/** One parameter of a form. */
function FormPart({ form, part, set, workspace, samplingRateHz, conditions }: FormPartProps) {
  const stepMs = Number((1000 / samplingRateHz).toPrecision(6))
  switch (part) {
    case 'row':
      if (form.form !== 'change') return null
      return (
        <Choice
          stacked
          label="what is changed"
          value={form.row}
          options={ROWS.map((row) => ({ value: row, text: ROW_TEXT[row], ...hintOf(row, workspace) }))}
          onChange={(row) => set({ ...form, row, unit: isLatency(row, workspace) ? 'own' : form.unit })}
        />
      )
    case 'relation':
      if (form.form !== 'change') return null
      return (
        <Choice
          label="at least or at most"
          value={form.relation}
          options={plain('at least', 'at most')}
          onChange={(relation) => set({ ...form, relation })}
        />
      )
    case 'unit':
      if (form.form === 'change')
        return (
          <Choice
            stacked
            label="unit of the amount"
            value={form.unit}
            options={[
              { value: 'own', text: rowUnitWords(form.row, workspace) },
              isLatency(form.row, workspace)
                ? { value: '%', text: '% of its value before', hint: 'not of a latency', disabled: true }
                : { value: '%', text: '% of its value before' },
            ]}
            onChange={(unit) => set({ ...form, unit })}
          />
        )
      if (form.form !== 'deflection') return null
      return (
        <Choice
          stacked
          label="unit of the amount"
          value={form.unit}
          options={[
            { value: 'µV', text: 'µV' },
            { value: '%', text: '% of the unfiltered waveform’s largest absolute value' },
          ]}
          onChange={(unit) => set({ ...form, unit })}
        />
      )
    case 'amount':
      return <AmountField {...{ form, set, workspace }} />
    case 'window': {
      const window = 'window' in form ? form.window : form.form === 'late-only' ? form.early : null
      if (!window) return null
      return (
        <WindowFields
          {...window}
          stepMs={stepMs}
          onChange={(fromMs, toMs) => {
            if (form.form === 'late-only') set({ ...form, early: { fromMs, toMs } })
            else if ('window' in form) set({ ...form, window: { fromMs, toMs } })
          }}
        />
      )
    }
    case 'first':
    case 'second':
      if (form.form !== 'effect') return null
      if (conditions.length === 0) return <p className="quiet">There are no conditions to choose from.</p>
      return (
        <Choice
          stacked
          label={`${part} condition`}
          value={form[part]}
          options={plain(...conditions)}
          onChange={(name) => set(withoutTwice(form, part, name))}
        />
      )
    case 'says':
      if (form.form !== 'effect') return null
      return (
        <Choice
          stacked
          label="what is said of the effect"
          value={form.says}
          options={plain('exists without the filter', 'is absent without the filter', 'changes sign')}
          onChange={(says) => set({ ...form, says })}
        />
      )
    case 'least':
      if (form.form !== 'effect') return null
      return (
        <Positive
          label="smallest effect that counts"
          unit="µV"
          value={form.leastUv}
          step={0.1}
          above
          set={(leastUv) => set({ ...form, leastUv })}
        />
      )
    case 'direction':
      if (form.form !== 'onset') return null
      return (
        <Choice
          label="earlier or later"
          value={form.direction}
          options={plain('earlier', 'later')}
          onChange={(direction) => set({ ...form, direction })}
        />
      )
    case 'hz':
      if (form.form !== 'attenuation' && form.form !== 'tone') return null
      return <Positive label="frequency" unit="Hz" value={form.hz} above set={(hz) => set({ ...form, hz })} />
    case 'amplitude':
      if (form.form !== 'tone') return null
      return (
        <Positive
          label="amplitude in single trials"
          unit="µV"
          value={form.amplitudeUv}
          set={(amplitudeUv) => set({ ...form, amplitudeUv })}
        />
      )
    case 'below':
      if (form.form !== 'tone') return null
      return (
        <Positive
          label="amplitude claimed"
          unit="µV"
          value={form.belowUv}
          step={0.01}
          set={(belowUv) => set({ ...form, belowUv })}
        />
      )
    case 'locked':
      if (form.form !== 'tone') return null
      return (
        <Choice
          stacked
          label="locked to the event or not"
          value={form.locked ? 'locked' : 'not locked'}
          options={[
            {
              value: 'not locked',
              text: 'not locked to the event',
              hint: 'its phase is random: it averages out with the trials',
            },
            {
              value: 'locked',
              text: 'locked to the event',
              hint: 'it stays in every average, as a display’s refresh does',
            },
          ]}
          onChange={(value) => set({ ...form, locked: value === 'locked' })}
        />
      )
    case 'twin':
      if (form.form !== 'twin') return null
      return (
        <Choice
          stacked
          label="which other version"
          value={form.twin}
          options={[
            { value: 'causal', text: 'causal', hint: 'minimum phase, or the same sections run forward twice' },
            { value: 'zero-phase', text: 'zero-phase', hint: 'run both ways, or its delay compensated' },
          ]}
          onChange={(twin) => set({ ...form, twin })}
        />
      )
    case 'stated':
    case 'other':
      if (form.form !== 'meaning') return null
      return (
        <Choice
          stacked
          label={PART_TITLE[part]}
          value={form[part]}
          options={(Object.keys(MEANING_TEXT) as CutoffMeaning[]).map((value) => ({
            value,
            text: MEANING_TEXT[value],
          }))}
          onChange={(meaning) => set(meaningWithoutTwice(form, part, meaning))}
        />
      )
    case 'onset':
      if (form.form !== 'late-only') return null
      return (
        <NumberField
          label="no activity before"
          unit="ms"
          value={form.t0Ms}
          step={stepMs}
          onChange={(t0Ms) => (Number.isFinite(t0Ms) ? set({ ...form, t0Ms }) : undefined)}
        />
      )
    case 'slack':
      if (form.form !== 'late-only') return null
      return (
        <Positive
          label="or at most this much earlier"
          unit="ms"
          value={form.slackMs}
          step={stepMs}
          set={(slackMs) => set({ ...form, slackMs })}
        />
      )
    default:
      return null
  }
}

/** A latency has no per cent: it is counted from an arbitrary moment. */
const isLatency = (row: ClaimRow, workspace: Workspace) => unitOfRow(row, workspace) === 'ms'

const unitOfRow = (row: ClaimRow, workspace: Workspace) => claimRowUnit(row, { scoreUnit: claimScoreUnit(workspace) })

const rowUnitWords = (row: ClaimRow, workspace: Workspace) => unitOfRow(row, workspace) ?? 'its own unit'

type Effect = Extract<ClaimForm, { form: 'effect' }>
type Meaning = Extract<ClaimForm, { form: 'meaning' }>

/** A condition has no difference from itself: the one that stood there already takes the other place. */
function withoutTwice(form: Effect, part: 'first' | 'second', name: string): Effect {
  const other = part === 'first' ? 'second' : 'first'
  return { ...form, [part]: name, ...(form[other] === name ? { [other]: form[part] } : {}) }
}

/** Two meanings are compared: the one that stood there already takes the other place. */
function meaningWithoutTwice(form: Meaning, part: 'stated' | 'other', meaning: CutoffMeaning): Meaning {
  const other = part === 'stated' ? 'other' : 'stated'
  return { ...form, [part]: meaning, ...(form[other] === meaning ? { [other]: form[part] } : {}) }
}

function hintOf(row: ClaimRow, { measure, score }: Workspace): { hint?: string } {
  const window = row === 'score' ? score : row === 'mean-amplitude' ? measure.mean : measure.peak
  return { hint: `${window.fromMs} to ${window.toMs} ms` }
}

/** The amount of a form, whatever it is called there. */
function AmountField({ form, set, workspace }: Pick<FormPartProps, 'form' | 'set' | 'workspace'>) {
  switch (form.form) {
    case 'change':
    case 'deflection':
      return (
        <Positive
          label="amount claimed"
          unit={form.form === 'change' && form.unit === 'own' ? rowUnitWords(form.row, workspace) : form.unit}
          value={form.amount}
          step={form.unit === '%' ? 1 : 0.1}
          set={(amount) => set({ ...form, amount })}
        />
      )
    case 'from-outside':
      return (
        <Positive
          label="share claimed"
          unit="%"
          value={form.percent}
          step={5}
          set={(percent) => set({ ...form, percent })}
        />
      )
    case 'onset':
      return <Positive label="shift claimed" unit="ms" value={form.ms} set={(ms) => set({ ...form, ms })} />
    case 'attenuation':
      return (
        <NumberField
          label="attenuation claimed"
          unit="dB"
          value={form.db}
          onChange={(db) => (Number.isFinite(db) ? set({ ...form, db }) : undefined)}
        />
      )
    default:
      return null
  }
}

/** A number of at least 0 (above 0 where so said): another one is named under the field, and the claim keeps the last good one. */
function Positive(props: {
  label: string
  unit: string
  value: number
  step?: number
  above?: boolean
  set: (value: number) => void
}) {
  const { label, unit, value, step = 1, above = false, set } = props
  const good = (next: number) => Number.isFinite(next) && (above ? next > 0 : next >= 0)
  const [refused, setRefused] = useState<{ kept: number } | null>(null)
  const rule = above ? 'more than 0' : '0 or more'
  // the claim has changed since, by undo perhaps: the fault is no longer there
  const error = refused?.kept === value ? `${label} must be ${rule}; the claim keeps ${exact(value)}` : undefined
  return (
    <NumberField
      {...{ label, unit, value, step, error }}
      onChange={(next) => {
        setRefused(good(next) ? null : { kept: value })
        if (good(next)) set(next)
      }}
    />
  )
}

/** Another statement in the place of the inner one. */
function InnerForm({ form, set, workspace, data, conditions }: FormPartProps) {
  const few = conditions.length < 2
  return (
    <div>
      <p className="quiet">The statement is about</p>
      <Choice
        stacked
        label="what the statement is about"
        value={form.form}
        options={SHOWN_FORMS.map((value) => ({
          value,
          text: claimFormName(value),
          ...(value === 'effect' && few ? { disabled: true, hint: 'needs two conditions' } : {}),
        }))}
        onChange={(next) =>
          isShownForm(next) && next !== form.form ? set(shownToBegin(next, workspace, data)) : undefined
        }
      />
    </div>
  )
}

type OwnProps = ClaimEditorProps & { title: string; change: (next: Partial<Claim>) => void }

const KEPT = 'kept'
const LINE = 'line'

/** The chain that a claim is about: that of the protocol line as it changes, or one that the claim keeps. */
function ChainOfClaim({ claim, workspace, title, change, error }: OwnProps) {
  const { pins, chain, extent } = workspace
  const names = namesOfPins(workspace)
  const copy = (name: string, from: { chain: Workspace['chain']; extent: Workspace['extent'] }) =>
    change({ on: structuredClone({ name, chain: from.chain, extent: from.extent }) })
  return (
    <Editor title={title} subtitle="which chain it is about" error={error}>
      <Choice
        stacked
        label="chain of the claim"
        value={claim.on ? KEPT : LINE}
        options={[
          { value: LINE, text: 'the chain of the protocol line', hint: 'follows every change of it' },
          ...(claim.on ? [{ value: KEPT, text: claim.on.name, hint: 'kept by this claim' }] : []),
          {
            value: 'freeze',
            text: 'the chain of the protocol line as it is now',
            hint: 'kept by this claim from here on',
          },
          ...pins.map((_, i) => ({
            value: `pin:${i}`,
            text: `pinned: ${names[i]}`,
            hint: 'a copy, kept by this claim',
          })),
        ]}
        onChange={(value) => {
          if (value === LINE) return change({ on: null })
          if (value === 'freeze') return copy('the chain as it was', { chain, extent })
          const place = Number(value.split(':')[1])
          if (pins[place]) copy(names[place].slice(0, 400), pins[place])
        }}
      />
    </Editor>
  )
}

function TakenOfClaim({ claim, workspace, title, change, error }: OwnProps) {
  const recorded = workspace.source.kind === 'recorded'
  return (
    <Editor title={title} subtitle="how the waveform is taken" error={error}>
      <Choice
        stacked
        label="how the waveform is taken"
        value={takenOf(claim, workspace)}
        options={[
          {
            value: 'as it stands',
            text: 'as it stands',
            hint: 'without noise: what the filter does to this waveform',
            disabled: recorded,
          },
          {
            value: 'as measured',
            text: `as measured in ${workspace.trials} trials`,
            hint: 'with the noise of the page: what one study of so many trials could tell',
          },
        ]}
        onChange={(taken) => change({ taken })}
      />
      {recorded ? <p className="quiet">A recorded average carries its noise.</p> : null}
    </Editor>
  )
}

const sameVaried = (a: Varied, b: Varied) => a.stage === b.stage && a.what === b.what && a.cutoff === b.cutoff

function VariedOfClaim({ claim, workspace, samplingRateHz, title, change, error }: OwnProps) {
  const { chain } = chainOfClaim(claim, workspace)
  const fit = claim.says.form === 'late-only'
  const choices = variedChoices(chain, samplingRateHz, fit)
  const present = variedOf(claim, chain)
  const place = present ? choices.findIndex((choice) => sameVaried(choice, present)) : -1
  return (
    <Editor title={title} subtitle="what is varied to find what would change the answer" error={error}>
      {choices.length === 0 ? (
        <p className="quiet">No stage of this chain has a cutoff, an order or a transition width to vary.</p>
      ) : (
        <Choice
          stacked
          label="what is varied"
          value={String(place)}
          options={choices.map((choice, i) => ({
            value: String(i),
            text: `stage ${choice.stage + 1}: ${variedWords(choice, chain)}`,
          }))}
          onChange={(value) => change({ varied: choices[Number(value)] ?? null })}
        />
      )}
    </Editor>
  )
}
