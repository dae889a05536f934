/** Which words stand where in the frequency figure: each beside what it names, none over another. */
import { type LabelBox, type LabelPlace, placeLabels, placesAlong, type PlacedLabel } from '../plot/place-labels.ts'
import type { Tone } from '../plot/tone.ts'
import { type FrequencyCourses, type HalfPoint, HEIGHT, type Wish, widthOf, wish } from './label-wish.ts'
import { spectrumWishes } from './spectrum-labels.ts'

export interface FigureLabel extends PlacedLabel {
  text: string
  tone: Tone
  strong: boolean
}

/** All labels that found room, ready to be drawn. */
export function frequencyLabels(courses: FrequencyCourses): FigureLabel[] {
  const { points } = courses
  const row = courses.full - HEIGHT / 2 - 3
  const stages = courses.stages.map((_, which) => inRow(stageWish(courses, which), row))
  const first = [
    ...points.filter(({ strong, stated }) => strong && !stated).map(pointWish),
    ...points.filter(({ strong }) => !strong).map(pointWish),
    inRow(chainWish(courses), row),
    ...spectrumWishes(courses),
    ...(courses.pins ?? []).map((_, which) => pinWish(courses, which)),
  ]
  const last = [...points.filter(({ stated }) => stated).map(pointWish), noiseWish(courses), ...halfWishes(courses)]
  // which stage chooses first makes a difference, and no order is the best for all chains
  const orders = stages.length > 1 ? [stages, [...stages].reverse()] : [stages]
  const tries = orders.map((order) => place([...first, ...order, ...last], courses))
  return tries.reduce((best, other) => (other.cost < best.cost ? other : best)).labels
}

/** Labels that stand nearly in the row above full gain stand in it, on one line. */
function inRow(wanted: Wish, row: number): Wish {
  return {
    ...wanted,
    places: wanted.places.map((spot) => (Math.abs(spot.y - row) < 4 ? { ...spot, y: row } : spot)),
  }
}

/** What it costs to leave a label out. */
const MISSING = 8

function place(wishes: Wish[], courses: FrequencyCourses): { labels: FigureLabel[]; cost: number } {
  const { left, right, top, bottom, points } = courses
  const placed = placeLabels(wishes, {
    limits: { left, right: right + 1, top, bottom },
    taken: points.map(({ x, y, strong }): LabelBox => {
      const r = strong ? 7 : 4
      return { left: x - r, right: x + r, top: y - r, bottom: y + r }
    }),
    courses: [
      { heights: courses.chain, weight: 4 },
      ...courses.stages.map(({ heights }) => ({ heights, weight: 2.6 })),
      ...(courses.pins ?? []).map(({ heights }) => ({ heights, weight: 2.6 })),
      { heights: courses.before, weight: 1.6 },
      { heights: courses.noise, weight: 0.8 },
    ],
  })
  const labels = placed.flatMap((found, i) => {
    const { text, tone, strong } = wishes[i]
    return found ? [{ ...found, text, tone, strong }] : []
  })
  return { labels, cost: placed.reduce((sum, found) => sum + (found?.cost ?? MISSING), 0) }
}

/** Beside its point, on the same height if it can be. */
function pointWish({ x, y, text, strong }: HalfPoint): Wish {
  const away = strong ? 10 : 8
  const places = [0, -8, 8, -14, 14].flatMap((shift, i): LabelPlace[] => [
    { x: x - away, y: y + shift, anchor: 'end', cost: i * 1.2 },
    { x: x + away, y: y + shift, anchor: 'start', cost: i * 1.2 + 0.4 },
  ])
  return wish(text, 'ink', strong, places)
}

/** Above its highest stretch, towards its middle. */
function chainWish({ chain, left, top, bottom }: FrequencyCourses): Wish {
  const text = 'whole chain'
  const summit = lowestHeight(chain)
  const high = columnsWhere(chain, (y) => y <= summit + 3)
  const middle = (high.first + high.last) / 2
  const places = placesAlong(chain, { width: widthOf(text, true), height: HEIGHT }, left, (column, side) => {
    const below = chain[column] - summit
    return (Math.abs(column - middle) / chain.length) * 3 + (side > 0 ? 1.5 : 0) + (below / (bottom - top)) * 6
  })
  return wish(text, 'after', true, places)
}

