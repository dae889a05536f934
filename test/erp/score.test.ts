import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { baselineWeights, correctBaseline } from '../../src/erp/baseline.ts'
import { findPeak } from '../../src/erp/peak.ts'
import { scoreOf, scoreWeights, type Score } from '../../src/erp/score.ts'
import { epochTimesMs, waveformAt } from '../../src/erp/waveform.ts'

const times = epochTimesMs(500, { fromMs: -200, toMs: 800 })
const at = (ms: number) => Math.round((ms + 200) / 2)
const from = (f: (t: number) => number) => Float64Array.from(times, f)
const score = (kind: Score['kind'], fromMs: number, toMs: number, more: Partial<Score> = {}): Score => ({
  kind,
  fromMs,
  toMs,
  polarity: 'positive',
  ...more,
})
const dot = (w: Float64Array, y: Float64Array) => w.reduce((s, v, i) => s + v * y[i], 0)
const triangle = (peakMs: number, halfMs: number, a: number) =>
  from((t) => a * Math.max(0, 1 - Math.abs(t - peakMs) / halfMs))
const gaussian = (latencyMs: number, widthMs: number, amplitudeUv: number) =>
  waveformAt([{ shape: 'gaussian', name: 'g', amplitudeUv, latencyMs, widthMs }], times)
/** A few random smooth bumps, so that peaks, areas and onsets exist. */
const smooth = fc
  .array(
    fc.record({
      a: fc.integer({ min: -80, max: 80 }).map((a) => a / 10),
      l: fc.integer({ min: 50, max: 600 }),
      w: fc.integer({ min: 40, max: 200 }),
    }),
    {
      minLength: 1,
      maxLength: 4,
    },
  )
  .map((bumps) =>
    waveformAt(
      bumps.map((b) => ({ shape: 'gaussian' as const, name: 'b', amplitudeUv: b.a, latencyMs: b.l, widthMs: b.w })),
      times,
    ),
  )

describe('correctBaseline', () => {
  test('subtracts the mean of the samples in the closed window', () => {
    const y = from((t) => (t <= 0 ? t : 7))
    const corrected = correctBaseline(y, times, { fromMs: -100, toMs: 0 })
    expect(corrected[at(0)]).toBeCloseTo(50, 12)
    expect(corrected[at(500)]).toBeCloseTo(57, 12)
    expect(y[at(500)]).toBe(7)
    expect(Array.from(correctBaseline(y, times, 'none'))).toEqual(Array.from(y))
  })

  test('leaves no trace of a 20 mV offset', () => {
    const y = gaussian(300, 100, 5)
    const moved = correctBaseline(
      y.map((v) => v + 20_000),
      times,
      { fromMs: -200, toMs: 0 },
    )
    const plain = correctBaseline(y, times, { fromMs: -200, toMs: 0 })
    moved.forEach((v, i) => expect(Math.abs(v - plain[i])).toBeLessThan(2e-11))
  })

  test('takes back exactly what its weights say', () => {
    fc.assert(
      fc.property(smooth, fc.integer({ min: -200, max: 0 }), fc.integer({ min: 0, max: 300 }), (y, fromMs, length) => {
        const baseline = { fromMs, toMs: fromMs + Math.max(2, length) }
        const mean = dot(baselineWeights(baseline, times), y)
        correctBaseline(y, times, baseline).forEach((v, i) => expect(v).toBeCloseTo(y[i] - mean, 12))
      }),
      { numRuns: 30 },
    )
  })
})

describe('mean amplitude', () => {
  test('is the mean of the samples in the closed interval, to a millionth of a sample', () => {
    const y = from((t) => t)
    expect(scoreOf(y, times, score('mean', 80, 140))).toBeCloseTo(110, 12)
    expect(scoreOf(y, times, score('mean', 80 + 1e-9, 140 - 1e-9))).toBeCloseTo(110, 12)
    expect(scoreOf(y, times, score('mean', 80.1, 139.9))).toBeCloseTo(110, 12)
    expect(scoreOf(y, times, score('mean', 80.1, 140))).toBeCloseTo(111, 12)
    expect(scoreOf(y, times, score('mean', 80, 80))).toBe(80)
  })
})

