/** Labels of the figure by moment: the largest stretches with their shares, where there is room near them. */
import type { MomentRow } from '../../../evidence/trace-by-moment.ts'
import type { Frame, Scale } from '../../../plot/index.ts'
import type { CurveCourse, LabelBox, LabelPlace } from '../../../plot/place-labels.ts'
import { shareWords, spanWords } from '../../../words/index.ts'
import { type DrawnLabel, drawnLabels, type LabelText, labelSize, type WantedText } from '../../placed-labels.ts'
import type { TimeAxis } from '../../time-axis.ts'
import { cutOut, type Density, labelledRows, placeOf } from './moment-shape.ts'

export interface MomentLabels {
  frame: Frame
  x: Scale
  y: Scale
  axis: TimeAxis
  density: Density
  rows: readonly MomentRow[]
  unit: 'µV' | 'µV·s'
  /** What the value is measured in, at a moment or in a window. */
  own: string
  courses: readonly CurveCourse[]
  /** Edges of the windows in pixels, on which a label reads badly. */
  edges: readonly number[]
  taken: readonly LabelBox[]
}

export function momentLabels(wish: MomentLabels): DrawnLabel[] {
  const { frame, rows, axis, courses, taken } = wish
  const wanted = labelledRows(rows, axis).map((i): WantedText => {
    const text = textOf(wish, i)
    const { width } = labelSize(text)
    const places = placesNear(wish, rows[i]).map((place) => ({
      ...place,
      cost: place.cost + onEdges(place, width, wish.edges),
    }))
    return { ...text, places, maxCost: 60 }
  })
  return drawnLabels(wanted, frame, courses, taken)
}

function textOf({ rows, unit, own }: MomentLabels, i: number): LabelText {
  const row = rows[i]
  const share = shareWords(row.share, unit)
  const id = `stretch ${i}`
  if (row.kind === 'score') return { id, tone: 'after', rows: [{ strong: `${share} from ${own}` }] }
  const where =
    row.kind === 'before'
      ? 'before the epoch'
      : row.kind === 'after'
        ? 'after the epoch'
        : spanWords(row.fromMs, row.toMs)
  return { id, tone: 'after', rows: [{ plain: where }, { strong: share }] }
}

const ON_EDGE = 14

function onEdges({ x, anchor }: LabelPlace, width: number, edges: readonly number[]): number {
  const left = anchor === 'start' ? x : anchor === 'end' ? x - width : x - width / 2
  return ON_EDGE * edges.filter((edge) => edge > left - 3 && edge < left + width + 3).length
}

/** Everywhere around the stretch, the nearer to its area the better. */
function placesNear({ frame, x, y, axis, density }: MomentLabels, row: MomentRow): LabelPlace[] {
  const place = placeOf(row, axis)
  if (!place) return []
  const { ys } = cutOut(density, place.fromMs, place.toMs)
  const extreme = ys.reduce((most, value) => (Math.abs(value) > Math.abs(most) ? value : most), 0)
  const middle = (x.toPixel(place.fromMs) + x.toPixel(place.toMs)) / 2
  const zero = y.toPixel(0)
  const end = y.toPixel(extreme)
  // just within the area's far end, where it is widest to the eye
  const height = zero + (end - zero) * 0.75
  const places: LabelPlace[] = []
  // beside the stretch, as near to its height as the curves allow
  for (let at = frame.top + 10; at < frame.bottom - 8; at += 8) {
    const cost = Math.abs(at - height) * 0.14
    places.push({ x: x.toPixel(place.toMs) + 8, y: at, anchor: 'start', cost })
    places.push({ x: x.toPixel(place.fromMs) - 8, y: at, anchor: 'end', cost: cost + 2 })
  }
  for (let dx = -160; dx <= 160; dx += 10)
    for (let at = frame.top + 10; at < frame.bottom - 8; at += 8) {
      const anchor = dx === 0 ? 'middle' : dx > 0 ? 'start' : 'end'
      places.push({ x: middle + dx, y: at, anchor, cost: 6 + Math.abs(dx) * 0.16 + Math.abs(at - height) * 0.14 })
    }
  return places
}
