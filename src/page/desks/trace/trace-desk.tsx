/** Trace-back: where a value comes from, by moment, by component or condition, and by stage. */
import { useMemo, useState } from 'react'
import type { PartTrace } from '../../../evidence/trace-by-component.ts'
import type { Evaluation } from '../../../state/evaluation.ts'
import type { Tracing } from '../../../state/evaluate-trace.ts'
import { sharesCsv, stagesCsv } from '../../../state/trace-csv.ts'
import type { Workspace } from '../../../state/workspace.ts'
import {
  exact,
  heldFixedWords,
  traceQuestion,
  tracedPhrase,
  traceSummary,
  trustWords,
  zeroWords,
} from '../../../words/index.ts'
import { TraceQuestionEditor, TraceThresholdEditor } from '../../editors/trace-editors.tsx'
import { useView } from '../../hooks.ts'
import { timeAxisOf } from '../../time-axis.ts'
import { Token } from '../../token.tsx'
import type { DeskProps } from '../desks.tsx'
import { MomentFigure } from './moment-figure.tsx'
import { PartsFigure } from './parts-figure.tsx'
import { SharesTable } from './shares-table.tsx'
import { StageTable } from './stage-table.tsx'
import './trace.css'
import { useTracing } from './use-tracing.ts'

export function TraceDesk({ workspace, shown, caption }: DeskProps) {
  const { evaluation, of } = shown
  if (!evaluation || !of) return null
  return (
    <div className={shown.stale ? 'desk trace-desk wraps stale' : 'desk trace-desk wraps'} aria-busy={shown.working}>
      <Account {...{ evaluation, of, workspace, caption }} />
    </div>
  )
}

interface AccountProps {
  evaluation: Evaluation
  of: Workspace
  workspace: Workspace
  caption: () => string
}

function Account({ evaluation, of, workspace, caption }: AccountProps) {
  const { trace } = workspace
  const { question } = trace
  const outcome = useTracing(of, evaluation, trace)
  const editing = useView((view) => view.open)
  const figure = question.kind === 'moment' ? 'moment' : question.row
  const asked = outcome.ok
    ? tracedPhrase(figure, outcome.tracing.traced)
    : tracedPhrase(figure, {
        of: figure === 'false-deflection' ? 'change' : question.of,
        atMs: question.kind === 'moment' ? question.atMs : null,
        score: of.score,
      })
  const token = (text: string) => <Token id="trace-question" text={text} label="the value that is traced" />
  const editor =
    editing === 'trace-question' ? <TraceQuestionEditor workspace={workspace} evaluation={evaluation} /> : null
  if (!outcome.ok)
    return (
      <div className="grid">
        <div>
          <p className="desk-question">Where does {token(asked)} come from?</p>
          <p className="remark" role="status">
            {outcome.reason}
          </p>
        </div>
        <div className="side desk-side">{editor}</div>
      </div>
    )
  const { tracing } = outcome
  const { moments } = tracing.back
  const sentence = traceQuestion(moments.value, tracing.traced.unit, asked)
  const words = `${sentence.before}${sentence.phrase}${sentence.after}`
  return (
    <Traced
      {...{ tracing, evaluation, of, workspace, asked, editing, caption, editor }}
      words={words}
      heading={
        <p className="desk-question">
          {sentence.before}
          {token(sentence.phrase)}
          {sentence.after}
        </p>
      }
    />
  )
}

interface TracedProps extends AccountProps {
  tracing: Tracing
  asked: string
  editing: string | null
  /** The question as one line. */
  words: string
  heading: React.ReactNode
  editor: React.ReactNode
}

function Traced(props: TracedProps) {
  const { tracing, evaluation, of, workspace, asked, editing, words, heading, editor } = props
  const { traced, back, trust, conditions } = tracing
  const { moments, rows, components, unfiltered } = back
  const [marked, setMarked] = useState<number | null>(null)
  const axis = useMemo(() => timeAxisOf(evaluation.timesMs), [evaluation.timesMs])
  const summary = useMemo(
    () =>
      traceSummary({
        ...{ traced, rows, unfiltered },
        value: moments.value,
        aboutZero: moments.aboutZero,
        components: components?.rows ?? null,
      }).text,
    [traced, rows, unfiltered, moments, components],
  )
  const caption = () => `${words} ${summary} ${props.caption()}`
  const heldFixed = heldFixedWords(traced)
  const { samplingRateHz } = evaluation
  return (
    <>
      <div className="grid">
        <div>{heading}</div>
        <div className="side desk-side">{editor}</div>
      </div>
      <p className="remark summary" role="status">
        {summary}
      </p>
      {heldFixed ? <p className="small quiet">{heldFixed}</p> : null}
      {trust.exceeded ? <p className="small distrust">{trustWords(trust)}</p> : null}
      <div className="grid desk-figures">
        <div className="figure-body">
          <MomentFigure
            {...{ tracing, axis, caption, marked }}
            baseline={of.baseline}
            question={words}
            onMark={setMarked}
          />
        </div>
        <div className="figure-body">
          {components ? (
            <PartsFigure
              title="By component"
              parts={components}
              fileName="trace-back-by-component"
              {...{ asked, caption }}
            />
          ) : null}
          {conditions ? (
            <PartsFigure
              title="By condition"
              parts={signedNames(conditions, of)}
              fileName="trace-back-by-condition"
              {...{ asked, caption }}
            />
          ) : null}
          <p className="small quiet desk-hint">
            {components ? null : 'A built waveform has components; a recorded one has moments only. '}
            To trace another value, change the phrase in the question above, or click a point on the time figure (by
            keyboard: T on its cursor).
          </p>
        </div>
      </div>
      <SharesTable
        {...{ tracing, asked, marked }}
        own={workspace.trace.stretches !== null}
        csv={() => sharesCsv(tracing, asked, of, samplingRateHz)}
        onMark={setMarked}
      />
      <div className="grid desk-notes">
        <p className="small quiet">{zeroWords(moments)}</p>
        <div className="side desk-side above">
          <p className={trust.exceeded ? 'small over' : 'small quiet'}>
            {trust.exceeded ? 'Unseen share above the limit: see the warning. ' : `${trustWords(trust)} `}
            <span className="quiet">
              A share of weight, not of µV, so it is not summed. The page warns above{' '}
              <span className="phrase">
                <Token
                  id="trace-threshold"
                  className="small"
                  text={`${exact(Number((trust.threshold * 100).toPrecision(10)))} %`}
                  label="unseen share that is too much"
                />
                .
              </span>
            </span>
          </p>
          {editing === 'trace-threshold' ? <TraceThresholdEditor workspace={workspace} /> : null}
        </div>
      </div>
      <StageTable {...{ tracing, asked }} csv={() => stagesCsv(tracing, asked, of, samplingRateHz)} />
    </>
  )
}

/** The condition that is subtracted says so. */
export function signedNames(conditions: PartTrace, { shown }: Workspace): PartTrace {
  const rows = conditions.rows.map((row, i) =>
    i === 1 && row.name === shown.difference?.second ? { ...row, name: `minus ${row.name}` } : row,
  )
  return { ...conditions, rows }
}
