import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { defaultNoise, noiseDensity, noiseDensityAt, type NoiseModel, type NoiseSpec } from '../../src/erp/noise.ts'
import { scoreWeights, type Score } from '../../src/erp/score.ts'
import { epochTimesMs } from '../../src/erp/waveform.ts'
import { gaussLegendre } from '../../src/evidence/gauss-legendre.ts'
import { lockedLineContribution, scoreVariance, scoreVarianceOfResponse } from '../../src/evidence/score-noise.ts'
import { directTransform, windowPower } from '../../src/evidence/window-power.ts'
import { inverseRealTransform } from '../../src/filter/fourier.ts'

const silent: NoiseModel = {
  kind: 'model',
  exponent: 1,
  levelAt1HzUv2PerHz: 0,
  flatBelowHz: 0.02,
  whiteUv2PerHz: 0,
  lines: [],
}
const early: Score = { kind: 'mean', fromMs: 80, toMs: 140, polarity: 'positive' }

/** mulberry32: a small published generator (public domain), so that draws are the same everywhere. */
function uniform(seed: number): () => number {
  let state = seed
  return () => {
    state = (state + 0x6d2b79f5) | 0
    let t = Math.imul(state ^ (state >>> 15), 1 | state)
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32
  }
}
function gaussian(seed: number): () => number {
  const draw = uniform(seed)
  return () => Math.sqrt(-2 * Math.log(1 - draw())) * Math.cos(2 * Math.PI * draw())
}
const random = (n: number, seed: number) => Float64Array.from({ length: n }, gaussian(seed))

/** Simpson's rule in ln f. */
function simpsonInLog(f: (hz: number) => number, fromHz: number, toHz: number, points: number): number {
  const h = Math.log(toHz / fromHz) / points
  let sum = 0
  for (let j = 0; j <= points; j++) {
    const hz = fromHz * Math.exp(j * h)
    sum += (j === 0 || j === points ? 1 : j % 2 === 1 ? 4 : 2) * f(hz) * hz
  }
  return (sum * h) / 3
}

describe('gaussLegendre', () => {
  test('integrates every polynomial of its degree exactly', () => {
    const { nodes, weights } = gaussLegendre(8)
    for (let degree = 0; degree <= 15; degree++) {
      const sum = nodes.reduce((s, x, i) => s + weights[i] * x ** degree, 0)
      expect(sum).toBeCloseTo(degree % 2 === 0 ? 2 / (degree + 1) : 0, 14)
    }
    expect(() => gaussLegendre(0)).toThrow(RangeError)
  })
})

describe('windowPower', () => {
  test('is the squared transform at any frequency', () => {
    for (const n of [1, 2, 7, 64, 700]) {
      const g = random(n, 3 + n)
      const power = windowPower(g, 500)
      const most = g.reduce((s, v) => s + v * v, 0)
      const draw = uniform(5)
      for (let i = 0; i < 200; i++) {
        const hz = 250 * draw() ** 3
        const { re, im } = directTransform(g, hz / 500)
        expect(Math.abs(power(hz) - re * re - im * im)).toBeLessThan(2e-6 * most)
      }
    }
    expect(windowPower(new Float64Array(5), 500)(10)).toBe(0)
  })

  test('keeps its digits near 0 Hz, where a window with a baseline has next to nothing', () => {
    const w = scoreWeights(early, { fromMs: -200, toMs: 0 }, epochTimesMs(500, { fromMs: -400, toMs: 1000 }))
    // the means of the two windows lie 210 ms apart: |W| goes to 2πf·0.21 s
    for (const hz of [1e-4, 1e-3, 1e-2])
      expect(windowPower(w, 500)(hz) / (2 * Math.PI * hz * 0.21) ** 2).toBeCloseTo(1, 3)
  })
})

