/** What the trace-back desk shows: the account of one value, as a function of the workspace and its evaluation. */
import type { Score } from '../erp/score.ts'
import { type TraceBack, type TraceTrust, traceBack, traceTrust } from '../evidence/trace-back.ts'
import { type PartTrace, type SignedCondition, traceByCondition } from '../evidence/trace-by-component.ts'
import { type StageTrace, traceByStage } from '../evidence/trace-by-stage.ts'
import type { TraceInput } from '../evidence/trace-input.ts'
import type { TraceSource } from '../evidence/traced-waveform.ts'
import { isTraced, type Traced, tracedWeights } from '../evidence/traced-weights.ts'
import { inWords, windowWords } from '../words/index.ts'
import { componentsOf, recordedValues } from './evaluate-curves.ts'
import { stripMargin } from './evaluate-figures.ts'
import type { Evaluation } from './evaluation.ts'
import type { RecordedData } from './recorded-data.ts'
import { DIFFERENCE, type Question, type Workspace } from './workspace.ts'

export interface Tracing {
  traced: Traced
  back: TraceBack
  trust: TraceTrust
  stages: StageTrace
  /** Of a difference wave; null for a single condition. */
  conditions: PartTrace | null
}

export type TraceOutcome = { ok: true; tracing: Tracing } | { ok: false; reason: string }

/**
 * The account of the value that the desk's question asks about.
 *
 * @param workspace the one that the evaluation belongs to.
 */
export function evaluateTrace(workspace: Workspace, evaluation: Evaluation, data: RecordedData | null): TraceOutcome {
  try {
    const { baseline, source, trace, shown } = workspace
    const { chain, timesMs } = evaluation
    const { before, after } = evaluation.curves[evaluation.chosen]
    const asked = scoreAsked(workspace, evaluation)
    if (!asked)
      return {
        ok: false,
        reason: 'There is no false deflection to trace: no onset is stated before which it could lie.',
      }
    const traced = tracedWeights({ ...asked, baseline, timesMs, before, after })
    if (!isTraced(traced)) {
      const where = windowWords(asked.score.fromMs, asked.score.toMs)
      return {
        ok: false,
        reason: `There is ${traced.missing} in ${where} ${traced.where} the chain: nothing to trace.`,
      }
    }
    const extent = source.kind === 'recorded' ? 'epochs' : workspace.extent
    const input: TraceInput = {
      chain,
      extent,
      timesMs,
      baseline,
      source: sourceOf(workspace, data, shown.chosen),
      traced,
    }
    return {
      ok: true,
      tracing: {
        traced,
        back: traceBack(input, trace.stretches, stripMargin(timesMs.length)),
        trust: traceTrust(input, trace.threshold),
        stages: traceByStage(input),
        conditions: byCondition(workspace, data, input),
      },
    }
  } catch (error) {
    if (!(error instanceof RangeError)) throw error
    return { ok: false, reason: inWords(error.message) }
  }
}

/** The value asked about, as a score of the filtered waveform or of its change; null for a false deflection that is not there. */
function scoreAsked(workspace: Workspace, evaluation: Evaluation): { score: Score; of: Question['of'] } | null {
  const { question } = workspace.trace
  const moment = (atMs: number): Score => ({ kind: 'moment', fromMs: atMs, toMs: atMs, polarity: 'positive' })
  if (question.kind === 'moment') return { score: moment(question.atMs), of: question.of }
  if (question.row === 'score') return { score: workspace.score, of: question.of }
  const row = evaluation.rows.find((entry) => entry.id === question.row)
  if (!row) return null
  const { figure, window, fraction, atMs } = row.label
  if (figure === 'false-deflection') return atMs === undefined ? null : { score: moment(atMs), of: 'change' }
  const { polarity } = workspace.measure
  return {
    score: { kind: figure, ...window, polarity, ...(fraction === undefined ? {} : { fraction }) },
    of: question.of,
  }
}

function sourceOf(workspace: Workspace, data: RecordedData | null, name: string): TraceSource {
  const { source, shown } = workspace
  if (source.kind === 'built')
    return { kind: 'built', components: componentsOf(source, name, shown.difference), events: source.events }
  return { kind: 'recorded', values: recordedValues(source, data, name, shown.channel, shown.difference) }
}

function byCondition(workspace: Workspace, data: RecordedData | null, input: TraceInput): PartTrace | null {
  const { chosen, difference } = workspace.shown
  if (chosen !== DIFFERENCE || !difference) return null
  const signed = (name: string, sign: 1 | -1): SignedCondition => ({
    name,
    sign,
    source: sourceOf(workspace, data, name),
  })
  return traceByCondition(input, [signed(difference.first, 1), signed(difference.second, -1)])
}
