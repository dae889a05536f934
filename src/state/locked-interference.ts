/** What interference locked to the event does to the score: the trade-off map counts it as bias, the curves do not draw it. */
import { noiseLines } from '../erp/noise.ts'
import { effectiveWindow } from '../evidence/effective-window.ts'
import { lockedLineContribution } from '../evidence/score-noise.ts'
import type { Chain } from '../filter/chain.ts'
import type { LockedInterference } from './evaluation.ts'
import { memoised } from './memo.ts'
import type { Workspace } from './workspace.ts'

/**
 * Null where no line is locked. Every line counts as it does in the map: it
 * comes to the applied stages as a steady tone, t from the event.
 *
 * @param weights of a score that is the same weighted sum before and after the chain; null for any other, whose change is then not told.
 */
export const lockedInterference = memoised(
  (
    noise: Workspace['noise'],
    chain: Chain,
    weights: Float64Array | null,
    extent: 'continuous' | 'epochs',
    timesMs: Float64Array,
  ): LockedInterference | null => {
    const { samplingRateHz } = chain
    const lines = noiseLines(noise).filter(({ locked, hz }) => locked && hz < samplingRateHz / 2)
    if (lines.length === 0) return null
    if (!weights) return { lines, score: null }
    const sum = (window: Float64Array, start: number) => {
      const startMs = timesMs[0] + (1000 * start) / samplingRateHz
      return lines.reduce((total, line) => total + lockedLineContribution(window, startMs, samplingRateHz, line), 0)
    }
    const after = effectiveWindow(chain, weights, extent)
    return { lines, score: { before: sum(weights, 0), after: sum(after.values, after.start) } }
  },
)
