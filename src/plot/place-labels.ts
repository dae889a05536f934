/** A rectangle in pixels of the figure's svg. */
export type LabelBox = { readonly left: number; readonly right: number; readonly top: number; readonly bottom: number }

/** One place where a label may stand; the lower its cost, the better. */
export type LabelPlace = {
  readonly x: number
  /** Middle of the text's height. */
  readonly y: number
  readonly anchor: 'start' | 'middle' | 'end'
  readonly cost: number
}

/** A label and all the places where it would be understood. */
export type LabelWish = {
  readonly width: number
  readonly height: number
  readonly places: readonly LabelPlace[]
  /** A label whose best place costs more than this is left out; default: never for its cost. */
  readonly maxCost?: number
}

/** A curve that labels should not cover: its height in pixels at limits.left, limits.left + 1 …; not finite where there is none. */
export type CurveCourse = { readonly heights: ArrayLike<number>; readonly weight: number }

export type LabelRoom = {
  /** No label leaves this box. */
  readonly limits: LabelBox
  /** What no label may touch: handles, dots. */
  readonly taken?: readonly LabelBox[]
  readonly courses?: readonly CurveCourse[]
  /** Least room between two labels, px; default 3. */
  readonly gap?: number
}

export type PlacedLabel = {
  readonly x: number
  readonly y: number
  readonly anchor: 'start' | 'middle' | 'end'
  readonly box: LabelBox
  /** A curve runs through it, so that it needs a halo. */
  readonly crossed: boolean
  /** What the place costs. */
  readonly cost: number
}

/**
 * Places labels beside the curves they name, so that none touches another, the marks or the figure's edge: one after another, each at
 * the cheapest place still free. A place costs what the wish says, and for each curve under the label weight·(0.5 + share of its width
 * under which the curve runs).
 *
 * @param wishes  the most important first; a later one never moves an earlier one.
 * @returns  where each stands, in the same order; null for a label that finds no place.
 * @throws RangeError for a size that is not finite or below 0.
 */
export function placeLabels(wishes: readonly LabelWish[], room: LabelRoom): (PlacedLabel | null)[] {
  const { limits, taken = [], courses = [], gap = 3 } = room
  const blocked = [...taken]
  return wishes.map((wish, i) => {
    if (!(wish.width >= 0 && wish.height >= 0 && Number.isFinite(wish.width + wish.height))) {
      throw new RangeError(`wishes[${i}] must have a finite size, has ${wish.width} × ${wish.height}`)
    }
    let best: PlacedLabel | null = null
    let least = wish.maxCost ?? Number.POSITIVE_INFINITY
    for (const place of wish.places) {
      if (!(place.cost < least)) continue
      const box = boxAt(place, wish)
      if (!within(box, limits) || blocked.some((other) => touches(box, other, gap))) continue
      let cost = place.cost
      let crossed = false
      for (const course of courses) {
        const share = shareCrossed(box, course.heights, limits.left)
        if (share === 0) continue
        crossed = true
        cost += course.weight * (0.5 + share)
      }
      if (!(cost < least)) continue
      least = cost
      best = { x: place.x, y: place.y, anchor: place.anchor, box, crossed, cost }
    }
    if (best !== null) blocked.push((best as PlacedLabel).box)
    return best
  })
}

/** The box that a text takes at a place. */
function boxAt(place: LabelPlace, size: { width: number; height: number }): LabelBox {
  const left = place.anchor === 'start' ? place.x : place.x - (place.anchor === 'end' ? size.width : size.width / 2)
  return { left, right: left + size.width, top: place.y - size.height / 2, bottom: place.y + size.height / 2 }
}

/** False also for a box without numbers. */
function within(box: LabelBox, limits: LabelBox): boolean {
  return box.left >= limits.left && box.right <= limits.right && box.top >= limits.top && box.bottom <= limits.bottom
}

function touches(a: LabelBox, b: LabelBox, gap: number): boolean {
  return a.left < b.right + gap && b.left < a.right + gap && a.top < b.bottom && b.top < a.bottom
}

/** The share of the box' columns that the curve enters; a steep stretch between two columns counts for the first of them. */
function shareCrossed(box: LabelBox, heights: ArrayLike<number>, origin: number): number {
  const first = Math.max(0, Math.floor(box.left - origin))
  const last = Math.min(heights.length - 1, Math.ceil(box.right - origin))
  if (last < first) return 0
  let crossed = 0
  for (let i = first; i <= last; i++) {
    const here = heights[i]
    const next = i + 1 < heights.length && Number.isFinite(heights[i + 1]) ? heights[i + 1] : here
    if (Math.min(here, next) < box.bottom && Math.max(here, next) > box.top) crossed++
  }
  return crossed / (last - first + 1)
}

/**
 * Places along a curve, above and below it: at every twelfth column, as near to the curve as the label's width lets it stand.
 *
 * @param heights  the curve's course as in CurveCourse.
 * @param size     of the label, px.
 * @param origin   pixel of heights[0].
 * @param costAt   what it costs to stand around a column (index into heights), above (−1) or below (1) the curve.
 */
export function placesAlong(
  heights: ArrayLike<number>,
  size: { readonly width: number; readonly height: number },
  origin: number,
  costAt: (column: number, side: -1 | 1) => number,
): LabelPlace[] {
  const half = Math.ceil(size.width / 2)
  const places: LabelPlace[] = []
  for (let column = half + 2; column + half + 2 < heights.length; column += 12) {
    let top = Number.POSITIVE_INFINITY
    let bottom = Number.NEGATIVE_INFINITY
    let drawn = 0
    for (let i = column - half; i <= column + half; i += 4) {
      if (!Number.isFinite(heights[i])) continue
      drawn++
      top = Math.min(top, heights[i])
      bottom = Math.max(bottom, heights[i])
    }
    if (drawn === 0) continue
    // beside a steep stretch a label stands off from its curve
    const steep = (bottom - top) * 0.03
    for (const side of [-1, 1] as const) {
      const edge = side < 0 ? top : bottom
      places.push({
        x: origin + column,
        y: edge + side * (size.height / 2 + 3),
        anchor: 'middle',
        cost: costAt(column, side) + steep,
      })
    }
  }
  return places
}
