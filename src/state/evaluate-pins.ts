/** The part of evaluate() that runs the same waveform and score through a pinned chain. */
import { effectiveWindowOn } from '../evidence/effective-window.ts'
import { inWords } from '../words/index.ts'
import type { ChosenNoise } from './chosen-noise.ts'
import { designedChain } from './evaluate-chain.ts'
import { correctedCurves, rawCurves, type TimeAxis } from './evaluate-curves.ts'
import { drawnReach, gainOn, kernelOf, stripMargin } from './evaluate-figures.ts'
import { precisionOf, rowsOf, weightsOf } from './evaluate-score.ts'
import type { FailedPin, KernelFigure, PinnedResult, ReachMs } from './evaluation.ts'
import { memoised } from './memo.ts'
import type { RecordedData } from './recorded-data.ts'
import type { Pin, Workspace } from './workspace.ts'

/** A pinned window hangs on nothing that is dragged but the score. */
const windowOf = memoised(effectiveWindowOn)

/** The longest reach of the pinned chains; those that cannot be designed reach nowhere. */
export function longestReach(pins: readonly Pin[], samplingRateHz: number): ReachMs {
  const longest = { beforeMs: 0, afterMs: 0 }
  for (const { chain } of pins) {
    try {
      const { beforeMs, afterMs } = drawnReach(designedChain(chain, samplingRateHz))
      longest.beforeMs = Math.max(longest.beforeMs, beforeMs)
      longest.afterMs = Math.max(longest.afterMs, afterMs)
    } catch (error) {
      if (!(error instanceof RangeError)) throw error
    }
  }
  return longest
}

/**
 * What a pinned chain makes of the present waveform, on the grids of the present figures. A pin that cannot be computed says why and leaves
 * the rest of the page alone.
 */
export function pinnedResult(
  pin: Pin,
  name: string,
  workspace: Workspace,
  data: RecordedData | null,
  noise: ChosenNoise,
  { samplingRateHz, timesMs }: TimeAxis,
  hz: Float64Array,
  kernel: KernelFigure,
): PinnedResult | FailedPin {
  const { source, shown, score, baseline, measure, onsetMs } = workspace
  try {
    const chain = designedChain(pin.chain, samplingRateHz)
    const extent = source.kind === 'recorded' ? 'epochs' : pin.extent
    const raw = rawCurves(source, data, shown.channel, shown.difference, shown.chosen, timesMs, chain, extent)
    const { before, after } = correctedCurves(raw, shown.chosen, timesMs, baseline)
    const rows = rowsOf(before, after, raw, timesMs, score, measure, onsetMs)
    const weights = weightsOf(score, baseline, timesMs, before, after)
    const margin = stripMargin(timesMs.length)
    return {
      name,
      after,
      window: weights && windowOf(chain, weights.after, extent, -margin, timesMs.length + margin),
      ...gainOn(chain, hz),
      reach: drawnReach(chain),
      ...kernelOf(chain, kernel.fromIndex, kernel.impulse.length),
      rows,
      precision: weights && precisionOf(workspace, noise, chain, weights, extent, rows[0], before),
    }
  } catch (error) {
    if (!(error instanceof RangeError)) throw error
    return { name, reason: inWords(error.message) }
  }
}
