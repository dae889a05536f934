import type { Scale } from './scale.ts'

// Paths are strings for the `d` of an svg path, coordinates rounded to 0.01 px. A sample without a pixel (NaN, an infinity, zero on a
// logarithmic scale) breaks the path; nothing is drawn across it.
//
// Decimation: of the neighbouring samples that fall into one pixel column only the lowest and the highest stay, in their order, so
// that no peak is lost and a path has at most about two points a column, however long the data are.

/** Where the samples stand: their own ascending values, or start + i·step with step > 0. */
export type Xs = ArrayLike<number> | { readonly start: number; readonly step: number }

/**
 * Line through samples.
 *
 * @param xs  positions, ascending, as many as ys (or regular).
 * @param ys  values; read only.
 * @returns  path data, '' where nothing has a pixel. Samples outside the domain of x are left out, but for one neighbour on each side.
 * @throws RangeError if the lengths differ or step is not above 0.
 */
export function linePath(xs: Xs, ys: ArrayLike<number>, x: Scale, y: Scale): string {
  let d = ''
  for (const run of decimatedRuns(xs, [ys], x, y)) d += polyline(run.points[0], 'M')
  return d
}

/**
 * Closed area between a curve and a level, or between two curves.
 *
 * @param xs    positions as for linePath.
 * @param ys    values.
 * @param base  a level, or a second curve of the same length; default 0.
 * @returns  closed path data for fill; a hole where either curve has no pixel.
 * @throws RangeError if lengths differ, or if the level has no place on the y scale.
 */
export function areaPath(
  xs: Xs,
  ys: ArrayLike<number>,
  x: Scale,
  y: Scale,
  base: number | ArrayLike<number> = 0,
): string {
  let d = ''
  if (typeof base === 'number') {
    const level = y.toPixel(base)
    if (!Number.isFinite(level)) throw new RangeError(`base must have a place on the y scale, was ${base}`)
    const levelText = pixelText(level)
    for (const { points } of decimatedRuns(xs, [ys], x, y)) {
      const top = points[0]
      d += `M${pixelText(top[0])},${levelText}${polyline(top, 'L')}L${pixelText(top[top.length - 2])},${levelText}Z`
    }
    return d
  }
  for (const { points } of decimatedRuns(xs, [ys, base], x, y)) {
    d += `${polyline(points[0], 'M')}${polyline(reversed(points[1]), 'L')}Z`
  }
  return d
}

/**
 * Steps: value i between edge i and edge i + 1, rising from the level at the first edge and falling back to it at the last.
 * A box is one value between two edges.
 *
 * @param edges   positions, ascending, one more than values.
 * @param values  heights; one without a pixel is left open.
 * @param base    the level, default 0.
 * @returns  open path data that a fill closes along the level.
 * @throws RangeError if edges are not one more than values, or if the level has no place on the y scale.
 */
export function stepPath(edges: ArrayLike<number>, values: ArrayLike<number>, x: Scale, y: Scale, base = 0): string {
  if (edges.length !== values.length + 1) {
    throw new RangeError(`edges must be one more than values (${values.length}), were ${edges.length}`)
  }
  const level = y.toPixel(base)
  if (!Number.isFinite(level)) throw new RangeError(`base must have a place on the y scale, was ${base}`)
  let d = ''
  let open = false
  for (let i = 0; i < values.length; i++) {
    const left = x.toPixel(edges[i])
    const right = x.toPixel(edges[i + 1])
    const height = y.toPixel(values[i])
    if (!(Number.isFinite(left) && Number.isFinite(right) && Number.isFinite(height))) {
      if (open) d += `V${pixelText(level)}`
      open = false
      continue
    }
    if (!open) d += `M${pixelText(left)},${pixelText(level)}`
    open = true
    d += `V${pixelText(height)}H${pixelText(right)}`
  }
  return open ? `${d}V${pixelText(level)}` : d
}

/** Points of one unbroken run, one list x0 y0 x1 y1 … in pixels for each curve. */
type Run = { points: number[][] }

