import { chainResponse, designChain, stagesGroupDelaySamples } from '../../src/filter/index.ts'
import type { StageSpec } from '../../src/filter/index.ts'
import { againstReference, Worst } from './against-reference.ts'

interface ResponseCase {
  samplingRateHz: number
  spec: StageSpec
  hz: number[]
  re: number[]
  im: number[]
  groupDelaySamples?: (number | null)[]
}

const named = (c: ResponseCase) => `${c.samplingRateHz} Hz, ${JSON.stringify(c.spec)}`
const isMinimumPhase = (c: ResponseCase) => 'delay' in c.spec && c.spec.delay === 'minimum-phase'

againstReference<ResponseCase>('responses.json', 'make_responses.py', 5, {
  'the complex gain as applied equals the reference to 1e-9 of the largest gain': (cases) => {
    const worst = new Worst()
    for (const c of cases.filter((one) => !isMinimumPhase(one))) {
      const { re, im } = chainResponse(designChain([c.spec], c.samplingRateHz), Float64Array.from(c.hz))
      c.hz.forEach((hz, i) => {
        worst.see(Math.hypot(re[i]! - c.re[i]!, im[i]! - c.im[i]!), 1e-9, () => `the gain at ${hz} Hz of ${named(c)}`)
      })
    }
    worst.expectWithinBounds()
  },

  'a minimum-phase stage has the amplitude of its symmetric prototype to 1e-5': (cases) => {
    const worst = new Worst()
    for (const c of cases.filter(isMinimumPhase)) {
      const { re, im } = chainResponse(designChain([c.spec], c.samplingRateHz), Float64Array.from(c.hz))
      c.hz.forEach((hz, i) => {
        worst.see(Math.abs(Math.hypot(re[i]!, im[i]!) - c.re[i]!), 1e-5, () => `the gain at ${hz} Hz of ${named(c)}`)
      })
    }
    worst.expectWithinBounds()
  },

  'the group delay equals the reference to 1e-8 relative': (cases) => {
    const worst = new Worst()
    for (const c of cases.filter((one) => one.groupDelaySamples && !isMinimumPhase(one))) {
      const delays = stagesGroupDelaySamples(designChain([c.spec], c.samplingRateHz).stages, Float64Array.from(c.hz))
      c.hz.forEach((hz, i) => {
        const wanted = c.groupDelaySamples![i]
        if (wanted === null || wanted === undefined) return
        worst.see(Math.abs(delays[i]! - wanted), 1e-8 * Math.max(1, Math.abs(wanted)), () => `${hz} Hz of ${named(c)}`)
      })
    }
    worst.expectWithinBounds()
  },
})
