import type { Component } from '../../src/erp/component.ts'
import type { Baseline } from '../../src/erp/baseline.ts'
import type { Score } from '../../src/erp/score.ts'
import { momentRows, traceByMoment } from '../../src/evidence/trace-by-moment.ts'
import { traceByComponent } from '../../src/evidence/trace-by-component.ts'
import { traceByStage } from '../../src/evidence/trace-by-stage.ts'
import type { TraceInput } from '../../src/evidence/trace-input.ts'
import { isTraced, tracedWeights } from '../../src/evidence/traced-weights.ts'
import { designChain, type StageSpec } from '../../src/filter/index.ts'
import { againstReference, Worst } from './against-reference.ts'

interface TraceCase {
  samplingRateHz: number
  stages: StageSpec[]
  extent: 'continuous' | 'epochs'
  count: number
  score: { from: number; to: number; baselineTo?: number }
  cuts: number[]
  shares: number[]
  value: number
  components: number[]
  stagesUpTo: number[]
  stagesAlone: number[]
}

/** The same three Gaussians as the script's, by sample. */
const SHAPES = [
  [-2, 5, 40],
  [6, 150, 50],
  [3, 235, 30],
]

function inputOf(c: TraceCase): TraceInput {
  const stepMs = 1000 / c.samplingRateHz
  const timesMs = Float64Array.from({ length: c.count }, (_, i) => i * stepMs)
  const components = SHAPES.map(
    ([amplitudeUv, centre, width], i): Component => ({
      shape: 'gaussian',
      name: `component ${i}`,
      amplitudeUv,
      latencyMs: centre * stepMs,
      widthMs: width * stepMs,
    }),
  )
  const { from, to, baselineTo } = c.score
  const baseline: Baseline = baselineTo === undefined ? 'none' : { fromMs: 0, toMs: baselineTo * stepMs }
  const score: Score = { kind: 'mean', fromMs: from * stepMs, toMs: to * stepMs, polarity: 'positive' }
  const flat = new Float64Array(c.count)
  const traced = tracedWeights({ score, of: 'after', baseline, timesMs, before: flat, after: flat })
  if (!isTraced(traced)) throw new Error('a mean has always a value')
  const chain = designChain(c.stages, c.samplingRateHz)
  return { chain, extent: c.extent, timesMs, baseline, source: { kind: 'built', components }, traced }
}

// the size of the waveform times that of the weights, which SciPy's own rounding goes with
const SIZE = 22
const named = (c: TraceCase) => `${c.extent} at ${c.samplingRateHz} Hz, ${JSON.stringify(c.stages)}`

againstReference<TraceCase>('trace-back.json', 'make_trace_back.py', 4, {
  'each stretch gives what SciPy makes of that stretch alone, and all of them the value': (cases) => {
    const worst = new Worst()
    for (const c of cases) {
      const input = inputOf(c)
      const trace = traceByMoment(input)
      const stretches = c.cuts.map((sample) => ({ sample, atMs: input.timesMs[sample] }))
      const rows = momentRows(trace, stretches)
      worst.see(Math.abs(trace.value - c.value), 1e-11 * SIZE, () => `the value, ${named(c)}`)
      c.shares.forEach((share, i) => {
        // the script's waveform begins and ends with its array, 2200 samples from the epoch
        const outside = i === 0 || i === c.shares.length - 1
        worst.see(Math.abs(rows[i].share - share), (outside ? 1e-9 : 1e-11) * SIZE, () => `stretch ${i}, ${named(c)}`)
      })
    }
    worst.expectWithinBounds()
  },
  'each component and each stage gives what SciPy makes of it': (cases) => {
    const worst = new Worst()
    for (const c of cases) {
      const input = inputOf(c)
      traceByComponent(input).rows.forEach(({ share }, i) =>
        worst.see(Math.abs(share - c.components[i]), 1e-11 * SIZE, () => `component ${i}, ${named(c)}`),
      )
      const stages = traceByStage(input)
      worst.see(Math.abs(stages.before - c.stagesUpTo[0]), 1e-11 * SIZE, () => `before any stage, ${named(c)}`)
      stages.rows.forEach(({ upTo, alone }, i) => {
        worst.see(Math.abs(upTo - c.stagesUpTo[i + 1]), 1e-11 * SIZE, () => `up to stage ${i}, ${named(c)}`)
        worst.see(Math.abs(alone - c.stagesAlone[i]), 1e-11 * SIZE, () => `stage ${i} alone, ${named(c)}`)
      })
    }
    worst.expectWithinBounds()
  },
})
