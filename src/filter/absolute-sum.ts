import { type LogPole, finiteInput, runPasses, standAlone } from './stand-alone.ts'
import type { Stage } from './stage.ts'
import { doubled, multiply } from './state-space.ts'

/**
 * Running sum of the absolute output of stages on the whole time axis, Σ|y[m]| over m < n for any n, of a waveform that
 * stands alone: of an impulse it gives reach, of a score's weights the share outside the data.
 *
 * Sample by sample as long as any part of the response moves fast; the slow rest of the two tails, which may last millions of
 * samples, by powers of the system matrix, in steps that are short against every part that is still alive, and by the
 * trapezoidal rule between them. Relative error of a tail's sum below 1e-3, mostly far below.
 */
export interface AbsoluteSum {
  /** Ascending sample indices … */
  readonly at: Float64Array
  /** … and Σ|y[m]| over all m before them. In between it is linear. */
  readonly before: Float64Array
  readonly total: number
}

/** A mode that has decayed by this factor since the waveform's end has no part any more, where 1e-3 is asked for … */
const GONE = 1e-7
/** … and where the last 1e-9 is. */
const GONE_TO_THE_END = 1e-12
/** Steps in a tail are so short that no living mode turns or decays by more than this, in radian or neper. */
const STEP = 0.05
/** Tails are run sample by sample until steps of this size may be taken. */
const WORTHWHILE_STEP = 16
/**
 * Most samples that a margin runs one by one. What moves fast and is alive after that rings for long, as a narrow notch does: its
 * absolute value is then averaged over …
 */
const MOST_SINGLE_SAMPLES = 2 ** 16
/** … so many samples at a time, between which lie steps that are short against its decay alone. */
const RINGING_SAMPLES = 256
const RINGING_WEIGHTS = Float64Array.from(
  { length: RINGING_SAMPLES },
  (_, i) => (1 - Math.cos((2 * Math.PI * (i + 0.5)) / RINGING_SAMPLES)) / RINGING_SAMPLES,
)

/**
 * @param x         waveform that stands alone, x[0] at index 0.
 * @param toTheEnd  follows the tails until less than 1e-9 of the sum is left, else until it no longer shows.
 */
export function absoluteSum(stages: readonly Stage[], x: Float64Array, toTheEnd = false): AbsoluteSum {
  const lifetimes = Math.log(1 / (toTheEnd ? GONE_TO_THE_END : GONE))
  const system = standAlone(stages)
  const input = finiteInput(system, x)
  if (input.values.length === 0) return { at: Float64Array.of(0), before: Float64Array.of(0), total: 0 }
  const marginBefore = singleSamples(system.backwardPoles, lifetimes)
  const marginAfter = singleSamples(system.forwardPoles, lifetimes)
  const from = input.start - marginBefore
  const to = input.start + input.values.length + marginAfter
  const stretch = runPasses(system, input, from, to)

  const left = { lags: [0], sums: [0] }
  const right = { lags: [0], sums: [0] }
  if (system.backward.length > 0 && marginBefore > 0) {
    const { d, c, size } = system.spaces().backward
    sumTail(left, d, c, size, stretch.backwardState, system.backwardPoles, marginBefore, lifetimes)
  }
  if (system.forward.length > 0 && marginAfter > 0) {
    const { forward, backward, start } = system.spaces()
    // after the end y[n] = C_b·X·A_f·s[n] + through·C_f·s[n]
    let row = forward.c
    if (backward.size > 0) {
      const ahead = multiply(backward.c, start, 1, backward.size)
      const moved = multiply(ahead, forward.d, 1, forward.size)
      row = row.map((value, i) => ahead[i] + moved[i] + backward.through * value)
    }
    sumTail(right, forward.d, row, forward.size, stretch.forwardState, system.forwardPoles, marginAfter, lifetimes)
  }

  const nodes = left.lags.length - 1 + stretch.values.length + right.lags.length
  const at = new Float64Array(nodes)
  const before = new Float64Array(nodes)
  let node = 0
  const leftTotal = left.sums[left.sums.length - 1]
  for (let i = left.lags.length - 1; i > 0; i--) {
    at[node] = from - left.lags[i]
    before[node++] = leftTotal - left.sums[i]
  }
  let running = leftTotal
  for (let i = 0; i < stretch.values.length; i++) {
    at[node] = from + i
    before[node++] = running
    running += Math.abs(stretch.values[i])
  }
  for (let i = 0; i < right.lags.length; i++) {
    at[node] = to + right.lags[i]
    before[node++] = running + right.sums[i]
  }
  return { at, before, total: before[nodes - 1] }
}

/** Σ|y[m]| over m < n. */
export function absoluteBefore(sum: AbsoluteSum, n: number): number {
  const { at, before, total } = sum
  if (n <= at[0]) return 0
  if (n >= at[at.length - 1]) return total
  let low = 0
  let high = at.length - 1
  while (high - low > 1) {
    const middle = (low + high) >> 1
    if (at[middle] <= n) low = middle
    else high = middle
  }
  return before[low] + ((n - at[low]) / (at[high] - at[low])) * (before[high] - before[low])
}

