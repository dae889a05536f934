import { describe, expect, test } from 'vitest'
import {
  checkNoise,
  defaultNoise,
  noiseDensity,
  noiseKinksHz,
  noiseLines,
  type NoiseModel,
} from '../../src/erp/noise.ts'

const density = (noise: Parameters<typeof noiseDensity>[0], hz: number) => noiseDensity(noise, Float64Array.of(hz))[0]
const plain: NoiseModel = {
  kind: 'model',
  exponent: 1.5,
  levelAt1HzUv2PerHz: 8,
  flatBelowHz: 0.02,
  whiteUv2PerHz: 0,
  lines: [],
}

describe('noiseDensity', () => {
  test('is a power law above its flat part and constant below it', () => {
    expect(density(plain, 1)).toBeCloseTo(8, 12)
    expect(density(plain, 4)).toBeCloseTo(1, 12)
    expect(density(plain, 0.02)).toBeCloseTo(8 * 0.02 ** -1.5, 9)
    for (const hz of [0, 0.001, 0.0199]) expect(density(plain, hz)).toBe(density(plain, 0.02))
  })

  test('adds drift (flattened too), white and an alpha peak that is Gaussian in power', () => {
    const full: NoiseModel = {
      ...plain,
      driftAt1HzUv2PerHz: 2,
      whiteUv2PerHz: 0.3,
      alpha: { centreHz: 10, sdHz: 2, peakUv2PerHz: 5 },
    }
    expect(density(full, 12)).toBeCloseTo(8 * 12 ** -1.5 + 2 / 144 + 0.3 + 5 * Math.exp(-0.5), 12)
    expect(density(full, 0)).toBeCloseTo(8 * 0.02 ** -1.5 + 2 / 0.0004 + 0.3 + 5 * Math.exp(-12.5), 7)
  })

  test('of a table is a straight line in log-log between its points and constant outside', () => {
    const table = { kind: 'table' as const, hz: Float64Array.of(1, 10, 100), uv2PerHz: Float64Array.of(100, 1, 0.25) }
    expect(density(table, 2)).toBeCloseTo(25, 12)
    expect(density(table, Math.sqrt(1000))).toBeCloseTo(0.5, 12)
    expect(density(table, 10)).toBe(1)
    expect(density(table, 0.1)).toBe(100)
    expect(density(table, 400)).toBe(0.25)
    const zero = { kind: 'table' as const, hz: Float64Array.of(1, 3), uv2PerHz: Float64Array.of(4, 0) }
    expect(density(zero, 2)).toBe(2)
  })

  test('of the default is that of an adult at rest: standard deviation 10 to 20 µV, exponent 1 to 2', () => {
    // Source: the form from Gerster et al. 2022; both ranges from memory, medium
    const noise = defaultNoise()
    expect(noise.exponent).toBeGreaterThanOrEqual(1)
    expect(noise.exponent).toBeLessThanOrEqual(2)
    const n = 200_000
    const f = Float64Array.from({ length: n }, (_, i) => ((i + 0.5) * 250) / n)
    const sd = Math.sqrt(noiseDensity(noise, f).reduce((s, v) => s + v, 0) * (250 / n))
    expect(sd).toBeGreaterThan(14.5)
    expect(sd).toBeLessThan(15.5)
  })

  test('tells where an integral must begin a new piece, and its lines', () => {
    expect(noiseKinksHz(plain)).toEqual([0.02])
    expect(noiseKinksHz({ kind: 'table', hz: Float64Array.of(1, 2), uv2PerHz: Float64Array.of(1, 2) })).toEqual([1, 2])
    expect(noiseLines({ kind: 'table', hz: Float64Array.of(1), uv2PerHz: Float64Array.of(1) })).toEqual([])
    expect(noiseLines({ ...plain, lines: [{ hz: 50, amplitudeUv: 2, locked: false }] }).length).toBe(1)
  })
})

describe('checkNoise', () => {
  test.each<[string, Parameters<typeof checkNoise>[0], RegExp]>([
    ['exponent', { ...plain, exponent: NaN }, /noise.exponent must lie between 0 and 4, was NaN/],
    ['flat part', { ...plain, flatBelowHz: 0 }, /noise.flatBelowHz must lie between/],
    ['level', { ...plain, levelAt1HzUv2PerHz: -1 }, /levelAt1HzUv2PerHz .* was -1/],
    ['alpha', { ...plain, alpha: { centreHz: 10, sdHz: 0, peakUv2PerHz: 1 } }, /alpha.sdHz .* was 0/],
    ['line', { ...plain, lines: [{ hz: 0, amplitudeUv: 1, locked: false }] }, /lines\[0\].hz .* was 0/],
    [
      'phase',
      { ...plain, lines: [{ hz: 50, amplitudeUv: 1, locked: true, phaseRad: NaN }] },
      /lines\[0\].phaseRad must be finite/,
    ],
    [
      'table order',
      { kind: 'table', hz: Float64Array.of(2, 1), uv2PerHz: Float64Array.of(1, 1) },
      /must be positive and ascend, hz\[1\] was 1/,
    ],
    [
      'table value',
      { kind: 'table', hz: Float64Array.of(1, 2), uv2PerHz: Float64Array.of(1, -1) },
      /not negative, uv2PerHz\[1\] was -1/,
    ],
    [
      'table length',
      { kind: 'table', hz: Float64Array.of(1, 2), uv2PerHz: Float64Array.of(1) },
      /of one length .* were 2 and 1/,
    ],
  ])('refuses a bad %s', (_, noise, message) => {
    expect(() => checkNoise(noise)).toThrow(RangeError)
    expect(() => noiseDensity(noise, Float64Array.of(1))).toThrow(message)
  })
})
