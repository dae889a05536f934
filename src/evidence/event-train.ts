import { type Component, componentSupportMs } from '../erp/component.ts'
import { supportMs, waveformAt } from '../erp/waveform.ts'
import { finestMs, runningIntegral } from './running-integral.ts'
import { type Events, MAX_SAMPLES_OUTSIDE } from './traced-waveform.ts'

/**
 * What the neighbouring events of a train add to the average waveform of an event.
 *
 * Intervals between events are independent and even between a and b, before the event and after it. The k-th neighbour then comes at the sum of
 * k intervals, and the average of all that follow, N⁺, obeys the renewal equation N⁺(t) = mean over τ in [a, b] of
 * (x + N⁺)(t − τ): each neighbour is the next event of the one before. It is solved forward in time, once for the events that follow and on
 * reversed time for those that came before. Far away it is constant, the waveform's area over the mean interval, since the events there
 * have lost all track of this one. At a fixed interval they never do, and the shifted waveforms are added up one by one.
 *
 * Steady tones are locked to every event alike and are no part of it: they stay what they are.
 *
 * @see Feller, An Introduction to Probability Theory and Its Applications, vol. 2, chapter "Renewal theory".
 */
export interface NeighbourWaveform {
  /** Constant part: area of the waveform over the mean interval, µV. */
  readonly meanUv: number
  /** The rest, µV, at samples from … relative to the epoch's first; at a random interval it is negligible outside. */
  readonly from: number
  readonly deviation: Float64Array
}

export type Interval = Exclude<Events, 'alone'>

/** Events cannot follow each other faster than this in any experiment with an epoch. */
const SHORTEST_INTERVAL_MS = 50
const LONGEST_INTERVAL_MS = 1e6
/** A train has forgotten this event when its average keeps within this part of the waveform's largest value for an interval. */
const FORGOTTEN = 1e-12
/** Finest grid of the renewal equation, in parts of a sample. */
const FINEST = 16

/** @throws RangeError for intervals that are not numbers, in the wrong order, shorter than 50 ms or longer than 1000 s. */
export function checkEvents(events: Events): void {
  if (events === 'alone') return
  const { fromMs, toMs } = events
  if (!(fromMs >= SHORTEST_INTERVAL_MS))
    throw new RangeError(`events.fromMs must be at least ${SHORTEST_INTERVAL_MS} ms, was ${fromMs}`)
  if (!(toMs >= fromMs && toMs <= LONGEST_INTERVAL_MS))
    throw new RangeError(`events.toMs must lie between fromMs (${fromMs}) and ${LONGEST_INTERVAL_MS} ms, was ${toMs}`)
}

/** Two intervals that differ by less than this are one. */
const isFixed = ({ fromMs, toMs }: Interval) => toMs - fromMs < 1e-6

interface Made {
  readonly waveform: NeighbourWaveform
  /** The train has been forgotten on both sides: nothing more would come of a wider margin. */
  readonly whole: boolean
}

const kept = new WeakMap<readonly Component[], (Made & { key: string; margin: number })[]>()
const KEPT = 4

/**
 * The neighbours' part of the average waveform, exact to about 1e-8 of the waveform's largest value.
 *
 * Kept for the same components, times and interval, so that a dragged filter does not ask for it anew.
 *
 * @param before  samples before the epoch that are wanted at most; where the train has been forgotten earlier, fewer are made.
 * @param after   the same after the epoch.
 * @throws RangeError for a bad component or interval, or more samples than 4 million on a side.
 */
export function neighbourWaveform(
  components: readonly Component[],
  interval: Interval,
  timesMs: Float64Array,
  samplingRateHz: number,
  before: number,
  after: number,
): NeighbourWaveform {
  checkEvents(interval)
  const longest = Math.max(before, after)
  if (!(Math.min(before, after) >= 0 && longest <= MAX_SAMPLES_OUTSIDE))
    throw new RangeError(
      `the events' neighbours are wanted on at most ${MAX_SAMPLES_OUTSIDE} samples on either side of the epoch, were on ${longest}`,
    )
  // a power of two, so that a cutoff that is dragged does not change it at every step
  const margin = Math.min(MAX_SAMPLES_OUTSIDE, 2 ** Math.ceil(Math.log2(Math.max(64, longest))))
  const key = [interval.fromMs, interval.toMs, timesMs[0], timesMs.length, samplingRateHz].join()
  let entries = kept.get(components)
  if (!entries) kept.set(components, (entries = []))
  const found = entries.find((entry) => entry.key === key && (entry.whole || entry.margin >= margin))
  if (found) return found.waveform
  const made = make(components, interval, timesMs, samplingRateHz, margin)
  entries.unshift({ key, margin, ...made })
  if (entries.length > KEPT) entries.pop()
  return made.waveform
}

