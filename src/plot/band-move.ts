import type { SliderKey } from './slider-keys.ts'

/** A window on an axis, from ≤ to, in the axis' own unit. */
export type BandValue = { readonly from: number; readonly to: number }

/** The limits of a band and the grid that it snaps to. */
export type BandLimits = {
  /** Neither edge leaves min..max. */
  readonly min: number
  readonly max: number
  /** One step: the sampling interval. */
  readonly step: number
  /** A value on the grid of steps; default 0. */
  readonly origin?: number
  /** Least width; default one step, 0 allows a single moment. */
  readonly minWidth?: number
}

export type BandPart = 'from' | 'to' | 'body'

/** The nearest value of the grid that lies within min..max; the limits themselves are reachable off the grid. */
export function snapToGrid(value: number, limits: BandLimits): number {
  const origin = limits.origin ?? 0
  const steps = Math.round((value - origin) / limits.step)
  return clamp(origin + steps * limits.step, limits.min, limits.max)
}

/**
 * The band after one of its parts was moved to a value: an edge stops short of the other and of the limits; the body keeps its width
 * and stops at the limits. Both land on the grid.
 *
 * @param value  for an edge the wanted place, for the body the wanted place of `from`.
 */
export function moveBandTo(band: BandValue, part: BandPart, value: number, limits: BandLimits): BandValue {
  const minWidth = limits.minWidth ?? limits.step
  if (part === 'from') return { from: clamp(snapToGrid(value, limits), limits.min, band.to - minWidth), to: band.to }
  if (part === 'to') return { from: band.from, to: clamp(snapToGrid(value, limits), band.from + minWidth, limits.max) }
  const width = band.to - band.from
  const from = clamp(snapToGrid(value, limits), limits.min, limits.max - width)
  return { from, to: from + width }
}

/**
 * The band after a key on one of its parts. Steps count from where the part stands, so that a limit typed off the grid keeps its
 * distance from it.
 */
export function moveBandByKey(band: BandValue, part: BandPart, key: SliderKey, limits: BandLimits): BandValue {
  const minWidth = limits.minWidth ?? limits.step
  const stands = part === 'to' ? band.to : band.from
  const wanted =
    key.kind === 'end' ? (key.end === 'min' ? limits.min : limits.max) : tidy(stands + key.steps * limits.step, limits)
  if (part === 'from') return { from: clamp(wanted, limits.min, band.to - minWidth), to: band.to }
  if (part === 'to') return { from: band.from, to: clamp(wanted, band.from + minWidth, limits.max) }
  const width = band.to - band.from
  const from = clamp(wanted, limits.min, limits.max - width)
  return { from, to: from + width }
}

/** The rectangles in which the pointer finds a band's three parts, left and right in pixels. */
export type BandHitAreas = { from: [number, number]; body: [number, number]; to: [number, number] }

/**
 * Edges have areas 24 px wide. On a narrow band these move outwards, so that the middle third still belongs to the body; a body
 * narrower than that is reached by the keyboard.
 */
export function bandHitAreas(fromPx: number, toPx: number): BandHitAreas {
  const left = Math.min(fromPx, toPx)
  const right = Math.max(fromPx, toPx)
  const inner = Math.min(12, (right - left) / 3)
  const areas: BandHitAreas = {
    from: [left + inner - 24, left + inner],
    body: [left + inner, right - inner],
    to: [right - inner, right - inner + 24],
  }
  // on an axis that runs leftwards "from" is the right edge
  return fromPx <= toPx ? areas : { from: areas.to, body: areas.body, to: areas.from }
}

/** Takes the rounding error off a value that is meant to lie on the grid. */
function tidy(value: number, limits: BandLimits): number {
  const origin = limits.origin ?? 0
  const steps = (value - origin) / limits.step
  return Math.abs(steps - Math.round(steps)) < 1e-6 ? origin + Math.round(steps) * limits.step : value
}

/** The value within low..high; low wins where they cross. */
function clamp(value: number, low: number, high: number): number {
  return Math.max(low, Math.min(high, value))
}
