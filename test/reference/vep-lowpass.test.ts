import { describe, test } from 'vitest'
import { scoreOf } from '../../src/erp/index.ts'
import { applyChain } from '../../src/filter/apply-chain.ts'
import { designChain } from '../../src/filter/index.ts'
import type { StageSpec } from '../../src/filter/index.ts'
import { readReference, Worst } from './against-reference.ts'

interface Peak {
  latencyMs: number
  amplitudeUv: number
}
interface VepCase {
  samplingRateHz: number
  stages: StageSpec[]
  x: number[]
  y: number[]
  peaks: { name: string; polarity: 'positive' | 'negative'; fromMs: number; toMs: number; before: Peak; after: Peak }[]
}

// Source of the waveform: UCI Machine Learning Repository, EEG Database (Begleiter, 1997), mean of 20 trials, channel PO7.
describe('a real visual evoked potential through a 20 Hz low-pass', () => {
  const vep = readReference<VepCase>('vep-lowpass.json').cases[0]!
  const x = Float64Array.from(vep.x)
  const y = applyChain(designChain(vep.stages, vep.samplingRateHz), x, 'epochs')
  const timesMs = Float64Array.from(x, (_, i) => (i * 1000) / vep.samplingRateHz)

  test('every sample of the filtered epoch equals SciPy to 1e-11 of the largest input', () => {
    const worst = new Worst()
    vep.y.forEach((value, i) => worst.see(Math.abs(y[i]! - value), 1e-11 * 25, () => `sample ${i}`))
    worst.expectWithinBounds()
  })

  test('the peaks before and after have the latencies and amplitudes measured by an independent script', () => {
    const worst = new Worst()
    for (const { name, before, after, ...window } of vep.peaks) {
      for (const [wave, peak] of [
        [x, before],
        [y, after],
      ] as const) {
        const latency = scoreOf(wave, timesMs, { kind: 'peak-latency', ...window })
        const amplitude = scoreOf(wave, timesMs, { kind: 'peak-amplitude', ...window })
        worst.see(Math.abs(Number(latency) - peak.latencyMs), 1e-8, () => `the latency of ${name}: ${latency}`)
        worst.see(Math.abs(Number(amplitude) - peak.amplitudeUv), 1e-9, () => `the amplitude of ${name}: ${amplitude}`)
      }
    }
    worst.expectWithinBounds()
  })
})
