import { applyEpochs, type Extent } from '../filter/apply-chain.ts'
import type { Chain } from '../filter/chain.ts'
import { adjointEpochs } from '../filter/epoch-adjoint.ts'
import { runContinuous } from '../filter/stand-alone.ts'
import type { Stage } from '../filter/stage.ts'

/**
 * A chain as it has acted on a waveform that is already filtered: every enabled stage, whether the page runs it or the data have passed
 * it before. Amplifier stages act as continuous, before any cutting.
 */
export interface ActingStages {
  readonly samplingRateHz: number
  readonly continuous: readonly Stage[]
  readonly onEpoch: readonly Stage[]
}

/** @throws RangeError for another extent. */
export function actingStages(chain: Chain, extent: Extent): ActingStages {
  if (extent !== 'continuous' && extent !== 'epochs') {
    throw new RangeError(`extent must be 'continuous' or 'epochs', was ${extent}`)
  }
  const acting = chain.stages.filter(({ spec }) => spec.enabled !== false)
  const cut = (stage: Stage) => extent === 'epochs' && stage.spec.design !== 'amplifier'
  return {
    samplingRateHz: chain.samplingRateHz,
    continuous: acting.filter((stage) => !cut(stage)),
    onEpoch: acting.filter(cut),
  }
}

/**
 * K·x on the n samples of an epoch.
 *
 * @param x      values that stand alone: zeros before and after them.
 * @param start  index of x[0] relative to the epoch's first sample.
 * @throws RangeError for an epoch not longer than a stage's padding.
 */
export function actOn({ continuous, onEpoch }: ActingStages, x: Float64Array, start: number, n: number): Float64Array {
  const y = runContinuous(continuous, x, -start, n - start)
  return onEpoch.length > 0 ? applyEpochs(onEpoch, y, y) : y
}

/** Weights on the epoch before its own stages that give the same as weights on it after them. */
export function beforeEpochStages({ onEpoch }: ActingStages, weights: Float64Array): Float64Array {
  return onEpoch.length > 0 ? adjointEpochs(onEpoch, weights) : weights
}
