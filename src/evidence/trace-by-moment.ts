import type { ToneComponent } from '../erp/component.ts'
import { samplesInWindow } from '../erp/time-axis.ts'
import { waveformAt } from '../erp/waveform.ts'
import { appliedAmplifierStages, appliedOfflineStages } from '../filter/apply-chain.ts'
import { appliedStages } from '../filter/chain.ts'
import { adjointEpochs } from '../filter/epoch-adjoint.ts'
import { adjointContinuous } from '../filter/stand-alone.ts'
import type { Stage } from '../filter/stage.ts'
import { type LargeComponent, largeComponents } from './large-components.ts'
import { nameStretch, type StretchMarks, type StretchName } from './default-stretches.ts'
import { neighbourContribution } from './neighbours.ts'
import { checkStretches, type Stretches } from './stretches.ts'
import { toneTails } from './tone-tails.ts'
import { checkTraceInput, isAboutZero, percentOf, type TraceInput } from './trace-input.ts'
import { type OnAxis, sourceOnAxis } from './traced-waveform.ts'
import { windowWithTails } from './window-with-tails.ts'

/** The density of shares over time, ready to be cut into stretches: everything that a moved boundary does not change. */
export interface MomentTrace {
  readonly timesMs: Float64Array
  /** Index of the first value of the arrays below, relative to the epoch's first sample. */
  readonly from: number
  /** g: weight of each unfiltered sample. */
  readonly weights: Float64Array
  /** x as it was used, minus `zeroUv`. */
  readonly waveform: Float64Array
  /** Which zero x was taken against: its own baseline mean where the weights sum to zero, else as it is. */
  readonly zero: 'baseline mean' | 'as given'
  readonly zeroUv: number
  /** Weight and share of all that lies before and after the arrays. */
  readonly tails: { before: Tail; after: Tail }
  /** Share of the samples that the padding of epochs invented; null where epochs are not padded. */
  readonly invented: number | null
  /** Share of the neighbouring events; null where the event stands alone. */
  readonly neighbours: number | null
  /** The value: sum of all shares. */
  readonly value: number
  /** Σ|g·x|, what exactness is measured by. */
  readonly absoluteSum: number
  /** Too near zero for anything in per cent of it. */
  readonly aboutZero: boolean
  readonly unit: 'µV' | 'µV·s'
  /** What stretches are named after. */
  readonly marks: StretchMarks
}

interface Tail {
  readonly weight: number
  readonly share: number
}

/** One row of the account by moment. */
export interface MomentRow {
  readonly kind: StretchName['kind'] | 'before' | 'after' | 'invented' | 'neighbours'
  /** The whole window, or the whole component. */
  readonly whole: boolean
  readonly component: LargeComponent | null
  /** Limits as they are named, and the samples from … to − 1 relative to the epoch's first; before and after the epoch they are open. */
  readonly fromMs: number
  readonly toMs: number
  readonly from: number
  readonly to: number
  /** Mean of the waveform as it was used, µV; null for samples that are no moments. */
  readonly meanUv: number | null
  readonly weight: number | null
  readonly share: number
  readonly percent: number | null
  /** Sum of the shares down to this row. */
  readonly running: number
}

/** Weights that sum to less than this part of Σ|w| sum to zero. */
const SUMS_TO_ZERO = 1e-12

/**
 * Where a value comes from, moment by moment: value = Σ g[m]·x[m] (+ what the padding invented, + the neighbouring events).
 *
 * Continuous: g is the effective window of all applied stages. Epochs: of the offline stages as they would run on a continuous waveform, over the
 * epoch, then of the amplifier stages; what the padding adds to that is `invented`. Recorded waveforms, and amplifier stages that are applied
 * to them, know zeros outside the epoch.
 *
 * @param marginSamples samples on either side of the epoch that are wanted in the arrays.
 * @throws RangeError for a bad component or interval, values or weights that do not fit the times, an epoch not longer than a
 *   stage's padding.
 */
