import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { prototypePoles } from '../../src/filter/butterworth.ts'
import { type ButterworthSpec, designStage } from '../../src/filter/stage.ts'
import { decibels, expanded, gainOf, rowsOf, runSections } from './measure.ts'
import { butterworths } from './random-specs.ts'

const once = (pass: 'low' | 'high', order: number, cutoffHz: number): ButterworthSpec => ({
  design: 'butterworth',
  pass,
  order,
  cutoffsHz: [cutoffHz],
  meaning: 'design',
  direction: 'forward',
})

describe('the prototype', () => {
  // Source: handbook tables, e.g. Winder 1998, Filter Design (numbers from memory, high)
  const poles: Record<number, [number, number][]> = {
    1: [[-1, 0]],
    2: [[-0.7071, 0.7071]],
    3: [
      [-1, 0],
      [-0.5, 0.866],
    ],
    4: [
      [-0.9239, 0.3827],
      [-0.3827, 0.9239],
    ],
    5: [
      [-1, 0],
      [-0.809, 0.5878],
      [-0.309, 0.9511],
    ],
    6: [
      [-0.9659, 0.2588],
      [-0.7071, 0.7071],
      [-0.2588, 0.9659],
    ],
    7: [
      [-1, 0],
      [-0.901, 0.4339],
      [-0.6235, 0.7818],
      [-0.2225, 0.9749],
    ],
    8: [
      [-0.9808, 0.1951],
      [-0.8315, 0.5556],
      [-0.5556, 0.8315],
      [-0.1951, 0.9808],
    ],
  }
  test.each(Object.entries(poles))('of order %s has the tabulated poles', (order, wanted) => {
    const found = prototypePoles(Number(order)).sort((a, b) => a.im - b.im)
    expect(found.length).toBe(wanted.length)
    found.forEach(({ re, im }, i) => {
      expect(Math.abs(re - wanted[i][0])).toBeLessThan(5e-5)
      expect(Math.abs(im - wanted[i][1])).toBeLessThan(5e-5)
    })
  })

  // Source: standard handbook table, Weinberg 1962, Winder 1998 (from memory, high)
  const polynomials: Record<number, number[]> = {
    1: [1, 1],
    2: [1, 1.4142, 1],
    3: [1, 2, 2, 1],
    4: [1, 2.6131, 3.4142, 2.6131, 1],
    5: [1, 3.2361, 5.2361, 5.2361, 3.2361, 1],
    6: [1, 3.8637, 7.4641, 9.1416, 7.4641, 3.8637, 1],
    7: [1, 4.494, 10.0978, 14.5918, 14.5918, 10.0978, 4.494, 1],
    8: [1, 5.1258, 13.1371, 21.8462, 25.6884, 21.8462, 13.1371, 5.1258, 1],
  }
  test.each(Object.entries(polynomials))('of order %s has the tabulated polynomial', (order, wanted) => {
    let product = [1]
    for (const { re, im } of prototypePoles(Number(order))) {
      const factor = im === 0 ? [1, -re] : [1, -2 * re, re * re + im * im]
      const next = new Array<number>(product.length + factor.length - 1).fill(0)
      product.forEach((x, i) => factor.forEach((y, j) => (next[i + j] += x * y)))
      product = next
    }
    wanted.forEach((value, i) => expect(Math.abs(product[i] - value)).toBeLessThan(6e-5))
  })

  // Source: as the polynomials (from memory, high). With the cutoff at fs/4 the warped cutoff is 1: the rows are the factors.
  const factors: Record<number, number[]> = {
    2: [1.4142],
    3: [1],
    4: [0.7654, 1.8478],
    5: [0.618, 1.618],
    6: [0.5176, 1.4142, 1.9319],
    7: [0.445, 1.247, 1.8019],
    8: [0.3902, 1.1111, 1.6629, 1.9616],
  }
  test.each(Object.entries(factors))('of order %s has the tabulated quadratic factors', (order, wanted) => {
    const { analogue } = designStage(once('low', Number(order), 125), 500)
    const pairs = rowsOf(analogue).filter((row) => row[3] === 1 && row[4] < 2 && Math.abs(row[5] - 1) < 1e-12)
    const found = pairs.map((row) => row[4]).sort((a, b) => a - b)
    expect(found.length).toBe(wanted.length)
    found.forEach((a, i) => expect(Math.abs(a - wanted[i])).toBeLessThan(5e-5))
  })
})