describe('signed area', () => {
  test('of a Gaussian is A·s·√(2π), in µV·s', () => {
    // Source: textbook, recomputed: s = 50 ms gives 0.125331 µV·s per µV
    const sd = 50
    const y = gaussian(300, 2 * Math.sqrt(2 * Math.LN2) * sd, 1)
    expect(scoreOf(y, times, score('area', -200, 800))).toBeCloseTo(0.125331, 6)
    // derived from the same area: 10 µV, SD 80 ms, over the whole axis it is 2.00530; ±4 SD hold erf(4/√2) of it
    const wide = gaussian(400, 2 * Math.sqrt(2 * Math.LN2) * 80, 10)
    expect(scoreOf(wide, times, score('area', 80, 720))).toBeCloseTo(2.0053 * 0.9999366575, 5)
  })

  test('clips by sample, and a negative side has a negative area', () => {
    const y = from((t) => (t < 100 ? 0 : t < 200 ? 3 : t < 300 ? -2 : 0))
    // 50 samples of 3 µV, each worth 2 ms
    expect(scoreOf(y, times, score('area', 0, 400))).toBeCloseTo(50 * 3 * 0.002, 12)
    expect(scoreOf(y, times, score('area', 0, 400, { polarity: 'negative' }))).toBeCloseTo(-50 * 2 * 0.002, 12)
    expect(scoreOf(y, times, score('area', 300, 400))).toBe(0)
  })

  test('of a triangle is half its base times its height', () => {
    expect(scoreOf(triangle(300, 100, 4), times, score('area', 100, 500))).toBeCloseTo(0.4, 12)
  })
})

