import { describe, expect, test } from 'vitest'
import { defaultNoise, noiseDensityAt, type NoiseSpec } from '../../src/erp/noise.ts'
import { scoreWeights } from '../../src/erp/score.ts'
import { epochTimesMs } from '../../src/erp/waveform.ts'
import { effectiveWindow } from '../../src/evidence/effective-window.ts'
import { extrapolatedShare } from '../../src/evidence/extrapolated-share.ts'
import { scoreVariance } from '../../src/evidence/score-noise.ts'
import { directTransform } from '../../src/evidence/window-power.ts'
import { designChain } from '../../src/filter/index.ts'

const fs = 250
const timesMs = epochTimesMs(fs, { fromMs: -200, toMs: 800 })
const score = { kind: 'mean', fromMs: 300, toMs: 500, polarity: 'positive' } as const
const w = scoreWeights(score, { fromMs: -200, toMs: 0 }, timesMs)

describe('extrapolatedShare', () => {
  test('is the integral below over the integral of everything', () => {
    const noise: NoiseSpec = defaultNoise()
    const density = noiseDensityAt(noise)
    for (const limit of [0.5, 2, 10]) {
      // Simpson in log frequency: slow and plain
      const points = 20_000
      const h = Math.log(limit / 1e-5) / points
      let sum = 0
      for (let j = 0; j <= points; j++) {
        const hz = 1e-5 * Math.exp(j * h)
        const { re, im } = directTransform(w, hz / fs)
        sum += ((j === 0 || j === points ? 1 : j % 2 ? 4 : 2) * density(hz) * (re * re + im * im) * hz * h) / 3
      }
      expect(extrapolatedShare(w, noise, fs, limit)).toBeCloseTo(sum / scoreVariance(w, noise, fs, 1), 5)
    }
  })

  test('grows with the limit from nothing to everything, and falls with a high-pass', () => {
    const shares = [0, 0.1, 1, 2, 5, 30, 125, 999].map((hz) => extrapolatedShare(w, defaultNoise(), fs, hz))
    expect(shares[0]).toBe(0)
    for (let i = 1; i < shares.length; i++) expect(shares[i]).toBeGreaterThanOrEqual(shares[i - 1])
    expect(shares[7]).toBeCloseTo(1, 6)
    const chain = designChain(
      [{ design: 'butterworth', pass: 'high', order: 2, cutoffsHz: [2], meaning: 'half-amplitude', direction: 'both' }],
      fs,
    )
    const g = effectiveWindow(chain, w, 'epochs').values
    expect(extrapolatedShare(g, defaultNoise(), fs, 2)).toBeLessThan(0.6 * shares[3])
  })

  test('refuses a limit that is none', () => {
    expect(() => extrapolatedShare(w, defaultNoise(), fs, NaN)).toThrow(/belowHz must be at least 0/)
  })
})
