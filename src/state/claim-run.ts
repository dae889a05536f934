/**
 * Answers of claims as they are computed: the answer first, then what would change it. What was answered is kept by the question's key,
 * so that an undo or a reorder finds it there, and a search that was stopped goes on where it was.
 */
import { createStore } from 'zustand/vanilla'
import type { ClaimForm, ClaimSetting, Varied } from '../evidence/claims/claim.ts'
import { inWords } from '../words/index.ts'
import type { ClaimResult, ClaimSlice } from './claim-worker.ts'
import { withEntry } from './kept-entries.ts'

export interface ClaimState {
  readonly key: string
  /** Null before the answer itself is there. */
  readonly result: ClaimResult | null
  /** Steps of the search that are done, and how many are known to be needed. */
  readonly done: number
  readonly total: number
  readonly status: 'running' | 'complete' | 'cancelled' | 'failed'
  readonly reason: string | null
}

export interface ClaimRequest {
  readonly key: string
  readonly form: ClaimForm
  readonly setting: ClaimSetting
  readonly varied: Varied | null
}

type Slice = (key: string, question: Omit<ClaimRequest, 'key'> | null, budgetMs: number) => Promise<ClaimSlice | null>

const KEPT_ANSWERS = 200
const SLICE_MS = 60

export const claimStore = createStore<{ answers: Readonly<Record<string, ClaimState>> }>(() => ({ answers: {} }))

function keep(state: ClaimState): void {
  claimStore.setState(({ answers }) => ({ answers: withEntry(answers, state, KEPT_ANSWERS) }))
}

/**
 * Answers a claim, or what is left to answer, until it is complete or the signal aborts (between two slices).
 *
 * @param slice the worker's function.
 */
export async function runClaim(request: ClaimRequest, slice: Slice, signal: AbortSignal): Promise<void> {
  const { key, ...question } = request
  const known = claimStore.getState().answers[key]
  if (known?.status === 'complete') return
  let state: ClaimState = {
    ...(known ?? { key, result: null, done: 0, total: 1 }),
    status: 'running',
    reason: null,
  }
  keep(state)
  let asked = false
  try {
    for (;;) {
      if (signal.aborted) return keep({ ...state, status: 'cancelled' })
      // the question is sent once; a worker that was started anew asks for it again
      const got = await slice(key, asked ? null : question, SLICE_MS)
      asked = got !== null
      // another card with the same question may have brought it to its end
      if (claimStore.getState().answers[key]?.status === 'complete') return
      if (!got) continue
      const { result, done, total, finished } = got
      state = { ...state, result: result ?? state.result, done, total }
      if (finished) return keep({ ...state, status: 'complete' })
      if (!signal.aborted) keep(state)
    }
  } catch (error) {
    const reason = error instanceof Error ? inWords(error.message) : String(error)
    keep({ ...state, result: null, status: 'failed', reason })
  }
}
