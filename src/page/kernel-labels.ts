import { textWidth } from '../plot/axis-layout.ts'
import { type LabelBox, type LabelPlace, type LabelWish, placeLabels } from '../plot/place-labels.ts'
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
  taken: LabelBox[]
}

/** The words on the reach as one block where the curve leaves room, right before left, top before bottom; else line by line. */
export function placeWords({ words, end, endX, endY, limits, course, taken }: WordsRoom) {
  const { left, right, top, bottom } = limits
  const room = { limits, taken, courses: [{ heights: course, weight: 3 }] }
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
  if (block && !block.crossed) {
    const rows = lines.map((line, row) => ({ ...line, ...block, y: block.box.top + LINE_HEIGHT * (row + 0.5) }))
    return { end: atEnd, lines: rows }
  }
  const [, ...apart] = placeLabels([endWish, ...lines.map((line) => wishOf(widthOf(line), LINE_HEIGHT))], room)
  return { end: atEnd, lines: apart.flatMap((place, i) => (place ? [{ ...lines[i], ...place }] : [])) }
}
