/** The curves, paths and marked points of the gain figure, made from an evaluation without a screen. */
import { areaPath, linePath } from '../plot/path.ts'
import type { Scale } from '../plot/scale.ts'
import type { Evaluation, FrequencyFigure } from '../state/evaluation.ts'
import { courseOf, valueAt } from './curve-course.ts'
import type { CutoffMark } from './cutoff-marks.ts'
import { hzText } from './frequency-words.ts'
import { type GainAxis, type GainUnit, gainsIn, largest, noiseIn, spectrumIn } from './gain-axis.ts'
import { drawnPins } from './pin-line.tsx'
import type { FrequencyCourses, HalfPoint } from './label-wish.ts'

/** Where a stage lets less through than this, it forms the whole chain's curve, which then carries its dashes. */
const FORMING = 0.985

/** All curves in the unit of the axis, sample by sample as `hz`. */
export function gainCurves(evaluation: Evaluation, unit: GainUnit, axis: GainAxis) {
  const { frequency, table } = evaluation
  const most = largest(frequency.before)
  return {
    hz: frequency.hz,
    chain: gainsIn(unit, frequency.gain, axis),
    stages: frequency.stages.map(({ index, inData, gain }) => ({
      index,
      inData,
      name: table.find((row) => row.index === index)?.name ?? `stage ${index + 1}`,
      drawn: gainsIn(unit, gain, axis),
      forming: gainsIn(
        unit,
        gain.map((value) => (value < FORMING ? value : Number.NaN)),
        axis,
      ),
    })),
    pins: drawnPins(evaluation).map(({ index, name, result }) => ({
      index,
      name,
      drawn: gainsIn(unit, result.gain, axis),
    })),
    before: spectrumIn(unit, frequency.before, most, axis),
    after: spectrumIn(unit, frequency.after, most, axis),
    noise: noiseIn(frequency.noise, axis),
  }
}

export type GainCurves = ReturnType<typeof gainCurves>

export function gainPaths(curves: GainCurves, x: Scale, y: Scale) {
  const line = (values: Float64Array) => linePath(curves.hz, values, x, y)
  return {
    chain: line(curves.chain),
    stages: curves.stages.map((stage) => ({ whole: line(stage.drawn), forming: line(stage.forming) })),
    pins: curves.pins.map((pin) => line(pin.drawn)),
    before: line(curves.before),
    noise: line(curves.noise),
    taken: areaPath(
      curves.hz,
      curves.before,
      x,
      y,
      curves.before.map((value, i) => Math.min(value, curves.after[i])),
    ),
    after: areaPath(curves.hz, curves.after, x, y, y.domain[0]),
  }
}

/** What labels have to heed, but for the marked points. */
export function gainCourses(curves: GainCurves, axis: GainAxis, x: Scale, y: Scale): Omit<FrequencyCourses, 'points'> {
  const [left, right] = x.range
  const [bottom, top] = y.range
  const course = (values: ArrayLike<number>) => courseOf(curves.hz, values, x, y, left, Math.ceil(right - left))
  const [amplitude, power] = [y.toPixel(axis.halfAmplitude), y.toPixel(axis.halfPower)]
  return {
    left,
    right,
    top,
    bottom,
    chain: course(curves.chain),
    stages: curves.stages.map(({ name, inData, drawn }) => ({ name, inData, heights: course(drawn) })),
    pins: curves.pins.map(({ name, drawn }) => ({ name, heights: course(drawn) })),
    before: course(curves.before),
    after: course(curves.after),
    noise: course(curves.noise),
    full: y.toPixel(axis.full),
    halves: Math.abs(amplitude - power) > 20 ? { amplitude, power } : null,
  }
}

/** A cutoff with the place of its handle. */
export interface PlacedCutoff {
  cutoff: CutoffMark
  x: number
  y: number
}

/** Handles on the axis: each at its stage's gain, so that it lies on the stage's curve. */
export function placeCutoffs(
  cutoffs: readonly CutoffMark[],
  frequency: FrequencyFigure,
  unit: GainUnit,
  axis: GainAxis,
  x: Scale,
  y: Scale,
): PlacedCutoff[] {
  return cutoffs
    .filter(({ hz }) => hz >= x.domain[0] && hz <= x.domain[1])
    .map((cutoff) => {
      const stage = frequency.stages.find(({ index }) => index === cutoff.stage)
      const gain = cutoff.gain ?? (stage ? valueAt(frequency.hz, stage.gain, cutoff.hz) : 0.5)
      const [drawn] = gainsIn(unit, [gain], axis)
      return { cutoff, x: x.toPixel(cutoff.hz), y: Math.min(y.range[0], y.toPixel(drawn)) }
    })
}

/** Half-amplitude and half-power points of the whole chain, and the handles that stand on none of them with their own number. */
export function halfPoints(
  { halfAmplitudeHz, halfPowerHz }: Pick<FrequencyFigure, 'halfAmplitudeHz' | 'halfPowerHz'>,
  placed: readonly PlacedCutoff[],
  axis: GainAxis,
  x: Scale,
  y: Scale,
): { dots: HalfPoint[]; handles: HalfPoint[] } {
  const pointsAt = (points: readonly number[], value: number, strong: boolean) =>
    points
      .filter((hz) => hz >= x.domain[0] && hz <= x.domain[1])
      .map((hz): HalfPoint => ({ x: x.toPixel(hz), y: y.toPixel(value), text: hzText(hz), strong, stated: false }))
  const dots = [...pointsAt(halfAmplitudeHz, axis.halfAmplitude, true), ...pointsAt(halfPowerHz, axis.halfPower, false)]
  const handles = placed
    .filter((mark) => !dots.some((dot) => Math.hypot(dot.x - mark.x, dot.y - mark.y) < 9))
    .map((mark) => ({ x: mark.x, y: mark.y, text: hzText(mark.cutoff.hz), strong: true, stated: true }))
  return { dots, handles }
}
