import { describe, expect, test } from 'vitest'
import { noiseAutocovariance, noiseSpectrum } from '../../src/erp/noise-autocovariance.ts'
import { defaultNoise, noiseDensityAt, type NoiseModel, type NoiseSpec } from '../../src/erp/noise.ts'
import { seededRandom } from '../../src/erp/seeded-random.ts'
import { drawNoise, noiseSource } from '../../src/erp/simulate-noise.ts'

const silent: NoiseModel = {
  kind: 'model',
  exponent: 1,
  levelAt1HzUv2PerHz: 0,
  flatBelowHz: 0.02,
  whiteUv2PerHz: 0,
  lines: [],
}

/** Simpson's rule in ln f between kinks, flat below the lowest: a slow second way. */
function covarianceAt(noise: NoiseSpec, fs: number, lag: number, kinksHz: number[]): number {
  const density = noiseDensityAt(noise)
  const turn = (2 * Math.PI * lag) / fs
  const limits = [...kinksHz, fs / 2]
  let sum = density(0) * (lag === 0 ? limits[0] : Math.sin(turn * limits[0]) / turn)
  for (let p = 0; p + 1 < limits.length; p++) {
    const points = 40_000
    const h = Math.log(limits[p + 1] / limits[p]) / points
    for (let j = 0; j <= points; j++) {
      const hz = limits[p] * Math.exp(j * h)
      sum += ((j === 0 || j === points ? 1 : j % 2 === 1 ? 4 : 2) * density(hz) * Math.cos(turn * hz) * hz * h) / 3
    }
  }
  return sum
}

describe('noiseAutocovariance', () => {
  test.each<[string, NoiseSpec, number[]]>([
    ['the default noise', defaultNoise(), [0.02]],
    ['a steep power law', { ...silent, exponent: 2.5, levelAt1HzUv2PerHz: 10 }, [0.02]],
    [
      'a power law that goes on to 0.001 Hz',
      { ...silent, exponent: 1.5, levelAt1HzUv2PerHz: 5, flatBelowHz: 0.001 },
      [0.001],
    ],
    [
      'a table',
      { kind: 'table', hz: Float64Array.of(0.5, 2, 9, 11, 40), uv2PerHz: Float64Array.of(60, 9, 6, 4, 0.2) },
      [0.5, 2, 9, 11, 40],
    ],
  ])('of %s is the integral of S·cos, to 1e-7 of the variance', (_, noise, kinks) => {
    const fs = 250
    const covariance = noiseAutocovariance(noiseSpectrum(noise), fs, 600)
    for (const lag of [0, 1, 2, 17, 100, 311, 599]) {
      // white noise is Σ at lag 0 only, which Simpson's rule sees as a constant density
      const expected = covarianceAt(noise, fs, lag, kinks)
      expect(Math.abs(covariance[lag] - expected), `lag ${lag}`).toBeLessThan(1e-7 * covariance[0])
    }
  })

  test('of white noise is σ² at lag 0 and nothing else', () => {
    const covariance = noiseAutocovariance(noiseSpectrum({ ...silent, whiteUv2PerHz: 0.4 }), 250, 50)
    expect(covariance[0]).toBeCloseTo(50, 12)
    for (let k = 1; k < 50; k++) expect(Math.abs(covariance[k])).toBeLessThan(1e-12)
  })

  test('of a narrow alpha peak is a slowly dying cosine', () => {
    const alpha = { centreHz: 10, sdHz: 0.05, peakUv2PerHz: 100 }
    const covariance = noiseAutocovariance(noiseSpectrum({ ...silent, alpha }), 250, 1000)
    for (const lag of [0, 12, 333, 999]) {
      const t = lag / 250
      const expected =
        100 * 0.05 * Math.sqrt(2 * Math.PI) * Math.exp(-2 * (Math.PI * 0.05 * t) ** 2) * Math.cos(20 * Math.PI * t)
      expect(Math.abs(covariance[lag] - expected)).toBeLessThan(1e-7 * covariance[0])
    }
  })

  test('refuses lags and rates that are none', () => {
    expect(() => noiseAutocovariance(noiseSpectrum(silent), 250, 0)).toThrow(/lags must be/)
    expect(() => noiseAutocovariance(noiseSpectrum(silent), -1, 5)).toThrow(/samplingRateHz must be/)
    expect(() => noiseSpectrum({ ...silent, exponent: 9 })).toThrow(/noise.exponent/)
  })
})