describe('peak', () => {
  test('of a parabola is exact between samples', () => {
    const y = from((t) => 6 - ((t - 301.3) / 40) ** 2)
    expect(scoreOf(y, times, score('peak-latency', 200, 400))).toBeCloseTo(301.3, 9)
    expect(scoreOf(y, times, score('peak-amplitude', 200, 400))).toBeCloseTo(6, 12)
  })

  test('of a Gaussian lies at its latency, to the parabola’s error', () => {
    const y = gaussian(300.7, 100, -5)
    const negative = { polarity: 'negative' as const }
    expect(scoreOf(y, times, score('peak-latency', 200, 400, negative))).toBeCloseTo(300.7, 3)
    expect(scoreOf(y, times, score('peak-amplitude', 200, 400, negative))).toBeCloseTo(-5, 5)
  })

  test('is never the window’s edge on a rising or falling flank', () => {
    const y = gaussian(300, 100, 5)
    expect(scoreOf(y, times, score('peak-amplitude', 200, 280))).toBe('no peak')
    expect(scoreOf(y, times, score('peak-latency', 310, 400))).toBe('no peak')
    expect(scoreOf(y, times, score('onset-latency', 310, 400))).toBe('no peak')
    expect(
      scoreOf(
        from((t) => t),
        times,
        score('peak-amplitude', -200, 800),
      ),
    ).toBe('no peak')
  })

  test('consults samples outside the window', () => {
    // the largest sample in the window, 298, is exceeded by its neighbour outside
    const y = triangle(300, 100, 5)
    expect(scoreOf(y, times, score('peak-amplitude', 200, 298))).toBe('no peak')
    expect(scoreOf(y, times, score('peak-latency', 200, 300))).toBe(300)
  })

  test('may lie up to half a sample outside the window', () => {
    const y = from((t) => 6 - ((t - 300.9) / 40) ** 2)
    expect(scoreOf(y, times, score('peak-latency', 200, 300))).toBeCloseTo(300.9, 9)
  })

  test('exceeds every sample within ±10 ms, at exactly 10 ms too', () => {
    const spikes = (gapMs: number) => from((t) => (t === 300 ? 2 : t === 300 + gapMs ? 3 : 0))
    // only the larger of two spikes 10 ms apart is a peak, so a window on the smaller has none
    expect(scoreOf(spikes(10), times, score('peak-amplitude', 290, 304))).toBe('no peak')
    expect(scoreOf(spikes(12), times, score('peak-latency', 290, 304))).toBe(300)
  })

  test('of two is the larger, and of two equal ones the earlier', () => {
    const two = (a: number, b: number) =>
      waveformAt(
        [
          { shape: 'ramp', name: 'a', amplitudeUv: a, latencyMs: 200, widthMs: 50, riseShare: 0.5 },
          { shape: 'ramp', name: 'b', amplitudeUv: b, latencyMs: 400, widthMs: 50, riseShare: 0.5 },
        ],
        times,
      )
    const latency = (y: Float64Array) => findPeak(y, times, { fromMs: 100, toMs: 600 }, 'positive')
    expect((latency(two(3, 4)) as { first: number }).first).toBe(at(400))
    expect((latency(two(4, 3)) as { first: number }).first).toBe(at(200))
    expect((latency(two(4, 4)) as { first: number }).first).toBe(at(200))
  })

  test('may have either sign', () => {
    const y = from((t) => -5 + Math.max(0, 1 - Math.abs(t - 300) / 100))
    expect(scoreOf(y, times, score('peak-latency', 200, 400))).toBe(300)
    expect(scoreOf(y, times, score('peak-amplitude', 200, 400))).toBeLessThan(-3.9)
  })

  test('on a plateau lies at its middle time, at its height', () => {
    const y = from((t) => Math.min(4, Math.max(0, (200 - Math.abs(t - 301)) / 20)))
    // flat from 181 to 421: the samples 182 to 420
    expect(scoreOf(y, times, score('peak-latency', 100, 600))).toBe(301)
    expect(scoreOf(y, times, score('peak-amplitude', 100, 600))).toBeCloseTo(4, 12)
    // the middle decides on which side of a window's limit it lies
    expect(scoreOf(y, times, score('peak-latency', 300, 600))).toBe(301)
    expect(scoreOf(y, times, score('peak-latency', 302, 600))).toBe('no peak')
    expect(scoreOf(y, times, score('peak-latency', 100, 300))).toBe('no peak')
  })

  test('between two equal samples is the parabola’s vertex', () => {
    const y = from((t) => 6 - ((t - 301) / 40) ** 2)
    expect(scoreOf(y, times, score('peak-latency', 200, 400))).toBeCloseTo(301, 9)
    expect(scoreOf(y, times, score('peak-amplitude', 200, 400))).toBeCloseTo(6, 12)
  })

  test('is not found in a constant, nor at the very ends of the epoch', () => {
    expect(
      scoreOf(
        from(() => 3),
        times,
        score('peak-latency', -200, 800),
      ),
    ).toBe('no peak')
    expect(
      scoreOf(
        from((t) => (t === -200 ? 1 : t === 800 ? 2 : 0)),
        times,
        score('peak-latency', -200, 800),
      ),
    ).toBe('no peak')
    expect(
      scoreOf(
        from((t) => (t >= 700 ? 1 : 0)),
        times,
        score('peak-latency', -200, 800),
      ),
    ).toBe('no peak')
  })

  test('agrees with a slow search written from the definition', () => {
    const slow = (y: Float64Array, fromMs: number, toMs: number): number => {
      let best = -1
      for (let i = 1; i < y.length - 1; i++) {
        if (times[i] < fromMs || times[i] > toMs) continue
        let peak = true
        y.forEach((v, k) => {
          if (k !== i && Math.abs(times[k] - times[i]) <= 10 && v >= y[i]) peak = false
        })
        if (peak && (best < 0 || y[i] > y[best])) best = i
      }
      return best
    }
    // a linear congruential generator (constants of Numerical Recipes): rough values without plateaus
    const noisy = fc.integer({ min: 0, max: 2 ** 31 }).map((seed) => {
      let state = seed
      return times.map(() => (state = (Math.imul(state, 1664525) + 1013904223) >>> 0) / 2 ** 32)
    })
    fc.assert(
      fc.property(
        noisy,
        fc.integer({ min: -200, max: 300 }),
        fc.integer({ min: 10, max: 500 }),
        (values, fromMs, length) => {
          const y = values
          const expected = slow(y, fromMs, fromMs + length)
          const found = findPeak(y, times, { fromMs, toMs: fromMs + length }, 'positive')
          if (expected < 0) expect(found).toBe('no peak')
          else expect((found as { first: number }).first).toBe(expected)
        },
      ),
      { numRuns: 40 },
    )
  })
})

