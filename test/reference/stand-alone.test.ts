import { applyChain } from '../../src/filter/apply-chain.ts'
import { designChain } from '../../src/filter/index.ts'
import type { StageSpec } from '../../src/filter/index.ts'
import { againstReference, Worst } from './against-reference.ts'
import { randomSignal } from './random-signal.ts'
import type { SignalRecipe } from './random-signal.ts'

interface StandAloneCase {
  samplingRateHz: number
  stages: StageSpec[]
  signal: SignalRecipe
  largestInput: number
  judge: 'scipy' | 'extended precision'
  /** Largest difference between SciPy and the closed form, over the largest input. */
  difference?: number
  at: number[]
  y: number[]
}

againstReference<StandAloneCase>('stand-alone.json', 'make_stand_alone.py', 4, {
  'a waveform that stands alone is filtered as if zeros went on for ever on both sides': (cases) => {
    const worst = new Worst()
    for (const c of cases) {
      const y = applyChain(designChain(c.stages, c.samplingRateHz), randomSignal(c.signal), 'continuous')
      // Some wide band-stops of high order lose more than that in any double-precision cascade, SciPy's included.
      const bound = c.judge === 'scipy' ? 1e-11 : Math.max(1e-11, c.difference ?? 0)
      c.at.forEach((i, n) => {
        const what = () => `sample ${i} of ${c.samplingRateHz} Hz, ${JSON.stringify(c.stages)} (${c.judge})`
        worst.see(Math.abs(y[i]! - c.y[n]!), bound * c.largestInput, what)
      })
    }
    worst.expectWithinBounds()
  },
})