describe('drawNoise', () => {
  test('has the covariance of the noise, at every lag', () => {
    const fs = 125
    const n = 100
    const noise = defaultNoise()
    const expected = noiseAutocovariance(noiseSpectrum(noise), fs, n)
    const source = noiseSource(noise, fs, n)
    const random = seededRandom(8)
    const count = 6000
    const lags = [0, 1, 5, 12, 40, 99]
    const sums = lags.map(() => 0)
    let squares = 0
    for (let draw = 0; draw < count / 2; draw++) {
      for (const x of drawNoise(source, random)) {
        squares += x[50] * x[50]
        lags.forEach((lag, i) => {
          sums[i] += x[0] * x[lag]
        })
      }
    }
    const c0 = expected[0]
    lags.forEach((lag, i) => {
      // of a product of normals: variance C0² + C²
      const error = Math.sqrt((c0 * c0 + expected[lag] ** 2) / count)
      expect(Math.abs(sums[i] / count - expected[lag]), `lag ${lag}`).toBeLessThan(4 * error)
    })
    expect(Math.abs(squares / count / c0 - 1)).toBeLessThan(4 * Math.sqrt(2 / count))
  })

  test('embeds the noise exactly: the circulant’s own covariance is right to 1e-5', () => {
    for (const noise of [
      defaultNoise(),
      { ...defaultNoise(), exponent: 2, whiteUv2PerHz: 0 },
      { ...defaultNoise(), alpha: { centreHz: 10, sdHz: 0.2, peakUv2PerHz: 30 } },
    ]) {
      const n = 300
      const { scale } = noiseSource(noise, 250, n)
      const expected = noiseAutocovariance(noiseSpectrum(noise), 250, n)
      const fall = expected[0] - Math.min(...expected)
      for (const lag of [0, 1, 10, 150, 299]) {
        let sum = 0
        for (let k = 0; k < scale.length; k++) {
          sum += scale[k] * scale[k] * Math.cos((2 * Math.PI * ((k * lag) % scale.length)) / scale.length)
        }
        expect(Math.abs(sum - expected[lag])).toBeLessThan(1.1e-5 * fall)
      }
    }
  })

  test('draws two averages that are independent of each other, and of N trials with 1/N of the variance', () => {
    const source = noiseSource(defaultNoise(), 125, 64)
    const random = seededRandom(2)
    let [product, first, second] = [0, 0, 0]
    const count = 4000
    for (let i = 0; i < count; i++) {
      const [a, b] = drawNoise(source, random, 25)
      product += a[30] * b[30]
      first += a[30] ** 2
      second += b[30] ** 2
    }
    expect(Math.abs(product / Math.sqrt(first * second))).toBeLessThan(4 / Math.sqrt(count))
    const variance = noiseAutocovariance(noiseSpectrum(defaultNoise()), 125, 1)[0] / 25
    expect(Math.abs((first + second) / (2 * count) / variance - 1)).toBeLessThan(4 / Math.sqrt(count))
  })

  test('lines have a random phase in every trial, and those locked to the event are no noise', () => {
    const lines = [
      { hz: 10, amplitudeUv: 3, locked: false },
      { hz: 7, amplitudeUv: 50, locked: true },
      { hz: 80, amplitudeUv: 50, locked: false },
    ]
    const source = noiseSource({ ...silent, lines }, 125, 250)
    const random = seededRandom(3)
    let mean = 0
    let square = 0
    for (let i = 0; i < 2000; i++) {
      for (const x of drawNoise(source, random)) {
        // a pure tone of amplitude 3 in one trial: its power over whole periods is A²/2
        const power = x.reduce((s, v) => s + v * v, 0) / 250
        expect(power).toBeCloseTo(4.5, 9)
        mean += x[0] / 4000
      }
      for (const x of drawNoise(source, random, 9)) square += x[0] ** 2 / 4000
    }
    expect(Math.abs(mean)).toBeLessThan(4 * Math.sqrt(4.5 / 4000))
    expect(Math.abs(square / 0.5 - 1)).toBeLessThan(4 * Math.sqrt(2 / 4000))
  })

  test('the same seed draws the same noise', () => {
    const source = noiseSource(defaultNoise(), 125, 50)
    const draw = (seed: number) => drawNoise(source, seededRandom(seed))[0]
    expect(draw(11)).toEqual(draw(11))
    expect(draw(11)).not.toEqual(draw(12))
  })

  test('refuses what it cannot do', () => {
    expect(() => noiseSource(defaultNoise(), 125, 1)).toThrow(/samples must be/)
    expect(() => drawNoise(noiseSource(defaultNoise(), 125, 50), seededRandom(1), 0)).toThrow(
      /trials must be at least 1/,
    )
    expect(() =>
      drawNoise(noiseSource(defaultNoise(), 125, 50), seededRandom(1), 1, [new Float64Array(50), new Float64Array(49)]),
    ).toThrow(/outputs must hold 50 samples, had 49/)
    const steep: NoiseModel = { ...silent, exponent: 4, levelAt1HzUv2PerHz: 10 }
    expect(() => noiseSource(steep, 500, 1500)).toThrow(/must be less steep/)
  })
})