function make(
  components: readonly Component[],
  interval: Interval,
  timesMs: Float64Array,
  samplingRateHz: number,
  margin: number,
): Made {
  const bounded = components.filter((component) => componentSupportMs(component) !== 'unbounded')
  const support = supportMs(bounded)
  if (support === null) return { waveform: { meanUv: 0, from: 0, deviation: new Float64Array(0) }, whole: true }
  const stepMs = 1000 / samplingRateHz
  const meanMs = (interval.fromMs + interval.toMs) / 2
  const count = Math.max(2, Math.ceil((support.toMs - support.fromMs) / stepMs) + 1)
  const area = runningIntegral(bounded, support.fromMs, (support.toMs - support.fromMs) / (count - 1), count, 1)
  const meanUv = area[count - 1] / meanMs
  const n = timesMs.length
  if (isFixed(interval)) {
    const deviation = fixedInterval(bounded, meanMs, timesMs[0], stepMs, -margin, n + margin)
    for (let i = 0; i < deviation.length; i++) deviation[i] -= meanUv
    return { waveform: { meanUv, from: -margin, deviation }, whole: false }
  }
  const later = renewal(bounded, interval, timesMs[0], stepMs, n + margin, 1, meanUv)
  // on reversed time the epoch's first sample lies at −timesMs[0], and earlier samples follow it
  const earlier = renewal(bounded, interval, -timesMs[0], stepMs, margin + 1, -1, meanUv)
  const to = Math.min(n + margin, Math.max(n, later.end))
  const from = Math.max(-margin, Math.min(0, 1 - earlier.end))
  const deviation = new Float64Array(to - from)
  for (let m = from; m < to; m++) deviation[m - from] = later.at(m) + earlier.at(-m) - meanUv
  const whole = later.end <= n + margin && earlier.end <= margin && later.settled && earlier.settled
  return { waveform: { meanUv, from, deviation }, whole }
}

/** Σ over k ≠ 0 of x(t − k·T). */
function fixedInterval(
  components: readonly Component[],
  intervalMs: number,
  startMs: number,
  stepMs: number,
  from: number,
  to: number,
): Float64Array {
  const sum = new Float64Array(to - from)
  for (const component of components) {
    const support = componentSupportMs(component)
    if (support === 'unbounded') continue
    const endMs = startMs + (to - 1) * stepMs
    const beginMs = startMs + from * stepMs
    const firstEvent = Math.ceil((beginMs - support.toMs) / intervalMs)
    const lastEvent = Math.floor((endMs - support.fromMs) / intervalMs)
    const periodSamples = intervalMs / stepMs
    const repeats = Math.abs(periodSamples - Math.round(periodSamples)) < 1e-9
    let shape: { first: number; values: Float64Array } | null = null
    for (let k = firstEvent; k <= lastEvent; k++) {
      if (k === 0) continue
      const shift = k * intervalMs
      // where the interval is a whole number of samples, every event has the same values
      const base = repeats ? k * Math.round(periodSamples) : 0
      if (shape === null || !repeats) {
        const first = Math.floor((support.fromMs + shift - startMs) / stepMs)
        const last = Math.ceil((support.toMs + shift - startMs) / stepMs)
        const times = new Float64Array(last - first + 1)
        for (let i = 0; i < times.length; i++) times[i] = startMs + (first + i) * stepMs - shift
        shape = { first: first - base, values: waveformAt([component], times) }
      }
      const at = shape.first + base - from
      const low = Math.max(0, -at)
      const high = Math.min(shape.values.length, sum.length - at)
      for (let i = low; i < high; i++) sum[at + i] += shape.values[i]
    }
  }
  return sum
}

/** A solution of the renewal equation on samples; `end` is the first sample from which it is the constant, or was not followed. */
interface Renewal {
  readonly settled: boolean
  readonly end: number
  readonly at: (sample: number) => number
}

/**
 * N⁺ on the grid startMs + m·stepMs, m < limit, by a running integral: N⁺(t) = (I(t − a) − I(t − b))/(b − a), I the integral of x + N⁺. That of x
 * is exact; that of N⁺, which is smoother, is taken on a grid fine enough for every component, through six neighbours.
 */
