/** The account that the desk shows, made anew only where something changed that it depends on. */
import { useMemo } from 'react'
import { useStore } from 'zustand'
import { evaluateTrace, type TraceOutcome } from '../../../state/evaluate-trace.ts'
import type { Evaluation } from '../../../state/evaluation.ts'
import { dataStore, recordedData } from '../../../state/recorded-data.ts'
import { overStretches } from '../../../state/trace-actions.ts'
import type { Workspace } from '../../../state/workspace.ts'

/**
 * @param of         the workspace that the evaluation belongs to.
 * @param trace      question, stretches and threshold of the sentence's workspace: they wait for no evaluation.
 */
export function useTracing(of: Workspace, evaluation: Evaluation, trace: Workspace['trace']): TraceOutcome {
  const data = useStore(dataStore, (state) => recordedData(of.source, state.files))
  const { source, shown, extent, baseline, score, measure } = of
  const { chain, timesMs, rows, curves, chosen } = evaluation
  const { before, after } = curves[chosen]
  const { question, stretches, threshold } = trace
  // A change of trials, limits or stretches makes another workspace, but no other account.
  // biome-ignore lint/correctness/useExhaustiveDependencies: these are all that the account reads of the two
  const outcome = useMemo(
    () => evaluateTrace({ ...of, trace: { question, threshold, stretches: null } }, evaluation, data),
    [source, shown, extent, baseline, score, measure, chain, timesMs, rows, before, after, question, threshold, data],
  )
  return useMemo(
    () => (outcome.ok ? { ok: true, tracing: overStretches(outcome.tracing, stretches) } : outcome),
    [outcome, stretches],
  )
}
