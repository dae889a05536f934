import { chainResponse, designChain, designStage } from '../../src/filter/index.ts'
import type { StageSpec } from '../../src/filter/index.ts'
import { expect } from 'vitest'
import { againstReference, largest, Worst } from './against-reference.ts'

interface MinimumPhaseCase {
  samplingRateHz: number
  spec: StageSpec & { pass: 'low' | 'high' | 'band' | 'stop' }
  hz: number[]
  prototype: number[]
  scipy: number[]
}

/**
 * Number of zeros of Σ taps[k]·z^−k outside |z| = radius, by the argument principle: the turns that the polynomial in
 * w = 1/z makes about 0 while w goes once round the circle of 1/radius.
 */
function zerosOutside(taps: Float64Array, radius: number): number {
  const points = 1 << 16
  let turns = 0
  let last = 0
  for (let i = 0; i <= points; i++) {
    const [wr, wi] = [Math.cos((2 * Math.PI * i) / points) / radius, Math.sin((2 * Math.PI * i) / points) / radius]
    let [re, im] = [0, 0]
    for (let k = taps.length - 1; k >= 0; k--) [re, im] = [re * wr - im * wi + taps[k]!, re * wi + im * wr]
    const angle = Math.atan2(im, re)
    if (i > 0) {
      const step = angle - last
      turns += (step - 2 * Math.PI * Math.round(step / (2 * Math.PI))) / (2 * Math.PI)
    }
    last = angle
  }
  return Math.abs(Math.round(turns))
}

againstReference<MinimumPhaseCase>('minimum-phase.json', 'make_minimum_phase.py', 3, {
  "the amplitude equals the prototype's and SciPy's minimum_phase to 1e-5": (cases) => {
    const worst = new Worst()
    for (const c of cases) {
      const { re, im } = chainResponse(designChain([c.spec], c.samplingRateHz), Float64Array.from(c.hz))
      c.hz.forEach((hz, i) => {
        const gain = Math.hypot(re[i]!, im[i]!)
        worst.see(Math.abs(gain - c.prototype[i]!), 1e-5, () => `${hz} Hz of ${JSON.stringify(c.spec)}`)
        worst.see(Math.abs(gain - c.scipy[i]!), 1e-5, () => `${hz} Hz of ${JSON.stringify(c.spec)} (SciPy)`)
      })
    }
    worst.expectWithinBounds()
  },

  'no zero lies outside a radius of 1.001, and high- and band-passes are 0 at 0 Hz to rounding': (cases) => {
    for (const c of cases) {
      const { taps, leadSamples } = designStage(c.spec, c.samplingRateHz)
      expect(leadSamples).toBe(0)
      if (taps!.length < 700) expect(zerosOutside(taps!, 1.001), JSON.stringify(c.spec)).toBe(0)
      if (c.spec.pass === 'high' || c.spec.pass === 'band') {
        const sum = taps!.reduce((a, b) => a + b, 0)
        expect(Math.abs(sum), JSON.stringify(c.spec)).toBeLessThan(1e-14 * taps!.length * largest(taps!))
      }
    }
  },
})