describe('fractional-area latency', () => {
  test('of a symmetric shape is its middle', () => {
    expect(scoreOf(triangle(300, 100, 4), times, score('area-latency', 100, 500))).toBeCloseTo(300, 9)
    expect(
      scoreOf(gaussian(351, 120, -4), times, score('area-latency', -100, 800, { polarity: 'negative' })),
    ).toBeCloseTo(351, 6)
  })

  test('divides a box linearly between samples', () => {
    const y = from((t) => (t >= 100 && t <= 300 ? 5 : 0))
    // the window's samples all have 5 µV: the running area is linear in time
    for (const fraction of [0.1, 0.25, 0.333, 0.5, 0.9]) {
      expect(scoreOf(y, times, score('area-latency', 100, 300, { fraction }))).toBeCloseTo(100 + 200 * fraction, 9)
    }
  })

  test('of a right triangle is where the square root says', () => {
    // y = t from 0 to 400: the area to t is t²/2
    const y = from((t) => (t >= 0 && t <= 400 ? t / 100 : 0))
    expect(scoreOf(y, times, score('area-latency', 0, 400))).toBeCloseTo(400 * Math.SQRT1_2, 2)
  })

  test('is "no area" where the waveform never takes the stated side', () => {
    expect(scoreOf(gaussian(300, 100, -4), times, score('area-latency', 100, 500))).toBe('no area')
    expect(
      scoreOf(
        from(() => 0),
        times,
        score('area-latency', 100, 500),
      ),
    ).toBe('no area')
  })
})

describe('onset latency', () => {
  test('of a linear rise is where the fraction says, between samples', () => {
    const y = triangle(300, 100, 5)
    // the parabola through the tip lies above it; the stated fraction of that
    const top = scoreOf(y, times, score('peak-amplitude', 200, 400)) as number
    for (const fraction of [0.1, 0.5, 0.777]) {
      expect(scoreOf(y, times, score('onset-latency', 200, 400, { fraction }))).toBeCloseTo(
        200 + (100 * fraction * top) / 5,
        9,
      )
    }
  })

  test('of a Gaussian at 50 % is half its full width before the peak', () => {
    expect(scoreOf(gaussian(350, 120, 6), times, score('onset-latency', 250, 450))).toBeCloseTo(290, 2)
    expect(
      scoreOf(gaussian(350, 120, -6), times, score('onset-latency', 250, 450, { polarity: 'negative' })),
    ).toBeCloseTo(290, 2)
  })

  test('looks before the window, and takes the first crossing met going back', () => {
    const y = from((t) => (t < 0 ? 0 : t < 100 ? 4 : t < 150 ? 1 : Math.max(0, 4 - Math.abs(t - 300) / 50)))
    expect(scoreOf(y, times, score('onset-latency', 290, 310))).toBeCloseTo(200, 0)
  })

  test('is "no onset" where the waveform has been up since the epoch began, or its peak is below zero', () => {
    const y = from((t) => 3 + Math.max(0, 2 - Math.abs(t - 300) / 50))
    expect(scoreOf(y, times, score('onset-latency', 200, 400))).toBe('no onset')
    expect(
      scoreOf(
        y.map((v) => v - 10),
        times,
        score('onset-latency', 200, 400),
      ),
    ).toBe('no onset')
  })

  test('at a fraction near 1 stays between the last lower sample and the vertex', () => {
    for (const shift of [-0.9, -0.4, 0, 0.4, 0.9]) {
      const y = from((t) => 6 - ((t - 300 - shift) / 4) ** 2)
      const onset = scoreOf(y, times, score('onset-latency', 280, 320, { fraction: 0.9999 })) as number
      expect(onset).toBeLessThanOrEqual(300 + shift)
      expect(onset).toBeGreaterThan(297)
    }
  })
})

