import { absoluteSum, firstAfter, lastBefore } from './absolute-sum.ts'
import type { Stage } from './stage.ts'

/** Lags in samples, both ≥ 0. */
export interface Reach {
  readonly beforeSamples: number
  readonly afterSamples: number
}

/** Share of the kernel's absolute sum that each side may leave out. */
const SHARE = 0.005

/**
 * Reach of the stages' kernel h: the smallest lags a, b ≥ 0 such that at most 0.5 % of Σ|h| lies before −a and at most
 * 0.5 % after b. To one sample, or 1e-3 of the lag where the kernel is long.
 */
export function reach(stages: readonly Stage[]): Reach {
  const sum = absoluteSum(stages, Float64Array.of(1))
  const before = lastBefore(sum, SHARE * sum.total)
  const after = firstAfter(sum, SHARE * sum.total) - 1
  return { beforeSamples: Math.max(0, -before), afterSamples: Math.max(0, after) }
}
