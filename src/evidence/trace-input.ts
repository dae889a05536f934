import type { Baseline } from '../erp/baseline.ts'
import { checkValues } from '../erp/time-axis.ts'
import type { Extent } from '../filter/apply-chain.ts'
import type { Chain } from '../filter/chain.ts'
import type { Traced } from './traced-weights.ts'
import type { TraceSource } from './traced-waveform.ts'

/** All that an account of a value needs. */
export interface TraceInput {
  readonly chain: Chain
  readonly extent: Extent
  /** Evenly spaced sample times of the epoch. */
  readonly timesMs: Float64Array
  readonly baseline: Baseline
  readonly source: TraceSource
  readonly traced: Traced
}

/** @throws RangeError for weights that do not fit the times, or an extent that is none. */
export function checkTraceInput({ extent, timesMs, traced }: TraceInput): void {
  if (extent !== 'continuous' && extent !== 'epochs')
    throw new RangeError(`extent must be 'continuous' or 'epochs', was ${extent}`)
  checkValues(traced.onAfter, timesMs)
  if (traced.onBefore !== null) checkValues(traced.onBefore, timesMs)
}

/** Under this a value prints as nothing and is called about zero: half a hundredth of a microvolt. */
const SMALL_UV = 0.005
/** Part of all that is added up under which a sum is called about zero. */
const SMALL_SHARE = 1e-3

/**
 * Whether a value is about zero, so that nothing is given in per cent of it: under 0.005 µV (an area: 0.005 µV over its whole window), or under
 * 1e-3 of Σ|g·x|.
 */
export function isAboutZero(value: number, absoluteSum: number, traced: Traced): boolean {
  const { fromMs, toMs } = traced.window
  const least = traced.unit === 'µV' ? SMALL_UV : (SMALL_UV * (toMs - fromMs)) / 1000
  return !(Math.abs(value) >= least && Math.abs(value) >= SMALL_SHARE * absoluteSum)
}

/** A share in per cent of the value; null where the value is about zero. */
export function percentOf(share: number, value: number, aboutZero: boolean): number | null {
  return aboutZero ? null : (100 * share) / value
}