describe('value at a moment', () => {
  test('is a sample, or lies linearly between two', () => {
    const y = gaussian(300, 100, 5)
    expect(scoreOf(y, times, score('moment', 280, 280))).toBe(y[at(280)])
    expect(scoreOf(y, times, score('moment', 280.5, 280.5))).toBeCloseTo(0.75 * y[at(280)] + 0.25 * y[at(282)], 12)
    expect(scoreOf(y, times, score('moment', 800, 800))).toBe(y[y.length - 1])
  })
})

describe('every score', () => {
  const kinds: Score['kind'][] = [
    'mean',
    'area',
    'peak-amplitude',
    'peak-latency',
    'area-latency',
    'onset-latency',
    'moment',
  ]
  const windowOf = (kind: Score['kind'], fromMs: number, toMs: number) =>
    score(kind, fromMs, kind === 'moment' ? fromMs : toMs)

  test('scales with the waveform; latencies do not', () => {
    fc.assert(
      fc.property(
        smooth,
        fc.constantFrom(...kinds),
        fc.double({ min: 0.01, max: 100, noNaN: true }),
        (y, kind, factor) => {
          const s = windowOf(kind, 0, 650)
          const plain = scoreOf(y, times, s)
          const scaled = scoreOf(
            y.map((v) => v * factor),
            times,
            s,
          )
          if (typeof plain === 'string') return void expect(scaled).toBe(plain)
          expect(scaled).toBeCloseTo(kind.endsWith('latency') ? plain : plain * factor, 7)
        },
      ),
    )
  })

  test('flips its sign with the waveform and the polarity; latencies do not', () => {
    fc.assert(
      fc.property(smooth, fc.constantFrom(...kinds), (y, kind) => {
        const s = windowOf(kind, 0, 650)
        const plain = scoreOf(y, times, s)
        const flipped = scoreOf(
          y.map((v) => -v),
          times,
          { ...s, polarity: 'negative' },
        )
        if (typeof plain === 'string') return void expect(flipped).toBe(plain)
        expect(flipped).toBeCloseTo(kind.endsWith('latency') ? plain : -plain, 12)
      }),
    )
  })

  test('moves with the waveform: a shift by whole samples shifts latencies and nothing else', () => {
    fc.assert(
      fc.property(smooth, fc.constantFrom(...kinds), fc.integer({ min: 1, max: 40 }), (y, kind, k) => {
        const moved = new Float64Array(y.length)
        for (let i = 0; i < y.length; i++) moved[i] = i < k ? y[0] : y[i - k]
        const plain = scoreOf(y, times, windowOf(kind, 0, 650))
        const shifted = scoreOf(moved, times, windowOf(kind, 2 * k, 650 + 2 * k))
        if (typeof plain === 'string') return void expect(shifted).toBe(plain)
        expect(shifted).toBeCloseTo(kind.endsWith('latency') ? plain + 2 * k : plain, 8)
      }),
    )
  })

  test.each(['mean', 'area', 'peak-amplitude', 'moment'] as const)(
    '%s is the weighted sum of its weights with any baseline',
    (kind) => {
      fc.assert(
        fc.property(
          smooth,
          fc.double({ min: -20, max: 20, noNaN: true }),
          fc.constantFrom<'none' | { fromMs: number; toMs: number }>(
            'none',
            { fromMs: -200, toMs: 0 },
            { fromMs: -50.3, toMs: 21 },
          ),
          fc.double({ min: 0, max: 200, noNaN: true }),
          (smoothY, offset, baseline, fromMs) => {
            const y = smoothY.map((v) => v + offset)
            const s = windowOf(kind, fromMs, 650)
            const value = scoreOf(correctBaseline(y, times, baseline), times, s)
            if (typeof value === 'string')
              return void expect(() => scoreWeights(s, baseline, times, y)).toThrow(/need a peak/)
            const weights = scoreWeights(s, baseline, times, y)
            expect(Math.abs(dot(weights, y) - value)).toBeLessThan(1e-12 * (1 + Math.abs(offset)) * 30)
            const sum = weights.reduce((a, b) => a + b, 0)
            if (baseline !== 'none') expect(Math.abs(sum)).toBeLessThan(1e-12)
          },
        ),
      )
    },
  )

  test.each(['peak-latency', 'area-latency', 'onset-latency'] as const)('%s has no weights', (kind) => {
    expect(() => scoreWeights(score(kind, 0, 400), 'none', times, gaussian(300, 100, 1))).toThrow(RangeError)
    expect(() => scoreWeights(score(kind, 0, 400), 'none', times)).toThrow(/must be a weighted sum .* was/)
  })
})

