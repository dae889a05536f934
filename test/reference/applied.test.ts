import { applyChain } from '../../src/filter/apply-chain.ts'
import { designChain } from '../../src/filter/index.ts'
import type { StageSpec } from '../../src/filter/index.ts'
import { againstReference, Worst } from './against-reference.ts'
import { randomSignal } from './random-signal.ts'
import type { SignalRecipe } from './random-signal.ts'

interface AppliedCase {
  samplingRateHz: number
  stages: StageSpec[]
  signal: SignalRecipe
  cutoffRatio: number
  judge: 'scipy' | 'extended precision'
  scipyError?: number
  at: number[]
  y: number[]
  norm: number
  largestInput: number
}

againstReference<AppliedCase>('applied.json', 'make_applied.py', 5, {
  'a filtered epoch equals SciPy to 1e-11 of the largest input (1e-10 below a cutoff of fs/1000)': (cases) => {
    const worst = new Worst()
    for (const c of cases) {
      const y = applyChain(designChain(c.stages, c.samplingRateHz), randomSignal(c.signal), 'epochs')
      const goal = c.cutoffRatio >= 1e-3 ? 1e-11 : 1e-10
      // Some wide band-stops of high order lose more than that in any double-precision cascade, SciPy's included.
      const bound = c.judge === 'scipy' ? goal : Math.max(goal, c.scipyError!)
      const named = (what: string) => () =>
        `${what} of ${c.samplingRateHz} Hz, ${JSON.stringify(c.stages)} (${c.judge})`
      c.at.forEach((i, n) => worst.see(Math.abs(y[i]! - c.y[n]!), bound * c.largestInput, named(`sample ${i}`)))
      // The norm covers the samples between the checkpoints.
      const norm = Math.sqrt(y.reduce((sum, v) => sum + v * v, 0))
      worst.see(Math.abs(norm - c.norm), bound * c.largestInput * Math.sqrt(y.length), named('the norm'))
    }
    worst.expectWithinBounds()
  },

  "the error is no larger than SciPy's own where SciPy is too far off to judge": (cases) => {
    const worst = new Worst()
    const beyond = cases.filter((one) => one.judge === 'extended precision')
    for (const c of beyond) {
      const y = applyChain(designChain(c.stages, c.samplingRateHz), randomSignal(c.signal), 'epochs')
      c.at.forEach((i, n) => {
        worst.see(
          Math.abs(y[i]! - c.y[n]!),
          c.scipyError! * c.largestInput,
          () => `sample ${i} of ${JSON.stringify(c.stages)}`,
        )
      })
    }
    if (beyond.length > 0) worst.expectWithinBounds()
  },
})
