/** Where a map meets its limits: a line for each of them, the region that keeps all, and the places of their names. */
import {
  commonRuns,
  type Corner,
  type Frame,
  runsBelow,
  type RunsByRow,
  stepLines,
  textWidth,
} from '../../../plot/index.ts'
import { type LabelPlace, placeLabels } from '../../../plot/place-labels.ts'
import type { LimitName, TradeOffLimits } from '../../../evidence/trade-off-answer.ts'
import type { CellFigures } from '../../../evidence/trade-off-figures.ts'
import { LIMIT_WORD, limitUnit, type MapUnit } from './map-words.ts'
import { exact, list } from '../../../words/index.ts'

export interface LimitLine {
  readonly limit: LimitName
  readonly most: number
  readonly inside: RunsByRow
  /** In cells; none where the limit is kept everywhere or nowhere. */
  readonly lines: readonly (readonly Corner[])[]
  /** Of the cells that have the figure. */
  readonly kept: 'all' | 'some' | 'none' | 'unknown'
}

export interface LimitedMap {
  readonly limits: readonly LimitLine[]
  /** What keeps every limit; null where there is none in force. */
  readonly region: RunsByRow | null
  /** Its border, but for the map's own edges. */
  readonly border: readonly (readonly Corner[])[]
}

/** Sizes a thousand times the limit, or a thousandth, are no nearer to the line than others. */
const FARTHEST = Math.log(1000)

export function limitedMap(
  cells: readonly (CellFigures | null)[],
  limits: TradeOffLimits,
  columns: number,
  rows: number,
): LimitedMap {
  const names = (Object.keys(LIMIT_WORD) as LimitName[]).filter((name) => limits[name] !== undefined)
  const of = names.map((limit): LimitLine => {
    const most = limits[limit] as number
    const values = cells.map((cell) => distance(cell && cell.error === null ? cell[limit] : null, most))
    const runs = runsBelow(values, columns, rows, 0)
    const known = values.filter((value) => !Number.isNaN(value))
    const within = known.filter((value) => value <= 0).length
    const kept = known.length === 0 ? 'unknown' : within === 0 ? 'none' : within === known.length ? 'all' : 'some'
    return { limit, most, inside: runs.inside, lines: stepLines(runs), kept }
  })
  const region = of.length === 0 ? null : of.slice(1).reduce((all, { inside }) => commonRuns(all, inside), of[0].inside)
  const whole = Array.from({ length: rows }, () => [{ from: 0, to: columns }])
  return { limits: of, region, border: region === null ? [] : stepLines({ inside: region, known: whole }) }
}

/** Above 0 over the limit, as a ratio, since sizes run over decades; a hair over it is kept, as the verdict keeps it. */
function distance(value: number | null, most: number): number {
  if (value === null) return Number.NaN
  const size = Math.abs(value)
  if (size <= most * (1 + 1e-9)) return size === 0 ? -FARTHEST : Math.max(-FARTHEST, Math.min(0, Math.log(size / most)))
  return Math.min(FARTHEST, Math.log(size / most))
}

/** "bias 0.2 µV" */
export const limitLabel = ({ limit, most }: Pick<LimitLine, 'limit' | 'most'>, unit: MapUnit) =>
  `${LIMIT_WORD[limit]} ${exact(most)} ${limitUnit(limit, unit)}`

/** The limits that have no line on this map, and why; '' where each has one. */
export function unlinedWords({ limits }: LimitedMap, unit: MapUnit): string {
  const said = (['all', 'none'] as const).flatMap((kept) => {
    const names = limits.filter((of) => of.kept === kept).map((of) => limitLabel(of, unit))
    if (names.length === 0) return []
    const who = kept === 'all' ? 'every filter of the map keeps' : 'no filter of the map keeps'
    return `${list(names)} (${who} ${names.length === 1 ? 'it' : 'them'})`
  })
  return said.length === 0 ? '' : `Without a line: ${list(said)}.`
}

export interface PlacedLimit {
  readonly limit: LimitName
  readonly text: string
  readonly x: number
  readonly y: number
  readonly anchor: 'start' | 'end'
  readonly width: number
  readonly height: number
}

const LABEL_HEIGHT = 16
const PADDING = 4
/** A name that stands on another limit's line could be taken for that one's: only where there is no other place. */
const COST = { lineCovered: 30, cursorCovered: 15, outside: 8, markCovered: 1, row: 0.1 }

/**
 * Each limit's name beside an upright piece of its line, rather on the side that keeps the limit. A limit with several lines has its name at the
 * longest; at the others where there is room.
 *
 * @param marks  cells that a name should leave free, as far as there is room.
 * @param cursor the cell that a name should leave free above others; null for none.
 * @returns fewer than there are limits with lines only where the map is too small for a name.
 */
export function placedLimits(
  { limits }: LimitedMap,
  frame: Frame,
  columns: number,
  rows: number,
  unit: MapUnit,
  marks: readonly number[],
  cursor: number | null,
): PlacedLimit[] {
  const x = (column: number) => frame.left + (column / columns) * frame.plotWidth
  const middle = (row: number) => frame.bottom - ((row + 0.5) / rows) * frame.plotHeight
  const lined = limits
    .flatMap((of) =>
      of.lines
        .map((line) => ({ of, pieces: uprightPieces(line) }))
        .sort((a, b) => b.pieces.length - a.pieces.length)
        .map((line, place) => ({ ...line, place })),
    )
    .filter(({ pieces, place }) => pieces.length > (place === 0 ? 0 : 1))
    .sort((a, b) => a.place - b.place)
  const wishes = lined.map(({ of, pieces, place }) => {
    const width = textWidth(limitLabel(of, unit)) + 2 * PADDING
    const places = pieces.flatMap(({ column, row }) =>
      ([1, -1] as const).map((side): LabelPlace => {
        const near = x(column) + side * 2
        const [left, right] = side > 0 ? [near, near + width] : [near - width, near]
        const covers = (at: number) => at > left - 2 && at < right + 2
        const crossed = lined
          .flatMap((other) => other.pieces)
          .filter((piece) => piece.row === row && piece.column !== column && covers(x(piece.column))).length
        const under = (at: number) => Math.floor(at / columns) === row && covers(x((at % columns) + 0.5))
        const onCursor = cursor !== null && under(cursor) ? COST.cursorCovered : 0
        const kept = of.inside[row].some((run) => Math.abs((side > 0 ? run.from : run.to) - column) < 1e-3)
        const cost =
          COST.lineCovered * crossed +
          COST.markCovered * marks.filter(under).length +
          onCursor +
          (kept ? 0 : COST.outside) +
          COST.row * (rows - row)
        return { x: near, y: middle(row), anchor: side > 0 ? 'start' : 'end', cost }
      }),
    )
    return { width, height: LABEL_HEIGHT, places, maxCost: place === 0 ? undefined : COST.lineCovered }
  })
  const room = { left: frame.left, right: frame.right, top: frame.top, bottom: frame.bottom }
  return placeLabels(wishes, { limits: room }).flatMap((place, k) => {
    if (!place || place.anchor === 'middle') return []
    const { of } = lined[k]
    const { width, height } = wishes[k]
    return { limit: of.limit, text: limitLabel(of, unit), x: place.x, y: place.y, anchor: place.anchor, width, height }
  })
}

/** The pieces of a line that cross a row. */
function uprightPieces(line: readonly Corner[]): { column: number; row: number }[] {
  return line.slice(1).flatMap(([column, row], i) => {
    const [from, last] = line[i]
    return row === last || from !== column ? [] : [{ column, row: Math.min(row, last) }]
  })
}