describe('bad input', () => {
  const y = gaussian(300, 100, 5)
  const broken = y.slice()
  broken[3] = NaN
  test.each<[string, () => unknown, RegExp]>([
    [
      'a window that leaves the epoch',
      () => scoreOf(y, times, score('mean', 600, 900)),
      /score window must lie in the epoch \(-200 to 800 ms\), was 600 to 900 ms/,
    ],
    [
      'a window between two samples',
      () => scoreOf(y, times, score('mean', 80.5, 81.5)),
      /must hold at least one sample/,
    ],
    [
      'a window that ends before it begins',
      () => scoreOf(y, times, score('mean', 100, 50)),
      /must begin before it ends/,
    ],
    ['an open window', () => scoreOf(y, times, score('mean', NaN, 50)), /must have finite limits/],
    ['an area of one sample', () => scoreOf(y, times, score('area', 80, 81)), /an area needs at least 2 samples/],
    [
      'an area latency of one sample',
      () => scoreOf(y, times, score('area-latency', 80, 81)),
      /an area needs at least 2 samples/,
    ],
    [
      'a value that is not a number',
      () => scoreOf(broken, times, score('mean', 80, 140)),
      /y\[3\] \(at -194 ms\) was NaN/,
    ],
    [
      'a length that does not fit',
      () => scoreOf(y.slice(1), times, score('mean', 80, 140)),
      /one value per time \(501\), had 500/,
    ],
    [
      'a fraction of 1',
      () => scoreOf(y, times, score('onset-latency', 80, 400, { fraction: 1 })),
      /fraction must lie between 0 and 1, was 1/,
    ],
    [
      'a moment with two limits',
      () => scoreOf(y, times, score('moment', 80, 90)),
      /toMs of a moment must equal its fromMs/,
    ],
    ['a moment outside', () => scoreOf(y, times, score('moment', 900, 900)), /must lie in the epoch/],
    [
      'a peak without a waveform',
      () => scoreWeights(score('peak-amplitude', 80, 140), 'none', times),
      /need the filtered waveform/,
    ],
    [
      'a baseline outside',
      () => correctBaseline(y, times, { fromMs: -300, toMs: 0 }),
      /baseline window must lie in the epoch/,
    ],
    [
      'uneven times',
      () =>
        scoreOf(
          y,
          times.map((t, i) => (i === 7 ? t + 1 : t)),
          score('mean', 80, 140),
        ),
      /evenly spaced .* timesMs\[7\]/,
    ],
    [
      'descending times',
      () =>
        scoreOf(
          y,
          times.map((t) => -t),
          score('mean', 80, 140),
        ),
      /must ascend/,
    ],
  ])('%s is refused in words', (_, act, message) => {
    expect(act).toThrow(RangeError)
    expect(act).toThrow(message)
  })

  test('a limit less than a step outside the samples is none: no sample is missing', () => {
    const odd = epochTimesMs(512, { fromMs: -200, toMs: 800 })
    expect(odd[odd.length - 1]).toBeLessThan(800)
    expect(
      scoreOf(
        odd.map(() => 2),
        odd,
        score('mean', 500, 800),
      ),
    ).toBe(2)
  })
})