describe('published designs', () => {
  test('order 2 has the textbook closed form with d = 1/tan(πfc/fs)', () => {
    // Source: Lynn, theory.stanford.edu/~blynn/sound/example.xhtml, as reported (seen)
    for (const [fs, cutoff] of [
      [500, 30],
      [1000, 0.5],
      [250, 100],
    ]) {
      const d = 1 / Math.tan((Math.PI * cutoff) / fs)
      const c = 1 / (d * d + Math.SQRT2 * d + 1)
      const [row] = rowsOf(designStage(once('low', 2, cutoff), fs).sections)
      const wanted = [c, 2 * c, c, 1, (2 - 2 * d * d) * c, (d * d + 1 - Math.SQRT2 * d) * c]
      row.forEach((value, i) => expect(Math.abs(value - wanted[i])).toBeLessThan(1e-12))
    }
  })

  test('the gain at the cutoff is −3.0103 dB for every order and pass, one pass', () => {
    // Source: Pieter P., tttapa.github.io, order 4 at 45 Hz of 360 Hz: −3.01 dB, as reported (seen)
    expect(decibels(once('low', 4, 45), 360, 45)).toBeCloseTo(-3.0103, 4)
    for (let order = 1; order <= 12; order++) {
      for (const pass of ['low', 'high'] as const) {
        expect(decibels(once(pass, order, 7), 500, 7)).toBeCloseTo(10 * Math.log10(0.5), 9)
      }
    }
  })

  test('order 4 at 45 Hz of 360 Hz has the published coefficients', () => {
    // Source: as above (design values seen, coefficients checked with SciPy)
    expect(2 * 360 * Math.tan(Math.PI / 8)).toBeCloseTo(298.234, 3)
    const { sections } = designStage(once('low', 4, 45), 360)
    const { b, a } = expanded(sections!)
    const wantedB = [0.0102095, 0.0408379, 0.0612569, 0.0408379, 0.0102095]
    const wantedA = [1, -1.9684278, 1.7358607, -0.7244708, 0.1203896]
    wantedB.forEach((value, i) => expect(Math.abs(b[i] - value)).toBeLessThan(6e-8))
    wantedA.forEach((value, i) => expect(Math.abs(a[i] - value)).toBeLessThan(6e-8))
    const rows = rowsOf(sections)
    ;[
      [-0.8553979, 0.2097154],
      [-1.1130299, 0.5740619],
    ].forEach(([a1, a2], i) => {
      expect(Math.abs(rows[i][4] - a1)).toBeLessThan(6e-8)
      expect(Math.abs(rows[i][5] - a2)).toBeLessThan(6e-8)
    })
  })

  test.each([
    // Source: Winter, Biomechanics and Motor Control of Human Movement, smoothing (from memory, high)
    { order: 2, cutoff: 100, fs: 1000, b0: 0.0674553, a: [-1.1429805, 0.4128016] },
    // Source: Ifeachor & Jervis, Digital Signal Processing, bilinear examples (from memory, high)
    { order: 2, cutoff: 150, fs: 1280, b0: 0.0878213, a: [-1.0047722, 0.3560573] },
    { order: 1, cutoff: 30, fs: 150, b0: 0.4208078, a: [-0.1583844, 0] },
  ])('order $order at $cutoff Hz of $fs Hz has the textbook coefficients', ({ order, cutoff, fs, b0, a }) => {
    const [row] = rowsOf(designStage(once('low', order, cutoff), fs).sections)
    expect(Math.abs(row[0] - b0)).toBeLessThan(6e-8)
    expect(Math.abs(row[1] - (order === 2 ? 2 : 1) * b0)).toBeLessThan(6e-8)
    a.forEach((value, i) => expect(Math.abs(row[4 + i] - value)).toBeLessThan(6e-8))
  })

  test('order 6 pinned at the stop edge has the textbook sections and gains', () => {
    // Source: Oppenheim & Schafer, Discrete-Time Signal Processing, ch. 7 (from memory, high). fs = 2: 0.2π is 0.2 Hz
    const cutoff = (2 / Math.PI) * Math.atan(0.76623 / 2)
    const stage = designStage(once('low', 6, cutoff), 2)
    const rows = rowsOf(stage.sections)
    expect(Math.abs(rows[0][0] - 0.00073783)).toBeLessThan(1e-8)
    ;[
      [-0.9043645, 0.215515],
      [-1.0105772, 0.3582707],
      [-1.268645, 0.7051279],
    ].forEach(([a1, a2], i) => {
      expect(Math.abs(rows[i][4] - a1)).toBeLessThan(3e-5)
      expect(Math.abs(rows[i][5] - a2)).toBeLessThan(3e-5)
    })
    expect(gainOf(stage, 0.2)).toBeCloseTo(0.93721, 4)
    expect(gainOf(stage, 0.3)).toBeCloseTo(0.17783, 4)
  })

  test.each([
    [1, 6.008],
    [2, 12.041],
    [4, 24.082],
    [8, 48.165],
  ])('order %i falls by %f dB from 16 to 32 times the cutoff, and by twice that both ways', (order, wanted) => {
    // Source: 6 dB per octave per pole, general (rule seen, values computed)
    const spec = once('low', order, 0.01)
    const fall = (both: ButterworthSpec) => decibels(both, 4096, 0.16) - decibels(both, 4096, 0.32)
    expect(fall(spec)).toBeCloseTo(wanted, 2)
    expect(fall({ ...spec, direction: 'both' })).toBeCloseTo(2 * fall(spec), 9)
  })

  test('the reference coefficients are met', () => {
    // Source: computed with SciPy (derived)
    const close = (found: number[], wanted: number[], bound: number) =>
      wanted.forEach((value, i) => expect(Math.abs(found[i] - value)).toBeLessThan(bound))
    const four = rowsOf(designStage(once('low', 4, 30), 500).sections)
    close(four[0], [0.0008063599, 0.0016127197, 0.0008063599, 1, -1.3876197076, 0.4924228873], 6e-11)
    close(four[1], [1, 2, 1, 1, -1.6299355311, 0.7530401723], 6e-11)
    const [low] = rowsOf(designStage(once('low', 2, 30), 250).sections)
    close(low, [0.0913149, 0.1826298, 0.0913149, 1, -0.9824058, 0.3476654], 6e-8)
    const [high] = rowsOf(designStage(once('high', 2, 0.1), 250).sections)
    close(high, [0.998224425025, -1.99644885005, 0.998224425025, 1, -1.996445697381, 0.996452002719], 6e-13)
  })
})

