import { defaultStretches } from './default-stretches.ts'
import { neighboursBefore } from './neighbours.ts'
import { type MomentRow, type MomentTrace, momentRows, traceByMoment } from './trace-by-moment.ts'
import { type PartTrace, traceByComponent } from './trace-by-component.ts'
import type { TraceInput } from './trace-input.ts'
import type { Stretches } from './stretches.ts'
import { unseenShare } from './unseen-share.ts'

/** How far a value can be trusted: shares of absolute weight, not of µV, which are not summed with the account. */
export interface TraceTrust {
  /** Share of the weight that would fall on samples outside the data, 0 to 1; 0 for a built waveform on the whole axis. */
  readonly unseenShare: number
  /** From here on the value cannot be trusted. */
  readonly threshold: number
  readonly exceeded: boolean
  /** Share of the weight outside the epoch: another number, which says nothing against a waveform that is known there. */
  readonly outsideEpoch: number
}

/** From this unseen share on a value cannot be trusted, unless the user says otherwise. */
export const UNSEEN_THRESHOLD = 0.1

/**
 * @param threshold 0 to 1.
 * @throws RangeError for another threshold.
 */
export function traceTrust(
  { chain, extent, traced, timesMs }: Omit<TraceInput, 'source' | 'baseline'>,
  threshold = UNSEEN_THRESHOLD,
): TraceTrust {
  if (!(threshold >= 0 && threshold <= 1)) throw new RangeError(`threshold must lie between 0 and 1, was ${threshold}`)
  const n = timesMs.length
  const outsideEpoch = unseenShare(chain, traced.onAfter, 0, n)
  // a built waveform is known on the whole axis
  const share = extent === 'epochs' ? outsideEpoch : 0
  return { unseenShare: share, threshold, exceeded: share > threshold, outsideEpoch }
}

/** The account of a value that stands beside its figure. */
export interface TraceBack {
  readonly moments: MomentTrace
  readonly stretches: Stretches
  readonly rows: readonly MomentRow[]
  /** null for a recorded waveform. */
  readonly components: PartTrace | null
  /** The same weighted sum of the unfiltered waveform: the value if no stage had acted (0 for a change of one that is linear). */
  readonly unfiltered: number
}

/**
 * Where a value comes from: by moment over stretches, and by component.
 *
 * @param stretches     the user's, or null for those that an account begins with.
 * @param marginSamples samples on either side of the epoch that the density is drawn on.
 * @throws RangeError as `traceByMoment`.
 */
export function traceBack(input: TraceInput, stretches: Stretches | null = null, marginSamples = 0): TraceBack {
  const moments = traceByMoment(input, marginSamples)
  const used = stretches ?? defaultStretches(moments.marks)
  return {
    moments,
    stretches: used,
    rows: momentRows(moments, used),
    components: input.source.kind === 'built' ? traceByComponent(input, moments.neighbours) : null,
    unfiltered: unfilteredValue(input, moments),
  }
}

function unfilteredValue(input: TraceInput, { waveform, from }: MomentTrace): number {
  const { traced, timesMs, source, chain } = input
  const train =
    source.kind === 'built' && source.events !== undefined && source.events !== 'alone'
      ? neighboursBefore(source.components, source.events, timesMs, chain.samplingRateHz)
      : null
  let value = 0
  for (let m = 0; m < timesMs.length; m++) {
    const weight = traced.onAfter[m] - (traced.onBefore === null ? 0 : traced.onBefore[m])
    value += weight * (waveform[m - from] + (train === null ? 0 : train[m]))
  }
  return value
}
