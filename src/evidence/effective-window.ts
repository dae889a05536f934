import { appliedAmplifierStages, appliedOfflineStages, type Extent } from '../filter/apply-chain.ts'
import { appliedStages, type Chain } from '../filter/chain.ts'
import { adjointEpochs } from '../filter/epoch-adjoint.ts'
import { type Located, wholeResponse } from '../filter/kernel.ts'
import { requireFinite } from '../filter/missing-values.ts'
import { adjointContinuous, requireRange } from '../filter/stand-alone.ts'

/**
 * Effective window g of a score that is a weighted sum of filtered samples: score = Σ w[n]·y[n] = Σ g[m]·x[m] with x
 * unfiltered and g = Kᵀ·w, K the applied stages under the stated extent, the padding of epochs included.
 *
 * @param weights  w on the filtered samples of the epoch.
 * @param extent   'epochs': the offline stages as they run on an epoch; amplifier stages act before the cut, so that g then
 *                 begins before the epoch.
 * @returns  `start` is the index of values[0] relative to weights[0]; the epoch itself is always included. At most 1e-9 of
 *           Σ|g| is left out.
 * @throws RangeError for NaN or an infinity in the weights, or an epoch not longer than a stage's padding.
 */
export function effectiveWindow(chain: Chain, weights: Float64Array, extent: Extent): Located {
  const { stages, w } = lastPart(chain, weights, extent)
  // reversed time turns the transpose into the stages themselves
  const { values, start } = wholeResponse(stages, w.slice().reverse())
  return { values: values.reverse(), start: w.length - start - values.length }
}

/** The effective window at samples from … to − 1 relative to weights[0], for instance those that are drawn. */
export function effectiveWindowOn(
  chain: Chain,
  weights: Float64Array,
  extent: Extent,
  from: number,
  to: number,
): Float64Array {
  requireRange(from, to)
  const { stages, w } = lastPart(chain, weights, extent)
  return adjointContinuous(stages, w, from, to)
}

/** What is left to do as continuous once the epoch rules, if any, have been transposed. */
function lastPart(chain: Chain, weights: Float64Array, extent: Extent) {
  requireFinite('weights', weights)
  if (extent === 'continuous') return { stages: appliedStages(chain), w: weights }
  if (extent !== 'epochs') throw new RangeError(`extent must be 'continuous' or 'epochs', was ${extent}`)
  return { stages: appliedAmplifierStages(chain), w: adjointEpochs(appliedOfflineStages(chain), weights) }
}
