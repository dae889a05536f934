import { renderToStaticMarkup } from 'react-dom/server'
import { describe, expect, test } from 'vitest'
import { MomentPlot } from '../../../src/page/desks/trace/moment-plot.tsx'
import { barsOf } from '../../../src/page/desks/trace/parts-figure.tsx'
import { RunningBar, runningScale } from '../../../src/page/desks/trace/running-bars.tsx'
import { signedNames, TraceDesk } from '../../../src/page/desks/trace/trace-desk.tsx'
import { timeAxisOf } from '../../../src/page/time-axis.ts'
import { makeFrame } from '../../../src/plot/index.ts'
import { evaluate } from '../../../src/state/evaluate.ts'
import { evaluateTrace, type TraceOutcome } from '../../../src/state/evaluate-trace.ts'
import type { Evaluation } from '../../../src/state/evaluation.ts'
import { asking } from '../../../src/state/trace-actions.ts'
import { DIFFERENCE, type Question, SCENARIOS, type Workspace, workspaceOf } from '../../../src/state/workspace.ts'
import { momentRowWords, shareWords } from '../../../src/words/index.ts'

const scenarios = SCENARIOS.map((scenario) => workspaceOf(scenario))
const first = scenarios[0]

function evaluated(workspace: Workspace): Evaluation {
  const outcome = evaluate(workspace, null)
  if (!outcome.ok) throw new Error(outcome.problems[0].message)
  return outcome.evaluation
}

const traced = (workspace: Workspace): TraceOutcome => evaluateTrace(workspace, evaluated(workspace), null)

/** The desk as text, marks and elements taken out. */
function desk(workspace: Workspace): { html: string; text: string } {
  const shown = { evaluation: evaluated(workspace), of: workspace, problems: [], stale: false, working: false }
  const html = renderToStaticMarkup(<TraceDesk workspace={workspace} shown={shown} caption={() => ''} />)
  return { html, text: html.replace(/<[^>]*>/g, ' ').replace(/\s+/g, ' ') }
}

const QUESTIONS: Question[] = [
  ...(['score', 'mean-amplitude', 'peak-amplitude', 'signed-area', 'peak-latency', 'onset-latency'] as const).flatMap(
    (row) => (['after', 'change'] as const).map((of): Question => ({ kind: 'row', row, of })),
  ),
  { kind: 'row', row: 'false-deflection', of: 'after' },
  { kind: 'moment', atMs: 180, of: 'after' },
]

