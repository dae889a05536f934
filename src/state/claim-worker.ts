/** The worker's part of a claim: its answer, then the search for what would change it, a slice of time at once. */
import { answerClaim } from '../evidence/claims/answer-claim.ts'
import type { ClaimAnswer, ClaimCurve, ClaimForm, ClaimSetting, Varied } from '../evidence/claims/claim.ts'
import { claimCurve } from '../evidence/claims/claim-curve.ts'
import { type LateOnlyResult, lateOnlySteps } from './late-only-steps.ts'

/** What is known of a claim's answer so far. */
export interface ClaimResult {
  readonly answer: ClaimAnswer
  /** Undefined while the search goes on; null where there is nothing to vary. */
  readonly curve?: ClaimCurve | null
  readonly lateOnly?: LateOnlyResult
}

export interface ClaimSlice {
  /** Null before the answer itself is there. */
  readonly result: ClaimResult | null
  readonly done: number
  readonly total: number
  readonly finished: boolean
}

type Steps = Generator<Omit<ClaimSlice, 'finished'>, ClaimResult>

interface Question {
  readonly form: ClaimForm
  readonly setting: ClaimSetting
  readonly varied: Varied | null
}

/** Claims that are being answered, by their question, oldest first. */
const going = new Map<string, { steps: Steps; last: ClaimSlice }>()
/** A list of claims is answered in turns. */
const MOST_GOING = 30

/**
 * Goes on with a claim until the time is up or it is finished; the first call answers it.
 *
 * @param key      of the question, so that the next slice finds it where it was.
 * @param question null where the caller believes it known; asked for again (null returned) where it is not.
 * @throws RangeError as `answerClaim`.
 */
export function claimSlice(key: string, question: Question | null, budgetMs: number): ClaimSlice | null {
  let entry = going.get(key)
  if (!entry) {
    if (!question) return null
    entry = { steps: stepsOf(question), last: { result: null, done: 0, total: 1, finished: false } }
    going.set(key, entry)
    for (const old of going.keys()) {
      if (going.size <= MOST_GOING) break
      going.delete(old)
    }
  }
  const started = Date.now()
  try {
    do {
      const step = entry.steps.next()
      if (step.done) {
        going.delete(key)
        return { result: step.value, done: 1, total: 1, finished: true }
      }
      entry.last = { ...step.value, finished: false }
    } while (Date.now() - started < budgetMs)
  } catch (error) {
    going.delete(key)
    throw error
  }
  return entry.last
}

function stepsOf({ form, setting, varied }: Question): Steps {
  return form.form === 'late-only' ? lateOnlySteps(form, setting, varied) : answeredSteps(form, setting, varied)
}

function* answeredSteps(
  form: Exclude<ClaimForm, { form: 'late-only' }>,
  setting: ClaimSetting,
  varied: Varied | null,
): Steps {
  const answer = answerClaim(form, setting)
  yield { result: { answer }, done: 0, total: 1 }
  const search = claimCurve(form, setting, varied)
  for (;;) {
    const step = search.next()
    if (step.done) return { answer, curve: step.value }
    yield { result: { answer }, ...step.value }
  }
}
