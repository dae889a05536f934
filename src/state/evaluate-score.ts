/** The part of evaluate() that measures: the readout's rows, the score's weights, and its noise. */
import type { Baseline } from '../erp/baseline.ts'
import { type Score, scoreLinearity, scoreOf, scoreUnit, scoreWeights } from '../erp/score.ts'
import { type FidelityRow, fidelityRows, largestAbsolute } from '../evidence/fidelity.ts'
import { onsetOfBuilt } from '../evidence/onset-of-built.ts'
import { type NoiseRow, noiseRow, varianceOfDifference } from '../evidence/precision.ts'
import type { Chain } from '../filter/chain.ts'
import type { ChosenNoise } from './chosen-noise.ts'
import type { RawCurves } from './evaluate-curves.ts'
import { scoreVariances } from './evaluate-precision.ts'
import { memoised } from './memo.ts'
import { DIFFERENCE, type Workspace } from './workspace.ts'

export const rowsOf = memoised(
  (
    before: Float64Array,
    after: Float64Array,
    raw: RawCurves,
    timesMs: Float64Array,
    score: Score,
    measure: Workspace['measure'],
    statedOnsetMs: number | null,
  ): FidelityRow[] => {
    const onsetMs = raw.components ? onsetOfBuilt(raw.components, timesMs) : statedOnsetMs
    return fidelityRows({ timesMs, before, after, score, measure, onsetMs })
  },
)

export interface Weights {
  /** On the unfiltered and on the filtered waveform: the same for linear scores, each at its own peak or side for the others. */
  before: Float64Array
  after: Float64Array
}

/** The same array for the same score, whatever the chain: what hangs on it alone is kept by its identity. */
const linearWeights = memoised((score: Score, baseline: Baseline, timesMs: Float64Array) =>
  scoreWeights(score, baseline, timesMs),
)

/** Two for the present chain and two for each pinned one. */
const heldWeights = memoised(
  (score: Score, baseline: Baseline, timesMs: Float64Array, y: Float64Array) =>
    scoreWeights(score, baseline, timesMs, y),
  12,
)

/** Null for a latency, which is no weighted sum, and for a peak that is not there. */
export function weightsOf(
  score: Score,
  baseline: Baseline,
  timesMs: Float64Array,
  before: Float64Array,
  after: Float64Array,
): Weights | null {
  switch (scoreLinearity(score.kind)) {
    case 'linear': {
      const weights = linearWeights(score, baseline, timesMs)
      return { before: weights, after: weights }
    }
    case 'held fixed':
      if ([before, after].some((y) => typeof scoreOf(y, timesMs, score) === 'string')) return null
      return {
        before: heldWeights(score, baseline, timesMs, before),
        after: heldWeights(score, baseline, timesMs, after),
      }
    case 'none':
      return null
  }
}

/** The noise row: what the chain did to the precision of the score. */
export function precisionOf(
  workspace: Workspace,
  { noise, passed }: ChosenNoise,
  chain: Chain,
  weights: Weights,
  extent: 'continuous' | 'epochs',
  scoreRow: FidelityRow,
  before: Float64Array,
): NoiseRow {
  const { trials, score } = workspace
  let variances = scoreVariances(chain, weights.before, weights.after, extent, noise, passed, trials)
  if (workspace.shown.chosen === DIFFERENCE) {
    // Two conditions of as many trials each, independent of one another; a noise that was estimated is the mean of theirs.
    const { before: b, after: a } = variances
    variances = { before: varianceOfDifference(b, b), after: varianceOfDifference(a, a) }
  }
  const unit = scoreUnit(score.kind) === 'µV·s' ? 'µV·s' : 'µV'
  const effect =
    typeof scoreRow.before === 'number' && typeof scoreRow.after === 'number'
      ? { before: scoreRow.before, after: scoreRow.after }
      : null
  const largest = largestAbsolute(before) * (unit === 'µV·s' ? (score.toMs - score.fromMs) / 1000 : 1)
  return noiseRow(unit, trials, variances.before, variances.after, effect, largest)
}
