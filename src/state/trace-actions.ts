/** What the trace-back desk changes in the workspace, and how the stretches that stand there fit the epoch in use. */
import type { NoScore } from '../erp/score.ts'
import { stepMs } from '../erp/time-axis.ts'
import { largestAbsolute } from '../evidence/fidelity.ts'
import { splitStretch, type Stretches } from '../evidence/stretches.ts'
import { momentRows } from '../evidence/trace-by-moment.ts'
import { appliedStages } from '../filter/chain.ts'
import { isFalseDeflection } from '../words/remark.ts'
import type { Tracing } from './evaluate-trace.ts'
import type { Evaluation } from './evaluation.ts'
import type { Question, Workspace } from './workspace.ts'

/** Another question; stretches belong to the one for which they were drawn, so a new value begins with its own. */
export function asking(workspace: Workspace, question: Question): Workspace {
  const { trace } = workspace
  const sameValue = JSON.stringify(trace.question) === JSON.stringify(question)
  return sameValue ? workspace : { ...workspace, trace: { ...trace, question, stretches: null } }
}

/** The value at a moment of the time figure: after the chain, or its change where that was asked before. */
export function askingMoment(workspace: Workspace, atMs: number): Workspace {
  const { question } = workspace.trace
  return asking(workspace, { kind: 'moment', atMs, of: question.kind === 'moment' ? question.of : 'after' })
}

/** @param stretches null for those that suggest themselves. */
export function withStretches(workspace: Workspace, stretches: Stretches | null): Workspace {
  const own = stretches === null ? null : stretches.map(({ sample, atMs }) => ({ sample, atMs }))
  return { ...workspace, trace: { ...workspace.trace, stretches: own } }
}

/**
 * Stretches as they stand in the workspace, on an epoch that may be another than that for which they were drawn (another sampling rate,
 * other limits): then each boundary goes to the sample nearest its moment, and those outside the epoch fall away.
 */
export function fittingStretches(stretches: Stretches, timesMs: Float64Array): Stretches {
  const step = stepMs(timesMs)
  const fits = stretches.every(
    ({ sample, atMs }, i) =>
      Number.isInteger(sample) &&
      sample >= 1 &&
      sample <= timesMs.length - 1 &&
      (i === 0 || sample > stretches[i - 1].sample) &&
      Math.abs(timesMs[sample] - atMs) <= step * 1.01,
  )
  if (fits) return stretches
  return stretches.reduce<Stretches>((kept, { atMs }) => splitStretch(kept, timesMs, atMs), [])
}

/** The account over other stretches: all that a moved boundary changes. */
export function overStretches(tracing: Tracing, stretches: Stretches | null): Tracing {
  if (stretches === null) return tracing
  const { back } = tracing
  const fitting = fittingStretches(stretches, back.moments.timesMs)
  return { ...tracing, back: { ...back, stretches: fitting, rows: momentRows(back.moments, fitting) } }
}

/** Whether the score is a deflection that the chain made, so that the question where it comes from suggests itself. */
export function showsFalseDeflection(workspace: Workspace, evaluation: Evaluation): boolean {
  const [row] = evaluation.rows
  return isFalseDeflection({
    score: workspace.score,
    unit: row.unit,
    before: row.before as number | NoScore,
    after: row.after as number | NoScore,
    largestUv: largestAbsolute(evaluation.curves[evaluation.chosen].before),
    unseenShare: null,
    extent: workspace.extent,
    noFilter: appliedStages(evaluation.chain).length === 0,
  })
}