/** Where a stage runs alone its name says the most; beside others nobody knows which line is meant. */
function stageWish({ stages, chain, left, top }: FrequencyCourses, which: number): Wish {
  const { name, heights, inData } = stages[which]
  const others = [chain, ...stages.filter((_, other) => other !== which).map((stage) => stage.heights)]
  const width = widthOf(name)
  const places = placesAlong(heights, { width, height: HEIGHT }, left, (column, side) => {
    let near = 0
    for (const at of [column - width / 2, column - width / 4, column, column + width / 4, column + width / 2]) {
      const i = Math.round(at)
      for (const other of others) if (Math.abs(other[i] - heights[i]) < 10) near += other === chain ? 0.4 : 0.2
    }
    const edge = Math.min(column, heights.length - column) / heights.length
    // under a line at the top there is room; above it the place is for those who have no other
    return near * 2 + edge * 1.2 + (side > 0 ? 0.5 : 0) + (heights[column] < top ? 9 : 0)
  })
  return wish(name, inData ? 'quiet' : 'ink', false, places, 14)
}

/** Where a pinned chain lets through most differently from the present one, as far from every other line as can be. */
function pinWish({ pins = [], chain, stages, before, left, top, bottom }: FrequencyCourses, which: number): Wish {
  const { name, heights } = pins[which]
  const others = [chain, before, ...stages.map((stage) => stage.heights)]
  for (const [i, pin] of pins.entries()) if (i !== which) others.push(pin.heights)
  const size = { width: widthOf(name), height: HEIGHT }
  const alone = (column: number) => {
    let least = 14
    for (const other of others) least = Math.min(least, Math.abs(other[column] - heights[column]))
    return least / 14
  }
  // where the two chains do the same, the name would be taken for that of both
  const apart = (column: number) => {
    const px = Math.abs(chain[column] - heights[column])
    return px < HEIGHT ? -2.5 : px / (bottom - top)
  }
  const along = placesAlong(heights, size, left, (column) => 6 - 3 * alone(column) - 3 * Math.min(1, apart(column)))
  // A slope is steep on this axis: beside it, too, since above and below it the name would stand far off.
  const beside: LabelPlace[] = []
  for (let column = 4; column < heights.length; column += 4) {
    const y = heights[column]
    if (!(y > top + HEIGHT && y < bottom - HEIGHT / 2)) continue
    for (const side of [-1, 1] as const) {
      // behind another line it would be taken for that one's name
      const behind = others.some((other) => runsThrough(other, column + side * 2, column + side * (7 + size.width), y))
      const cost = 5.5 - 3 * alone(column) - 3 * Math.min(1, apart(column)) + (behind ? 4 : 0)
      beside.push({ x: left + column + side * 7, y, anchor: side < 0 ? 'end' : 'start', cost })
    }
  }
  return wish(name, 'quiet', false, [...along, ...beside], 20)
}

/** Whether a line crosses the height of a label's text between two columns. */
function runsThrough(heights: Float64Array, from: number, to: number, y: number): boolean {
  const first = Math.max(1, Math.floor(Math.min(from, to)))
  const last = Math.min(heights.length - 1, Math.ceil(Math.max(from, to)))
  for (let i = first; i <= last; i++) {
    const [low, high] = [Math.min(heights[i - 1], heights[i]), Math.max(heights[i - 1], heights[i])]
    if (low < y + HEIGHT / 2 && high > y - HEIGHT / 2) return true
  }
  return false
}

function noiseWish({ noise, left }: FrequencyCourses): Wish {
  const middle = noise.length / 3
  const text = 'noise, log scale'
  const size = { width: widthOf(text), height: HEIGHT }
  const costAt = (column: number, side: -1 | 1) => (Math.abs(column - middle) / noise.length) * 2 + (side > 0 ? 1 : 0)
  return wish(text, 'quiet', false, placesAlong(noise, size, left, costAt), 6)
}

/** What the flat lines stand for, said once where it is quiet. */
function halfWishes({ halves, left, right }: FrequencyCourses): Wish[] {
  if (halves === null) return []
  const rows = [
    ['half-power', halves.power],
    ['half-amplitude', halves.amplitude],
  ] as const
  return rows.map(([text, y]) => {
    const places: LabelPlace[] = []
    for (let x = left + 8; x < right - widthOf(text); x += 12) {
      for (const side of [-1, 1]) {
        places.push({
          x,
          y: y + side * 9.5,
          anchor: 'start',
          cost: ((x - left) / (right - left)) * 1.5 + (side > 0 ? 0.8 : 0),
        })
      }
    }
    return wish(text, 'quiet', false, places, 2.4)
  })
}

function lowestHeight(heights: Float64Array): number {
  let least = Number.POSITIVE_INFINITY
  for (const y of heights) if (y < least) least = y
  return least
}

function columnsWhere(heights: Float64Array, holds: (y: number) => boolean): { first: number; last: number } {
  let first = heights.length
  let last = 0
  heights.forEach((y, i) => {
    if (!holds(y)) return
    first = Math.min(first, i)
    last = Math.max(last, i)
  })
  return { first, last }
}
