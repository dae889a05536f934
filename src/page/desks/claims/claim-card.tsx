/** One claim: its sentence, verdict, reason, what would change it, and the figure of that. */
import { Fragment, type RefObject, useEffect, useRef } from 'react'
import type { ClaimForm, ClaimVerdict } from '../../../evidence/claims/claim.ts'
import { claimContext } from '../../../state/claim-facts.ts'
import {
  chainOfClaim,
  changingClaim,
  claimScoreUnit,
  duplicatingClaim,
  movingClaim,
  removingClaim,
  takenOf,
  variedOf,
} from '../../../state/claims.ts'
import type { RecordedData } from '../../../state/recorded-data.ts'
import { endGesture, say } from '../../../state/store.ts'
import type { Claim, Workspace } from '../../../state/workspace.ts'
import {
  claimReason,
  claimSentence,
  claimText,
  claimVerdictWords,
  curveSentence,
  variedWords,
} from '../../../words/index.ts'
import { ClaimEditor } from '../../editors/claim-editors.tsx'
import { WordButton } from '../../fields.tsx'
import { useView } from '../../hooks.ts'
import { Phrases } from '../../phrases.tsx'
import { Token } from '../../token.tsx'
import { CurveFigure } from './curve-figure.tsx'
import type { FigureSource } from './dossier-part.tsx'
import { LateOnlyPanel } from './late-only-panel.tsx'
import { unbroken, unbrokenText } from './unbroken.ts'
import { TextField } from './text-field.tsx'
import { type AnsweredClaim, useClaim } from './use-claim.ts'
import type { FocusNext } from './use-focus-next.ts'

interface ClaimCardProps {
  claim: Claim
  /** Place in the list, from 1. */
  number: number
  count: number
  workspace: Workspace
  data: RecordedData | null
  samplingRateHz: number
  conditions: readonly string[]
  /** Names chain, data and score of the page. */
  caption: () => string
  figures: Map<number, FigureSource>
  focusNext: FocusNext
}

export function ClaimCard(props: ClaimCardProps) {
  const { claim, number, workspace, figures } = props
  const answered = useClaim(claim, workspace)
  const { result, stale, reason } = answered
  const svg = useRef<SVGSVGElement>(null)
  const more = useRef(new Map<string, RefObject<SVGSVGElement | null>>())
  const own = `claim-${claim.id}:`
  const editing = useView((view) => (view.open?.startsWith(own) ? view.open.slice(own.length) : null))
  const { chain } = chainOfClaim(claim, workspace)
  const scoreUnit = claimScoreUnit(workspace)
  const pieces = claimSentence(claim.says, { scoreUnit })
  const text = claimText(claim.says, { scoreUnit })
  const varied = variedOf(claim, chain)
  const quantity = varied ? variedWords(varied, chain) : null
  const answerText = result ? claimReason(claim.says, result.answer, claimContext(claim, workspace)) : null
  const figure = () =>
    `Claim: ${text} ${result ? `${claimVerdictWords(result.answer.verdict)}. ${answerText}` : ''} ${props.caption()}`
  useEffect(() => {
    figures.set(claim.id, { svg, caption: figure, more: more.current })
    return () => {
      figures.delete(claim.id)
    }
  })
  const change = (next: Partial<Claim>, group: string) =>
    say(
      changingClaim(claim.id, (present) => ({ ...present, ...next })),
      `claim:${claim.id}:${group}`,
    )
  // the card moves in the list, and the keyboard would stay behind
  const act = (next: Parameters<typeof say>[0], then: 'up' | 'down') => {
    say(next)
    props.focusNext((desk) => buttonsOf(desk, claim.id).find((button) => button.textContent === then))
  }
  const messageId = `claim-${claim.id}-message`
  return (
    <section
      id={`card-of-claim-${claim.id}`}
      className={stale ? 'claim grid stale' : 'claim grid'}
      aria-label={`claim ${number}`}
    >
      <div>
        <p className="claim-sentence">
          <span className="claim-number">{number}</span>{' '}
          <Phrases
            pieces={unbroken(pieces)}
            idOf={(id) => `${own}${id}`}
            badOf={(id) => (isAtFault(id, claim.says, reason) ? messageId : undefined)}
          />
        </p>
        {reason ? (
          <p id={messageId} className="message" role="alert">
            {reason}
          </p>
        ) : null}
        {result && !reason ? (
          <div className="claim-answer" aria-busy={stale} aria-live="polite">
            <p className="claim-verdict">
              <VerdictMark verdict={result.answer.verdict} />
              {claimVerdictWords(result.answer.verdict)}
            </p>
            <p className="remark claim-reason">{answerText ? unbrokenText(answerText) : null}</p>
          </div>
        ) : null}
        {result?.curve && !reason ? (
          <p className="small claim-flips">
            <Stretches sentence={unbrokenText(curveSentence(claim.says, result.curve, chain))} />
          </p>
        ) : null}
        {result?.curve === null && !reason ? (
          <p className="small claim-flips quiet">
            {claim.varied
              ? 'The chain has no such quantity any more: choose another to vary.'
              : chain.some(({ enabled, inData }) => enabled !== false && !inData)
                ? 'No stage of this chain has a cutoff to vary.'
                : 'No stage of this chain is applied here, so that there is nothing to vary.'}
          </p>
        ) : null}
        {reason ? null : <Progress answered={answered} />}
        <p className="small claim-about">
          About{' '}
          <Token
            id={`${own}chain`}
            className="small"
            text={claim.on?.name ?? 'the chain of the protocol line'}
            label="chain of the claim"
          />
          {', the waveform taken '}
          <Token
            id={`${own}taken`}
            className="small"
            text={
              takenOf(claim, workspace) === 'as it stands'
                ? 'as it stands'
                : `as measured in ${workspace.trials} trials`
            }
            label="how the waveform is taken"
          />
          {quantity ? (
            <>
              {'; what would change it is sought over the '}
              <Token id={`${own}varied`} className="small" text={quantity} label="what is varied" />
            </>
          ) : null}
          .
        </p>
        <div className="claim-foot">
          <TextField
            label="made in"
            hint="for example “Reviewer 2, comment 4”"
            value={claim.madeIn}
            onChange={(madeIn) => change({ madeIn }, 'made-in')}
            onEnd={endGesture}
          />
          <span className="actions">
            <WordButton
              label={`move claim ${number} up`}
              disabled={number === 1}
              onPress={() => act(movingClaim(claim.id, -1), number > 2 ? 'up' : 'down')}
            >
              up
            </WordButton>
            <WordButton
              label={`move claim ${number} down`}
              disabled={number === props.count}
              onPress={() => act(movingClaim(claim.id, 1), number < props.count - 1 ? 'down' : 'up')}
            >
              down
            </WordButton>
            <WordButton label={`duplicate claim ${number}`} onPress={() => say(duplicatingClaim(claim.id))}>
              duplicate
            </WordButton>
            <WordButton
              label={`remove claim ${number}`}
              onPress={() => {
                say(removingClaim(claim.id))
                props.focusNext((desk) => removeButtonNear(desk, number))
              }}
            >
              remove
            </WordButton>
          </span>
        </div>
      </div>
      <div className="side">
        {editing ? (
          <ClaimEditor key={`${claim.id}:${editing}`} {...props} part={editing} error={reason ?? undefined} />
        ) : null}
        {result?.curve && quantity && !reason ? (
          <div className="figure-body">
            <CurveFigure
              {...{ number, quantity, svg }}
              form={claim.says}
              answer={result.answer}
              curve={result.curve}
              caption={figure}
            />
          </div>
        ) : null}
      </div>
      {claim.says.form === 'late-only' && result?.lateOnly && !reason ? (
        <LateOnlyPanel
          form={claim.says}
          result={result.lateOnly}
          number={number}
          caption={figure}
          figures={more.current}
        />
      ) : null}
    </section>
  )
}

