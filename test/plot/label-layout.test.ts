import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { layoutLabels } from '../../src/plot/label-layout.ts'

const label = fc.record({
  wanted: fc.double({ min: -100, max: 500, noNaN: true }),
  height: fc.double({ min: 0, max: 30, noNaN: true }),
})

describe('layoutLabels', () => {
  test('labels that do not meet stay where they want to be', () => {
    const wanted = [
      { wanted: 20, height: 10 },
      { wanted: 60, height: 10 },
    ]
    expect(layoutLabels(wanted, { top: 0, bottom: 100 })).toEqual([20, 60])
  })

  test('two labels on one spot move apart by equal amounts', () => {
    const both = [
      { wanted: 50, height: 16 },
      { wanted: 50, height: 16 },
    ]
    expect(layoutLabels(both, { top: 0, bottom: 100, gap: 2 })).toEqual([41, 59])
  })

  test('labels pushed against a limit push the others', () => {
    const all = [
      { wanted: 98, height: 10 },
      { wanted: 90, height: 10 },
    ]
    expect(layoutLabels(all, { top: 0, bottom: 100 })).toEqual([95, 85])
  })

  test('labels never overlap, stay within the limits, keep their order, and none is dropped', () => {
    fc.assert(
      fc.property(fc.array(label, { maxLength: 8 }), (labels) => {
        const limits = { top: 0, bottom: 400, gap: 2 }
        const centres = layoutLabels(labels, limits)
        expect(centres).toHaveLength(labels.length)
        const boxes = centres.map((c, i) => ({ from: c - labels[i].height / 2, to: c + labels[i].height / 2, i }))
        for (const box of boxes) {
          expect(box.from).toBeGreaterThanOrEqual(-1e-9)
          expect(box.to).toBeLessThanOrEqual(400 + 1e-9)
        }
        for (const a of boxes) {
          for (const b of boxes) {
            if (a.i >= b.i) continue
            expect(a.to + 2 <= b.from + 1e-9 || b.to + 2 <= a.from + 1e-9).toBe(true)
            if (labels[a.i].wanted < labels[b.i].wanted) expect(centres[a.i]).toBeLessThanOrEqual(centres[b.i])
          }
        }
      }),
      { numRuns: 300 },
    )
  })

  test('no smaller movement than the one found: moving any label either way is worse or overlaps', () => {
    fc.assert(
      fc.property(fc.array(label, { minLength: 2, maxLength: 5 }), (labels) => {
        const limits = { top: 0, bottom: 400 }
        const centres = layoutLabels(labels, limits)
        const cost = (c: readonly number[]) => c.reduce((sum, v, i) => sum + (v - labels[i].wanted) ** 2, 0)
        const order = centres.map((_, i) => i).sort((a, b) => centres[a] - centres[b])
        const allowed = (c: readonly number[]) =>
          order.every((i, k) => {
            const above = k === 0 ? limits.top : c[order[k - 1]] + labels[order[k - 1]].height / 2
            return c[i] - labels[i].height / 2 >= above - 1e-9 && c[i] + labels[i].height / 2 <= limits.bottom + 1e-9
          })
        // every block of neighbours, moved together by a little
        for (let a = 0; a < order.length; a++) {
          for (let b = a; b < order.length; b++) {
            for (const by of [-0.01, 0.01]) {
              const moved = centres.slice()
              for (let k = a; k <= b; k++) moved[order[k]] += by
              if (allowed(moved)) expect(cost(moved)).toBeGreaterThanOrEqual(cost(centres) - 1e-9)
            }
          }
        }
      }),
      { numRuns: 100 },
    )
  })

  test('labels side by side do not push each other', () => {
    const all = [
      { wanted: 50, height: 16, left: 0, right: 40 },
      { wanted: 50, height: 16, left: 60, right: 90 },
    ]
    expect(layoutLabels(all, { top: 0, bottom: 100 })).toEqual([50, 50])
  })

  test('too many labels are spread evenly over the room there is', () => {
    const many = Array.from({ length: 5 }, () => ({ wanted: 10, height: 20 }))
    expect(layoutLabels(many, { top: 0, bottom: 60 })).toEqual([10, 20, 30, 40, 50])
  })

  test('labels that fit only without the gap give up the gap', () => {
    const three = Array.from({ length: 3 }, () => ({ wanted: 10, height: 20 }))
    expect(layoutLabels(three, { top: 0, bottom: 60, gap: 5 })).toEqual([10, 30, 50])
  })

  test('bad places, heights and limits are refused', () => {
    expect(() => layoutLabels([{ wanted: Number.NaN, height: 1 }], { top: 0, bottom: 1 })).toThrow(
      /labels\[0\]\.wanted must be finite, was NaN/,
    )
    expect(() => layoutLabels([{ wanted: 1, height: -1 }], { top: 0, bottom: 1 })).toThrow(/labels\[0\]\.height/)
    expect(() => layoutLabels([], { top: 2, bottom: 1 })).toThrow(
      /limits.bottom must be at least limits.top \(2\), was 1/,
    )
  })
})