describe('step responses', () => {
  const stepOf = (order: number) => {
    const { sections } = designStage(once('low', order, 1), 2000)
    return runSections(sections!, new Float64Array(8000).fill(1))
  }

  test.each([
    [1, 0],
    [2, 4.32],
    [3, 8.15],
    [4, 10.83],
    [5, 12.78],
    [6, 14.25],
    [7, 15.41],
    [8, 16.34],
  ])('order %i overshoots a step by %f %%', (order, percent) => {
    // Source: Zverev, Handbook of Filter Synthesis, step responses (from memory, medium; checked)
    const overshoot = Math.max(...stepOf(order)) - 1
    expect(Math.abs(100 * overshoot - percent)).toBeLessThan(0.02)
  })

  test.each([
    [1, 2.197],
    [2, 2.148],
    [3, 2.29],
    [4, 2.432],
    [5, 2.563],
    [6, 2.68],
    [8, 2.888],
  ])('order %i rises from 10 to 90 %% in %f/ωc', (order, wanted) => {
    // Source: standard, the first value is ln 9 (derived, checked)
    const step = stepOf(order)
    const crossing = (level: number) => {
      const n = step.findIndex((y) => y >= level)
      return n - 1 + (level - step[n - 1]) / (step[n] - step[n - 1])
    }
    const riseTimesCutoff = ((crossing(0.9) - crossing(0.1)) / 2000) * 2 * Math.PI
    expect(Math.abs(riseTimesCutoff - wanted)).toBeLessThan(0.002)
  })
})

