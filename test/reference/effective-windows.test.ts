import { effectiveWindow } from '../../src/evidence/effective-window.ts'
import { designChain } from '../../src/filter/index.ts'
import type { StageSpec } from '../../src/filter/index.ts'
import { againstReference, Worst } from './against-reference.ts'

interface WindowCase {
  samplingRateHz: number
  stages: StageSpec[]
  extent: 'continuous' | 'epochs'
  count: number
  score: { from: number; to: number; baselineTo?: number }
  at: number[]
  g: number[]
  absoluteSum: number
}

function weightsOf({ count, score }: WindowCase): Float64Array {
  const w = new Float64Array(count)
  for (let i = score.from; i <= score.to; i++) w[i] = 1 / (score.to - score.from + 1)
  const { baselineTo } = score
  if (baselineTo !== undefined) for (let i = 0; i <= baselineTo; i++) w[i]! -= 1 / (baselineTo + 1)
  return w
}

againstReference<WindowCase>('effective-windows.json', 'make_effective_window.py', 3, {
  "the effective window is what filtering every unit impulse with SciPy gives, to 1e-9 of the window's absolute sum": (
    cases,
  ) => {
    const worst = new Worst()
    for (const c of cases) {
      const chain = designChain(c.stages, c.samplingRateHz)
      const { values, start } = effectiveWindow(chain, weightsOf(c), c.extent)
      c.at.forEach((m, n) => {
        const what = () => `sample ${m} (${c.extent}) of ${c.samplingRateHz} Hz, ${JSON.stringify(c.stages)}`
        worst.see(Math.abs((values[m - start] ?? 0) - c.g[n]!), 1e-9 * c.absoluteSum, what)
      })
    }
    worst.expectWithinBounds()
  },
})
