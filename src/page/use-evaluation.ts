/** The evaluation that is drawn: at once where it is quick, from the worker where it would hold up the page. */
import { useEffect, useMemo, useRef, useState } from 'react'
import { useStore } from 'zustand'
import type { Evaluation, Problem } from '../state/evaluation.ts'
import { evaluate } from '../state/evaluate.ts'
import { isHeavy } from '../state/evaluation-cost.ts'
import { bench, dataStore, recordedData } from '../state/recorded-data.ts'
import type { Workspace } from '../state/workspace.ts'

export interface Shown {
  /** The last good evaluation; null before there was one. */
  evaluation: Evaluation | null
  /** The workspace that the evaluation belongs to, so that figure and sentence never disagree. */
  of: Workspace | null
  problems: readonly Problem[]
  /** The evaluation drawn is not that of the present workspace: it is being computed, or has problems. */
  stale: boolean
  working: boolean
}

export function useEvaluation(workspace: Workspace): Shown {
  const files = useStore(dataStore, (state) => state.files)
  const data = recordedData(workspace.source, files)
  const heavy = useMemo(() => isHeavy(workspace, data), [workspace, data])
  const direct = useMemo(() => (heavy ? null : evaluate(workspace, data)), [heavy, workspace, data])
  const [answer, setAnswer] = useState<{ workspace: Workspace; outcome: ReturnType<typeof evaluate> } | null>(null)
  const lastGood = useRef<{ evaluation: Evaluation; workspace: Workspace } | null>(null)

  useEffect(() => {
    if (!heavy) return
    const control = new AbortController()
    // Dragging asks for many; only the last one that stands still for a moment is computed.
    const timer = setTimeout(() => {
      bench.call('evaluate', [workspace, data], control.signal).then(
        (outcome) => setAnswer({ workspace, outcome }),
        (error: unknown) => {
          if (error instanceof DOMException && error.name === 'AbortError') return
          const message = `This could not be computed: ${error instanceof Error ? error.message : String(error)}`
          setAnswer({ workspace, outcome: { ok: false, problems: [{ at: 'chain', message }] } })
        },
      )
    }, 60)
    return () => {
      clearTimeout(timer)
      control.abort()
    }
  }, [heavy, workspace, data])

  const outcome = direct ?? (answer?.workspace === workspace ? answer.outcome : null)
  if (outcome?.ok) lastGood.current = { evaluation: outcome.evaluation, workspace }
  return {
    evaluation: lastGood.current?.evaluation ?? null,
    of: lastGood.current?.workspace ?? null,
    problems: outcome && !outcome.ok ? outcome.problems : [],
    stale: !outcome?.ok,
    working: outcome === null,
  }
}
