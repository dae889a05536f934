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

// A few roundings of the largest input: no double-precision filter can be asked for less. (A first-order amplifier at 0.1 Hz
// that meets 20 mV from rest has SciPy itself within 1e-14.)
const FLOOR = 32 * 2 ** -53

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
    for (const c of cases.filter((one) => ['low', 'high'].includes(one.spec.pass))) see(worst, c, c.scipyError / 100)
    worst.expectWithinBounds()
  },

  "band-passes and band-stops are nowhere farther from the exact result than SciPy's": (cases) => {
    const worst = new Worst()
    for (const c of cases.filter((one) => ['band', 'stop'].includes(one.spec.pass))) see(worst, c, c.scipyError)
    worst.expectWithinBounds()
  },
})