export function traceByMoment(input: TraceInput, marginSamples = 0): MomentTrace {
  checkTraceInput(input)
  const { chain, extent, timesMs, baseline, source, traced } = input
  const n = timesMs.length
  const x = sourceOnAxis(source, timesMs, chain.samplingRateHz, marginSamples)
  const raw = x.values.slice(-x.from, n - x.from)
  const to = x.from + x.values.length

  const epochs = extent === 'epochs'
  const stages = epochs ? appliedAmplifierStages(chain) : appliedStages(chain)
  const offline = appliedOfflineStages(chain)
  const seen = epochs ? adjointContinuous(offline, traced.onAfter, 0, n) : traced.onAfter
  const window = windowWithTails(stages, seen, x.from, to)
  const weights = window.values
  if (traced.onBefore !== null) for (let m = 0; m < n; m++) weights[m - x.from] -= traced.onBefore[m]

  const baselineMean = meanOver(raw, baseline === 'none' ? null : samplesInWindow(timesMs, baseline, 'baseline window'))
  // every stage passes a constant as a constant, padded or not: the sum of all weights is Σw times the gain at 0 Hz
  const relative = baselineMean !== null && sumsToZero(traced.onAfter) && sumsToZero(traced.onBefore)
  const zeroUv = relative ? baselineMean : 0

  const tones = source.kind === 'built' ? source.components.filter((c) => c.shape === 'tone') : []
  const ofTones = tonesOutside(stages, seen, tones, input, x, window.values, traced.onBefore)
  const waveform = x.values
  let value = 0
  let absoluteSum = 0
  for (let i = 0; i < waveform.length; i++) {
    waveform[i] -= zeroUv
    const share = weights[i] * waveform[i]
    value += share
    absoluteSum += Math.abs(share)
  }
  const tails = {
    before: { weight: window.weightBefore, share: ofTones.before - zeroUv * window.weightBefore },
    after: { weight: window.weightAfter, share: ofTones.after - zeroUv * window.weightAfter },
  }
  value += tails.before.share + tails.after.share
  absoluteSum += Math.abs(tails.before.share) + Math.abs(tails.after.share)

  let invented: number | null = null
  if (epochs && offline.length > 0) {
    const padded = adjointEpochs(offline, traced.onAfter)
    for (let m = 0; m < n; m++) padded[m] -= seen[m]
    const onX = windowWithTails(stages, padded, x.from, to)
    const around = tonesOutside(stages, padded, tones, input, { from: x.from, values: waveform }, onX.values, null)
    invented = around.before + around.after - zeroUv * (onX.weightBefore + onX.weightAfter)
    for (let i = 0; i < waveform.length; i++) invented += onX.values[i] * waveform[i]
    value += invented
    absoluteSum += Math.abs(invented)
  }

  let neighbours: number | null = null
  if (source.kind === 'built' && source.events !== undefined && source.events !== 'alone') {
    const { components, events } = source
    neighbours = neighbourContribution(chain, components, events, timesMs, extent, traced.onAfter, traced.onBefore)
    value += neighbours
    absoluteSum += Math.abs(neighbours)
  }

  const corrected = waveform.slice(-x.from, n - x.from)
  if (!relative && baselineMean !== null) for (let m = 0; m < n; m++) corrected[m] -= baselineMean
  const components = largeComponents(source, timesMs, corrected)
  return {
    timesMs,
    from: x.from,
    weights,
    waveform,
    zero: relative ? 'baseline mean' : 'as given',
    zeroUv,
    tails,
    invented,
    neighbours,
    value,
    absoluteSum,
    aboutZero: isAboutZero(value, absoluteSum, traced),
    unit: traced.unit,
    marks: { timesMs, baseline, window: traced.window, components },
  }
}

/** Steady tones beyond the arrays, whose own samples hold them already. */
function tonesOutside(
  stages: readonly Stage[],
  w: Float64Array,
  tones: readonly ToneComponent[],
  { timesMs, chain }: TraceInput,
  x: OnAxis,
  values: Float64Array,
  onBefore: Float64Array | null,
): { before: number; after: number } {
  if (tones.length === 0 || stages.length === 0) return { before: 0, after: 0 }
  const stepMs = 1000 / chain.samplingRateHz
  const times = Float64Array.from(values, (_, i) => timesMs[0] + (x.from + i) * stepMs)
  const tone = waveformAt(tones, times)
  let inside = 0
  for (let i = 0; i < values.length; i++) inside += values[i] * tone[i]
  // `values` may have had the weights on the unfiltered samples taken off
  if (onBefore !== null) for (let m = 0; m < onBefore.length; m++) inside += onBefore[m] * tone[m - x.from]
  return toneTails(stages, w, tones, timesMs, chain.samplingRateHz, x.from + values.length, inside)
}

