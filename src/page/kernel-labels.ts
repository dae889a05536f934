import { textWidth } from '../plot/axis-layout.ts'
import {
  type LabelBox,
  type LabelPlace,
  type LabelWish,
  type PlacedLabel,
  placeLabels,
  placesAlong,
} from '../plot/place-labels.ts'
import type { KernelWords } from './kernel-shape.ts'

/** What is said at the right end of a step response. */
export interface StepEnd {
  value: number
  words: string
}

const LINE_HEIGHT = 16

interface WordsRoom {
  words: KernelWords
  end: StepEnd | null
  endX: number
  endY: number
  limits: LabelBox
  course: Float64Array
  /** Pinned curves, which are named where they run apart. */
  others?: readonly { name: string; course: Float64Array }[]
  taken: LabelBox[]
}

/** The words on the reach as one block where the curve leaves room, right before left, top before bottom; else line by line. */
export function placeWords({ words, end, endX, endY, limits, course, others = [], taken }: WordsRoom) {
  const { left, right, top, bottom } = limits
  const room = {
    limits,
    taken,
    courses: [course, ...others.map((other) => other.course)].map((heights) => ({ heights, weight: 3 })),
  }
  const lines = [words.reach, ...words.more].map((text, row) => ({ text, strong: row === 0 }))
  const widthOf = ({ text, strong }: { text: string; strong: boolean }) => textWidth(text) * (strong ? 1.06 : 1)
  const wishOf = (width: number, height: number): LabelWish => {
    const places: LabelPlace[] = []
    for (let px = right - 10; px - width >= left + 10; px -= 8) {
      for (let py = top + height / 2 + 3; py + height / 2 <= bottom - 2; py += 6) {
        places.push({
          x: px - width,
          y: py,
          anchor: 'start',
          cost: (right - px) / (right - left) + (py - top) / (bottom - top) / 2,
        })
      }
    }
    return { width, height, places }
  }
  const endPlaces = [-14, 14, -24, 24, -40, 40].map(
    (away, i): LabelPlace => ({ x: endX - 8, y: endY + away, anchor: 'end', cost: i * 0.2 }),
  )
  const endWish = { width: textWidth(end?.words ?? '') * 1.06, height: LINE_HEIGHT, places: end ? endPlaces : [] }
  const [atEnd, block] = placeLabels(
    [endWish, wishOf(Math.max(...lines.map(widthOf)), LINE_HEIGHT * lines.length)],
    room,
  )
  /** The names of the pinned curves, around what stands already. */
  const namesAround = (standing: readonly (PlacedLabel | null)[]) => {
    const boxes = standing.flatMap((place) => (place ? [place.box] : []))
    const wishes = others.map((other, i) =>
      nameWish(other, [course, ...others.filter((_, j) => j !== i).map((o) => o.course)], left),
    )
    const placed = placeLabels(wishes, { ...room, taken: [...taken, ...boxes] })
    return placed.flatMap((place, i) => (place ? [{ text: others[i].name, ...place }] : []))
  }
  if (block && !block.crossed) {
    const rows = lines.map((line, row) => ({ ...line, ...block, y: block.box.top + LINE_HEIGHT * (row + 0.5) }))
    return { end: atEnd, lines: rows, names: namesAround([atEnd, block]) }
  }
  const [, ...apart] = placeLabels([endWish, ...lines.map((line) => wishOf(widthOf(line), LINE_HEIGHT))], room)
  const rows = apart.flatMap((place, i) => (place ? [{ ...lines[i], ...place }] : []))
  return { end: atEnd, lines: rows, names: namesAround([atEnd, ...apart]) }
}

/** Along its own curve, where no other one is near. */
function nameWish(
  { name, course }: { name: string; course: Float64Array },
  rivals: readonly Float64Array[],
  left: number,
): LabelWish {
  const size = { width: textWidth(name), height: LINE_HEIGHT }
  const costAt = (column: number) => {
    const apart = Math.min(12, ...rivals.map((heights) => Math.abs(heights[column] - course[column])))
    return 4 - apart / 3
  }
  return { ...size, places: placesAlong(course, size, left, costAt), maxCost: 12 }
}
