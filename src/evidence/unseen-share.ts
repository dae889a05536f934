import { absoluteBefore, absoluteSum } from '../filter/absolute-sum.ts'
import { appliedOfflineStages } from '../filter/apply-chain.ts'
import type { Chain } from '../filter/chain.ts'
import type { Located } from '../filter/kernel.ts'
import { requireFinite } from '../filter/missing-values.ts'
import type { Stage } from '../filter/stage.ts'

/**
 * Unseen share of a score: Σ|g∞| outside the data over Σ|g∞|, g∞ the effective window of the applied offline stages on a
 * continuous waveform. It says how much of the score would rest on samples that were never recorded.
 *
 * @param dataFrom  first sample of the data relative to weights[0]; may be −Infinity.
 * @param dataTo    sample after the last one; may be Infinity.
 * @returns  0 to 1; 0 where all weights are zero. To about 1e-3 of itself.
 */
export function unseenShare(chain: Chain, weights: Float64Array, dataFrom: number, dataTo: number): number {
  requireFinite('weights', weights)
  requireOrder(dataFrom, dataTo)
  // the window is the stages' output on reversed time: sample m of the window is n − 1 − m there
  const sum = absoluteSum(appliedOfflineStages(chain), weights.slice().reverse())
  if (sum.total === 0) return 0
  const inside = absoluteBefore(sum, weights.length - dataFrom) - absoluteBefore(sum, weights.length - dataTo)
  return within(1 - inside / sum.total)
}

/**
 * For each sample of a filtered epoch the share of its kernel's absolute weight that falls outside the epoch, where the
 * stages saw padding in the place of data.
 *
 * @param stages  offline stages.
 * @param n       samples of the epoch.
 * @returns  n shares, 0 to 1.
 */
export function unseenShareBySample(stages: readonly Stage[], n: number): Float64Array {
  if (!Number.isInteger(n) || n < 0) throw new RangeError(`n must be a whole number of samples, was ${n}`)
  const sum = absoluteSum(stages, Float64Array.of(1))
  const shares = new Float64Array(n)
  if (sum.total === 0) return shares
  // y[i] = Σ h[k]·x[i − k] uses lags i − n + 1 … i inside the epoch
  for (let i = 0; i < n; i++) {
    shares[i] = within(1 - (absoluteBefore(sum, i + 1) - absoluteBefore(sum, i + 1 - n)) / sum.total)
  }
  return shares
}

/** Share of a window's absolute sum outside samples from … to − 1; 0 for a window of zeros. */
export function shareOutside(window: Located, from: number, to: number): number {
  requireOrder(from, to)
  let total = 0
  let outside = 0
  for (let i = 0; i < window.values.length; i++) {
    const size = Math.abs(window.values[i])
    total += size
    if (window.start + i < from || window.start + i >= to) outside += size
  }
  return total === 0 ? 0 : outside / total
}

function requireOrder(from: number, to: number): void {
  if (!(from <= to)) throw new RangeError(`data must begin before they end, were ${from} to ${to}`)
}

function within(share: number): number {
  return Math.min(1, Math.max(0, share))
}
