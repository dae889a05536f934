import { convolveTaps } from '../../filter/finite-response.ts'
import type { ExportPlan, ExportStage } from './export-plan.ts'

/**
 * Runs a chain the way exported code does: sections in transposed direct form II, one after another in double precision, padding and
 * zeros included. It tells how far that can be from the core's exact output, and nothing else on the page uses it.
 *
 * Source of the initial state: SciPy's `lfilter_zi` and `sosfilt_zi`.
 */

/**
 * How a run on an epoch starts in the steady state: with SciPy's initial state, or with the first sample taken off and its gain added
 * again, which is the same but for rounding.
 */
export type Start = 'initial-state' | 'offset-removed'

type Runnable = Pick<ExportPlan, 'stages' | 'extent' | 'zerosBefore' | 'zerosAfter'>

/** @returns  as many values as x. */
export function directForm(plan: Runnable, x: Float64Array, start: Start): Float64Array {
  if (plan.extent === 'epochs') return plan.stages.reduce((values, stage) => onEpoch(stage, values, start), x)
  const { zerosBefore, zerosAfter } = plan
  let values: Float64Array = new Float64Array(zerosBefore + x.length + zerosAfter)
  values.set(x, zerosBefore)
  for (const stage of plan.stages) {
    if (stage.taps) {
      values = convolveTaps(values, stage.taps).slice(stage.leadSamples, stage.leadSamples + values.length)
      continue
    }
    fromRest(stage.sections as Float64Array, values)
    if (stage.passes === 2) fromRest(stage.sections as Float64Array, values.reverse()).reverse()
  }
  return values.slice(zerosBefore, zerosBefore + x.length)
}

function onEpoch(stage: ExportStage, x: Float64Array, start: Start): Float64Array {
  const { rule, sections, taps, leadSamples, paddingSamples: padding } = stage
  if (taps) {
    const padded = reflected(x, padding, leadSamples)
    return convolveTaps(padded, taps).slice(taps.length - 1, taps.length - 1 + x.length)
  }
  if (rule === 'rest') return fromRest(sections as Float64Array, x.slice())
  if (rule === 'forward') return steady(stage, x.slice(), start)
  const padded = steady(stage, reflected(x, padding, padding), start)
  return steady(stage, padded.reverse(), start)
    .reverse()
    .slice(padding, padding + x.length)
}

function steady({ sections, gainAtZero }: ExportStage, values: Float64Array, start: Start): Float64Array {
  const first = values[0]
  if (start === 'initial-state') return fromRest(sections as Float64Array, values, first)
  for (let i = 0; i < values.length; i++) values[i] -= first
  fromRest(sections as Float64Array, values)
  for (let i = 0; i < values.length; i++) values[i] += gainAtZero * first
  return values
}

/** All sections over the values in place; `constant` is what they have been fed with for ever, 0 for a start from rest. */
function fromRest(sections: Float64Array, values: Float64Array, constant = 0): Float64Array {
  let level = constant
  for (let at = 0; at < sections.length; at += 6) {
    const [b0, b1, b2, , a1, a2] = sections.subarray(at, at + 6)
    const c1 = b1 - a1 * b0
    const c2 = b2 - a2 * b0
    const state = (c1 + c2) / (1 + a1 + a2)
    let z0 = level * state
    let z1 = level * ((1 + a1) * state - c1)
    level *= (b0 + b1 + b2) / (1 + a1 + a2)
    for (let i = 0; i < values.length; i++) {
      const x = values[i]
      const y = b0 * x + z0
      z0 = b1 * x - a1 * y + z1
      z1 = b2 * x - a2 * y
      values[i] = y
    }
  }
  return values
}

function reflected(x: Float64Array, before: number, after: number): Float64Array {
  const last = x.length - 1
  const padded = new Float64Array(before + x.length + after)
  padded.set(x, before)
  for (let k = 1; k <= before; k++) padded[before - k] = 2 * x[0] - x[k]
  for (let k = 1; k <= after; k++) padded[before + last + k] = 2 * x[last] - x[last - k]
  return padded
}
