/** One claim: its sentence, verdict, reason, what would change it, and the figure of that. */
import { useEffect, useRef } from 'react'
import type { ClaimVerdict } from '../../../evidence/claims/claim.ts'
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
import { TextField } from './text-field.tsx'
import { type AnsweredClaim, useClaim } from './use-claim.ts'

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
}

export function ClaimCard(props: ClaimCardProps) {
  const { claim, number, workspace, figures } = props
  const answered = useClaim(claim, workspace)
  const { state, stale, reason } = answered
  const result = state?.result ?? null
  const svg = useRef<SVGSVGElement>(null)
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
    figures.set(claim.id, { svg, caption: figure })
    return () => {
      figures.delete(claim.id)
    }
  })
  const change = (next: Partial<Claim>, group: string) =>
    say(
      changingClaim(claim.id, (present) => ({ ...present, ...next })),
      `claim:${claim.id}:${group}`,
    )
  const messageId = `claim-${claim.id}-message`
  return (
    <section className={stale ? 'claim grid stale' : 'claim grid'} aria-label={`claim ${number}`}>
      <div>
        <p className="claim-sentence">
          <span className="claim-number">{number}</span>
          <Phrases pieces={pieces} idOf={(id) => `${own}${id}`} badOf={() => (reason ? messageId : undefined)} />
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
            <p className="remark claim-reason">{answerText}</p>
          </div>
        ) : null}
        {result?.curve && !reason ? (
          <p className="small claim-flips">{curveSentence(claim.says, result.curve, chain)}</p>
        ) : null}
        {result?.curve === null && !reason ? (
          <p className="small quiet">
            {claim.varied
              ? 'The chain has no such quantity any more: choose another to vary.'
              : 'No stage of this chain has a cutoff to vary.'}
          </p>
        ) : null}
        <Progress answered={answered} />
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
              onPress={() => say(movingClaim(claim.id, -1))}
            >
              up
            </WordButton>
            <WordButton
              label={`move claim ${number} down`}
              disabled={number === props.count}
              onPress={() => say(movingClaim(claim.id, 1))}
            >
              down
            </WordButton>
            <WordButton label={`duplicate claim ${number}`} onPress={() => say(duplicatingClaim(claim.id))}>
              duplicate
            </WordButton>
            <WordButton label={`remove claim ${number}`} onPress={() => say(removingClaim(claim.id))}>
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
        <LateOnlyPanel form={claim.says} result={result.lateOnly} number={number} caption={figure} />
      ) : null}
    </section>
  )
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
  const { state, cancel, goOn } = answered
  if (!state || state.status === 'complete' || state.status === 'failed') return null
  const far = state.done > 0 ? ` ${state.done} of about ${state.total} steps` : ''
  return (
    <p className="small quiet">
      {state.status === 'cancelled' ? (
        <>
          Stopped{far ? ` after${far}` : ''}. <WordButton onPress={goOn}>go on</WordButton>
        </>
      ) : (
        <>
          {state.result ? 'Looking for what would change it:' : 'Computing:'}
          {far} <WordButton onPress={cancel}>cancel</WordButton>
        </>
      )}
    </p>
  )
}
