import { describe, expect, test } from 'vitest'
import {
  cutOut,
  densityDomain,
  densityOnAxis,
  labelledRows,
  largestShare,
  placeOf,
  tintOf,
} from '../../../src/page/desks/trace/moment-shape.ts'
import { momentLabels } from '../../../src/page/desks/trace/moment-labels.ts'
import { courseOf } from '../../../src/page/placed-labels.ts'
import { timeAxisOf } from '../../../src/page/time-axis.ts'
import { linearScale, makeFrame } from '../../../src/plot/index.ts'
import { evaluate } from '../../../src/state/evaluate.ts'
import { evaluateTrace } from '../../../src/state/evaluate-trace.ts'
import { SCENARIOS, type Workspace, workspaceOf } from '../../../src/state/workspace.ts'

function shapeOf(workspace: Workspace) {
  const outcome = evaluate(workspace, null)
  if (!outcome.ok) throw new Error(outcome.problems[0].message)
  const found = evaluateTrace(workspace, outcome.evaluation, null)
  if (!found.ok) throw new Error(found.reason)
  const axis = timeAxisOf(outcome.evaluation.timesMs)
  const { back, traced } = found.tracing
  return { axis, back, traced, density: densityOnAxis(back.moments, axis) }
}

const cases = SCENARIOS.flatMap((scenario) =>
  (['continuous', 'epochs'] as const).map((extent) => [scenario.id, { ...workspaceOf(scenario), extent }] as const),
)

describe.each(cases)('the figure by moment: %s', (_, workspace) => {
  const { axis, back, traced, density } = shapeOf(workspace)
  const { rows, moments } = back

  test('its density lies on the axis of the time figure and sums to the shares inside the epoch', () => {
    expect(density.startMs).toBeCloseTo(axis.fromMs, 9)
    expect(density.startMs + (density.values.length - 1) * density.stepMs).toBeCloseTo(axis.toMs, 9)
    const margin = Math.round((axis.firstMs - axis.fromMs) / axis.stepMs)
    let sum = 0
    for (let i = 0; i < axis.samples; i++) sum += (density.values[margin + i] * axis.stepMs) / 100
    const inside = rows.filter(({ kind }) => !['before', 'after', 'invented', 'neighbours'].includes(kind))
    const shares = inside.reduce((total, { share }) => total + share, 0)
    expect(Math.abs(sum - shares)).toBeLessThanOrEqual(1e-9 * moments.absoluteSum)
  })

  test('its stretches meet and cover the axis from end to end', () => {
    const places = rows.flatMap((row) => placeOf(row, axis) ?? [])
    expect(places[0].fromMs).toBe(axis.fromMs)
    expect(places.at(-1)?.toMs).toBe(axis.toMs)
    for (let i = 1; i < places.length; i++) {
      expect(places[i].fromMs).toBe(places[i - 1].toMs)
      const left = cutOut(density, places[i - 1].fromMs, places[i - 1].toMs)
      const right = cutOut(density, places[i].fromMs, places[i].toMs)
      expect(right.xs[0]).toBeCloseTo(left.xs[left.xs.length - 1], 9)
      expect(right.ys[0]).toBeCloseTo(left.ys[left.ys.length - 1], 9)
    }
  })

  test('the larger a share, the stronger its tint, and the largest ones are labelled with their shares', () => {
    const largest = largestShare(rows)
    const bySize = [...rows].sort((a, b) => Math.abs(a.share) - Math.abs(b.share))
    for (let i = 1; i < bySize.length; i++)
      expect(tintOf(bySize[i], largest)).toBeGreaterThanOrEqual(tintOf(bySize[i - 1], largest))
    const labelled = labelledRows(rows, axis)
    const placed = rows.filter((row) => placeOf(row, axis))
    const top = placed.reduce((a, b) => (Math.abs(b.share) > Math.abs(a.share) ? b : a))
    expect(labelled.map((i) => rows[i])).toContain(top)
    expect(labelled.length).toBeLessThanOrEqual(3)
  })

  test('negative up turns it upside down', () => {
    const up = densityDomain(density, 'up')
    expect(densityDomain(density, 'down')).toEqual([up[1], up[0]])
    for (const value of density.values) {
      expect(value).toBeGreaterThan(up[0])
      expect(value).toBeLessThan(up[1])
    }
  })

  test.each([908, 620, 340])('labels stay inside a figure %i px wide and clear of one another', (width) => {
    const frame = makeFrame(width, 196, { top: 6, right: 0, bottom: 24, left: 44 }, 'f')
    const x = linearScale([axis.fromMs, axis.toMs], [frame.left, frame.right])
    const y = linearScale(densityDomain(density, 'up'), [frame.bottom, frame.top])
    const courses = [courseOf(density.values, density.startMs, density.stepMs, frame, x, y)]
    const common = { frame, x, y, axis, density, rows, courses, edges: [], taken: [] }
    const labels = momentLabels({ ...common, unit: traced.unit, own: 'the score window' })
    for (const { box } of labels) {
      expect(box.left).toBeGreaterThanOrEqual(frame.left)
      expect(box.right).toBeLessThanOrEqual(frame.right)
      expect(box.bottom).toBeLessThanOrEqual(frame.bottom)
    }
    for (const [i, a] of labels.entries())
      for (const b of labels.slice(i + 1)) {
        const apart =
          a.box.right <= b.box.left ||
          b.box.right <= a.box.left ||
          a.box.bottom <= b.box.top ||
          b.box.bottom <= a.box.top
        expect(apart, `${a.id} and ${b.id}`).toBe(true)
      }
    if (width > 600) expect(labels.length).toBeGreaterThan(0)
  })
})
