/** The labels of the time figure: those of the windows and the score, which stand still, and those that follow the cursor. */
import type { Frame, Scale, Tone } from '../plot/index.ts'
import { type CurveCourse, type LabelBox, type LabelPlace, placesAlong } from '../plot/place-labels.ts'
import {
  around,
  type DrawnLabel,
  drawnLabels,
  firstThatFits,
  type LabelText,
  labelSize,
  placesBeside,
  ROW_PX,
  type WantedText,
} from './placed-labels.ts'
import type { ScoreMark } from './score-mark.ts'

/** Height of the bands' handles, as a part of the plot's. */
export const HANDLE_AT = 0.4

export interface WindowLabel {
  id: string
  /** The window in pixels, left to right. */
  fromPx: number
  toPx: number
  rows: LabelText['rows']
}

export interface StillLabels {
  frame: Frame
  windows: readonly WindowLabel[]
  /** The score's mark in pixels and its text; null where the window's label says it. */
  mark: { fromPx: number; toPx: number; y: number; text: string } | null
  /** Hatched stretches in pixels. */
  unseen: readonly { fromPx: number; toPx: number }[]
  /** Further conditions: their filtered curves. */
  others: readonly { name: string; tone: Tone; heights: ArrayLike<number> }[]
  zeroY: number
  courses: readonly CurveCourse[]
}

/** Labels that depend on the data and the windows, not on the cursor. */
export function stillLabels(still: StillLabels): DrawnLabel[] {
  const { frame, windows, mark, unseen, others, zeroY, courses } = still
  const wanted: WantedText[] = windows.map((entry) => windowLabel(entry, windows, frame))
  if (mark) wanted.push(markLabel(mark))
  for (const [i, { name, tone, heights }] of others.entries()) {
    const text: LabelText = { id: `condition ${i}`, tone, rows: [{ strong: name }] }
    // best where the curve stands far from zero, since there it is alone most often
    // and dear where it runs together with another one
    const rivals = courses.filter((course) => course.heights !== heights)
    const costAt = (column: number) => {
      const apart = Math.min(14, ...rivals.map((rival) => Math.abs(rival.heights[column] - heights[column])))
      return 24 - Math.min(24, Math.abs(heights[column] - zeroY) * 0.4) + 2 * (14 - apart)
    }
    wanted.push({ ...text, places: placesAlong(heights, labelSize(text), frame.left, costAt) })
  }
  for (const [i, { fromPx, toPx }] of unseen.entries()) {
    const text: LabelText = { id: `unseen ${i}`, tone: 'quiet', rows: [{ plain: 'unseen' }] }
    if (toPx - fromPx < labelSize(text).width + 10) continue
    const places = [0, 1, 2, 3].map((row): LabelPlace => {
      return { x: (fromPx + toPx) / 2, y: frame.bottom - 10 - ROW_PX * row, anchor: 'middle', cost: row * 4 }
    })
    wanted.push({ ...text, places, maxCost: 40 })
  }
  return drawnLabels(wanted, frame, courses, handles(windows, frame))
}

/** The handles at the edges of the windows, which stand above everything. */
export function handles(windows: readonly WindowLabel[], frame: Frame): LabelBox[] {
  const y = frame.top + frame.plotHeight * HANDLE_AT
  return windows.flatMap(({ fromPx, toPx }) => [around(fromPx, y, 5, 13), around(toPx, y, 5, 13)])
}

/** Inside its window where that is wide enough, else beside it; at the top, or in the rows below. */
function windowLabel(
  { id, fromPx, toPx, rows }: WindowLabel,
  windows: readonly WindowLabel[],
  frame: Frame,
): WantedText {
  const text: LabelText = { id, tone: 'ink', rows }
  const { width, height } = labelSize(text)
  const places: LabelPlace[] = []
  // in another window it would be taken for that one's
  const astray = (left: number, right: number) =>
    windows.some((other) => other.id !== id && left < other.toPx && right > other.fromPx) ? 30 : 0
  for (let row = 0; row * 12 + height < frame.plotHeight - 6; row++) {
    const y = frame.top + 4 + height / 2 + row * 12
    const cost = row * 9
    if (toPx - fromPx >= width + 14) places.push({ x: fromPx + 8, y, anchor: 'start', cost })
    // from one edge inwards and out at the other, where neighbours leave no room
    places.push({ x: toPx - 7, y, anchor: 'end', cost: cost + 16 + astray(toPx - 7 - width, toPx - 7) })
    places.push({ x: fromPx + 8, y, anchor: 'start', cost: cost + 17 + astray(fromPx + 8, fromPx + 8 + width) })
    places.push({ x: toPx + 8, y, anchor: 'start', cost: cost + 4 + astray(toPx + 8, toPx + 8 + width) })
    places.push({ x: fromPx - 8, y, anchor: 'end', cost: cost + 7 + astray(fromPx - 8 - width, fromPx - 8) })
  }
  return { ...text, places }
}

