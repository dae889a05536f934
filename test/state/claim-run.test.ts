import { beforeEach, describe, expect, test } from 'vitest'
import { answerClaim } from '../../src/evidence/claims/answer-claim.ts'
import type { ClaimCurve } from '../../src/evidence/claims/claim.ts'
import { claimCurve } from '../../src/evidence/claims/claim-curve.ts'
import { type ClaimRequest, claimStore, runClaim } from '../../src/state/claim-run.ts'
import { claimSlice } from '../../src/state/claim-worker.ts'
import { addingClaim, claimKey, claimSetting, variedOf } from '../../src/state/claims.ts'
import { startWorkspace, type Workspace } from '../../src/state/workspace.ts'

type Slice = Parameters<typeof runClaim>[1]

const start: Workspace = startWorkspace()
const never = new AbortController().signal

/** One step of the search at a time: with no budget a slice ends after its first step. */
const stepwise: Slice = (key, question) => Promise.resolve(claimSlice(key, question, 0))

/** The same, and how often it was asked. */
function counting() {
  let calls = 0
  const slice: Slice = (...args) => {
    calls++
    return stepwise(...args)
  }
  return { slice, calls: () => calls }
}

let count = 0
/** A question that was never asked before. */
function requestOf(form: 'deflection' | 'tone' | 'attenuation' = 'deflection', amount = 0.5): ClaimRequest {
  const added = addingClaim(form, null)(start)
  const [claim] = added.claims.list
  const says = claim.says.form === 'deflection' ? { ...claim.says, amount } : claim.says
  const setting = claimSetting({ ...claim, says }, added, null)
  count++
  return { key: `${claimKey(claim, added)} ${count}`, form: says, setting, varied: variedOf(claim, added.chain) }
}

function whole(steps: Generator<unknown, ClaimCurve | null>): ClaimCurve | null {
  for (;;) {
    const step = steps.next()
    if (step.done) return step.value
  }
}

function expected({ form, setting, varied }: ClaimRequest) {
  if (form.form === 'late-only') throw new Error('a fit has steps of its own')
  return { answer: answerClaim(form, setting), curve: whole(claimCurve(form, setting, varied)) }
}

const stateOf = ({ key }: ClaimRequest) => claimStore.getState().answers[key]

beforeEach(() => claimStore.setState({ answers: {} }))

