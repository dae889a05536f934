import { absoluteBefore, absoluteSum } from '../filter/absolute-sum.ts'
import { appliedOfflineStages } from '../filter/apply-chain.ts'
import type { Chain } from '../filter/chain.ts'
import { requireFinite } from '../filter/missing-values.ts'

/** Samples that the data would have to hold beside the epoch's own. */
export interface FurtherData {
  readonly before: number
  readonly after: number
}

/** Nobody records on for longer: 2²⁴ samples are over nine hours at 500 Hz. */
const MOST_SAMPLES = 2 ** 24

/**
 * How much further data would have to reach for the unseen share of a score (`unseenShare` of the epoch) to fall to a threshold. Both sides are asked for
 * their part: the share that each may keep is to the other's as their shares are now.
 *
 * @param weights   on the filtered samples of the epoch.
 * @param threshold 0 to 1.
 * @returns whole samples, to 1 or 1e-3 of the length; null where no length would do (a threshold of 0 under a kernel that never ends).
 * @throws RangeError for weights that are not finite or another threshold.
 */
export function furtherData(chain: Chain, weights: Float64Array, threshold: number): FurtherData | null {
  requireFinite('weights', weights)
  if (!(threshold >= 0 && threshold <= 1)) throw new RangeError(`threshold must lie between 0 and 1, was ${threshold}`)
  const n = weights.length
  // reversed time, as in `unseenShare`: sample m of the window is n − 1 − m there
  const sum = absoluteSum(appliedOfflineStages(chain), weights.slice().reverse())
  if (sum.total === 0) return { before: 0, after: 0 }
  const shareBefore = (samples: number) => 1 - absoluteBefore(sum, n + samples) / sum.total
  const shareAfter = (samples: number) => absoluteBefore(sum, -samples) / sum.total
  const share = shareBefore(0) + shareAfter(0)
  if (share <= threshold) return { before: 0, after: 0 }
  const kept = threshold / share
  const before = least(shareBefore, kept * shareBefore(0))
  const after = least(shareAfter, kept * shareAfter(0))
  return before === null || after === null ? null : { before, after }
}

/** The fewest samples at which a falling share has come down to a level. */
function least(share: (samples: number) => number, level: number): number | null {
  if (share(0) <= level) return 0
  let high = 1
  while (share(high) > level) {
    high *= 2
    if (high > MOST_SAMPLES) return null
  }
  let low = high / 2
  while (high - low > Math.max(1, 1e-3 * high)) {
    const middle = Math.floor((low + high) / 2)
    if (share(middle) > level) low = middle
    else high = middle
  }
  return high
}
