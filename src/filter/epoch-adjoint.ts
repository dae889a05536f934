import {
  epochPaddingSamples,
  type RecursiveProgram,
  recursiveProgram,
  requireRoom,
  runPass,
  sum,
} from './epoch-rules.ts'
import { convolveTaps } from './finite-response.ts'
import { requireFinite } from './missing-values.ts'
import { adjointContinuous } from './stand-alone.ts'
import type { Stage } from './stage.ts'

/**
 * Weights on the samples of the unfiltered epoch that give the same number as the weights w on the filtered one: the exact
 * transpose of `applyEpochs`, padding included; each stage's pad, run and trim are transposed, in reverse order.
 * Of an amplifier only the weights within the epoch are returned.
 *
 * @param w  weights on the filtered samples.
 * @returns  as many weights.
 * @throws RangeError as `applyEpochs`.
 */
export function adjointEpochs(stages: readonly Stage[], w: Float64Array): Float64Array {
  requireFinite('weights', w)
  let v: Float64Array = w.slice()
  for (let i = stages.length - 1; i >= 0; i--) v = adjointStage(stages[i], v)
  return v
}

function adjointStage(stage: Stage, w: Float64Array): Float64Array {
  if (stage.spec.design === 'amplifier') return adjointContinuous([stage], w, 0, w.length)
  requireRoom(stage, w.length)
  if (w.length === 0) return w
  if (stage.taps !== null) {
    const before = stage.taps.length - 1 - stage.leadSamples
    return foldOddly(convolveTaps(w, reversed(stage.taps)), before, w.length)
  }
  const program = recursiveProgram(stage)
  if (stage.passes === 1) {
    const v = w.slice()
    transposePass(program, v, false)
    return v
  }
  const padding = epochPaddingSamples(stage)
  const padded = new Float64Array(w.length + 2 * padding)
  padded.set(w, padding)
  transposePass(program, padded, true)
  transposePass(program, padded, false)
  return foldOddly(padded, padding, w.length)
}

/**
 * Transpose of one pass from the steady state, y = L(x − x0) + G·x0 with L the run from rest: L transposed is the run on
 * reversed time, and x0 collects what the constant took and gave.
 */
function transposePass(program: RecursiveProgram, values: Float64Array, backward: boolean): void {
  const given = program.gainAtZero * sum(values)
  runPass(program, values, !backward)
  values[backward ? values.length - 1 : 0] += given - sum(values)
}

/** Transpose of the odd reflection: what lies `before` and after the n samples goes back to where it came from. */
function foldOddly(padded: Float64Array, before: number, n: number): Float64Array {
  const folded = padded.slice(before, before + n)
  for (let k = 1; k <= before; k++) {
    folded[0] += 2 * padded[before - k]
    folded[k] -= padded[before - k]
  }
  for (let k = 1; before + n - 1 + k < padded.length; k++) {
    folded[n - 1] += 2 * padded[before + n - 1 + k]
    folded[n - 1 - k] -= padded[before + n - 1 + k]
  }
  return folded
}

const mirrored = new WeakMap<Float64Array, Float64Array>()

/** Reversed taps; kept, so that their spectrum can be. Symmetric taps are their own. */
function reversed(taps: Float64Array): Float64Array {
  let mirror = mirrored.get(taps)
  if (!mirror) {
    mirror = taps.slice().reverse()
    if (mirror.every((tap, i) => tap === taps[i])) mirror = taps
    mirrored.set(taps, mirror)
  }
  return mirror
}
