/** The time axis that the time figure and the effective window share, and what stands on it, without a screen. */
import { layoutBottomAxis } from '../plot/axis-layout.ts'
import { type Scale, type Tick, ticksFor } from '../plot/index.ts'
import { stripMargin } from '../state/evaluate-figures.ts'
import { fixed } from '../words/number.ts'

export interface TimeAxis {
  /** First and last sample of the epoch. */
  firstMs: number
  lastMs: number
  stepMs: number
  samples: number
  /** Ends of the axis: the epoch and a margin on either side, so that it is seen where the epoch ends. */
  fromMs: number
  toMs: number
}

/** @param timesMs  evenly spaced sample times of the epoch, at least 2. */
export function timeAxisOf(timesMs: Float64Array): TimeAxis {
  const samples = timesMs.length
  const firstMs = timesMs[0]
  const lastMs = timesMs[samples - 1]
  const stepMs = (lastMs - firstMs) / (samples - 1)
  const marginMs = stripMargin(samples) * stepMs
  return { firstMs, lastMs, stepMs, samples, fromMs: firstMs - marginMs, toMs: lastMs + marginMs }
}

/** Index of the sample nearest to a moment; a moment outside the epoch has the first or the last. */
export function sampleNear(axis: TimeAxis, ms: number): number {
  return Math.max(0, Math.min(axis.samples - 1, Math.round((ms - axis.firstMs) / axis.stepMs)))
}

/** Values this near to the largest, as a part of it, are as large. */
const AS_LARGE = 1e-6

/**
 * Where the cursor stands until it is moved: the moment at which the waveform is largest, whatever its sign; the middle of it where it
 * stays as large for a while.
 */
export function largestMomentMs(values: Float64Array, axis: TimeAxis): number {
  let first = 0
  for (let i = 1; i < values.length; i++) if (Math.abs(values[i]) > Math.abs(values[first]) * (1 + AS_LARGE)) first = i
  const least = Math.abs(values[first]) * (1 - AS_LARGE)
  let last = first
  while (last + 1 < values.length && Math.abs(values[last + 1]) >= least) last++
  return axis.firstMs + Math.round((first + last) / 2) * axis.stepMs
}

const TITLE = 'Time, ms'

/** Ticks of the time axis, few enough for its title to stand among them. */
export function timeTicks(x: Scale): { ticks: Tick[]; title: string } {
  const most = Math.abs(x.range[1] - x.range[0]) / 110
  let ticks = ticksFor(x, { count: Math.max(3, most) })
  for (let count = most - 0.5; count >= 1 && !titleFits(ticks, x); count -= 0.5) {
    const fewer = ticksFor(x, { count })
    if (fewer.length < 2) break
    ticks = fewer
  }
  return { ticks, title: TITLE }
}

function titleFits(ticks: readonly Tick[], x: Scale): boolean {
  const { labels, title } = layoutBottomAxis(ticks, x.range, 0, TITLE)
  return title === null || labels.every((label) => label.y === title.y)
}

/** "400 ms", with one decimal where the sample lies between whole milliseconds. */
export function msText(ms: number): string {
  return `${fixed(ms, Math.abs(ms - Math.round(ms)) < 1e-6 ? 0 : 1)} ms`
}

export function uvText(uv: number): string {
  return `${fixed(uv, 2)} µV`
}

/** Room above and below the curves, as a part of what they span: labels of the windows stand at the top. */
const ROOM_ABOVE = 0.16
const ROOM_BELOW = 0.1

/**
 * The amplitudes at the bottom and at the top of the figure: all the curves, zero and room for labels. Upside down where negative is up.
 *
 * @returns  values in µV; ±1 µV around a flat line.
 */
export function amplitudeDomain(curves: readonly Float64Array[], polarity: 'up' | 'down'): [number, number] {
  let low = 0
  let high = 0
  for (const values of curves)
    for (const value of values) {
      if (value < low) low = value
      if (value > high) high = value
    }
  const span = high - low
  if (!(span > 0)) return polarity === 'up' ? [-1, 1] : [1, -1]
  return polarity === 'up'
    ? [low - ROOM_BELOW * span, high + ROOM_ABOVE * span]
    : [high + ROOM_BELOW * span, low - ROOM_ABOVE * span]
}

/** Where more than this part of a sample's weight lies on samples that are not in the data, the epoch is hatched. */
const UNSEEN_SHARE = 0.05

/** Stretches at the ends of the epoch whose values lean on samples that are not in the data, in ms. */
export function unseenStretches(shares: Float64Array | null, axis: TimeAxis): { fromMs: number; toMs: number }[] {
  if (!shares) return []
  const n = shares.length
  let head = 0
  while (head < n && shares[head] > UNSEEN_SHARE) head++
  if (head === n) return [{ fromMs: axis.firstMs, toMs: axis.lastMs }]
  let tail = n
  while (tail > 0 && shares[tail - 1] > UNSEEN_SHARE) tail--
  const at = (index: number) => axis.firstMs + index * axis.stepMs
  const stretches = []
  if (head > 0) stretches.push({ fromMs: at(0), toMs: at(head) })
  if (tail < n) stretches.push({ fromMs: at(tail - 1), toMs: at(n - 1) })
  return stretches
}