function renewal(
  components: readonly Component[],
  interval: Interval,
  startMs: number,
  stepMs: number,
  limit: number,
  sign: 1 | -1,
  meanUv: number,
): Renewal {
  const { fromMs: a, toMs: b } = interval
  const support = supportMs(components) as { fromMs: number; toMs: number }
  const beginMs = sign === 1 ? support.fromMs : -support.toMs
  const endMs = sign === 1 ? support.toMs : -support.fromMs
  const finest = Math.min(...components.map(finestMs))
  const wanted = Math.max(stepMs / (0.04 * finest), (16 * stepMs) / (b - a), (10 * stepMs) / a)
  const parts = Math.min(FINEST, Math.max(1, Math.ceil(wanted)))
  const h = stepMs / parts
  // the first grid point at or before the waveform's beginning; all before it are 0
  const first = Math.floor((beginMs - startMs) / h) - 1
  const total = limit * parts - first
  const empty: Renewal = { settled: false, end: limit, at: () => 0 }
  if (total <= 0) return empty

  const widthMs = b - a
  const shortDelay = delay(a, h)
  const longDelay = delay(b, h)
  const ofX = (offset: number) => {
    // the integral at t − offset for every grid point t, from the one before which it is 0
    const skip = Math.ceil((beginMs + offset - startMs) / h) - first
    const from = startMs + (first + skip) * h - offset
    const count = Math.max(2, Math.ceil((endMs - from) / h) + 1)
    // starts from the beginning itself, a part of a step earlier
    const lead = runningIntegral(components, beginMs, from - beginMs, 2, sign)[1]
    const values = runningIntegral(components, from, h, count, sign)
    return { skip, values, lead }
  }
  const early = ofX(a)
  const late = ofX(b)
  const xAt = ({ skip, values, lead }: ReturnType<typeof ofX>, i: number) =>
    i < skip ? 0 : lead + values[Math.min(values.length - 1, i - skip)]

  const level = FORGOTTEN * Math.max(...components.map(({ amplitudeUv }) => Math.abs(amplitudeUv)))
  const window = Math.ceil(b / h) + 8
  const quiet = Math.ceil((endMs - startMs) / h) - first
  const average = new Float64Array(total)
  const integral = new Float64Array(total)
  let calm = 0
  let made = total
  for (let i = 0; i < total; i++) {
    // three points back all neighbours of a step are known
    const k = i - 3
    if (k > 0) integral[k] = integral[k - 1] + stepIntegral(average, k, h)
    const own = read(integral, i, shortDelay) - read(integral, i, longDelay)
    average[i] = (xAt(early, i) - xAt(late, i) + own) / widthMs
    if (i > quiet && Math.abs(average[i] - average[i - calm]) <= level) calm++
    else calm = 0
    if (calm > window) {
      made = i + 1
      break
    }
  }
  const settled = made < total
  const end = settled ? Math.ceil((first + made) / parts) : limit
  return {
    settled,
    end,
    at: (sample) => {
      const i = sample * parts - first
      if (i < 0) return 0
      return i < made ? average[i] : meanUv
    },
  }
}

interface Delay {
  /** Whole steps, the next one up. */
  readonly steps: number
  /** Weights of the six points around a place between them; null where it is a point. */
  readonly weights: Float64Array | null
}

function delay(ms: number, h: number): Delay {
  const exact = ms / h
  const nearest = Math.round(exact)
  if (Math.abs(exact - nearest) < 1e-9) return { steps: nearest, weights: null }
  const steps = Math.ceil(exact)
  // t − ms lies this far after the point that is `steps` back
  const place = steps - exact
  const weights = new Float64Array(6)
  for (let j = 0; j < 6; j++) {
    let weight = 1
    for (let k = 0; k < 6; k++) if (k !== j) weight *= (place - (k - 2)) / (j - k)
    weights[j] = weight
  }
  return { steps, weights }
}

function read(integral: Float64Array, i: number, { steps, weights }: Delay): number {
  const at = i - steps
  if (weights === null) return at < 0 ? 0 : integral[at]
  let sum = 0
  for (let j = 0; j < 6; j++) {
    const k = at + j - 2
    if (k >= 0) sum += weights[j] * integral[k]
  }
  return sum
}

/** ∫ from point k − 1 to k of the polynomial through six points around it. */
function stepIntegral(y: Float64Array, k: number, h: number): number {
  const at = (j: number) => (j < 0 ? 0 : y[j])
  return (h / 1440) * (11 * (at(k - 3) + at(k + 2)) - 93 * (at(k - 2) + at(k + 1)) + 802 * (at(k - 1) + at(k)))
}