/** The largest n with at most the stated sum before it. */
export function lastBefore(sum: AbsoluteSum, most: number): number {
  const { at, before } = sum
  if (before[0] > most) return at[0]
  let low = 0
  let high = at.length
  while (high - low > 1) {
    const middle = (low + high) >> 1
    if (before[middle] <= most) low = middle
    else high = middle
  }
  if (high === at.length) return at[low]
  const fraction = (most - before[low]) / (before[high] - before[low])
  return at[low] + Math.min(Math.floor(fraction * (at[high] - at[low])), at[high] - at[low] - 1)
}

/** The smallest n such that at most the stated sum lies at n and after it. */
export function firstAfter(sum: AbsoluteSum, most: number): number {
  const { at, before, total } = sum
  const enough = total - most
  let low = -1
  let high = at.length - 1
  while (high - low > 1) {
    const middle = (low + high) >> 1
    if (before[middle] >= enough) high = middle
    else low = middle
  }
  if (low < 0) return at[0]
  const fraction = (enough - before[low]) / (before[high] - before[low])
  return at[low] + Math.max(Math.ceil(fraction * (at[high] - at[low])), 1)
}

function swiftness({ decay, angle }: LogPole): number {
  return Math.hypot(decay, angle)
}

function singleSamples(poles: readonly LogPole[], lifetimes: number): number {
  let most = 0
  for (const pole of poles) {
    if (swiftness(pole) * WORTHWHILE_STEP > STEP) most = Math.max(most, Math.ceil(lifetimes / pole.decay))
  }
  // one sample at least, so that what a first-order section leaves in its last state is seen
  return poles.length === 0 ? 0 : Math.min(Math.max(most, 1), MOST_SINGLE_SAMPLES)
}

/** Adds lags (from 1 on) and the sums of |C·A^j·state| over all j below them. */
function sumTail(
  tail: { lags: number[]; sums: number[] },
  d: Float64Array,
  c: Float64Array,
  size: number,
  start: Float64Array,
  poles: readonly LogPole[],
  margin: number,
  lifetimes: number,
): void {
  const modes = poles.map((pole) => ({
    end: lifetimes / pole.decay - margin,
    swift: swiftness(pole),
    decay: pole.decay,
  }))
  const state = start.slice()
  const ringing = new Float64Array(size)
  const move = new Float64Array(size)
  let power = d
  let step = 1
  let lag = 0
  let sum = 0
  let change = 0
  let rings = false
  let back = 1
  let value = 0
  for (;;) {
    if (lag >= change) {
      // some modes have ended: the others may allow longer steps
      const living = modes.filter(({ end }) => end > lag)
      if (living.length === 0) return
      change = Math.min(...living.map(({ end }) => end))
      let fastest = Math.max(...living.map(({ swift }) => swift))
      rings = fastest * WORTHWHILE_STEP > STEP
      if (rings) fastest = Math.max(...living.map(({ decay }) => decay))
      while (2 * step * fastest <= STEP) {
        power = doubled(power, size)
        step *= 2
      }
      // the mean belongs to the middle of its samples: what lasts longest has been larger at their start by this factor
      const slowest = Math.min(...living.map(({ decay }) => decay))
      back = Math.exp((slowest * RINGING_SAMPLES) / 2)
      value = rings ? back * meanWhileRinging(d, c, state, ringing, move) : product(c, state)
    }
    takeStep(power, state, move)
    const next = rings ? back * meanWhileRinging(d, c, state, ringing, move) : product(c, state)
    const here = Math.abs(value)
    const there = Math.abs(next)
    // a straight line between the two, which may cross zero, and the ends' difference between sum and integral
    const area = value * next < 0 ? (here * here + there * there) / (2 * (here + there)) : (here + there) / 2
    sum += step === 1 ? here : step * area + (here - there) / 2
    lag += step
    tail.lags.push(lag)
    tail.sums.push(sum)
    value = next
  }
}

function product(c: Float64Array, state: Float64Array): number {
  let total = 0
  for (let i = 0; i < c.length; i++) total += c[i] * state[i]
  return total
}

/** state becomes (1 + D)·state; `move` is room for the difference. */
function takeStep(d: Float64Array, state: Float64Array, move: Float64Array): void {
  const size = state.length
  for (let i = 0; i < size; i++) {
    let total = 0
    // a section depends on itself and on those before it alone
    for (let j = 0; j <= (i | 1); j++) total += d[i * size + j] * state[j]
    move[i] = total
  }
  for (let i = 0; i < size; i++) state[i] += move[i]
}

/**
 * Mean absolute output around the middle of the next samples, weighted by a Hann window, so that it hardly depends on the phase in
 * which the samples begin; the state stays.
 */
function meanWhileRinging(
  d: Float64Array,
  c: Float64Array,
  state: Float64Array,
  running: Float64Array,
  move: Float64Array,
): number {
  running.set(state)
  let sum = 0
  for (let i = 0; i < RINGING_SAMPLES; i++) {
    sum += RINGING_WEIGHTS[i] * Math.abs(product(c, running))
    takeStep(d, running, move)
  }
  return sum
}
