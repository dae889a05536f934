import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { evaluate } from '../../src/state/evaluate.ts'
import { evaluateTrace, type Tracing } from '../../src/state/evaluate-trace.ts'
import type { Evaluation } from '../../src/state/evaluation.ts'
import {
  asking,
  askingMoment,
  fittingStretches,
  overStretches,
  showsFalseDeflection,
  withStretches,
} from '../../src/state/trace-actions.ts'
import { splitStretch, type Stretches } from '../../src/state/trace-facts.ts'
import { readWorkspace, SCENARIOS, type Workspace, workspaceOf } from '../../src/state/workspace.ts'

const first = workspaceOf(SCENARIOS[0])

function evaluated(workspace: Workspace): Evaluation {
  const outcome = evaluate(workspace, null)
  if (!outcome.ok) throw new Error(outcome.problems[0].message)
  return outcome.evaluation
}

function traced(workspace: Workspace): Tracing {
  const outcome = evaluateTrace(workspace, evaluated(workspace), null)
  if (!outcome.ok) throw new Error(outcome.reason)
  return outcome.tracing
}

describe('the question', () => {
  test('another one begins with its own stretches, the same one keeps everything', () => {
    const cut = withStretches(first, [{ sample: 20, atMs: -360 }])
    expect(asking(cut, { ...cut.trace.question })).toBe(cut)
    const other = asking(cut, { kind: 'row', row: 'mean-amplitude', of: 'change' })
    expect(other.trace).toEqual({ ...first.trace, question: { kind: 'row', row: 'mean-amplitude', of: 'change' } })
  })

  test('a moment is asked for after the chain, or as a change where a change of a moment was asked before', () => {
    expect(askingMoment(first, 180).trace.question).toEqual({ kind: 'moment', atMs: 180, of: 'after' })
    const change = asking(first, { kind: 'moment', atMs: 10, of: 'change' })
    expect(askingMoment(change, 20).trace.question).toEqual({ kind: 'moment', atMs: 20, of: 'change' })
  })
})

describe('stretches', () => {
  test('what the desk writes into the workspace reads back', () => {
    const { stretches } = traced(first).back
    const own = withStretches(first, stretches)
    expect(readWorkspace(JSON.parse(JSON.stringify(own)))).toEqual({ ok: true, workspace: own })
  })

  test('on the epoch for which they were drawn they stay the very same', () => {
    const { back } = traced(first)
    expect(fittingStretches(back.stretches, back.moments.timesMs)).toBe(back.stretches)
  })

  test('at another sampling rate each goes to the sample nearest its moment', () => {
    const { stretches } = traced(first).back
    const { timesMs } = evaluated({ ...first, source: { ...first.source, samplingRateHz: 250 } as Workspace['source'] })
    const moved = fittingStretches(stretches, timesMs)
    expect(moved).toHaveLength(stretches.length)
    moved.forEach(({ sample, atMs }, i) => {
      expect(timesMs[sample]).toBe(atMs)
      expect(Math.abs(atMs - stretches[i].atMs)).toBeLessThanOrEqual(2)
    })
  })

  test('whatever stands in a workspace becomes a partition of the epoch, and its shares sum to the value', () => {
    const tracing = traced(first)
    const { timesMs } = tracing.back.moments
    const anything = fc.array(
      fc.record({
        sample: fc.oneof(fc.integer({ min: -5, max: 900 }), fc.double({ noNaN: true, noDefaultInfinity: true })),
        atMs: fc.double({ min: -800, max: 1500, noNaN: true }),
      }),
      { maxLength: 12 },
    )
    fc.assert(
      fc.property(anything, (stretches: Stretches) => {
        const { rows, moments } = overStretches(tracing, stretches).back
        const sum = rows.reduce((total, { share }) => total + share, 0)
        expect(Math.abs(sum - moments.value)).toBeLessThanOrEqual(1e-9 * moments.absoluteSum)
        const inside = rows.filter(({ kind }) => kind !== 'before' && kind !== 'after')
        expect(inside[0].from).toBe(0)
        inside.forEach(({ from, to }, i) => {
          expect(to).toBeGreaterThan(from)
          if (i > 0) expect(from).toBe(inside[i - 1].to)
        })
        expect(inside.at(-1)?.to).toBe(timesMs.length)
      }),
      { numRuns: 200 },
    )
  })

  test('one more boundary changes the rows and nothing else', () => {
    const tracing = traced(first)
    const { stretches, moments, rows } = tracing.back
    const split = overStretches(tracing, splitStretch(stretches, moments.timesMs, 300))
    expect(split.back.rows).toHaveLength(rows.length + 1)
    expect(split.back.moments).toBe(moments)
    expect(overStretches(tracing, null)).toBe(tracing)
  })
})

describe('a false deflection', () => {
  test('is found in the scenario that opens, and not where the score lies on the component itself', () => {
    expect(showsFalseDeflection(first, evaluated(first))).toBe(true)
    const late = { ...first, score: { ...first.score, fromMs: 300, toMs: 500 } }
    expect(showsFalseDeflection(late, evaluated(late))).toBe(false)
    const unfiltered = { ...first, chain: [] }
    expect(showsFalseDeflection(unfiltered, evaluated(unfiltered))).toBe(false)
  })

  test('is found exactly where the remark says that it was not in the input', () => {
    for (const scenario of SCENARIOS) {
      const workspace = workspaceOf(scenario)
      const evaluation = evaluated(workspace)
      expect(showsFalseDeflection(workspace, evaluation), scenario.id).toBe(
        evaluation.remark.includes('was not in the input'),
      )
    }
  })
})
