/** What the kernel figure has to know before it draws: how far it reaches, how it is compressed, what is said beside it. */
import type { Evaluation } from '../state/evaluation.ts'
import { fixed } from '../words/number.ts'
import { drawnPins } from './pin-line.tsx'

export interface KernelRange {
  fromMs: number
  toMs: number
  /** The reach of the stages that the figure is about; null without any. */
  reach: { fromMs: number; toMs: number } | null
  /** Whether the curve is there for the whole reach. */
  whole: boolean
}

/** Room beyond the reach, as a share of its length. */
const BEYOND = 0.08
/** A kernel without length is drawn on this. */
const LEAST_MS = 100

/**
 * Lags to draw: the reach of the offline stages and a little more, or that of the amplifier where nothing else runs, and that of the pinned
 * chains; never more than the curve holds.
 */
export function kernelRange({ kernel, reach, amplifierReach, chain, pins }: Evaluation): KernelRange {
  const applied = chain.stages.filter(({ spec }) => spec.inData !== true)
  const pinned = drawnPins({ pins }).map(({ result }) => result.reach)
  if (applied.length === 0 && pinned.length === 0)
    return { fromMs: -LEAST_MS, toMs: LEAST_MS, reach: null, whole: true }
  const offline = applied.some(({ spec }) => spec.design !== 'amplifier')
  const own = offline || !amplifierReach ? reach : amplifierReach
  const beforeMs = Math.max(own.beforeMs, ...pinned.map((pin) => pin.beforeMs))
  const afterMs = Math.max(own.afterMs, ...pinned.map((pin) => pin.afterMs))
  const heldFrom = kernel.fromIndex * kernel.stepMs
  const heldTo = (kernel.fromIndex + kernel.impulse.length - 1) * kernel.stepMs
  const room = Math.max(BEYOND * (beforeMs + afterMs), 6 * kernel.stepMs)
  // what lies before a causal kernel is nothing, which may be drawn without samples
  const fromMs = beforeMs > 0 ? Math.max(heldFrom, -beforeMs - room) : -room
  const toMs = Math.max(Math.min(heldTo, afterMs + room), kernel.stepMs)
  return {
    fromMs: Math.min(fromMs, -kernel.stepMs),
    toMs,
    reach: applied.length === 0 ? null : { fromMs: -own.beforeMs || 0, toMs: own.afterMs },
    whole: heldFrom <= -own.beforeMs + kernel.stepMs / 2 && heldTo >= own.afterMs - kernel.stepMs / 2,
  }
}

/**
 * Value up to which a compressed scale is about linear: a quarter of the curve's absolute area lies on samples that are smaller. So
 * the low, long lobes of a high-pass stay visible beside an impulse a thousand times as high. Held between a 3000th and a third of the
 * largest value; counted in 160 classes over five decades, so that it costs one pass.
 */
export function linearWidth(values: ArrayLike<number>): number {
  let most = 0
  for (let i = 0; i < values.length; i++) most = Math.max(most, Math.abs(values[i]))
  if (!(most > 0 && Number.isFinite(most))) return 1
  const CLASSES = 160
  const areas = new Float64Array(CLASSES)
  let total = 0
  for (let i = 0; i < values.length; i++) {
    const size = Math.abs(values[i])
    if (size === 0) continue
    const below = Math.min(CLASSES - 1, Math.floor((Math.log10(most / size) / 5) * CLASSES))
    areas[below] += size
    total += size
  }
  let counted = 0
  for (let below = CLASSES - 1; below >= 0; below--) {
    counted += areas[below]
    if (counted >= total / 4) return Math.min(most / 3, Math.max(most / 3000, most * 10 ** ((-5 * below) / CLASSES)))
  }
  return most / 3
}

/** Domain of values: zero within, and room at both ends. On a compressed scale the room is taken where the scale is wide. */
export function valueDomain(
  values: ArrayLike<number>,
  first: number,
  end: number,
  width: number | null,
): [number, number] {
  let low = 0
  let high = 0
  for (let i = Math.max(0, first); i < Math.min(values.length, end); i++) {
    low = Math.min(low, values[i])
    high = Math.max(high, values[i])
  }
  if (low === 0 && high === 0) return [-1, 1]
  if (width === null) {
    const room = (high - low) * 0.1
    return [low - room, high + room]
  }
  const [from, to] = [Math.asinh(low / width), Math.asinh(high / width)]
  const room = (to - from) * 0.1
  return [width * Math.sinh(from - room), width * Math.sinh(to + room)]
}

/** Milliseconds as they are written here: whole ones, tenths below 10. */
export function lagText(ms: number): string {
  return fixed(ms, Math.abs(ms) < 9.95 && Math.abs(ms % 1) > 0.05 ? 1 : 0)
}

export interface KernelWords {
  /** Strong: "reach −844 to 844 ms". */
  reach: string
  /** Quiet lines below it. */
  more: string[]
}

/** Null where there is nothing but a single impulse to draw. */
export function kernelWords({ chain, pins }: Evaluation, range: KernelRange): KernelWords | null {
  if (range.reach === null)
    return drawnPins({ pins }).length === 0 ? null : { reach: 'no filter applied', more: ['a single impulse'] }
  const { fromMs, toMs } = range.reach
  const amplified = chain.stages.some(({ spec }) => spec.design === 'amplifier' && spec.inData !== true)
  const offline = chain.stages.some(({ spec }) => spec.design !== 'amplifier' && spec.inData !== true)
  const more = [amplified && offline ? '99 %, amplifier aside' : '99 % of the absolute area']
  const [from, to] = [lagText(range.fromMs), lagText(range.toMs)]
  if (!range.whole) more.push(from === lagText(-range.toMs) ? `drawn to ±${to} ms` : `drawn ${from} to ${to} ms`)
  return { reach: `reach ${lagText(fromMs)} to ${lagText(toMs)} ms`, more }
}

/**
 * Course of a curve by pixel column for labels to avoid: its highest and its lowest point of each two columns in turn, so that nothing
 * stands between them either.
 */
export function envelopeCourse(
  { fromIndex, stepMs }: { fromIndex: number; stepMs: number },
  values: ArrayLike<number>,
  x: { fromPixel: (pixel: number) => number },
  y: { toPixel: (value: number) => number },
  left: number,
  columns: number,
): Float64Array {
  const heights = new Float64Array(columns + 1).fill(y.toPixel(0))
  for (let column = 0; column <= columns; column++) {
    const first = Math.max(0, Math.floor(x.fromPixel(left + column) / stepMs) - fromIndex)
    const end = Math.min(values.length, Math.ceil(x.fromPixel(left + column + 2) / stepMs) - fromIndex + 1)
    if (first >= end) continue
    let low = values[first]
    let high = values[first]
    for (let i = first + 1; i < end; i++) {
      low = Math.min(low, values[i])
      high = Math.max(high, values[i])
    }
    heights[column] = y.toPixel(column % 2 === 0 ? high : low)
  }
  return heights
}
