import { applyChain } from '../../src/filter/apply-chain.ts'
import { designChain } from '../../src/filter/index.ts'
import type { StageSpec } from '../../src/filter/index.ts'
import { againstReference, Worst } from './against-reference.ts'
import { randomSignal } from './random-signal.ts'
import type { SignalRecipe } from './random-signal.ts'

interface LowCutoffCase {
  samplingRateHz: number
  spec: StageSpec & { pass: 'low' | 'high' | 'band' | 'stop' }
  signal: SignalRecipe
  at: number[]
  y: number[]
  largestInput: number
  scipyError: number
}

// A few roundings of the largest input: no double-precision filter can be asked for less.
const FLOOR = 16 * 2 ** -53

/** An amplifier meets the 20 mV from rest, so that they stay in its states whatever the form: SciPy's error is its measure. */
const hundredfold = ({ spec }: LowCutoffCase) => spec.design === 'butterworth' && ['low', 'high'].includes(spec.pass)

function see(worst: Worst, c: LowCutoffCase, bound: number): void {
  const y = applyChain(designChain([c.spec], c.samplingRateHz), randomSignal(c.signal), 'epochs')
  const allowed = Math.max(bound, FLOOR) * c.largestInput
  c.at.forEach((i, n) => {
    worst.see(
      Math.abs(y[i]! - c.y[n]!),
      allowed,
      () => `sample ${i} of ${c.samplingRateHz} Hz, ${JSON.stringify(c.spec)}`,
    )
  })
}

// An epoch on an electrode offset of 20 mV; the judge is extended precision, and SciPy's own error is the measure.
againstReference<LowCutoffCase>('low-cutoff.json', 'make_low_cutoff.py', 3, {
  'low- and high-passes below fs/1000 are at least a hundred times nearer to the exact result than SciPy': (cases) => {
    const worst = new Worst()
    for (const c of cases.filter(hundredfold)) see(worst, c, c.scipyError / 100)
    worst.expectWithinBounds()
  },

  "band-passes, band-stops and amplifiers are nowhere farther from the exact result than SciPy's": (cases) => {
    const worst = new Worst()
    for (const c of cases.filter((one) => !hundredfold(one))) see(worst, c, c.scipyError)
    worst.expectWithinBounds()
  },
})
