import { requireFinite } from '../filter/missing-values.ts'
import { finiteInput, requireRange, runPasses, standAlone } from '../filter/stand-alone.ts'
import type { Stage } from '../filter/stage.ts'
import { stagesResponse } from '../filter/stage-response.ts'
import { sumOfFreeOutput } from '../filter/state-variable.ts'

/** An effective window on a range of samples, and the sums of all its weights before and after the range. */
export interface WindowWithTails {
  /** Index of values[0] relative to the epoch's first sample. */
  readonly from: number
  readonly values: Float64Array
  readonly weightBefore: number
  readonly weightAfter: number
}

/**
 * The effective window of weights under stages that run as continuous, at samples from … to − 1 relative to weights[0], and what lies outside:
 * tails that may last millions of samples are summed from the states at the range's ends, in closed form, and together
 * all weights come to the gain at 0 Hz times the sum of w.
 *
 * @param w  weights on filtered samples.
 * @throws RangeError for NaN or an infinity in w, or a range that is not one.
 */
export function windowWithTails(stages: readonly Stage[], w: Float64Array, from: number, to: number): WindowWithTails {
  requireFinite('weights', w)
  requireRange(from, to)
  if (stages.length === 0) return withoutStages(w, from, to)
  const n = w.length
  // reversed time turns the transpose into the stages themselves: sample m is n − 1 − m there
  const system = standAlone(stages)
  const input = finiteInput(system, w.slice().reverse())
  const values = new Float64Array(to - from)
  if (input.values.length === 0) return { from, values, weightBefore: 0, weightAfter: 0 }
  const first = Math.min(n - to, input.start)
  const last = Math.max(n - from, input.start + input.values.length)
  const run = runPasses(system, input, first, last)
  let early = system.backward.length > 0 ? sumOfFreeOutput(system.backward, run.backwardState) : 0
  for (let i = first; i < n - to; i++) early += run.values[i - first]
  let inside = 0
  for (let i = n - to; i < n - from; i++) {
    const value = run.values[i - first]
    values[n - 1 - i - from] = value
    inside += value
  }
  let total = 0
  for (let i = 0; i < n; i++) total += w[i]
  total *= stagesResponse(stages, Float64Array.of(0)).re[0]
  // what is left over, where the reversed input cannot reach further, is rounding
  const more = system.forward.length > 0 || last > n - from
  return { from, values, weightBefore: more ? total - inside - early : 0, weightAfter: early }
}

function withoutStages(w: Float64Array, from: number, to: number): WindowWithTails {
  const values = new Float64Array(to - from)
  let weightBefore = 0
  let weightAfter = 0
  for (let i = 0; i < w.length; i++) {
    if (i < from) weightBefore += w[i]
    else if (i >= to) weightAfter += w[i]
    else values[i - from] = w[i]
  }
  return { from, values, weightBefore, weightAfter }
}
