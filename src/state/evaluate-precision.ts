/** The part of evaluate() that makes the noise row: the score's noise with and without the chain. */
import { effectiveWindow } from '../evidence/effective-window.ts'
import { responseBreaksHz } from '../evidence/response-breaks.ts'
import { scoreVariance, scoreVarianceOfResponse } from '../evidence/score-noise.ts'
import { appliedStages, type Chain } from '../filter/chain.ts'
import { wholeResponse } from '../filter/kernel.ts'
import { stagesResponse } from '../filter/stage-response.ts'
import { memoised } from './memo.ts'
import type { Workspace } from './workspace.ts'

type Noise = Workspace['noise']

export interface ScoreVariances {
  before: number
  after: number
}

const unfilteredVariance = memoised(scoreVariance)

/**
 * Variance of a linear score over the stated trials, unfiltered and filtered. The model's noise is that of single trials before anything;
 * stages that are in the data have acted on it already, for both.
 */
export const scoreVariances = memoised(
  (
    chain: Chain,
    weightsBefore: Float64Array,
    weightsAfter: Float64Array,
    extent: 'continuous' | 'epochs',
    noise: Noise,
    trials: number,
  ): ScoreVariances => {
    const { samplingRateHz } = chain
    const past = chain.stages.filter((stage) => stage.spec.inData)
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
