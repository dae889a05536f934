/** Names of the spectra: beside the slope of the waveform's, inside what came through, inside what was taken out. */
import { type LabelPlace, placesAlong } from '../plot/place-labels.ts'
import { type FrequencyCourses, HEIGHT, type Wish, widthOf, wish } from './label-wish.ts'

export function spectrumWishes({ before, after, left, bottom, top }: FrequencyCourses): Wish[] {
  const waveform = wish(
    'waveform',
    'before',
    true,
    placesAlong(before, { width: widthOf('waveform', true), height: HEIGHT }, left, (column, side) => {
      // on its falling side, at a third of the height, is where it can be told from everything else
      const share = (bottom - before[column]) / (bottom - top)
      return Math.abs(share - 0.3) * 4 + (side > 0 ? 1 : 0)
    }).flatMap((place) => {
      // beside the slope, too, since it is steep
      const column = Math.round(place.x - left)
      const share = (bottom - before[column]) / (bottom - top)
      const slope = { x: place.x + 8, y: before[column] - 2, anchor: 'start' as const, cost: Math.abs(share - 0.3) * 4 }
      return before[column + 8] > before[column] ? [place, slope] : [place]
    }),
    9,
  )
  return [
    waveform,
    wish('after', 'after', true, betweenPlaces(after, null, bottom, left, widthOf('after', true)), 9),
    wish('taken out', 'taken-out', true, betweenPlaces(before, after, bottom, left, widthOf('taken out', true)), 9),
  ]
}

/** Places inside the area between two curves (or a curve and the bottom), where the whole label fits. */
function betweenPlaces(
  upper: Float64Array,
  lower: Float64Array | null,
  bottom: number,
  left: number,
  width: number,
): LabelPlace[] {
  const half = Math.ceil(width / 2)
  const places: LabelPlace[] = []
  for (let column = half + 4; column + half + 4 < upper.length; column += 12) {
    let from = Number.NEGATIVE_INFINITY
    let to = bottom
    for (let i = column - half; i <= column + half; i += 3) {
      if (!Number.isFinite(upper[i])) from = Number.POSITIVE_INFINITY
      from = Math.max(from, upper[i])
      if (lower && Number.isFinite(lower[i])) to = Math.min(to, lower[i])
    }
    const room = to - from
    if (room < HEIGHT + 4) continue
    // low in a high area: the upper part is where the other lines are
    for (const share of [0.8, 0.65, 0.5, 0.35, 0.2]) {
      const y = from + HEIGHT / 2 + 2 + (room - HEIGHT - 4) * share
      places.push({ x: left + column, y, anchor: 'middle', cost: Math.abs(share - 0.75) * 2 + 60 / room })
    }
  }
  return places
}