describe('scoreVariance', () => {
  test('of white noise of variance σ² is σ²·Σg²/N', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 400 }),
        fc.integer({ min: 1, max: 100 }),
        fc.double({ min: 0.1, max: 30, noNaN: true }),
        (n, trials, sd) => {
          const g = random(n, n)
          const white = { ...silent, whiteUv2PerHz: (2 * sd * sd) / 500 }
          const expected = (sd * sd * g.reduce((s, v) => s + v * v, 0)) / trials
          expect(scoreVariance(g, white, 500, trials) / expected).toBeCloseTo(1, 12)
        },
      ),
      { numRuns: 30 },
    )
  })

  test('of white noise by the integral is the same as by Parseval', () => {
    // a table of one density is white, and has no Parseval route
    const table: NoiseSpec = { kind: 'table', hz: Float64Array.of(1), uv2PerHz: Float64Array.of(0.4) }
    for (const n of [1, 2, 3, 31, 500]) {
      const g = random(n, 40 + n)
      const expected = 0.4 * 250 * g.reduce((s, v) => s + v * v, 0)
      expect(Math.abs(scoreVariance(g, table, 500, 1) / expected - 1)).toBeLessThan(1e-6)
    }
  })

  test('of an average falls with N: σ/√N, 4 times less from 16 trials, 10 times from 100', () => {
    const white = { ...silent, whiteUv2PerHz: (2 * 15 * 15) / 500 }
    // Source: notes on signal averaging (notes.milesaron.com), as reported; the second column is a simulation of ours
    // with SD 15, good to 2 %
    const reported = [
      [4, 7.505, 2],
      [16, 3.764, 4],
      [25, 2.996, 5],
      [100, 1.52, 10],
      [400, 0.751, 20],
    ]
    for (const [trials, sd, times] of reported) {
      expect(Math.sqrt(scoreVariance(Float64Array.of(1), white, 500, trials)) / sd).toBeCloseTo(1, 1.5)
      expect(15 / Math.sqrt(scoreVariance(Float64Array.of(1), white, 500, trials))).toBeCloseTo(times, 10)
    }
  })

  test('of a long window equals the integral with every transform summed directly, to 1e-6', () => {
    const fs = 500
    const noise = defaultNoise()
    const density = noiseDensityAt(noise)
    const g = Float64Array.from({ length: 2500 }, (_, m) => Math.exp(-m / 900) * Math.cos(m / 70) - (m < 40 ? 0.3 : 0))
    const { nodes, weights } = gaussLegendre(12)
    let sum = 0
    // finer than any oscillation of |G|² (0.2 Hz) and than any change of S
    let from = 0
    while (from < fs / 2) {
      const to = from < 0.02 ? from + 0.005 : Math.min(fs / 2, from + Math.min(0.15, from / 2))
      const half = (to - from) / 2
      for (let i = 0; i < nodes.length; i++) {
        const hz = from + half * (1 + nodes[i])
        const { re, im } = directTransform(g, hz / fs)
        sum += half * weights[i] * density(hz) * (re * re + im * im)
      }
      from = to
    }
    expect(Math.abs(scoreVariance(g, noise, fs, 1) / sum - 1)).toBeLessThan(1e-6)
  })

  test.each<[string, NoiseSpec]>([
    ['the default noise', defaultNoise()],
    ['a steep power law', { ...silent, exponent: 2, levelAt1HzUv2PerHz: 10 }],
    ['a table', { kind: 'table', hz: Float64Array.of(0.5, 2, 9, 11, 40), uv2PerHz: Float64Array.of(60, 9, 6, 4, 0.2) }],
  ])('equals gᵀCg/N with the autocovariance of %s', (_, noise) => {
    const fs = 250
    const times = epochTimesMs(fs, { fromMs: -200, toMs: 240 })
    const y = times.map((t) => Math.exp(-(((t - 110) / 30) ** 2)))
    const windows = [
      scoreWeights(early, { fromMs: -200, toMs: 0 }, times),
      scoreWeights(early, 'none', times),
      scoreWeights({ ...early, kind: 'peak-amplitude' }, { fromMs: -200, toMs: 0 }, times, y),
    ]
    const lags = times.length
    const density = noiseDensityAt(noise)
    const kinks = noise.kind === 'table' ? [...noise.hz, fs / 2] : [noise.flatBelowHz, fs / 2]
    const covariance = Array.from({ length: lags }, (__, k) => {
      const turn = (2 * Math.PI * k) / fs
      // below the first kink S is constant, and its integral is in closed form
      const flat = density(0) * (k === 0 ? kinks[0] : Math.sin(turn * kinks[0]) / turn)
      const integrand = (hz: number) => density(hz) * Math.cos(turn * hz)
      return kinks.slice(1).reduce((sum, to, i) => sum + simpsonInLog(integrand, kinks[i], to, 12_000), flat)
    })
    for (const g of windows) {
      let quadratic = 0
      for (let i = 0; i < lags; i++)
        for (let j = 0; j < lags; j++) quadratic += g[i] * covariance[Math.abs(i - j)] * g[j]
      expect(Math.abs(scoreVariance(g, noise, fs, 7) / (quadratic / 7) - 1)).toBeLessThan(2e-6)
    }
  })

  test('agrees with 3000 draws of the noise, within their own 99.9 % interval', () => {
    const fs = 500
    const times = epochTimesMs(fs, { fromMs: -400, toMs: 1000 })
    const noise = defaultNoise()
    const size = 16_384
    const stepHz = fs / size
    const hz = Float64Array.from({ length: size / 2 + 1 }, (_, k) => k * stepHz)
    const density = noiseDensity(noise, hz)
    const draw = gaussian(17)
    const w = scoreWeights(early, { fromMs: -200, toMs: 0 }, times)
    let squares = 0
    let count = 0
    // several stretches of one long draw, two epochs apart
    for (let run = 0; run < 300; run++) {
      const scale = (k: number) => (size / 2) * Math.sqrt(density[k] * stepHz)
      const re = hz.map((_, k) => (k === 0 || k === size / 2 ? 0 : scale(k) * draw()))
      const im = hz.map((_, k) => (k === 0 || k === size / 2 ? 0 : scale(k) * draw()))
      const x = inverseRealTransform(re, im, size)
      for (let start = 0; start + 1400 < size && start < 14_000; start += 1400) {
        let value = 0
        for (let i = 0; i < w.length; i++) value += w[i] * x[start + i]
        squares += value * value
        count++
      }
    }
    expect(count).toBe(3000)
    const variance = scoreVariance(w, noise, fs, 1)
    expect(Math.abs(squares / count / variance - 1)).toBeLessThan(3.29 * Math.sqrt(2 / count))
    // 40 trials: the order of 0.9 µV
    expect(Math.sqrt(variance / 40)).toBeCloseTo(0.93, 2)
  })

  test('is the same for a window padded with zeros, moved, turned round or negated', () => {
    const g = random(60, 8)
    const padded = new Float64Array(400)
    padded.set(g, 133)
    const variance = scoreVariance(g, defaultNoise(), 500, 1)
    expect(scoreVariance(padded, defaultNoise(), 500, 1) / variance).toBeCloseTo(1, 6)
    expect(scoreVariance(g.slice().reverse(), defaultNoise(), 500, 1) / variance).toBeCloseTo(1, 6)
    expect(
      scoreVariance(
        g.map((v) => -v),
        defaultNoise(),
        500,
        1,
      ),
    ).toBe(variance)
  })

  test('finds an alpha peak far narrower than the window can resolve', () => {
    const g = random(30, 9)
    const alpha = { centreHz: 10, sdHz: 0.01, peakUv2PerHz: 100 }
    const { re, im } = directTransform(g, 10 / 500)
    const expected = 100 * 0.01 * Math.sqrt(2 * Math.PI) * (re * re + im * im)
    expect(scoreVariance(g, { ...silent, alpha }, 500, 1) / expected).toBeCloseTo(1, 4)
  })

  test('adds mains of random phase as (A²/2)·|G(f₀)|²/N, and a locked line not at all', () => {
    const g = random(100, 10)
    const { re, im } = directTransform(g, 50 / 500)
    const lines = [{ hz: 50, amplitudeUv: 3, locked: false }]
    expect(scoreVariance(g, { ...silent, lines }, 500, 20)).toBeCloseTo((4.5 * (re * re + im * im)) / 20, 10)
    expect(scoreVariance(g, { ...silent, lines: [{ ...lines[0], locked: true }] }, 500, 20)).toBe(0)
    expect(scoreVariance(g, { ...silent, lines: [{ ...lines[0], hz: 250 }] }, 500, 20)).toBe(0)
    // a line of random phase: the mean square of the score over phases
    let squares = 0
    for (let k = 0; k < 16; k++) {
      let score = 0
      g.forEach((v, m) => {
        score += v * 3 * Math.cos((2 * Math.PI * 50 * m) / 500 + (2 * Math.PI * k) / 16)
      })
      squares += score * score
    }
    expect(scoreVariance(g, { ...silent, lines }, 500, 1)).toBeCloseTo(squares / 16, 9)
  })

  test.each<[string, () => unknown, RegExp]>([
    ['no trials', () => scoreVariance(Float64Array.of(1), silent, 500, 0), /trials must be at least 1, was 0/],
    ['a bad window', () => scoreVariance(Float64Array.of(1, NaN), silent, 500, 1), /window\[1\] was NaN/],
    ['a bad rate', () => scoreVariance(Float64Array.of(1), silent, 0, 1), /samplingRateHz must be positive/],
    ['a bad noise', () => scoreVariance(Float64Array.of(1), { ...silent, exponent: 9 }, 500, 1), /noise.exponent/],
  ])('refuses %s', (_, act, message) => {
    expect(act).toThrow(RangeError)
    expect(act).toThrow(message)
  })
})

