import type { Component } from '../../src/erp/component.ts'
import { scoreOf } from '../../src/erp/score.ts'
import { filterBuiltWaveform, filterRecordedWaveform } from '../../src/evidence/filtered-waveform.ts'
import { traceBack } from '../../src/evidence/trace-back.ts'
import { traceByStage } from '../../src/evidence/trace-by-stage.ts'
import type { TraceSource } from '../../src/evidence/traced-waveform.ts'
import { isTraced, tracedWeights } from '../../src/evidence/traced-weights.ts'
import { designChain } from '../../src/filter/index.ts'
import { evaluate } from '../../src/state/evaluate.ts'
import { startWorkspace } from '../../src/state/workspace.ts'
import { BASELINE, butterworth, EPOCH, MEAN, noise, RATE, TIMES_MS } from './workloads.ts'

const START = startWorkspace()

/** What the page computes for one step of a slider: the whole evaluation of first sight with another high-pass cutoff. */
export function pageStep(position: number): number {
  const chain = START.chain.map((spec) =>
    spec.design === 'butterworth' ? { ...spec, cutoffsHz: [0.3 * 10 ** position] } : spec,
  )
  const outcome = evaluate({ ...START, chain }, null)
  if (!outcome.ok) throw new Error(outcome.problems[0]!.message)
  return outcome.evaluation.rows[0]!.after as number
}

const COMPONENTS: Component[] = [
  { shape: 'gaussian', name: 'late', amplitudeUv: 8, latencyMs: 400, widthMs: 200 },
  { shape: 'gaussian', name: 'early', amplitudeUv: -2, latencyMs: 120, widthMs: 60 },
]
const RECORDED = noise(EPOCH, 1)

/** One step of a slider with the trace-back desk open: the account by moment, component and stage for another cutoff. */
export function traceStep(extent: 'continuous' | 'epochs', position: number): number {
  const chain = designChain([butterworth('high', 2, [0.3 * 10 ** position]), butterworth('low', 4, [30])], RATE)
  const source: TraceSource =
    extent === 'continuous' ? { kind: 'built', components: COMPONENTS } : { kind: 'recorded', values: RECORDED }
  const after =
    source.kind === 'built'
      ? filterBuiltWaveform(chain, source.components, TIMES_MS, extent)
      : filterRecordedWaveform(chain, source.values)
  const traced = tracedWeights({
    score: MEAN,
    of: 'after',
    baseline: BASELINE,
    timesMs: TIMES_MS,
    before: after,
    after,
  })
  if (!isTraced(traced)) throw new Error('the mean must be there to be traced')
  const input = { chain, extent, timesMs: TIMES_MS, baseline: BASELINE, source, traced }
  return traceBack(input).moments.value + traceByStage(input).value + Number(scoreOf(after, TIMES_MS, MEAN))
}