/** The decimated runs in which all curves have pixels. Exported for tests and for other shapes than lines. */
export function decimatedRuns(xs: Xs, curves: readonly ArrayLike<number>[], x: Scale, y: Scale): Run[] {
  const n = curves[0].length
  for (const ys of curves)
    if (ys.length !== n) throw new RangeError(`curves must have ${n} samples each, one has ${ys.length}`)
  const regular = 'step' in xs
  if (regular && !(xs.step > 0)) throw new RangeError(`step must lie above 0, was ${xs.step}`)
  if (!regular && xs.length !== n) throw new RangeError(`xs must have as many samples as ys (${n}), has ${xs.length}`)
  const at = regular ? (i: number) => xs.start + i * xs.step : (i: number) => xs[i]

  const low = Math.min(x.domain[0], x.domain[1])
  const high = Math.max(x.domain[0], x.domain[1])
  const first = Math.max(0, firstIndex(n, (i) => at(i) >= low) - 1)
  const end = Math.min(n, firstIndex(n, (i) => at(i) > high) + 1)

  const runs: Run[] = []
  let run: Run | null = null
  let columnStart = first
  let column = Number.NaN
  const closeColumn = (stop: number) => {
    if (run === null || stop <= columnStart) return
    for (let c = 0; c < curves.length; c++) pushColumn(run.points[c], curves[c], columnStart, stop, at, x, y)
  }
  for (let i = first; i < end; i++) {
    const px = x.toPixel(at(i))
    let drawn = Number.isFinite(px)
    for (let c = 0; drawn && c < curves.length; c++) drawn = Number.isFinite(curves[c][i]) && hasPixel(y, curves[c][i])
    if (!drawn) {
      closeColumn(i)
      run = null
      column = Number.NaN
      continue
    }
    const here = Math.floor(px)
    if (run === null) {
      run = { points: curves.map(() => []) }
      runs.push(run)
      columnStart = i
    } else if (here !== column) {
      closeColumn(i)
      columnStart = i
    }
    column = here
  }
  closeColumn(end)
  return runs
}

/** Appends the samples start..stop-1 of one column: all of them if one or two, else the lowest and the highest, in their order. */
function pushColumn(
  out: number[],
  ys: ArrayLike<number>,
  start: number,
  stop: number,
  at: (i: number) => number,
  x: Scale,
  y: Scale,
): void {
  let least = start
  let most = start
  for (let i = start + 1; i < stop; i++) {
    if (ys[i] < ys[least]) least = i
    // the last of equal highest samples, so that a level stretch keeps its full length
    if (ys[i] >= ys[most]) most = i
  }
  const a = Math.min(least, most)
  const b = Math.max(least, most)
  out.push(x.toPixel(at(a)), y.toPixel(ys[a]))
  if (b !== a) out.push(x.toPixel(at(b)), y.toPixel(ys[b]))
}

function hasPixel(y: Scale, value: number): boolean {
  return y.kind !== 'log' || value > 0
}

/** The first of 0..n-1 for which the claim (false, then true) holds, else n. */
function firstIndex(n: number, holds: (i: number) => boolean): number {
  let a = 0
  let b = n
  while (a < b) {
    const middle = (a + b) >> 1
    if (holds(middle)) b = middle
    else a = middle + 1
  }
  return a
}

function polyline(points: readonly number[], command: 'M' | 'L'): string {
  let d = `${command}${pixelText(points[0])},${pixelText(points[1])}`
  for (let i = 2; i < points.length; i += 2) d += `L${pixelText(points[i])},${pixelText(points[i + 1])}`
  // a lone sample becomes a dot under round line caps
  return points.length === 2 && command === 'M' ? `${d}h0` : d
}

function reversed(points: readonly number[]): number[] {
  const out: number[] = []
  for (let i = points.length - 2; i >= 0; i -= 2) out.push(points[i], points[i + 1])
  return out
}

/** A pixel rounded to 0.01 as text. */
function pixelText(pixel: number): string {
  return String(Math.round(pixel * 100) / 100)
}
