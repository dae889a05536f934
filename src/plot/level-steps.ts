/**
 * The level lines of a grid whose rows are steps: along a row values are linear between the middles of its cells, between two rows there is nothing.
 * Everything is measured in cells: column c reaches from c to c + 1, row r from r to r + 1.
 */

/** A stretch of a row. */
export interface Run {
  readonly from: number
  readonly to: number
}

/** Runs of every row, ascending and apart. */
export type RunsByRow = readonly (readonly Run[])[]

export interface LevelRuns {
  /** Where values are at most the level. */
  readonly inside: RunsByRow
  /** Where there are values at all. */
  readonly known: RunsByRow
}

/**
 * Where the values of a grid are at most a level.
 *
 * @param values row after row, `columns` × `rows`; NaN where there is none.
 * @throws RangeError for values that do not fill the grid, or that are infinite.
 */
export function runsBelow(values: readonly number[], columns: number, rows: number, level: number): LevelRuns {
  if (values.length !== columns * rows || columns < 1 || rows < 1) {
    throw new RangeError(`values must fill ${columns} × ${rows} cells, were ${values.length}`)
  }
  const infinite = values.findIndex((value) => Math.abs(value) === Number.POSITIVE_INFINITY)
  if (infinite >= 0) throw new RangeError(`values[${infinite}] must be finite or NaN, was ${values[infinite]}`)
  const inside: Run[][] = []
  const known: Run[][] = []
  for (let r = 0; r < rows; r++) {
    const row = values.slice(r * columns, (r + 1) * columns)
    known.push(joined(row.flatMap((value, c) => (Number.isNaN(value) ? [] : [{ from: c, to: c + 1 }]))))
    inside.push(joined(row.flatMap((_, c) => insideCell(row, c, level))))
  }
  return { inside, known }
}

/** The two halves of a cell, as far as they are inside. */
function insideCell(row: readonly number[], c: number, level: number): Run[] {
  const here = row[c] - level
  if (Number.isNaN(here)) return []
  return [-1, 1].flatMap((side) => {
    const middle = c + 0.5
    const other = row[c + side] - level
    // a cell without a neighbour goes on as it is up to its edge
    const next = Number.isFinite(other) ? other : here
    const edge = (here + next) / 2
    const [from, to] = [middle, middle + side / 2]
    if (here <= 0 && edge <= 0) return [ordered(from, to)]
    if (here > 0 && edge > 0) return []
    const crossing = middle + side * (here / (here - next))
    return [here <= 0 ? ordered(from, crossing) : ordered(crossing, to)]
  })
}

const ordered = (a: number, b: number): Run => (a <= b ? { from: a, to: b } : { from: b, to: a })

/** Runs that touch become one; those without length go. */
function joined(runs: readonly Run[]): Run[] {
  const kept: { from: number; to: number }[] = []
  for (const { from, to } of runs) {
    const last = kept[kept.length - 1]
    if (last && from - last.to < TOUCHING) last.to = Math.max(last.to, to)
    else if (to - from > TOUCHING) kept.push({ from, to })
  }
  return kept
}

const TOUCHING = 1e-9

/** What is in both. */
export function commonRuns(first: RunsByRow, second: RunsByRow): RunsByRow {
  return first.map((runs, r) =>
    joined(
      runs.flatMap((run) =>
        second[r].flatMap((other) => {
          const from = Math.max(run.from, other.from)
          const to = Math.min(run.to, other.to)
          return to > from ? [{ from, to }] : []
        }),
      ),
    ),
  )
}

/** Column and row. */
export type Corner = readonly [number, number]

/**
 * The lines between inside and outside, in steps. The edge of the grid is no line, nor is the edge of what is known.
 *
 * @returns corners of each line in their order; a closed one ends where it begins.
 */
export function stepLines({ inside, known }: LevelRuns): Corner[][] {
  const pieces: [Corner, Corner][] = []
  inside.forEach((runs, r) => {
    for (const { from, to } of runs) {
      for (const at of [from, to]) {
        const within = known[r].some((run) => at > run.from + TOUCHING && at < run.to - TOUCHING)
        if (within) pieces.push([corner(at, r), corner(at, r + 1)])
      }
    }
    if (r + 1 === inside.length) return
    const shared = commonRuns([known[r]], [known[r + 1]])[0]
    for (const { from, to } of inOneOnly(runs, inside[r + 1], shared)) {
      pieces.push([corner(from, r + 1), corner(to, r + 1)])
    }
  })
  return chained(pieces)
}

/** The same place is the same number, however it was reached. */
const corner = (column: number, row: number): Corner => [Math.round(column * 1e6) / 1e6, row]

function inOneOnly(first: readonly Run[], second: readonly Run[], within: readonly Run[]): Run[] {
  const ends = [...first, ...second, ...within].flatMap(({ from, to }) => [from, to]).sort((a, b) => a - b)
  const holds = (runs: readonly Run[], at: number) => runs.some(({ from, to }) => at > from && at < to)
  const found: Run[] = []
  for (let i = 0; i + 1 < ends.length; i++) {
    const middle = (ends[i] + ends[i + 1]) / 2
    if (!holds(within, middle) || holds(first, middle) === holds(second, middle)) continue
    found.push({ from: ends[i], to: ends[i + 1] })
  }
  return joined(found)
}

/** Pieces that meet become one line, so that a dash runs on around its corners. */
function chained(pieces: readonly (readonly [Corner, Corner])[]): Corner[][] {
  const key = ([column, row]: Corner) => `${column} ${row}`
  const at = new Map<string, number[]>()
  pieces.forEach((piece, i) => {
    for (const end of piece) at.set(key(end), [...(at.get(key(end)) ?? []), i])
  })
  const used = new Set<number>()
  const follow = (start: number, from: Corner): Corner[] => {
    const line = [from]
    let piece: number | undefined = start
    while (piece !== undefined) {
      used.add(piece)
      const [a, b]: readonly [Corner, Corner] = pieces[piece]
      line.push(key(a) === key(line[line.length - 1]) ? b : a)
      piece = at.get(key(line[line.length - 1]))?.find((other) => !used.has(other))
    }
    return line
  }
  const lines: Corner[][] = []
  // open lines first, from their ends; what is left goes round
  for (const ends of [true, false])
    pieces.forEach((piece, i) => {
      if (used.has(i)) return
      const from = ends ? piece.find((end) => at.get(key(end))?.length === 1) : piece[0]
      if (from) lines.push(follow(i, from))
    })
  return lines
}
