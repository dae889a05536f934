import { contours } from 'd3'

/**
 * Outline of the region of a grid where values are at least a threshold, as an SVG path; linear between the grid's points, which lie
 * at the middles of its cells. A value that is not a number lies outside.
 *
 * @param values    row after row, `columns` × `rows`.
 * @param toPixelX  pixel of a place on the x axis, in columns: 0 … columns, cell i from i to i + 1. Likewise y.
 * @returns '' where the region is empty.
 * @throws RangeError for values that do not fill the grid.
 */
export function contourPath(
  values: readonly number[],
  columns: number,
  rows: number,
  threshold: number,
  toPixelX: (column: number) => number,
  toPixelY: (row: number) => number,
): string {
  if (values.length !== columns * rows || columns < 1 || rows < 1) {
    throw new RangeError(`values must fill ${columns} × ${rows} cells, were ${values.length}`)
  }
  // finite, so that interpolation stays so
  const size = Math.max(1, ...values.filter(Number.isFinite).map((value) => Math.abs(value - threshold)))
  const known = values.map((value) =>
    Number.isNaN(value) ? threshold - size : Math.min(threshold + size, Math.max(threshold - size, value)),
  )
  const { coordinates } = contours().size([columns, rows]).contour(known, threshold)
  return coordinates
    .flat()
    .map((ring) => `M${ring.map(([x, y]) => `${px(toPixelX(x))},${px(toPixelY(y))}`).join('L')}Z`)
    .join('')
}

const px = (value: number) => Math.round(value * 100) / 100
