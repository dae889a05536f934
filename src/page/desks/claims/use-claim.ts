/** The answer of one claim: asked for as soon as the claim and the page stand still. */
import { useEffect, useMemo, useRef, useState } from 'react'
import { useStore } from 'zustand'
import { computeClaim } from '../../../state/claim-bench.ts'
import { type ClaimState, claimStore } from '../../../state/claim-run.ts'
import type { ClaimResult } from '../../../state/claim-worker.ts'
import { claimKey, claimSetting, variedOf } from '../../../state/claims.ts'
import { dataStore, recordedData } from '../../../state/recorded-data.ts'
import type { Claim, Workspace } from '../../../state/workspace.ts'
import { inWords } from '../../../words/index.ts'

/** What is being dragged or typed is not asked before it rests. */
const REST_MS = 150

export interface AnsweredClaim {
  /** The last answer that there was, which may be that of an earlier question; null where there is none to show. */
  result: ClaimResult | null
  /** How far the present question has come. */
  present: ClaimState | undefined
  /** What is shown is not the answer to the present question. */
  stale: boolean
  /** Why it cannot be asked; null where it can. */
  reason: string | null
  cancel: () => void
  goOn: () => void
}

export function useClaim(claim: Claim, workspace: Workspace): AnsweredClaim {
  const data = useStore(dataStore, (store) => recordedData(workspace.source, store.files))
  const key = useMemo(() => claimKey(claim, workspace), [claim, workspace])
  const present = useStore(claimStore, (store) => store.answers[key])
  const [attempt, setAttempt] = useState(0)
  const [refused, setRefused] = useState<{ key: string; reason: string } | null>(null)
  const control = useRef<AbortController | null>(null)
  const asked = useRef({ claim, workspace })
  asked.current = { claim, workspace }
  // biome-ignore lint/correctness/useExhaustiveDependencies: the question is said in full by its key; another attempt asks it again
  useEffect(() => {
    const own = new AbortController()
    control.current = own
    const timer = setTimeout(() => {
      try {
        const { claim: about, workspace: from } = asked.current
        const setting = claimSetting(about, from, data)
        setRefused(null)
        const varied = variedOf(about, setting.chain)
        void computeClaim({ key, form: about.says, setting, varied }, own.signal)
      } catch (error) {
        if (!(error instanceof RangeError)) throw error
        setRefused({ key, reason: inWords(error.message) })
      }
    }, REST_MS)
    return () => {
      clearTimeout(timer)
      own.abort()
    }
  }, [key, attempt, data])

  const last = useRef<ClaimResult | null>(null)
  if (present?.result) last.current = present.result
  const stopped = present?.status === 'cancelled' && !present.result
  const failed = present?.status === 'failed' ? present.reason : null
  return {
    // while nobody looks for the new answer, the old one must not stand there as if it were coming
    result: stopped ? null : last.current,
    present,
    stale: !present?.result,
    reason: refused?.key === key ? refused.reason : failed,
    cancel: () => control.current?.abort(),
    goOn: () => setAttempt((count) => count + 1),
  }
}