describe('the desk', () => {
  test.each(scenarios.map((workspace) => [workspace.title, workspace] as const))(
    'prints every row of the account and no number that is none: %s',
    (_, workspace) => {
      for (const question of QUESTIONS)
        for (const extent of ['continuous', 'epochs'] as const) {
          const asked = asking({ ...workspace, extent }, question)
          const outcome = traced(asked)
          const { html, text } = desk(asked)
          expect(html).not.toMatch(/NaN|Infinity|undefined/)
          if (!outcome.ok) {
            expect(text).toContain(outcome.reason)
            continue
          }
          for (const row of outcome.tracing.back.rows)
            expect(text).toContain(momentRowWords(row, outcome.tracing.traced))
          expect(text).toContain('come from?')
          expect(text).toContain('By component')
          expect(text).toContain('By stage')
        }
    },
  )

  test('names what the padding invented and what neighbouring events add, each in a row', () => {
    expect(desk({ ...first, extent: 'epochs' }).text).toContain('invented by the padding')
    if (first.source.kind !== 'built') throw new Error('the first scenario is built')
    const train: Workspace = { ...first, source: { ...first.source, events: { fromMs: 1000, toMs: 1400 } } }
    expect(desk(train).text).toContain('neighbouring events')
    expect(desk(first).text).not.toMatch(/invented by the padding|neighbouring events/)
  })

  test('warns when the unseen share is over the threshold, and only then', () => {
    const epochs: Workspace = { ...first, extent: 'epochs' }
    expect(desk(epochs).text).not.toContain('cannot be trusted')
    const strict = desk({ ...epochs, trace: { ...epochs.trace, threshold: 0.01 } }).text
    expect(strict).toContain('The value cannot be trusted: 4.7 % of its weight falls on samples outside the data')
    expect(strict).toContain('The page warns above 1 %')
  })

  test('gives nothing in per cent of a value about zero', () => {
    const zero = asking({ ...first, chain: [] }, { kind: 'row', row: 'score', of: 'change' })
    const { text } = desk(zero)
    expect(text).toContain('about zero')
    expect(text.replace('The page warns above 10 %', '')).not.toMatch(/\d %/)
  })

  test('a difference wave is told by condition, the subtracted one named so', () => {
    if (first.source.kind !== 'built') throw new Error('the first scenario is built')
    const [{ name, components }] = first.source.conditions
    const smaller = components.map((component) => ({ ...component, amplitudeUv: component.amplitudeUv / 2 }))
    const two: Workspace = {
      ...first,
      source: {
        ...first.source,
        conditions: [
          { name, components },
          { name: 'frequent', components: smaller },
        ],
      },
      shown: { ...first.shown, chosen: DIFFERENCE, difference: { first: name, second: 'frequent' } },
    }
    const { text } = desk(two)
    expect(text).toContain('By condition')
    const outcome = traced(two)
    if (!outcome.ok || !outcome.tracing.conditions) throw new Error('there is an account by condition')
    const { rows } = signedNames(outcome.tracing.conditions, two)
    expect(rows.map((row) => row.name)).toEqual([name, 'minus frequent'])
    // half of the waveform is taken off
    expect(rows[1].share).toBeCloseTo(-rows[0].share / 2, 9)
    expect(desk(first).text).not.toContain('By condition')
  })
})

describe('its parts', () => {
  test('the largest stretches are labelled in the figure with the shares of the account', () => {
    const outcome = traced(first)
    if (!outcome.ok) throw new Error(outcome.reason)
    const { tracing } = outcome
    const axis = timeAxisOf(evaluated(first).timesMs)
    const frame = makeFrame(908, 196, { top: 6, right: 0, bottom: 24, left: 44 }, 'f')
    const html = renderToStaticMarkup(
      <MomentPlot {...{ frame, tracing, axis }} baseline={first.baseline} polarity="up" marked={null} />,
    )
    const large = [...tracing.back.rows].sort((a, b) => Math.abs(b.share) - Math.abs(a.share)).slice(0, 2)
    for (const { share } of large) expect(html).toContain(shareWords(share, 'µV'))
    expect(html.match(/role="slider"/g)).toHaveLength(tracing.back.stretches.length)
  })

  test('of many components the smallest share one bar, and the bars still sum to the value', () => {
    if (first.source.kind !== 'built') throw new Error('the first scenario is built')
    const [condition] = first.source.conditions
    const many = Array.from({ length: 20 }, (_, i) => ({
      ...condition.components[0],
      name: `part ${i}`,
      latencyMs: 100 + 40 * i,
    }))
    const outcome = traced({
      ...first,
      source: { ...first.source, conditions: [{ ...condition, components: many as typeof condition.components }] },
    })
    if (!outcome.ok || !outcome.tracing.back.components) throw new Error('there is an account by component')
    const parts = outcome.tracing.back.components
    const bars = barsOf(parts)
    expect(bars).toHaveLength(7)
    expect(bars.at(-1)?.name).toBe('14 others')
    expect(bars.reduce((sum, { share }) => sum + share, 0)).toBeCloseTo(parts.value, 12)
  })

  test('a bar of the running total reaches from what was before it to what is after it', () => {
    const scale = runningScale([0.5, -2, 1])
    const html = renderToStaticMarkup(<RunningBar scale={scale} from={0.5} to={-2} look="large" leads />)
    const [, left, width] = /<rect x="([\d.]+)%"[^>]*width="([\d.]+)%"/.exec(html) ?? []
    // the scale runs from −2 to 1 over 3 to 95 % of the column
    expect(Number(left)).toBeCloseTo(3, 2)
    expect(Number(width)).toBeCloseTo((2.5 / 3) * 92, 2)
  })
})