describe('any Butterworth', () => {
  test('has every pole of every section inside the unit circle', () => {
    fc.assert(
      fc.property(butterworths, ({ spec, samplingRateHz }) => {
        for (const [, , , a0, a1, a2] of rowsOf(designStage(spec, samplingRateHz).sections)) {
          expect(a0).toBe(1)
          expect(a2).toBeLessThan(1)
          expect(Math.abs(a1)).toBeLessThan(1 + a2)
        }
        // in the bilinear variable a stable row has positive coefficients, however low the cutoff
        for (const [, , , d2, d1, d0] of rowsOf(designStage(spec, samplingRateHz).analogue)) {
          expect(d2 === 1 || (d2 === 0 && d1 === 1)).toBe(true)
          expect(d1).toBeGreaterThan(0)
          expect(d0).toBeGreaterThan(0)
        }
      }),
      { seed: 17 },
    )
  })

  test('lets through or stops 0 Hz and half the sampling rate as its pass says', () => {
    fc.assert(
      fc.property(butterworths, ({ spec, samplingRateHz }) => {
        const stage = designStage(spec, samplingRateHz)
        const wanted = { low: [1, 0], high: [0, 1], band: [0, 0], stop: [1, 1] }[spec.pass]
        expect(Math.abs(gainOf(stage, 0) - wanted[0])).toBeLessThan(1e-11)
        expect(Math.abs(gainOf(stage, samplingRateHz / 2) - wanted[1])).toBeLessThan(1e-11)
      }),
      { seed: 18 },
    )
  })

  test('has the same response from its two forms where the direct one keeps its precision', () => {
    fc.assert(
      fc.property(butterworths, fc.double({ min: 0.05, max: 0.95, noNaN: true }), ({ spec, samplingRateHz }, at) => {
        const forward = { ...spec, direction: 'forward' as const, meaning: 'design' as const }
        if (forward.cutoffsHz[0] < 0.01 * samplingRateHz) return
        const stage = designStage(forward, samplingRateHz)
        const w = at * Math.PI
        let direct = 1
        for (const [b0, b1, b2, , a1, a2] of rowsOf(stage.sections)) {
          const size = (c0: number, c1: number, c2: number) =>
            Math.hypot(c0 + c1 * Math.cos(w) + c2 * Math.cos(2 * w), c1 * Math.sin(w) + c2 * Math.sin(2 * w))
          direct *= size(b0, b1, b2) / size(1, a1, a2)
        }
        expect(Math.abs(gainOf(stage, (at * samplingRateHz) / 2) - direct)).toBeLessThan(1e-9)
      }),
      { seed: 19 },
    )
  })

  test('keeps the poles of 0.01 Hz at 4096 Hz to full relative precision', () => {
    const [row] = rowsOf(designStage(once('high', 2, 0.01), 4096).analogue)
    // the tangent of a small angle by its series: x + x³/3
    const x = (Math.PI * 0.01) / 4096
    const g = x + x ** 3 / 3
    expect(Math.abs(row[4] / (Math.SQRT2 * g) - 1)).toBeLessThan(1e-15)
    expect(Math.abs(row[5] / (g * g) - 1)).toBeLessThan(1e-15)
  })
})

describe('a Butterworth that cannot be designed', () => {
  const spec = once('low', 2, 30)
  test.each([
    [{ order: 0 }, 'order', 'order must be a whole number from 1 to 12, was 0'],
    [{ order: 2.5 }, 'order', 'order must be a whole number from 1 to 12, was 2.5'],
    [{ order: 13 }, 'order', 'order must be a whole number from 1 to 12, was 13'],
    [{ pass: 'band', order: 9, cutoffsHz: [1, 2] }, 'order', 'order must be a whole number from 1 to 8, was 9'],
    [{ cutoffsHz: [300] }, 'cutoffsHz', 'cutoffsHz[0] must lie between 0 and 250 (half the sampling rate), was 300'],
    [{ cutoffsHz: [250] }, 'cutoffsHz', 'cutoffsHz[0] must lie between 0 and 250 (half the sampling rate), was 250'],
    [{ cutoffsHz: [0] }, 'cutoffsHz', 'cutoffsHz[0] must lie between 0 and 250 (half the sampling rate), was 0'],
    [{ cutoffsHz: [NaN] }, 'cutoffsHz', 'cutoffsHz[0] must lie between 0 and 250 (half the sampling rate), was NaN'],
    [{ cutoffsHz: [] }, 'cutoffsHz', 'cutoffsHz must hold one cutoff for pass low, was []'],
    [{ pass: 'band' }, 'cutoffsHz', 'cutoffsHz must hold two cutoffs for pass band, was [30]'],
    [{ pass: 'stop', cutoffsHz: [40, 30] }, 'cutoffsHz', 'cutoffsHz must ascend, was [40,30]'],
    [{ pass: 'all' }, 'pass', 'pass must be one of low, high, band, stop, was "all"'],
    [{ meaning: 'dB' }, 'meaning', 'meaning must be one of half-amplitude, half-power, design, was "dB"'],
    [{ direction: 'back' }, 'direction', 'direction must be one of forward, both, was "back"'],
  ])('%o is refused with what, rule and value', (change, field, message) => {
    let error: unknown
    try {
      designStage({ ...spec, ...change } as ButterworthSpec, 500)
    } catch (caught) {
      error = caught
    }
    expect(error).toBeInstanceOf(RangeError)
    expect(error).toMatchObject({ field, message })
  })

  test.each([0, -1, NaN, Infinity])('a sampling rate of %f is refused', (rate) => {
    expect(() => designStage(spec, rate)).toThrow(`samplingRateHz must be a positive number, was ${rate}`)
  })

  test('an unknown design is refused', () => {
    expect(() => designStage({ ...spec, design: 'magic' } as never, 500)).toThrow(/^design must be one of .*"magic"$/)
  })
})
