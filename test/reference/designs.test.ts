import { expect } from 'vitest'
import { chainResponse, designChain, designStage } from '../../src/filter/index.ts'
import type { StageSpec } from '../../src/filter/index.ts'
import { againstReference, largest, Worst } from './against-reference.ts'

interface DesignCase {
  samplingRateHz: number
  spec: StageSpec
  sections?: number[]
  tapCount?: number
  leadSamples?: number
  at?: number[]
  taps?: number[]
  sum?: number
  norm?: number
  crossingsHz?: number[]
}

const named = (c: DesignCase) => () => `${c.samplingRateHz} Hz, ${JSON.stringify(c.spec)}`
const isMinimumPhase = (c: DesignCase) => 'delay' in c.spec && c.spec.delay === 'minimum-phase'

againstReference<DesignCase>('designs.json', 'make_designs.py', 5, {
  "sections equal SciPy's butter and iirnotch to 1e-12 relative": (cases) => {
    const worst = new Worst()
    for (const c of cases.filter((one) => one.sections)) {
      const { sections } = designStage(c.spec, c.samplingRateHz)
      expect(sections, named(c)()).toHaveLength(c.sections!.length)
      c.sections!.forEach((value, i) => {
        // A coefficient that is zero in SciPy must be zero here.
        worst.see(Math.abs(sections![i]! - value), value === 0 ? Number.MIN_VALUE : 1e-12 * Math.abs(value), () => {
          return `coefficient ${i} (${sections![i]}, SciPy ${value}) of ${named(c)()}`
        })
      })
    }
    worst.expectWithinBounds()
  },

  "taps equal the combination of SciPy's firwin low-passes to 1e-12 of the largest tap": (cases) => {
    const worst = new Worst()
    for (const c of cases.filter((one) => one.taps && !isMinimumPhase(one))) {
      const stage = designStage(c.spec, c.samplingRateHz)
      const taps = stage.taps!
      expect(taps.length, named(c)()).toBe(c.tapCount)
      expect(stage.leadSamples, named(c)()).toBe(c.leadSamples)
      const scale = largest(taps)
      c.at!.forEach((i, n) =>
        worst.see(Math.abs(taps[i]! - c.taps![n]!), 1e-12 * scale, () => `tap ${i} of ${named(c)()}`),
      )
      const sum = taps.reduce((a, b) => a + b, 0)
      worst.see(Math.abs(sum - c.sum!), 1e-12, () => `the sum of the taps of ${named(c)()}`)
      const norm = Math.sqrt(taps.reduce((a, b) => a + b * b, 0))
      worst.see(Math.abs(norm - c.norm!), 1e-12 * c.norm!, () => `the norm of the taps of ${named(c)()}`)
    }
    worst.expectWithinBounds()
  },

  "half-amplitude and half-power cutoffs are met to 1e-6 relative on SciPy's own response and on ours": (cases) => {
    const worst = new Worst()
    for (const c of cases.filter((one) => one.crossingsHz)) {
      const spec = c.spec as StageSpec & { cutoffsHz: number[]; meaning: 'half-amplitude' | 'half-power' }
      const target = spec.meaning === 'half-amplitude' ? 0.5 : Math.SQRT1_2
      const chain = designChain([spec], c.samplingRateHz)
      c.crossingsHz!.forEach((crossing, i) => {
        worst.see(
          Math.abs(crossing - spec.cutoffsHz[i]!),
          1e-6 * spec.cutoffsHz[i]!,
          () => `the cutoff of ${named(c)()}`,
        )
        // Ours must pass the target within 1e-6 of the stated cutoff: below it on one side and above it on the other.
        const f = spec.cutoffsHz[i]!
        const { re, im } = chainResponse(chain, Float64Array.of(f * (1 - 1e-6), f * (1 + 1e-6), f))
        const [before, after] = [Math.hypot(re[0]!, im[0]!) - target, Math.hypot(re[1]!, im[1]!) - target]
        // A minimum-phase stage copies its prototype's amplitude to 1e-5 only.
        if (isMinimumPhase(c)) {
          const miss = Math.abs(Math.hypot(re[2]!, im[2]!) - target)
          worst.see(miss, 1e-5, () => `the gain at the cutoff of ${named(c)()}`)
        } else worst.see(before * after < 0 ? 0 : 1, 0.5, () => `the sides of the cutoff ${f} of ${named(c)()}`)
      })
    }
    worst.expectWithinBounds()
  },
})
