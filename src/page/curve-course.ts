/** Curves over log frequency read at one frequency, and at every pixel column. */

/**
 * Value of a curve at a frequency, linear over log frequency; the end values outside.
 *
 * @param hz  ascending, above 0.
 */
export function valueAt(hz: ArrayLike<number>, values: ArrayLike<number>, atHz: number): number {
  const last = hz.length - 1
  if (!(atHz > hz[0])) return values[0]
  if (atHz >= hz[last]) return values[last]
  let low = 0
  let high = last
  while (high - low > 1) {
    const middle = (low + high) >> 1
    if (hz[middle] <= atHz) low = middle
    else high = middle
  }
  const share = Math.log(atHz / hz[low]) / Math.log(hz[high] / hz[low])
  return values[low] + (values[high] - values[low]) * share
}

/** Heights of a curve by pixel column, from left on; NaN outside the curve. */
export function courseOf(
  hz: ArrayLike<number>,
  values: ArrayLike<number>,
  x: { fromPixel: (pixel: number) => number },
  y: { toPixel: (value: number) => number },
  left: number,
  columns: number,
): Float64Array {
  const heights = new Float64Array(columns + 1).fill(Number.NaN)
  let low = 0
  for (let column = 0; column <= columns; column++) {
    const at = x.fromPixel(left + column)
    if (at < hz[0] * (1 - 1e-9) || at > hz[hz.length - 1] * (1 + 1e-9)) continue
    while (low + 2 < hz.length && hz[low + 1] < at) low++
    const share = Math.log(at / hz[low]) / Math.log(hz[low + 1] / hz[low])
    heights[column] = y.toPixel(values[low] + (values[low + 1] - values[low]) * Math.max(0, Math.min(1, share)))
  }
  return heights
}
