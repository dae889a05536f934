/** Labels of a figure that are put where there is room: their size, the curves under them, and where they come to stand. */
import { type Frame, type Scale, type Tone, textWidth } from '../plot/index.ts'
import { type CurveCourse, type LabelBox, type LabelPlace, placeLabels } from '../plot/place-labels.ts'

/** A label of one or more rows; the semibold part of a row comes first. */
export interface LabelText {
  id: string
  tone: Tone
  rows: readonly { strong?: string; plain?: string }[]
}

export interface DrawnLabel extends LabelText {
  x: number
  /** Middle of the whole label. */
  y: number
  anchor: 'start' | 'middle' | 'end'
  box: LabelBox
}

export interface WantedText extends LabelText {
  places: readonly LabelPlace[]
  /** Dearer places than this are worse than no label. */
  maxCost?: number
}

export const ROW_PX = 16
/** Semibold letters are a little wider than what textWidth reckons with. */
const STRONG = 1.06

export function labelSize(text: LabelText): { width: number; height: number } {
  const widths = text.rows.map(
    ({ strong = '', plain = '' }) =>
      textWidth(strong) * STRONG + (strong && plain ? textWidth(' ') : 0) + textWidth(plain),
  )
  return { width: Math.max(0, ...widths), height: ROW_PX * text.rows.length }
}

/** What a label costs that covers a curve along its whole width. */
const CROSSED = 44

/**
 * Heights of a curve in pixels, one for each pixel of the plot area's width, for placeLabels.
 *
 * @param startMs  moment of values[0].
 */
export function courseOf(
  values: Float64Array,
  startMs: number,
  stepMs: number,
  frame: Frame,
  x: Scale,
  y: Scale,
): CurveCourse {
  const heights = new Float64Array(Math.floor(frame.plotWidth) + 1).fill(Number.NaN)
  for (let i = 0; i < heights.length; i++) {
    const place = (x.fromPixel(frame.left + i) - startMs) / stepMs
    if (!(place >= 0 && place <= values.length - 1)) continue
    const before = Math.floor(place)
    const part = place - before
    heights[i] = y.toPixel(part === 0 ? values[before] : values[before] * (1 - part) + values[before + 1] * part)
  }
  return { heights, weight: CROSSED }
}

/**
 * The labels that find a place, the most important first; none covers another, what is taken, or the edge of the plot area.
 *
 * @param taken  boxes in which nothing may stand.
 */
export function drawnLabels(
  wanted: readonly WantedText[],
  frame: Frame,
  courses: readonly CurveCourse[],
  taken: readonly LabelBox[],
): DrawnLabel[] {
  const limits = { left: frame.left, right: frame.right, top: frame.top, bottom: frame.bottom }
  const placed = placeLabels(
    wanted.map((text) => ({ ...labelSize(text), places: text.places, maxCost: text.maxCost })),
    { limits, courses, taken },
  )
  return wanted.flatMap(({ id, tone, rows }, i) => {
    const place = placed[i]
    return place ? [{ id, tone, rows, x: place.x, y: place.y, anchor: place.anchor, box: place.box }] : []
  })
}

/** A square around a dot, or around anything else that is that far to all sides. */
export function around(x: number, y: number, radius: number, radiusY = radius): LabelBox {
  return { left: x - radius, right: x + radius, top: y - radiusY, bottom: y + radiusY }
}

/**
 * Places on both sides of a point, the nearest first.
 *
 * @param lean  −1 for a label that would rather stand above its point, 1 below, 0 for neither.
 */
export function placesBeside(x: number, y: number, lean: -1 | 0 | 1): LabelPlace[] {
  const places: LabelPlace[] = []
  for (const side of [1, -1] as const)
    for (const dx of [12, 20, 30, 42, 56, 72, 90, 112])
      for (const dy of [0, -10, 10, -18, 18, -28, 28, -40, 40, -54, 54]) {
        const against = lean !== 0 && dy * lean < 0 ? 10 : 0
        places.push({
          x: x + side * dx,
          y: y + dy,
          anchor: side > 0 ? 'start' : 'end',
          cost: Math.abs(dy) * 0.5 + (dx - 12) * 0.22 + (side < 0 ? 5 : 0) + against,
        })
      }
  return places
}

/** Places above and below a point, for a label of that width that finds no room beside it. */
export function placesOver(x: number, y: number, width: number): LabelPlace[] {
  return [0.25, 0.5, 0.75].flatMap((part) =>
    [-18, 18, -28, 28].map(
      (dy): LabelPlace => ({ x: x - part * width, y: y + dy, anchor: 'start', cost: 8 + Math.abs(dy) * 0.5 }),
    ),
  )
}

/** The first wording for which a place is found that is no dearer than its limit. */
export function firstThatFits(
  wordings: readonly WantedText[],
  place: (wanted: WantedText) => DrawnLabel[],
): DrawnLabel[] {
  for (const wording of wordings) {
    const placed = place(wording)
    if (placed.length > 0) return placed
  }
  return []
}
