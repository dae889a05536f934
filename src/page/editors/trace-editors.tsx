/** The editors of the trace-back desk: which value is traced, and which unseen share is too much. */
import type { Evaluation } from '../../state/evaluation.ts'
import { endGesture, say } from '../../state/store.ts'
import { asking } from '../../state/trace-actions.ts'
import type { Question, Workspace } from '../../state/workspace.ts'
import { changeWords, rowWords, valueWords } from '../../words/index.ts'
import { Choice, NumberField, SliderField } from '../fields.tsx'
import { Editor } from './editor.tsx'

const MOMENT = 'moment'

/** Latencies are traced as the amplitude at their moment. */
const isLatency = (unit: string) => unit === 'ms'

export function TraceQuestionEditor({ workspace, evaluation }: { workspace: Workspace; evaluation: Evaluation }) {
  const { question } = workspace.trace
  const { timesMs, rows } = evaluation
  const stepMs = (timesMs[timesMs.length - 1] - timesMs[0]) / (timesMs.length - 1)
  const ask = (next: Question) => say((w) => asking(w, next), 'trace-question')
  const options = rows.map((row) => {
    const { name, where } = rowWords(row)
    const after = typeof row.after === 'number' ? `${valueWords(row.after, row.unit)} ${row.unit}` : row.after
    const change = row.change === null ? '' : `, change ${changeWords(row.change, row.unit)} ${row.unit}`
    return {
      value: row.id as string,
      text: row.id === 'score' ? `score: ${name} ${where}` : `${name} ${where}`.trim(),
      hint: row.id === 'false-deflection' ? after : `${after}${change}`,
    }
  })
  const peakMs = timesMs[Math.floor(timesMs.length / 2)]
  const choose = (value: string) => {
    if (value === MOMENT) return ask({ kind: 'moment', atMs: momentOf(workspace, peakMs), of: question.of })
    const row = rows.find(({ id }) => id === value)
    if (row) ask({ kind: 'row', row: row.id, of: question.of })
  }
  const chosen = question.kind === 'moment' ? MOMENT : question.row
  const row = rows.find(({ id }) => id === chosen)
  return (
    <Editor title="Trace-back" subtitle="which value is traced">
      <Choice
        stacked
        label="value that is traced"
        value={chosen}
        options={[...options, { value: MOMENT, text: 'the value at a moment', hint: 'or click it in the time figure' }]}
        onChange={choose}
      />
      {question.kind === 'moment' ? (
        <NumberField
          label="moment"
          unit="ms"
          value={question.atMs}
          step={stepMs}
          onChange={(atMs) => ask({ ...question, atMs })}
        />
      ) : null}
      {chosen === 'false-deflection' ? (
        <p className="quiet">A false deflection is a change: what the chain adds at its moment.</p>
      ) : (
        <Choice
          label="after the chain or its change"
          value={question.of}
          options={[
            { value: 'after', text: 'after the chain' },
            { value: 'change', text: 'change, after − before' },
          ]}
          onChange={(of) => ask({ ...question, of })}
        />
      )}
      {row && isLatency(row.unit) ? (
        <p className="quiet">A latency is no sum over the waveform: the amplitude at its moment is traced.</p>
      ) : null}
    </Editor>
  )
}

/** A moment to begin with: the middle of the score window, which the user has an eye on. */
function momentOf({ score }: Workspace, otherwise: number): number {
  const middle = Math.round((score.fromMs + score.toMs) / 2)
  return Number.isFinite(middle) ? middle : otherwise
}

export function TraceThresholdEditor({ workspace }: { workspace: Workspace }) {
  const percent = Number((workspace.trace.threshold * 100).toPrecision(10))
  const change = (next: number) => {
    if (next >= 0 && next <= 100)
      say((w) => ({ ...w, trace: { ...w.trace, threshold: next / 100 } }), 'trace-threshold')
  }
  return (
    <Editor title="Unseen share" subtitle="from here on a value cannot be trusted">
      <div className="editor-row">
        <SliderField
          label="unseen share that is too much"
          unit="%"
          value={percent}
          min={0}
          max={50}
          scale="linear"
          ticks={[0, 10, 20, 30, 40, 50]}
          onChange={change}
          onEnd={endGesture}
        />
        <NumberField label="unseen share" hideLabel unit="%" value={percent} onChange={change} />
      </div>
    </Editor>
  )
}