/** Words of a refusal by which its phrase is known; a fault of chain, score or waveform is none of the claim's phrases. */
const FAULT: Record<string, RegExp> = {
  window: /^The (?:window of the|early window)/,
  hz: /^The frequency/,
  onset: /^The onset of the activity/,
  unit: /^A latency has no per cent/,
  least: /^The smallest effect/,
}

function isAtFault(id: string, says: ClaimForm, reason: string | null): boolean {
  if (reason === null) return false
  const part = id.replace(/^inner:/, '')
  if (part !== 'first' && part !== 'second') return FAULT[part]?.test(reason) === true
  const shown = says.form === 'twin' ? says.shows : says.form === 'meaning' ? says.conclusion : says
  if (shown.form !== 'effect') return false
  const name = shown[part]
  return name === '' ? reason.endsWith('one is not chosen.') : reason.endsWith(`has no condition “${name}”.`)
}

/** A long sentence about many stretches breaks between them. */
function Stretches({ sentence }: { sentence: string }) {
  return sentence.split(/ (?=(?:and )?it (?:holds|does not|cannot) )/).map((part, place) => (
    <Fragment key={part}>
      {place === 0 ? '' : ' '}
      <span className={place === 0 ? undefined : 'claim-stretch'}>{part}</span>
    </Fragment>
  ))
}

const buttonsOf = (desk: HTMLElement, id: number) =>
  Array.from(desk.querySelectorAll<HTMLButtonElement>(`#card-of-claim-${id} .claim-foot button`))

/** Of the claim that has come to stand in a removed one's place, else of the last one; with no claim left, the first thing to add. */
function removeButtonNear(desk: HTMLElement, number: number): HTMLElement | null {
  const all = Array.from(desk.querySelectorAll<HTMLElement>('.claim .claim-foot .actions button:last-child'))
  return all[number - 1] ?? all[all.length - 1] ?? desk.querySelector<HTMLElement>('.add-claim button')
}

/** The verdict is said in words; the mark beside it differs in shape. */
export function VerdictMark({ verdict }: { verdict: ClaimVerdict }) {
  return (
    <svg className="verdict-mark" width="15" height="15" viewBox="0 0 15 15" aria-hidden="true">
      {verdict === 'holds' ? (
        <circle cx="7.5" cy="7.5" r="6" fill="var(--after)" />
      ) : verdict === 'does not hold' ? (
        <path d="M2.5,2.5L12.5,12.5M12.5,2.5L2.5,12.5" stroke="var(--taken-out-text)" strokeWidth="2.4" fill="none" />
      ) : (
        <circle cx="7.5" cy="7.5" r="5.6" fill="none" stroke="var(--quiet)" strokeWidth="1.8" strokeDasharray="3 2.4" />
      )}
    </svg>
  )
}

function Progress({ answered }: { answered: AnsweredClaim }) {
  const { present, cancel, goOn } = answered
  if (!present || present.status === 'complete' || present.status === 'failed') return null
  const far = present.done > 0 ? ` ${present.done} of about ${present.total} steps` : ''
  return (
    <p className="small claim-flips quiet">
      {present.status === 'cancelled' ? (
        <>
          Stopped{far ? ` after${far}` : ''}. <WordButton onPress={goOn}>go on</WordButton>
        </>
      ) : (
        <>
          {present.result ? 'Looking for what would change it:' : 'Computing:'}
          {far} <WordButton onPress={cancel}>cancel</WordButton>
        </>
      )}
    </p>
  )
}