function markLabel({ fromPx, toPx, y, text }: { fromPx: number; toPx: number; y: number; text: string }): WantedText {
  const places: LabelPlace[] = []
  const label: LabelText = { id: 'score after', tone: 'after', rows: [{ strong: text }] }
  // along a line that is long enough for it
  if (toPx - fromPx > labelSize(label).width + 16)
    for (const dy of [-12, 12, -22, 22])
      for (const part of [0, 0.25, 0.5, 0.75, 1])
        places.push({
          x: fromPx + 8 + part * (toPx - fromPx - 16 - labelSize(label).width),
          y: y + dy,
          anchor: 'start',
          cost: Math.abs(dy) * 0.5 - 6,
        })
  for (const dy of [0, 12, -12, 18, -18, 28, -28, 40, -40, 54, -54, 70, -70])
    for (const dx of [8, 18, 32, 50]) {
      const cost = Math.abs(dy) * 0.5 + (dx - 8) * 0.3
      places.push({ x: toPx + dx, y: y + dy, anchor: 'start', cost })
      places.push({ x: fromPx - dx, y: y + dy, anchor: 'end', cost: cost + 3 })
    }
  return { ...label, places }
}

/** What is read at the cursor. */
export interface CursorReading {
  id: string
  tone: Tone
  name: string
  text: string
  /** Height of the curve there, px. */
  y: number
  /** Heights of a curve that may be named anywhere along it where there is no room at the cursor. */
  along?: ArrayLike<number>
}

/**
 * The moment at the top of the cursor's line and the values beside the curves.
 *
 * @param still  labels that already stand, and what else is in the way.
 */
export function cursorLabels(
  frame: Frame,
  cursorPx: number,
  moment: string,
  readings: readonly CursorReading[],
  courses: readonly CurveCourse[],
  still: readonly LabelBox[],
): DrawnLabel[] {
  const order = [...readings].sort((a, b) => a.y - b.y)
  const lean = (reading: CursorReading) => {
    if (order.length < 2) return 0
    const place = order.indexOf(reading)
    return place === 0 ? -1 : place === order.length - 1 ? 1 : 0
  }
  const beside = (reading: CursorReading) => placesBeside(cursorPx, reading.y, lean(reading))
  const rows = [0, 1, 2, 3, 4].flatMap((row): LabelPlace[] => {
    const y = frame.top + 10 + row * ROW_PX
    return [
      { x: cursorPx - 7, y, anchor: 'end', cost: row * 8 },
      { x: cursorPx + 7, y, anchor: 'start', cost: row * 8 + 3 },
    ]
  })
  const wanted: WantedText[] = [
    { id: 'moment', tone: 'ink', rows: [{ plain: moment }], places: rows },
    ...readings.flatMap((reading) => (reading.along ? [] : [{ ...readingText(reading), places: beside(reading) }])),
  ]
  const inTheWay = [...still, ...readings.map(({ y }) => around(cursorPx, y, 5))]
  const labels = drawnLabels(wanted, frame, courses, inTheWay)
  for (const reading of readings) {
    if (!reading.along) continue
    const atCursor = { ...readingText(reading), places: beside(reading), maxCost: FAR }
    // a value far from the cursor would be read as that of another moment
    const alone = { ...readingText({ ...reading, text: '' }), places: [] as LabelPlace[] }
    const wordings = [atCursor, { ...alone, places: placesApart(reading.along, labelSize(alone), courses, frame) }]
    const taken = [...inTheWay, ...labels.map((label) => label.box)]
    labels.push(...firstThatFits(wordings, (wording) => drawnLabels([wording], frame, courses, taken)))
  }
  return labels
}

/** What a place at the cursor may cost before a curve is named elsewhere. */
const FAR = 62

function readingText({ id, tone, name, text }: CursorReading): LabelText {
  return { id, tone, rows: [text === '' ? { strong: name } : { strong: name, plain: text }] }
}

/** Along a curve, where it runs apart from every other one. */
function placesApart(
  heights: ArrayLike<number>,
  size: { width: number; height: number },
  courses: readonly CurveCourse[],
  frame: Frame,
): LabelPlace[] {
  const rivals = courses.filter((course) => course.heights !== heights)
  return placesAlong(heights, size, frame.left, (column) => {
    const apart = Math.min(14, ...rivals.map((rival) => Math.abs(rival.heights[column] - heights[column])))
    return 2 * (14 - apart)
  })
}

/** The mark's extent in pixels. */
export function markExtent(mark: ScoreMark, x: Scale, y: Scale): { fromPx: number; toPx: number; y: number } {
  const from = mark.kind === 'level' ? mark.fromMs : mark.atMs
  const to = mark.kind === 'level' ? mark.toMs : mark.atMs
  return { fromPx: x.toPixel(from), toPx: x.toPixel(to), y: y.toPixel(mark.uv) }
}
