import { lateOnlyFit } from '../../src/evidence/late-only-fit.ts'
import type { NoiseSpec } from '../../src/erp/index.ts'
import { designChain } from '../../src/filter/index.ts'
import type { StageSpec } from '../../src/filter/index.ts'
import { againstReference, Worst } from './against-reference.ts'

interface FitCase {
  samplingRateHz: number
  stages: StageSpec[]
  extent: 'continuous' | 'epochs'
  noise: NoiseSpec
  trials: number
  t0Ms: number
  early: { fromMs: number; toMs: number }
  startMs: number
  y: number[]
  beta: number
  standardError: number
  constant: number
  noiseScale: number
  alphaScale: number
  lateShare: number
  noiseOfMean: number
  filtered: number[]
  late: number[]
}

const EVERY = 20

function fitted(c: FitCase) {
  const y = Float64Array.from(c.y)
  const timesMs = Float64Array.from(y, (_, i) => c.startMs + (i * 1000) / c.samplingRateHz)
  return lateOnlyFit(y, designChain(c.stages, c.samplingRateHz), { ...c, timesMs })
}

const named = (c: FitCase) =>
  `${c.extent}, white ${c.noise.kind === 'model' && c.noise.whiteUv2PerHz}, ${JSON.stringify(c.stages)}`

// s and a lie at the top of a hill that is flat over 1e-5 of them, and the rest hangs on them
againstReference<FitCase>('late-only-fit.json', 'make_late_only_fit.py', 6, {
  'β, its standard error and c are those of dense matrices in SciPy to 1e-4 standard errors': (cases) => {
    const worst = new Worst()
    for (const c of cases) {
      const { beta, standardError, constant } = fitted(c)
      worst.see(Math.abs(beta - c.beta), 1e-4 * c.standardError, () => `β of ${named(c)}`)
      worst.see(Math.abs(standardError - c.standardError), 1e-4 * c.standardError, () => `error of ${named(c)}`)
      worst.see(Math.abs(constant - c.constant), 1e-4 * c.standardError, () => `c of ${named(c)}`)
    }
    worst.expectWithinBounds()
  },
  's and a are those of dense matrices and another optimiser to 1e-4 (a also to 0.001 µV²/Hz)': (cases) => {
    const worst = new Worst()
    for (const c of cases) {
      const { noiseScale, alphaScale } = fitted(c)
      worst.see(Math.abs(noiseScale - c.noiseScale), 1e-4 * c.noiseScale, () => `s of ${named(c)}`)
      worst.see(Math.abs(alphaScale - c.alphaScale), 1e-4 * c.alphaScale + 1e-3, () => `a of ${named(c)}`)
    }
    worst.expectWithinBounds()
  },
  'the late-only waveform, what the filter makes of it, its share and the noise of the mean are those of dense matrices':
    (cases) => {
      const worst = new Worst()
      for (const c of cases) {
        const { lateWaveform, filtered, lateShare, grounds } = fitted(c)
        c.late.forEach((value, k) => {
          worst.see(Math.abs(lateWaveform.values[EVERY * k]! - value), 2e-3, () => `late sample ${k} of ${named(c)}`)
        })
        c.filtered.forEach((value, k) => {
          worst.see(Math.abs(filtered[EVERY * k]! - value), 2e-4, () => `filtered sample ${k} of ${named(c)}`)
        })
        worst.see(Math.abs(lateShare - c.lateShare), 1e-3 * (1 + Math.abs(c.lateShare)), () => `share of ${named(c)}`)
        worst.see(Math.abs(grounds.noiseOfMeanUv - c.noiseOfMean), 1e-4 * c.noiseOfMean, () => `noise of ${named(c)}`)
      }
      worst.expectWithinBounds()
    },
})
