import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { linearScale, makeFrame } from '../../src/plot/index.ts'
import type { LabelBox } from '../../src/plot/place-labels.ts'
import { courseOf } from '../../src/page/placed-labels.ts'
import { type CursorReading, cursorLabels, handles, stillLabels, type WindowLabel } from '../../src/page/time-labels.ts'

const frame = makeFrame(908, 238, { top: 2, right: 0, bottom: 24, left: 44 }, 'f')
const x = linearScale([-450, 1050], [frame.left, frame.right])
const y = linearScale([-3, 9.6], [frame.bottom, frame.top])
const wave = Float64Array.from({ length: 701 }, (_, i) => 7.9 * Math.exp(-(((-400 + 2 * i - 400) / 128) ** 2)))
const course = courseOf(wave, -400, 2, frame, x, y)

const windowAt = (id: string, fromMs: number, toMs: number): WindowLabel => ({
  id,
  fromPx: x.toPixel(fromMs),
  toPx: x.toPixel(toMs),
  rows: [{ strong: id }, { plain: `${fromMs} to ${toMs} ms` }],
})

const overlap = (a: LabelBox, b: LabelBox) =>
  a.left < b.right && b.left < a.right && a.top < b.bottom && b.top < a.bottom

const still = (windows: WindowLabel[]) =>
  stillLabels({
    frame,
    windows,
    mark: { fromPx: windows[1].fromPx, toPx: windows[1].toPx, y: y.toPixel(1), text: 'score after 1.00 µV' },
    unseen: [{ fromPx: x.toPixel(-400), toPx: x.toPixel(-200) }],
    others: [],
    zeroY: y.toPixel(0),
    courses: [course],
  })

describe('courseOf', () => {
  test('follows the curve pixel by pixel and is empty outside it', () => {
    expect(course.heights[0]).toBeNaN()
    const at400 = Math.round(x.toPixel(400) - frame.left)
    expect(course.heights[at400]).toBeCloseTo(y.toPixel(7.9), 1)
  })
})

describe('the labels of the time figure', () => {
  test('a window that is wide enough has its label inside, at the top', () => {
    const [baseline, score] = still([windowAt('baseline', -200, 0), windowAt('score', 80, 140)])
    expect(baseline.box.left).toBeGreaterThan(x.toPixel(-200))
    expect(baseline.box.right).toBeLessThan(x.toPixel(0))
    expect(baseline.box.top).toBeLessThan(frame.top + 8)
    expect(score.box.left).toBeGreaterThan(x.toPixel(140))
  })

  test('never cover each other, a handle or the edge, wherever windows and cursor stand', () => {
    const moment = fc.integer({ min: -400, max: 1000 })
    fc.assert(
      fc.property(moment, moment, moment, moment, moment, (a, b, c, d, cursor) => {
        const windows = [
          windowAt('baseline', Math.min(a, b), Math.max(a, b)),
          windowAt('score', Math.min(c, d), Math.max(c, d)),
        ]
        const standing = still(windows)
        const value = wave[Math.round((cursor + 400) / 2)]
        const readings: CursorReading[] = [
          { id: 'before', tone: 'before', name: 'before', text: '7.90 µV', y: y.toPixel(value) },
          { id: 'after', tone: 'after', name: 'after', text: '4.55 µV', y: y.toPixel(value / 2) },
        ]
        const inTheWay = [...standing.map((label) => label.box), ...handles(windows, frame)]
        const moving = cursorLabels(frame, x.toPixel(cursor), `${cursor} ms`, readings, [course], inTheWay)
        const boxes = [...standing, ...moving].map((label) => label.box)
        boxes.forEach((box, i) => {
          expect(box.left).toBeGreaterThanOrEqual(frame.left)
          expect(box.right).toBeLessThanOrEqual(frame.right)
          for (const other of boxes.slice(i + 1)) expect(overlap(box, other)).toBe(false)
          for (const handle of handles(windows, frame)) expect(overlap(box, handle)).toBe(false)
        })
        expect(moving.map((label) => label.id)).toEqual(['moment', 'before', 'after'])
      }),
      { numRuns: 150, seed: 4 },
    )
  })

  test('a hatched stretch too narrow for its word stays without it', () => {
    const label = (toMs: number) =>
      stillLabels({
        frame,
        windows: [],
        mark: null,
        unseen: [{ fromPx: x.toPixel(-400), toPx: x.toPixel(toMs) }],
        others: [],
        zeroY: 0,
        courses: [],
      })
    expect(label(-360)).toHaveLength(0)
    expect(label(-200)).toMatchObject([{ rows: [{ plain: 'unseen' }] }])
  })
})
