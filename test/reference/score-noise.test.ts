import { noiseAutocovariance, noiseSpectrum, type NoiseModel } from '../../src/erp/index.ts'
import { effectiveWindow } from '../../src/evidence/effective-window.ts'
import { breaksOf } from '../../src/evidence/filtered-noise.ts'
import { scoreVariance, scoreVarianceOfResponse } from '../../src/evidence/score-noise.ts'
import { varianceOfWeights } from '../../src/evidence/variance-of-weights.ts'
import { chainResponse, designChain } from '../../src/filter/index.ts'
import type { StageSpec } from '../../src/filter/index.ts'
import { againstReference, Worst } from './against-reference.ts'

interface NoiseCase {
  samplingRateHz: number
  stages: StageSpec[]
  extent: 'continuous' | 'epochs'
  count: number
  score: { from: number; to: number; baselineTo?: number }
  noise: NoiseModel
  trials: number
  variance: number
}

function weightsOf({ count, score }: NoiseCase): Float64Array {
  const w = new Float64Array(count)
  for (let i = score.from; i <= score.to; i++) w[i] = 1 / (score.to - score.from + 1)
  const { baselineTo } = score
  if (baselineTo !== undefined) for (let i = 0; i <= baselineTo; i++) w[i] -= 1 / (baselineTo + 1)
  return w
}

const told = (c: NoiseCase) => `${c.extent}, ${JSON.stringify(c.stages)}, ${JSON.stringify(c.noise)}`

againstReference<NoiseCase>('score-noise.json', 'make_score_noise.py', 5, {
  "a score's variance is the sum over frequency with SciPy's filters, to 2e-6": (cases) => {
    const worst = new Worst()
    for (const c of cases) {
      const g = effectiveWindow(designChain(c.stages, c.samplingRateHz), weightsOf(c), c.extent)
      const ours = scoreVariance(g.values, c.noise, c.samplingRateHz, c.trials)
      worst.see(Math.abs(ours - c.variance), 2e-6 * c.variance, () => told(c))
    }
    worst.expectWithinBounds()
  },
  'so it is by the response of a continuous chain, to 2e-5': (cases) => {
    const worst = new Worst()
    for (const c of cases) {
      if (c.extent !== 'continuous') continue
      const chain = designChain(c.stages, c.samplingRateHz)
      const response = (hz: Float64Array) => chainResponse(chain, hz)
      const breaks = breaksOf(chain.stages, c.samplingRateHz)
      const ours = scoreVarianceOfResponse(weightsOf(c), response, c.noise, c.samplingRateHz, c.trials, breaks)
      worst.see(Math.abs(ours - c.variance), 2e-5 * c.variance, () => told(c))
    }
    worst.expectWithinBounds()
  },
  'so it is by the autocovariance on an epoch, to 2e-6': (cases) => {
    const worst = new Worst()
    for (const c of cases) {
      const lines = c.noise.lines.some((line) => !line.locked)
      if (c.extent !== 'epochs' || lines || c.stages.some((stage) => stage.design === 'amplifier')) continue
      const g = effectiveWindow(designChain(c.stages, c.samplingRateHz), weightsOf(c), 'epochs')
      const covariance = noiseAutocovariance(noiseSpectrum(c.noise), c.samplingRateHz, g.values.length)
      const ours = varianceOfWeights(g.values, covariance) / c.trials
      worst.see(Math.abs(ours - c.variance), 2e-6 * c.variance, () => told(c))
    }
    worst.expectWithinBounds()
  },
})
