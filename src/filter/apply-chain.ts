import { appliedStages, type Chain } from './chain.ts'
import { applyEpochs, requireSameLength } from './epoch-rules.ts'
import { runContinuous } from './stand-alone.ts'
import type { Stage } from './stage.ts'

export { applyEpochs }

/** What the offline stages are applied to: a waveform with nothing around it, or an epoch cut from more. */
export type Extent = 'continuous' | 'epochs'

/**
 * Applies a chain to a waveform. Stages that are disabled or already in the data are left out; amplifier stages run as
 * continuous under either extent.
 *
 * @param x       waveform at the chain's sampling rate; not changed.
 * @param extent  'continuous': x stands alone, preceded and followed by zeros, exact. 'epochs': x is padded stage by stage
 *                (`applyEpochs`).
 * @param out     where the result goes, if not into a new array, of as many samples; may be x itself. One array for a whole
 *                recording's channels saves the time that new memory takes.
 * @returns  as many values; with no stage a copy of x.
 * @throws RangeError for NaN or an infinity in x (naming its index), an epoch not longer than a stage's padding, or an `out`
 *         of another length.
 */
export function applyChain(chain: Chain, x: Float64Array, extent: Extent, out?: Float64Array): Float64Array {
  const stages = appliedStages(chain)
  if (extent === 'epochs') return applyEpochs(stages, x, out)
  if (extent !== 'continuous') throw new RangeError(`extent must be 'continuous' or 'epochs', was ${extent}`)
  const y = runContinuous(stages, x, 0, x.length)
  if (out === undefined) return y
  requireSameLength(out, x)
  out.set(y)
  return out
}

/** The applied stages that are analogue filters of the amplifier. */
export function appliedAmplifierStages(chain: Chain): Stage[] {
  return appliedStages(chain).filter(({ spec }) => spec.design === 'amplifier')
}

/** The applied stages that are run on what was recorded. */
export function appliedOfflineStages(chain: Chain): Stage[] {
  return appliedStages(chain).filter(({ spec }) => spec.design !== 'amplifier')
}
