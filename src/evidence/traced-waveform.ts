import { checkComponent, type Component, componentSupportMs } from '../erp/component.ts'
import { checkValues } from '../erp/time-axis.ts'
import { waveformAt } from '../erp/waveform.ts'

/** What the events stand in: alone, or one every a to b ms, each interval drawn evenly and independently between the two. */
export type Events = 'alone' | { readonly fromMs: number; readonly toMs: number }

/** The unfiltered waveform whose value is traced. */
export type TraceSource =
  | { readonly kind: 'built'; readonly components: readonly Component[]; readonly events?: Events }
  /** A recorded average, µV on the epoch's samples; nothing is known outside. */
  | { readonly kind: 'recorded'; readonly values: Float64Array }

/** A waveform on all samples where it is not zero (steady tones apart), the epoch and a margin included. */
export interface OnAxis {
  /** Index of values[0] relative to the epoch's first sample. */
  readonly from: number
  readonly values: Float64Array
}

/** More samples than this on either side of the epoch are a slip of the hand (a component hours away), not a waveform. */
export const MAX_SAMPLES_OUTSIDE = 4_000_000

/** First sample, and sample after the last one, of the range that holds the epoch, a margin and every component that ends. */
export function rangeOnAxis(
  components: readonly Component[],
  timesMs: Float64Array,
  samplingRateHz: number,
  margin: number,
): { from: number; to: number } {
  const stepMs = 1000 / samplingRateHz
  let from = -margin
  let to = timesMs.length + margin
  for (const component of components) {
    const support = componentSupportMs(component)
    if (support === 'unbounded') continue
    from = Math.min(from, Math.floor((support.fromMs - timesMs[0]) / stepMs))
    to = Math.max(to, Math.ceil((support.toMs - timesMs[0]) / stepMs) + 1)
    if (-from > MAX_SAMPLES_OUTSIDE || to - timesMs.length > MAX_SAMPLES_OUTSIDE)
      throw new RangeError(
        `component "${component.name}" must lie within ${MAX_SAMPLES_OUTSIDE} samples of the epoch, it reaches from ${support.fromMs} to ${support.toMs} ms`,
      )
  }
  return { from, to }
}

/** Components at samples from … to − 1 relative to the epoch's first. */
export function componentsOnAxis(
  components: readonly Component[],
  timesMs: Float64Array,
  samplingRateHz: number,
  from: number,
  to: number,
): Float64Array {
  const stepMs = 1000 / samplingRateHz
  const times = new Float64Array(to - from)
  for (let i = 0; i < times.length; i++) times[i] = timesMs[0] + (from + i) * stepMs
  return waveformAt(components, times)
}

/**
 * The source on its own axis, events standing alone.
 *
 * @param margin samples on either side of the epoch that are wanted at least.
 * @throws RangeError for a bad component, one too far away, or values that do not fit the times.
 */
export function sourceOnAxis(
  source: TraceSource,
  timesMs: Float64Array,
  samplingRateHz: number,
  margin: number,
): OnAxis {
  if (!Number.isSafeInteger(margin) || margin < 0)
    throw new RangeError(`marginSamples must be a whole number of at least 0, was ${margin}`)
  if (source.kind === 'recorded') {
    checkValues(source.values, timesMs)
    const values = new Float64Array(timesMs.length + 2 * margin)
    values.set(source.values, margin)
    return { from: -margin, values }
  }
  source.components.forEach(checkComponent)
  const { from, to } = rangeOnAxis(source.components, timesMs, samplingRateHz, margin)
  return { from, values: componentsOnAxis(source.components, timesMs, samplingRateHz, from, to) }
}
