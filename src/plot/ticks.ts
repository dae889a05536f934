import { tickStep, ticks as neatTicks } from 'd3'
import { numberText } from './number-text.ts'
import type { Scale } from './scale.ts'

/** One tick: where it stands in data and in pixels, and what is written there. */
export type Tick = { readonly value: number; readonly pixel: number; readonly label: string }

export type TickOptions = {
  /** About how many ticks on a linear scale; default by the room: one per 34 px upright, one per 110 px flat. */
  count?: number
  /** Smallest distance of two labels in pixels on the other scales; default 18 upright, 48 flat. */
  minGapPx?: number
  /** Which way the axis runs; sets the defaults above. Default 'flat'. */
  lie?: 'flat' | 'upright'
}

/** Few ticks with neat numbers for any scale, ascending in value, all inside the domain. */
export function ticksFor(scale: Scale, options: TickOptions = {}): Tick[] {
  const upright = options.lie === 'upright'
  const lengthPx = Math.abs(scale.range[1] - scale.range[0])
  const count = options.count ?? Math.max(2, lengthPx / (upright ? 34 : 110))
  const minGapPx = Math.max(1, options.minGapPx ?? (upright ? 18 : 48))
  if (scale.kind === 'log') return logTicks(scale, count, minGapPx)
  if (scale.kind === 'compressed') return compressedTicks(scale, count, minGapPx)
  return linearTicks(scale, count)
}

/** Ticks at the given values, those outside the domain left out; the label by `format`, else the shortest number. */
export function ticksAt(scale: Scale, values: readonly number[], format: (v: number) => string = numberText): Tick[] {
  const [low, high] = ascending(scale.domain)
  return values
    .filter((v) => v >= low && v <= high)
    .sort((a, b) => a - b)
    .map((value) => ({ value, pixel: scale.toPixel(value), label: format(value) }))
}

/** Multiples of 1, 2 or 5 × 10ⁿ, all with as many decimals as the step needs; zero is plain "0". */
function linearTicks(scale: Scale, count: number): Tick[] {
  const [low, high] = ascending(scale.domain)
  const step = tickStep(low, high, count)
  // steps are 1, 2 or 5 × 10ⁿ, so that their power of ten gives the decimals
  const decimals = Math.max(0, -Math.floor(Math.log10(step) + 1e-9))
  const format = (v: number) => (v === 0 ? '0' : numberText(v, decimals > 9 ? undefined : decimals))
  return ticksAt(scale, neatTicks(low, high, count), format)
}

/** Powers of ten; with fewer than three of them 1, 2 and 5; within less than that the linear ticks. */
function logTicks(scale: Scale, count: number, minGapPx: number): Tick[] {
  const [low, high] = ascending(scale.domain)
  const first = Math.floor(Math.log10(low)) - 1
  const last = Math.ceil(Math.log10(high)) + 1
  const decades: number[] = []
  const fine: number[] = []
  for (let k = first; k <= last; k++) {
    decades.push(Number(`1e${k}`))
    for (const m of [1, 2, 5]) fine.push(Number(`${m}e${k}`))
  }
  const coarse = ticksAt(scale, decades)
  if (coarse.length >= 3) return thinned(coarse, minGapPx)
  const oneTwoFive = ticksAt(scale, fine)
  if (oneTwoFive.length >= 3 && smallestGap(oneTwoFive) >= minGapPx) return oneTwoFive
  if (coarse.length >= 2) return coarse
  return oneTwoFive.length >= 2 ? thinned(oneTwoFive, minGapPx) : thinned(linearTicks(scale, count), minGapPx)
}

/**
 * Zero, and on both sides the same neat values in steps of about ten: 1.5, 0.2, 0, −0.2. Values whose label would stand too near
 * the one before are left out. A side too short for any of them gets one neat value of its own, if there is room.
 */
function compressedTicks(scale: Scale, count: number, minGapPx: number): Tick[] {
  const [low, high] = ascending(scale.domain)
  const width = scale.linearWidth ?? 1
  // on so short a stretch the scale is a straight line to the eye, and so are its ticks
  if (low > 0 || high < 0 || Math.max(-low, high) <= 1.5 * width) return thinned(linearTicks(scale, count), minGapPx)
  const zero = scale.toPixel(0)
  const apart = (a: number, b: number) => Math.abs(scale.toPixel(a) - scale.toPixel(b))
  const magnitudes: number[] = []
  for (let next = neatBelow(Math.max(-low, high)); next > 0; next = tenth(next)) {
    if (Math.abs(scale.toPixel(next) - zero) < minGapPx) break
    const before = magnitudes.at(-1)
    if (before === undefined || apart(before, next) >= minGapPx) magnitudes.push(next)
  }
  const values = [0]
  for (const [sign, reach] of [
    [1, high],
    [-1, -low],
  ] as const) {
    const fitting = magnitudes.filter((m) => m <= reach)
    if (fitting.length === 0 && reach > 0) fitting.push(neatBelow(reach))
    for (const m of fitting) if (apart(sign * m, 0) >= minGapPx) values.push(sign * m)
  }
  return ticksAt(scale, values)
}

/** The largest of 1, 1.5, 2, 3, 5 × 10ⁿ that is at most v. */
function neatBelow(v: number): number {
  const exponent = Math.floor(Math.log10(v))
  for (const k of [exponent + 1, exponent, exponent - 1]) {
    for (const m of [5, 3, 2, 1.5, 1]) {
      const neat = Number(`${m}e${k}`)
      if (neat <= v) return neat
    }
  }
  return 0
}

/** A tenth of a neat value, kept neat: 0.15 becomes 0.2. */
function tenth(v: number): number {
  const exponent = Math.floor(Math.log10(v) + 1e-9)
  const mantissa = Number((v / 10 ** exponent).toPrecision(3))
  return Number(`${mantissa === 1.5 ? 2 : mantissa}e${exponent - 1}`)
}

/** Every n-th tick, n the smallest number that leaves all gaps wide enough; zero or the first one stays. */
function thinned(all: Tick[], minGapPx: number): Tick[] {
  if (all.length < 2) return all
  const anchor = Math.max(
    0,
    all.findIndex((t) => t.value === 0),
  )
  for (let n = 1; n < all.length; n++) {
    const kept = all.filter((_, i) => (i - anchor) % n === 0)
    if (smallestGap(kept) >= minGapPx) return kept
  }
  return [all[anchor]]
}

function smallestGap(all: readonly Tick[]): number {
  let gap = Number.POSITIVE_INFINITY
  for (let i = 1; i < all.length; i++) gap = Math.min(gap, Math.abs(all[i].pixel - all[i - 1].pixel))
  return gap
}

function ascending([a, b]: readonly [number, number]): [number, number] {
  return a < b ? [a, b] : [b, a]
}
