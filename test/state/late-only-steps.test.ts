import { beforeAll, describe, expect, test } from 'vitest'
import { epochTimesMs } from '../../src/erp/waveform.ts'
import { scanBumps } from '../../src/evidence/bump-scan.ts'
import type { ClaimSetting, LateOnlyClaim } from '../../src/evidence/claims/claim.ts'
import { lateOnlyClaim, lateOnlyQuestion } from '../../src/evidence/claims/late-only-claim.ts'
import { latestOnset } from '../../src/evidence/onset-scan.ts'
import { type LateOnlyStep, lateOnlySteps } from '../../src/state/late-only-steps.ts'
import { built, gaussian, highPass } from '../evidence/claims/claim-settings.ts'

const form: LateOnlyClaim = { form: 'late-only', t0Ms: 200, early: { fromMs: 80, toMs: 140 }, slackMs: 30 }
/** Fits grow with the cube of the samples: an epoch of 80 keeps all of this at a second or two. */
const samplingRateHz = 100
const timesMs = epochTimesMs(samplingRateHz, { fromMs: -200, toMs: 600 })
const late = { shape: 'ramp', name: 'late', amplitudeUv: 9, latencyMs: 380, widthMs: 160, riseShare: 0.5 } as const
const setting: ClaimSetting = built([late, gaussian(-4, 110, 30)], {
  ...{ samplingRateHz, timesMs, trials: 100 },
  chain: [highPass(1)],
})

type Steps = ReturnType<typeof lateOnlySteps>
type Step = Steps extends Generator<infer Yielded, unknown> ? Yielded : never

function run(steps: Steps): { seen: Step[]; end: LateOnlyStep } {
  const seen: Step[] = []
  for (;;) {
    const next = steps.next()
    if (next.done) return { seen, end: next.value }
    seen.push(next.value)
  }
}

describe('a late-only fit in steps', () => {
  let seen: Step[]
  let end: LateOnlyStep
  beforeAll(() => {
    ;({ seen, end } = run(lateOnlySteps(form, setting, { stage: 0, what: 'cutoff', cutoff: 0 })))
  })

  test('has the answer of the fit with its first step, before the scan, the bumps and the curve', () => {
    const { robust, fitted, ...answer } = lateOnlyClaim(form, setting)
    expect(seen[0].result.answer).toEqual(answer)
    expect(answer.verdict).toBe('does not hold')
    expect(seen[0].result.lateOnly).toMatchObject({ robust, fitted, scan: null, bumps: null })
    expect(seen[0].result.curve).toBeUndefined()
    for (const { result } of seen) expect(result.answer).toEqual(answer)
    expect(end.answer).toEqual(answer)
  })

  test('counts each step, and never beyond its total', () => {
    expect(seen[0].done).toBe(3)
    seen.forEach(({ done, total }, i) => {
      if (i > 0) expect(done).toBe(seen[i - 1].done + 1)
      expect(done).toBeLessThanOrEqual(total)
    })
  })

  test('adds one onset at a time, from the early window to the largest late value', () => {
    const rows = seen.map(({ result }) => result.lateOnly?.scan?.rows.length ?? 0)
    expect(rows.slice(0, 4)).toEqual([0, 1, 2, 3])
    const scan = end.lateOnly!.scan
    if (!scan) throw new Error('there is no scan')
    const stepMs = scan.rows[1].t0Ms - scan.rows[0].t0Ms
    const last = scan.rows[scan.rows.length - 1].t0Ms
    expect(scan.rows[0].t0Ms).toBeCloseTo(form.early.fromMs, 9)
    const largest = end.lateOnly!.fitted.reduce(
      (best, value, i, all) => (timesMs[i] > form.early.toMs && Math.abs(value) > Math.abs(all[best]) ? i : best),
      timesMs.length - 1,
    )
    expect(timesMs[largest] - last).toBeGreaterThanOrEqual(0)
    expect(timesMs[largest] - last).toBeLessThan(stepMs)
    expect(timesMs[largest]).toBeGreaterThan(300)
    expect(scan).toEqual({ rows: scan.rows, ...latestOnset(scan.rows) })
    // nothing that was shown earlier is changed behind its back
    expect(seen[1].result.lateOnly?.scan?.rows).toHaveLength(1)
  })

  test('ends with the search for early components anywhere, and with a curve that has the answer where the chain stands', () => {
    const { y, chain, options } = lateOnlyQuestion(form, setting)
    const search = scanBumps(y, chain, options)
    let next = search.next()
    while (!next.done) next = search.next()
    expect(end.lateOnly!.bumps).toEqual(next.value)
    const here = end.curve?.points.find(({ at }) => at === end.curve?.present)
    expect(here).toMatchObject({ verdict: end.answer.verdict })
    expect(here?.number).toBeCloseTo(end.answer.number as number, 9)
    expect(end.curve?.present).toBe(1)
  })
})

test('late activity from the epoch’s start on leaves no room for a component before it, and the steps still come to their end', () => {
  const { end } = run(lateOnlySteps({ ...form, t0Ms: -200, slackMs: 0 }, setting, null))
  expect(end.lateOnly!.bumps).toBeNull()
  expect(end.lateOnly!.scan?.rows.length).toBeGreaterThan(1)
})

test('what had passed filters that nobody knows is not fitted, whatever it looks like', () => {
  const { seen: none, end } = run(lateOnlySteps(form, { ...setting, filteredBefore: 'not known' }, null))
  expect(none).toHaveLength(0)
  expect(end.answer).toMatchObject({ verdict: 'cannot be told', grounds: { kind: 'filtered before' }, number: null })
  expect(end.lateOnly).toBeUndefined()
})

test('without a cutoff to vary there is no curve', () => {
  const { end } = run(lateOnlySteps(form, { ...setting, chain: [] }, null))
  expect(end.curve).toBeNull()
})

test('what cannot be fitted is refused before any step', () => {
  const steps = lateOnlySteps({ ...form, t0Ms: 9000 }, setting, null)
  expect(() => steps.next()).toThrow('t0Ms must lie in the epoch (-200 to 600 ms), was 9000')
})