describe('a claim that is answered in slices', () => {
  test('ends with the answer and the curve that the core gives in one go', async () => {
    const request = requestOf()
    await runClaim(request, stepwise, never)
    expect(stateOf(request)).toMatchObject({ status: 'complete', reason: null })
    expect(stateOf(request).result).toEqual(expected(request))
    expect(stateOf(request).result?.curve?.flips.length).toBeGreaterThan(0)
  })

  test('has its answer before the search for what would change it has begun, and counts the search up', async () => {
    const request = requestOf()
    const seen: { done: number; total: number; answered: boolean; curve: boolean }[] = []
    const stop = claimStore.subscribe(() => {
      const { done, total, result } = stateOf(request)
      seen.push({ done, total, answered: result !== null, curve: Boolean(result?.curve) })
    })
    await runClaim(request, stepwise, never)
    stop()
    expect(seen[0]).toEqual({ done: 0, total: 1, answered: false, curve: false })
    expect(seen[1]).toMatchObject({ done: 0, answered: true, curve: false })
    expect(seen.length).toBeGreaterThan(50)
    const counts = seen.slice(0, -1).map(({ done }) => done)
    expect(counts).toEqual([...counts].sort((a, b) => a - b))
    for (const { done, total } of seen) expect(done).toBeLessThanOrEqual(total)
    expect(seen.filter(({ curve }) => curve)).toHaveLength(1)
  })

  test('is cancelled between two slices, keeps its answer, and goes on where it was', async () => {
    const request = requestOf()
    const control = new AbortController()
    let before = 0
    const stopping: Slice = async (key, question, budget) => {
      const got = await stepwise(key, question, budget)
      if (++before === 10) control.abort()
      return got
    }
    await runClaim(request, stopping, control.signal)
    const stopped = stateOf(request)
    expect(stopped.status).toBe('cancelled')
    expect(stopped.result?.answer).toEqual(expected(request).answer)
    expect(stopped.result?.curve).toBeUndefined()
    expect(stopped.done).toBeGreaterThan(0)

    const after = counting()
    let least = Number.POSITIVE_INFINITY
    const stop = claimStore.subscribe(() => {
      if (stateOf(request).status === 'running') least = Math.min(least, stateOf(request).done)
    })
    await runClaim(request, after.slice, never)
    stop()
    expect(stateOf(request).status).toBe('complete')
    expect(stateOf(request).result).toEqual(expected(request))
    expect(least).toBeGreaterThanOrEqual(stopped.done)
    // both parts together are one search
    const fresh = requestOf()
    const all = counting()
    await runClaim(fresh, all.slice, never)
    expect(before + after.calls()).toBe(all.calls())
  })

  test('asks nothing where it was cancelled before it began, and nothing more once it is complete', async () => {
    const request = requestOf()
    const control = new AbortController()
    control.abort()
    const asked = counting()
    await runClaim(request, asked.slice, control.signal)
    expect(asked.calls()).toBe(0)
    expect(stateOf(request)).toMatchObject({ status: 'cancelled', result: null })
    await runClaim(request, asked.slice, never)
    expect(stateOf(request).status).toBe('complete')
    const once = asked.calls()
    await runClaim(request, asked.slice, never)
    expect(asked.calls()).toBe(once)
  })

  test('sends its question once, and again where a worker that was started anew does not know it', async () => {
    const request = requestOf()
    const sent: boolean[] = []
    let calls = 0
    /** A worker that is ended after its fifth slice: the next one knows nothing of the question. */
    const forgetful: Slice = (key, question, budget) => {
      sent.push(question !== null)
      calls++
      return stepwise(calls <= 5 ? key : `${key} (anew)`, question, budget)
    }
    await runClaim(request, forgetful, never)
    expect(sent.slice(0, 7)).toEqual([true, false, false, false, false, false, true])
    expect(sent.slice(7)).not.toContain(true)
    expect(stateOf(request).status).toBe('complete')
    expect(stateOf(request).result).toEqual(expected(request))
  })

  test('says in words why it cannot be answered, and is answered once it can', async () => {
    const good = requestOf()
    const bad: ClaimRequest = { ...good, form: { form: 'attenuation', hz: 4000, db: 20 } }
    await runClaim(bad, stepwise, never)
    expect(stateOf(bad)).toMatchObject({
      status: 'failed',
      result: null,
      reason: 'The frequency must lie between 0 and 250 (half the sampling rate), was 4000.',
    })
    await runClaim(good, stepwise, never)
    expect(stateOf(good)).toMatchObject({ status: 'complete', reason: null })
  })

  test('says what a worker that broke down said', async () => {
    const request = requestOf()
    await runClaim(request, () => Promise.reject(new Error('the worker could not be started')), never)
    expect(stateOf(request)).toMatchObject({ status: 'failed', reason: 'The worker could not be started.' })
  })

  test('that stands on two cards is searched through once', async () => {
    const request = requestOf()
    const both = counting()
    await Promise.all([runClaim(request, both.slice, never), runClaim(request, both.slice, never)])
    expect(stateOf(request).status).toBe('complete')
    expect(stateOf(request).result).toEqual(expected(request))
    const alone = counting()
    await runClaim(requestOf(), alone.slice, never)
    expect(both.calls()).toBeLessThanOrEqual(alone.calls() + 2)
  })

  test('is kept among others by its question, the oldest given up beyond two hundred', async () => {
    const quick: Slice = () => Promise.resolve({ result: null, done: 1, total: 1, finished: true })
    const base = requestOf()
    for (let i = 0; i < 205; i++) await runClaim({ ...base, key: `question ${i}` }, quick, never)
    const kept = Object.keys(claimStore.getState().answers)
    expect(kept).toHaveLength(200)
    expect(kept).toContain('question 204')
    expect(kept).not.toContain('question 4')
    expect(kept).toContain('question 5')
  })
})

describe('claimSlice', () => {
  test('asks for a question that it does not know', () => {
    expect(claimSlice('never asked', null, 60)).toBeNull()
  })

  test('goes on within its time: with enough of it a claim is finished in one slice', () => {
    const { key, ...question } = requestOf('attenuation')
    const got = claimSlice(key, question, 60_000)
    expect(got).toMatchObject({ finished: true, done: 1, total: 1 })
    expect(claimSlice(key, null, 60)).toBeNull()
  })

  test('lets claims take turns', () => {
    const [{ key: first, ...one }, { key: second, ...other }] = [requestOf(), requestOf('tone')]
    claimSlice(first, one, 0)
    claimSlice(second, other, 0)
    for (let i = 0; i < 5; i++) {
      const [a, b] = [claimSlice(first, null, 0), claimSlice(second, null, 0)]
      expect(a).toMatchObject({ finished: false, done: i + 1 })
      expect(b).toMatchObject({ finished: false, done: i + 1 })
    }
  })

  test('throws what the core throws, and has then forgotten the question', () => {
    const { key, ...question } = requestOf()
    const bad = { ...question, form: { form: 'onset', direction: 'earlier', ms: -1 } as const }
    expect(() => claimSlice(key, bad, 60)).toThrow('ms must be at least 0, was -1')
    expect(claimSlice(key, null, 60)).toBeNull()
  })
})
