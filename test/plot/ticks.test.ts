import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { MINUS, numberText } from '../../src/plot/number-text.ts'
import { compressedScale, linearScale, logScale } from '../../src/plot/scale.ts'
import type { Scale } from '../../src/plot/scale.ts'
import { ticksAt, ticksFor } from '../../src/plot/ticks.ts'

const labels = (scale: Scale, lie: 'flat' | 'upright') => ticksFor(scale, { lie }).map((t) => t.label)

describe('ticksFor', () => {
  test('a time axis of −450 to 1050 ms has one tick per 200 ms', () => {
    const ticks = labels(linearScale([-450, 1050], [48, 912]), 'flat')
    expect(ticks).toEqual([`${MINUS}400`, `${MINUS}200`, '0', '200', '400', '600', '800', '1000'])
  })

  test('an amplitude axis has few ticks', () => {
    expect(labels(linearScale([-2.7, 9.5], [470, 258]), 'upright')).toEqual([`${MINUS}2`, '0', '2', '4', '6', '8'])
  })

  test('decimals are the same on one linear axis, and zero is plain', () => {
    expect(labels(linearScale([-0.7, 1.1], [200, 70]), 'upright')).toEqual([`${MINUS}0.5`, '0', '0.5', '1.0'])
  })

  test('a frequency axis has powers of ten', () => {
    expect(labels(logScale([0.01, 100], [960, 1390]), 'flat')).toEqual(['0.01', '0.1', '1', '10', '100'])
  })

  test('a logarithmic axis with less than three powers of ten has 1, 2 and 5', () => {
    expect(labels(logScale([0.8, 60], [0, 430]), 'flat')).toEqual(['1', '2', '5', '10', '20', '50'])
  })

  test('a logarithmic axis within one power of ten still has two ticks or more', () => {
    expect(ticksFor(logScale([11, 19], [0, 430])).length).toBeGreaterThanOrEqual(2)
    expect(ticksFor(logScale([2.1, 4.9], [0, 430])).length).toBeGreaterThanOrEqual(2)
  })

  test('many powers of ten on a short axis are thinned', () => {
    const ticks = ticksFor(logScale([1e-6, 1e6], [0, 300]))
    expect(ticks.length).toBeGreaterThanOrEqual(3)
    for (let i = 1; i < ticks.length; i++) expect(ticks[i].pixel - ticks[i - 1].pixel).toBeGreaterThanOrEqual(48)
  })

  test('a compressed axis has zero and about every tenth of a neat largest value', () => {
    const effectiveWindow = compressedScale([-0.4, 1.7], [600, 520], 0.056)
    expect(labels(effectiveWindow, 'upright')).toEqual([`${MINUS}0.2`, '0', '0.2', '1.5'])
    const kernel = compressedScale([-9, 60], [580, 464], 1.02)
    expect(labels(kernel, 'upright')).toEqual([`${MINUS}5`, '0', '5', '50'])
  })

  test('a short side of a compressed axis gets a value of its own', () => {
    const ticks = labels(compressedScale([-0.3, 60], [580, 380], 0.5), 'upright')
    expect(ticks).toContain(`${MINUS}0.3`)
    expect(ticks).toContain('50')
  })

  const domain = fc
    .tuple(fc.double({ min: -1e4, max: 1e4, noNaN: true }), fc.double({ min: -6, max: 5, noNaN: true }))
    .map(([low, e]): [number, number] => [low, low + 10 ** e + 1e-9 * Math.abs(low)])
  const scales = fc
    .record({
      domain,
      kind: fc.constantFrom('linear', 'log', 'compressed'),
      length: fc.double({ min: 60, max: 1500, noNaN: true }),
      width: fc.double({ min: 0.001, max: 50, noNaN: true }),
      turned: fc.boolean(),
    })
    .map(({ domain: [a, b], kind, length, width, turned }): Scale => {
      const range: [number, number] = turned ? [length, 0] : [0, length]
      if (kind === 'linear') return linearScale([a, b], range)
      if (kind === 'log') return logScale([Math.abs(a) + 1e-4, Math.abs(a) + 1e-4 + (b - a)], range)
      return compressedScale([a, b], range, width)
    })

  test('ticks lie inside the domain, rise, and stand where the scale says', () => {
    fc.assert(
      fc.property(scales, fc.constantFrom('flat' as const, 'upright' as const), (scale, lie) => {
        const ticks = ticksFor(scale, { lie })
        ticks.forEach((tick, i) => {
          expect(tick.value).toBeGreaterThanOrEqual(scale.domain[0])
          expect(tick.value).toBeLessThanOrEqual(scale.domain[1])
          expect(tick.pixel).toBe(scale.toPixel(tick.value))
          if (i > 0) expect(tick.value).toBeGreaterThan(ticks[i - 1].value)
        })
        expect(ticks.length).toBeLessThanOrEqual(60)
        expect(ticks.length).toBeGreaterThanOrEqual(1)
      }),
      { numRuns: 500 },
    )
  })

  test('labels of a compressed axis keep their distance', () => {
    fc.assert(
      fc.property(scales, (scale) => {
        if (scale.kind !== 'compressed') return
        const ticks = ticksFor(scale, { lie: 'upright' })
        for (let i = 1; i < ticks.length; i++) {
          expect(Math.abs(ticks[i].pixel - ticks[i - 1].pixel)).toBeGreaterThanOrEqual(18 - 1e-6)
        }
      }),
      { numRuns: 500 },
    )
  })
})

describe('ticksAt', () => {
  test('leaves out what the domain does not hold and sorts the rest', () => {
    const ticks = ticksAt(linearScale([0, 100], [200, 0]), [100, 71, 50, 0, 140])
    expect(ticks.map((t) => [t.label, t.pixel])).toEqual([
      ['0', 200],
      ['50', 100],
      ['71', 58],
      ['100', 0],
    ])
  })
})

describe('numberText', () => {
  test('has a true minus sign, no grouping, and no sign on zero', () => {
    expect(numberText(-1234.5)).toBe(`${MINUS}1234.5`)
    expect(numberText(0.1 + 0.2)).toBe('0.3')
    expect(numberText(-0.001, 2)).toBe('0.00')
    expect(numberText(-0)).toBe('0')
    expect(numberText(3, 1)).toBe('3.0')
    expect(numberText(Number.NaN)).toBe('–')
    expect(numberText(Number.NEGATIVE_INFINITY)).toBe(`${MINUS}∞`)
  })
})