describe('lockedLineContribution', () => {
  test('is the score of the tone itself', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 200 }),
        fc.double({ min: -7, max: 7, noNaN: true }),
        fc.double({ min: 1, max: 240, noNaN: true }),
        fc.integer({ min: -300, max: 300 }),
        (n, phaseRad, hz, start) => {
          const g = random(n, n + 1)
          const startMs = start * 2
          let score = 0
          g.forEach((v, m) => {
            score += v * 1.5 * Math.cos((2 * Math.PI * hz * (startMs + 2 * m)) / 1000 + phaseRad)
          })
          expect(lockedLineContribution(g, startMs, 500, { hz, amplitudeUv: 1.5, locked: true, phaseRad })).toBeCloseTo(
            score,
            8,
          )
        },
      ),
    )
  })

  test('refuses a line that is not finite', () => {
    expect(() => lockedLineContribution(Float64Array.of(1), 0, 500, { hz: NaN, amplitudeUv: 1, locked: true })).toThrow(
      RangeError,
    )
  })
})

describe('scoreVarianceOfResponse', () => {
  const times = epochTimesMs(500, { fromMs: -400, toMs: 1000 })
  const baseline = { fromMs: -200, toMs: 0 }

  /** The transform of a kernel, by direct sums. */
  const responseOf = (kernel: Float64Array) => (hz: Float64Array) => {
    const re = new Float64Array(hz.length)
    const im = new Float64Array(hz.length)
    hz.forEach((f, i) => {
      const h = directTransform(kernel, f / 500)
      re[i] = h.re
      im[i] = h.im
    })
    return { re, im }
  }
  /** g of a kernel: the weights correlated with it. */
  const windowOf = (weights: Float64Array, kernel: Float64Array) => {
    const g = new Float64Array(weights.length + kernel.length - 1)
    for (let n = 0; n < weights.length; n++) {
      if (weights[n] === 0) continue
      for (let k = 0; k < kernel.length; k++) g[n + kernel.length - 1 - k] += weights[n] * kernel[k]
    }
    return g
  }

  test('with no filter is the window’s own variance', () => {
    const unity = (hz: Float64Array) => ({ re: hz.map(() => 1), im: new Float64Array(hz.length) })
    for (const score of [early, { ...early, fromMs: 300, toMs: 700 }]) {
      for (const zero of [baseline, 'none'] as const) {
        const w = scoreWeights(score, zero, times)
        const fast = scoreVarianceOfResponse(w, unity, defaultNoise(), 500, 40)
        expect(Math.abs(fast / scoreVariance(w, defaultNoise(), 500, 40) - 1)).toBeLessThan(1e-6)
      }
    }
  })

  test('equals the long window’s variance to 1e-5 for a first-order high-pass with a long tail', () => {
    // y[n] = x[n] − (1 − p)·Σ p^(k−1)·x[n − k], cut where p^k < 1e-13
    for (const p of [0.999, 0.98]) {
      const length = Math.ceil(Math.log(1e-13) / Math.log(p))
      const kernel = Float64Array.from({ length }, (_, k) => (k === 0 ? 1 : -(1 - p) * p ** (k - 1)))
      for (const zero of [baseline, 'none'] as const) {
        const w = scoreWeights(early, zero, times)
        const exact = (hz: Float64Array) => {
          const re = new Float64Array(hz.length)
          const im = new Float64Array(hz.length)
          hz.forEach((f, i) => {
            // (1 − z⁻¹)/(1 − p·z⁻¹)
            const c = Math.cos((2 * Math.PI * f) / 500)
            const s = Math.sin((2 * Math.PI * f) / 500)
            const bottom = (1 - p * c) ** 2 + (p * s) ** 2
            re[i] = ((1 - c) * (1 - p * c) + s * p * s) / bottom
            im[i] = (s * (1 - p * c) - (1 - c) * p * s) / bottom
          })
          return { re, im }
        }
        const fast = scoreVarianceOfResponse(w, exact, defaultNoise(), 500, 1)
        expect(Math.abs(fast / scoreVariance(windowOf(w, kernel), defaultNoise(), 500, 1) - 1)).toBeLessThan(1e-5)
      }
    }
  })

  test('equals it for a long kernel with a narrow transition, given breaks around it', () => {
    // a Hamming sinc high-pass at 1 Hz, 0.2 Hz wide: 8251 taps at 500 Hz
    const taps = 8251
    const low = Float64Array.from({ length: taps }, (_, k) => {
      const t = k - (taps - 1) / 2
      const window = 0.54 - 0.46 * Math.cos((2 * Math.PI * k) / (taps - 1))
      return window * (t === 0 ? 2 / 500 : Math.sin((2 * Math.PI * t) / 500) / (Math.PI * t))
    })
    const sum = low.reduce((s, v) => s + v, 0)
    const kernel = low.map((v, k) => (k === (taps - 1) / 2 ? 1 : 0) - v / sum)
    const w = scoreWeights(early, baseline, times)
    const breaks = [
      ...Array.from({ length: 27 }, (_, k) => k * 0.1),
      ...Array.from({ length: 30 }, (_, k) => 3 + k * 0.4),
    ]
    const noise = defaultNoise()
    const long = scoreVariance(windowOf(w, kernel), noise, 500, 1)
    expect(Math.abs(scoreVarianceOfResponse(w, responseOf(kernel), noise, 500, 1, breaks) / long - 1)).toBeLessThan(
      1e-5,
    )
  })

  test('adds lines of random phase through the response', () => {
    const kernel = random(21, 77)
    const w = scoreWeights(early, baseline, times)
    const noise: NoiseModel = {
      ...defaultNoise(),
      lines: [
        { hz: 60, amplitudeUv: 4, locked: false },
        { hz: 75, amplitudeUv: 9, locked: true },
      ],
    }
    const long = scoreVariance(windowOf(w, kernel), noise, 500, 12)
    expect(Math.abs(scoreVarianceOfResponse(w, responseOf(kernel), noise, 500, 12) / long - 1)).toBeLessThan(1e-5)
  })

  test('asks for a few hundred frequencies, the same array every time', () => {
    const w = scoreWeights(early, baseline, times)
    const noise = defaultNoise()
    const asked: Float64Array[] = []
    const unity = (hz: Float64Array) => {
      asked.push(hz)
      return { re: hz.map(() => 1), im: new Float64Array(hz.length) }
    }
    scoreVarianceOfResponse(w, unity, noise, 500, 1)
    scoreVarianceOfResponse(w, unity, noise, 500, 1)
    expect(asked[0]).toBe(asked[1])
    expect(asked[0].length).toBeLessThan(900)
  })
})