/**
 * The account over stretches: before the epoch, each stretch of it, after it, then what the padding invented and what the neighbouring
 * events add. The shares sum to the value.
 *
 * @throws RangeError for stretches that are no partition of the epoch.
 */
export function momentRows(trace: MomentTrace, stretches: Stretches): MomentRow[] {
  const { timesMs, from, weights, waveform, tails, marks, zeroUv } = trace
  const n = timesMs.length
  checkStretches(stretches, n)
  const rows: MomentRow[] = []
  let running = 0
  const add = (row: Omit<MomentRow, 'percent' | 'running'>) => {
    running += row.share
    rows.push({ ...row, percent: percentOf(row.share, trace.value, trace.aboutZero), running })
  }
  /** Shares of the arrays' samples first … last − 1, relative to the epoch's first. */
  const sums = (first: number, last: number) => {
    let weight = 0
    let share = 0
    let mean = 0
    for (let i = first - from; i < last - from; i++) {
      weight += weights[i]
      share += weights[i] * waveform[i]
      mean += waveform[i]
    }
    // where the arrays hold nothing more, the waveform is its zero
    return { weight, share, meanUv: last > first ? mean / (last - first) : -zeroUv }
  }
  const outside = (kind: 'before' | 'after', first: number, last: number, tail: Tail) => {
    const { weight, share, meanUv } = sums(first, last)
    add({
      kind,
      whole: true,
      component: null,
      fromMs: kind === 'before' ? -Infinity : timesMs[n - 1],
      toMs: kind === 'before' ? timesMs[0] : Infinity,
      from: kind === 'before' ? -Infinity : n,
      to: kind === 'before' ? 0 : Infinity,
      meanUv,
      weight: weight + tail.weight,
      share: share + tail.share,
    })
  }
  outside('before', from, 0, tails.before)
  let first = 0
  let fromMs = timesMs[0]
  for (const boundary of [...stretches, { sample: n, atMs: timesMs[n - 1] }]) {
    add({
      ...nameStretch(marks, first, boundary.sample),
      fromMs,
      toMs: boundary.atMs,
      from: first,
      to: boundary.sample,
      ...sums(first, boundary.sample),
    })
    first = boundary.sample
    fromMs = boundary.atMs
  }
  outside('after', n, from + waveform.length, tails.after)
  const extra = (kind: 'invented' | 'neighbours', share: number | null) => {
    if (share === null) return
    const nowhere = { whole: true, component: null, fromMs: NaN, toMs: NaN, from: NaN, to: NaN }
    add({ kind, ...nowhere, meanUv: null, weight: null, share })
  }
  extra('invented', trace.invented)
  extra('neighbours', trace.neighbours)
  return rows
}

/** The density of shares on the arrays' samples: µV (or µV·s) per 100 ms. */
export function shareDensity(trace: MomentTrace): Float64Array {
  const { timesMs, weights, waveform } = trace
  const per100Ms = (100 * (timesMs.length - 1)) / (timesMs[timesMs.length - 1] - timesMs[0])
  return weights.map((g, i) => g * waveform[i] * per100Ms)
}

function meanOver(values: Float64Array, range: { first: number; last: number } | null): number | null {
  if (range === null) return null
  const offset = values[range.first]
  let sum = 0
  for (let i = range.first; i <= range.last; i++) sum += values[i] - offset
  return offset + sum / (range.last - range.first + 1)
}

function sumsToZero(w: Float64Array | null): boolean {
  if (w === null) return true
  let sum = 0
  let size = 0
  for (let i = 0; i < w.length; i++) {
    sum += w[i]
    size += Math.abs(w[i])
  }
  return Math.abs(sum) <= SUMS_TO_ZERO * size
}
