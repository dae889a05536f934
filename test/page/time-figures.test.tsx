import { renderToStaticMarkup } from 'react-dom/server'
import { describe, expect, test } from 'vitest'
import { SCENARIOS } from '../../src/erp/scenarios.ts'
import { makeFrame } from '../../src/plot/index.ts'
import { timeAxisOf } from '../../src/page/time-axis.ts'
import { readingWords } from '../../src/page/time-reading.ts'
import { TimeFigures } from '../../src/page/time-figures.tsx'
import { shownWords } from '../../src/page/time-head.tsx'
import { TimePlot } from '../../src/page/time-plot.tsx'
import { WindowPlot } from '../../src/page/window-plot.tsx'
import { evaluate } from '../../src/state/evaluate.ts'
import type { Evaluation } from '../../src/state/evaluation.ts'
import { DIFFERENCE, type Workspace, workspaceOf } from '../../src/state/workspace.ts'

function evaluated(workspace: Workspace): Evaluation {
  const outcome = evaluate(workspace, null)
  if (!outcome.ok) throw new Error(outcome.problems.map(({ message }) => message).join(' '))
  return outcome.evaluation
}

const scenarios = SCENARIOS.map((scenario) => workspaceOf(scenario))
const first = scenarios[0]
const frame = makeFrame(908, 238, { top: 2, right: 0, bottom: 24, left: 44 }, 'f')

function plot(workspace: Workspace, cursorMs: number, takenOut = true): string {
  const evaluation = evaluated(workspace)
  const axis = timeAxisOf(evaluation.timesMs)
  const cursor = Math.round((cursorMs - axis.firstMs) / axis.stepMs)
  const props = { frame, evaluation, axis, windows: workspace, score: workspace.score, cursor, takenOut }
  return renderToStaticMarkup(
    <TimePlot {...props} onCursor={() => undefined} onHold={() => undefined} polarity="up" />,
  ).replace(/<\/?tspan[^>]*>/g, '')
}

describe('TimeFigures', () => {
  test.each(scenarios.map((workspace) => [workspace.title, workspace] as const))(
    'has its heads: %s',
    (_, workspace) => {
      const evaluation = evaluated(workspace)
      const html = renderToStaticMarkup(
        <TimeFigures evaluation={evaluation} workspace={workspace} caption={() => ''} />,
      )
      expect(html).toContain('>Time</h2>')
      expect(html).toContain('>Effective window</h2>')
      expect(html.includes('it has no effective window')).toBe(evaluation.window === null)
    },
  )

  test('a causal chain’s difference is called what it is, and hidden until it is asked for', () => {
    const delayed = scenarios[3]
    const evaluation = evaluated(delayed)
    expect(evaluation.delayIncluded).toBe(true)
    const html = renderToStaticMarkup(<TimeFigures evaluation={evaluation} workspace={delayed} caption={() => ''} />)
    expect(html).toContain('before − after, delay included, hidden')
    expect(html).not.toContain('taken out')
    expect(plot(delayed, 104)).toContain('before − after, delay included')
  })
})

describe('TimePlot', () => {
  test('reads the evaluation’s own values at the cursor and the readout’s score', () => {
    const { curves, rows } = evaluated(first)
    const html = plot(first, 400)
    const text = (value: number) => `${value.toFixed(2).replace('-', '−')} µV`
    expect(html).toContain(`before ${text(curves[0].before[400])}`)
    expect(html).toContain(`after ${text(curves[0].after[400])}`)
    expect(html).toContain(`taken out ${text(curves[0].takenOut[400])}`)
    expect(html).toContain(`score after ${text(rows[0].after as number)}`)
  })

  test('what was taken out is neither drawn nor read when hidden', () => {
    expect(plot(first, 400, false)).not.toContain('taken out')
    expect(plot(first, 400, false)).not.toContain('var(--taken-out)')
  })

  test('both windows and the cursor are sliders with names', () => {
    const names = [...plot(first, 400).matchAll(/role="slider" aria-label="([^"]+)"/g)].map((match) => match[1])
    expect(names).toEqual([
      'cursor',
      ...['baseline, whole', 'baseline, start', 'baseline, end'],
      ...['score window, whole', 'score window, start', 'score window, end'],
    ])
  })

  test('a moment is one handle, and no baseline is no band', () => {
    const workspace: Workspace = {
      ...first,
      baseline: 'none',
      score: { ...first.score, kind: 'moment', fromMs: 110, toMs: 110 },
    }
    const names = [...plot(workspace, 400).matchAll(/role="slider" aria-label="([^"]+)"/g)].map((match) => match[1])
    expect(names).toEqual(['cursor', 'moment of the score'])
  })

  test('cut-out epochs are hatched where they lean on unseen samples, continuous ones are not', () => {
    expect(plot({ ...first, extent: 'epochs' }, 400)).toContain('plot-hatch-unseen')
    expect(plot(first, 400)).not.toContain('plot-hatch-unseen')
  })

  test('further conditions keep colours and names of their own', () => {
    const shown = {
      ...first.shown,
      conditions: ['rare targets', 'frequent standards'],
      difference: { first: 'rare targets', second: 'frequent standards' },
      chosen: DIFFERENCE,
    }
    const workspace = { ...first, shown }
    const html = plot(workspace, 400)
    expect(html).toContain('var(--condition-1)')
    expect(html).toContain('var(--condition-2)')
    expect(html).toContain('>rare targets')
    const evaluation = evaluated(workspace)
    expect(shownWords(evaluation, 'Pz')).toBe('difference wave, with 2 more, Pz')
    expect(readingWords(evaluation, 400, true)).toContain('frequent standards before')
  })
})

describe('WindowPlot', () => {
  test('gives the weight at the cursor and the component under it', () => {
    const evaluation = evaluated(first)
    const axis = timeAxisOf(evaluation.timesMs)
    const window = evaluation.window!
    const html = renderToStaticMarkup(
      <WindowPlot
        {...{ frame: makeFrame(908, 80, { top: 2, right: 0, bottom: 2, left: 44 }, 'w'), window, axis }}
        workspace={first}
        windows={first}
        cursor={400}
        scale="compressed"
      />,
    )
    const weight = window.filtered[400 - window.fromIndex] * 50
    expect(html).toContain(
      `after the chain: ${weight.toFixed(2).replace('-', '−')} under the peak of the late positivity`,
    )
    expect(html).toContain('unfiltered: a plain box')
  })
})
