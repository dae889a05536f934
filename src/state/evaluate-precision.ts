/** The part of evaluate() that makes the noise row: the score's noise with and without the chain. */
import type { NoiseSpec } from '../erp/noise.ts'
import { effectiveWindow } from '../evidence/effective-window.ts'
import { extrapolatedShare } from '../evidence/extrapolated-share.ts'
import type { NoisePassed } from '../evidence/filtered-noise.ts'
import { responseBreaksHz } from '../evidence/response-breaks.ts'
import { scoreVariance, scoreVarianceOfResponse } from '../evidence/score-noise.ts'
import { appliedStages, type Chain } from '../filter/chain.ts'
import { wholeResponse } from '../filter/kernel.ts'
import { stagesResponse } from '../filter/stage-response.ts'
import type { ChosenNoise } from './chosen-noise.ts'
import { memoised } from './memo.ts'

export interface ScoreVariances {
  before: number
  after: number
}

const unfilteredVariance = memoised(scoreVariance)

/**
 * Variance of a linear score over the stated trials, unfiltered and filtered. A model's noise is that of single trials before anything:
 * stages that are in the data have acted on it already, for both. An estimate was measured behind them.
 */
export const scoreVariances = memoised(
  (
    chain: Chain,
    weightsBefore: Float64Array,
    weightsAfter: Float64Array,
    extent: 'continuous' | 'epochs',
    noise: NoiseSpec,
    passed: NoisePassed,
    trials: number,
  ): ScoreVariances => {
    const { samplingRateHz } = chain
    const past = passed === 'nothing' ? chain.stages.filter((stage) => stage.spec.inData) : []
    if (extent === 'continuous' && past.length === 0) {
      const applied = appliedStages(chain)
      return {
        before: unfilteredVariance(weightsBefore, noise, samplingRateHz, trials),
        after: scoreVarianceOfResponse(
          weightsAfter,
          (hz) => stagesResponse(applied, hz),
          noise,
          samplingRateHz,
          trials,
          responseBreaksHz(chain),
        ),
      }
    }
    // The transpose of what is in the data, run over a window, is that stage's part of the same window.
    const throughPast = (window: Float64Array) =>
      past.length === 0 ? window : wholeResponse(past, window.slice().reverse()).values
    return {
      before: scoreVariance(throughPast(weightsBefore), noise, samplingRateHz, trials),
      after: scoreVariance(
        throughPast(effectiveWindow(chain, weightsAfter, extent).values),
        noise,
        samplingRateHz,
        trials,
      ),
    }
  },
)

/** The part of the score's variance, unfiltered and filtered, that rests on frequencies below what the trials' length can show: the factors rest on both. */
export function extrapolatedParts(
  chain: Chain,
  weights: { before: Float64Array; after: Float64Array },
  extent: 'continuous' | 'epochs',
  { noise, estimate }: ChosenNoise,
): { before: number; after: number } {
  const belowHz = estimate?.extrapolatedBelowHz ?? 0
  return {
    before: partOfUnfiltered(weights.before, noise, chain.samplingRateHz, belowHz),
    after: partOfFiltered(chain, weights.after, extent, noise, belowHz),
  }
}

const partOfUnfiltered = memoised(extrapolatedShare)

const partOfFiltered = memoised(
  (chain: Chain, weights: Float64Array, extent: 'continuous' | 'epochs', noise: NoiseSpec, belowHz: number): number =>
    extrapolatedShare(effectiveWindow(chain, weights, extent).values, noise, chain.samplingRateHz, belowHz),
)
