/** The labels of a claim's curve: where the chain stands, the critical values, and what is claimed, each where there is room. */
import type { ClaimCurve } from '../../../evidence/claims/claim.ts'
import type { Frame, Scale } from '../../../plot/index.ts'
import type { CurveCourse, LabelBox, LabelPlace } from '../../../plot/place-labels.ts'
import { brief } from '../../../words/index.ts'
import { around, type DrawnLabel, drawnLabels, firstThatFits, labelSize, type WantedText } from '../../placed-labels.ts'

/** Of a flip's line nothing but its width and a breath of paper. */
const LINE_PX = 3
/** The foot of the plot belongs to the critical values. */
const FOOT_PX = 9

/**
 * @param bounds  the claimed amounts that are drawn, in the number's unit.
 * @param answerUnit  of the number.
 */
export function curveLabels(
  curve: ClaimCurve,
  frame: Frame,
  x: Scale,
  y: Scale,
  bounds: readonly number[],
  answerUnit: string,
): DrawnLabel[] {
  const course = courseOfCurve(curve, frame, x, y)
  const dot = presentBox(curve, x, y)
  const lines = curve.flips.map(
    ({ at }): LabelBox => around(x.toPixel(at), (frame.top + frame.bottom) / 2, LINE_PX, 400),
  )
  const drawn: DrawnLabel[] = []
  // a label beside the critical lines before one on them
  const add = (wanted: WantedText, courses: readonly CurveCourse[]) => {
    const boxes = [...drawn.map(({ box }) => box), ...(dot ? [dot] : [])]
    const free = drawnLabels([wanted], frame, courses, [...boxes, ...lines])
    drawn.push(...(free.length > 0 ? free : drawnLabels([wanted], frame, courses, boxes)))
  }
  for (const flip of flipsToName(curve)) {
    const text = flipLabel(curve, flip.at)
    const places = flipPlaces(x.toPixel(flip.at), labelSize(text).width, frame)
    const boxes = drawn.map(({ box }) => box)
    drawn.push(...firstThatFits([{ ...text, places }], (one) => drawnLabels([one], frame, [course], boxes)))
  }
  const levels = [0, ...bounds].map((value): CurveCourse => levelCourse(y.toPixel(value), frame))
  const present = presentLabel(curve, frame, x)
  if (present) add(present, [course, ...levels])
  const claimed = bounds.filter((bound) => bound !== 0)
  for (const bound of claimed) add(boundLabel(bound, answerUnit, frame, y), [course, levels[0]])
  return drawn
}

/** The nearest to where the chain stands first: where not all find room it is those that matter. */
function flipsToName({ flips, present, unit }: ClaimCurve): ClaimCurve['flips'] {
  const far = (at: number) => (unit === 'Hz' ? Math.abs(Math.log(at / present)) : Math.abs(at - present))
  return [...flips].sort((a, b) => far(a.at) - far(b.at))
}

function flipLabel({ unit }: ClaimCurve, at: number): Omit<WantedText, 'places'> {
  const words = unit === 'Hz' ? `${brief(at, 2)} Hz` : String(at)
  return { id: `flip ${at}`, tone: 'over', rows: [{ strong: words }] }
}

/** At the foot of its line, or to one side of it. */
function flipPlaces(pixel: number, width: number, frame: Frame): LabelPlace[] {
  const y = frame.bottom - FOOT_PX
  const middle = Math.min(frame.right - width / 2, Math.max(frame.left + width / 2, pixel))
  return [
    { x: middle, y, anchor: 'middle', cost: 0 },
    { x: pixel + 5, y, anchor: 'start', cost: 2 },
    { x: pixel - 5, y, anchor: 'end', cost: 2 },
  ]
}

function presentBox({ points, present }: ClaimCurve, x: Scale, y: Scale): LabelBox | null {
  const here = points.find(({ at }) => at === present)
  return here && here.number !== null ? around(x.toPixel(here.at), y.toPixel(here.number), 6) : null
}

function presentLabel({ points, present, unit }: ClaimCurve, frame: Frame, x: Scale): WantedText | null {
  if (!points.some(({ at }) => at === present)) return null
  const words = `now ${brief(present, 3)}${unit === null ? '' : ` ${unit}`}`
  const text: Omit<WantedText, 'places'> = { id: 'now', tone: 'after', rows: [{ strong: words }] }
  return { ...text, places: placesOnLine(x.toPixel(present), frame) }
}

/** On the vertical line of the present value or to one side of it, at its head rather than further down. */
function placesOnLine(pixel: number, frame: Frame): LabelPlace[] {
  const places: LabelPlace[] = []
  for (let y = frame.top + 9; y < frame.bottom - 2 * FOOT_PX; y += 6) {
    const cost = (y - frame.top) * 0.25
    places.push(
      { x: pixel + 6, y, anchor: 'start', cost },
      { x: pixel - 6, y, anchor: 'end', cost: cost + 1 },
      { x: pixel, y, anchor: 'middle', cost: cost + 6 },
    )
  }
  return places
}

/** Along its line, above or below, from the right end on. */
function boundLabel(bound: number, unit: string, frame: Frame, y: Scale): WantedText {
  const text: Omit<WantedText, 'places'> = {
    id: `claimed ${bound}`,
    tone: 'ink',
    rows: [{ plain: `claimed ${brief(bound, 3)} ${unit}` }],
  }
  const { width } = labelSize(text)
  const places: LabelPlace[] = []
  for (let right = frame.right - 4; right - width > frame.left; right -= 14)
    for (const side of [-9, 9])
      places.push({
        x: right,
        y: y.toPixel(bound) + side,
        anchor: 'end',
        cost: (frame.right - right) * 0.04 + (side > 0 ? 1 : 0),
      })
  return { ...text, places }
}

/** A line across the plot: a label on it can be read, though not well. */
function levelCourse(height: number, frame: Frame): CurveCourse {
  return { heights: new Float64Array(Math.floor(frame.plotWidth) + 1).fill(height), weight: 8 }
}

/** Heights of the curve by pixel column; none where it leaves the plot or there is no number. */
function courseOfCurve({ points }: ClaimCurve, frame: Frame, x: Scale, y: Scale): CurveCourse {
  const heights = new Float64Array(Math.floor(frame.plotWidth) + 1).fill(Number.NaN)
  for (let i = 1; i < points.length; i++) {
    const [a, b] = [points[i - 1], points[i]]
    if (a.number === null || b.number === null) continue
    const [from, to] = [x.toPixel(a.at), x.toPixel(b.at)]
    const [start, end] = [y.toPixel(a.number), y.toPixel(b.number)]
    const first = Math.max(0, Math.ceil(from - frame.left))
    const last = Math.min(heights.length - 1, Math.floor(to - frame.left))
    for (let column = first; column <= last; column++)
      heights[column] = start + ((end - start) * (frame.left + column - from)) / (to - from || 1)
  }
  return { heights, weight: 44 }
}
