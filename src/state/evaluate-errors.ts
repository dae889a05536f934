/** The part of evaluate() that says how sure a recorded average is: its standard error from the single trials, before and after the chain. */
import { type Baseline, correctBaseline } from '../erp/baseline.ts'
import { standardErrorOfMean } from '../erp/standard-error-of-mean.ts'
import { filterRecordedWaveform } from '../evidence/filtered-waveform.ts'
import { trialsOf } from '../files/index.ts'
import type { Chain } from '../filter/chain.ts'
import { hasTrials } from './chosen-noise.ts'
import type { StandardErrors } from './evaluation.ts'
import { memoised } from './memo.ts'
import type { RecordedData } from './recorded-data.ts'
import { DIFFERENCE, type Workspace } from './workspace.ts'

/** Filtering every trial must leave a drag its frame: more samples than this in all, and only the band before the chain is made. */
const MAX_FILTERED_SAMPLES = 60_000

const before = memoised(
  (data: RecordedData, condition: string, channel: string, baseline: Baseline): Float64Array | null => {
    const trials = trialsOf(data, condition, channel)
    if (trials.length < 2) return null
    return standardErrorOfMean(trials.map((trial) => correctBaseline(trial, data.timesMs, baseline)))
  },
  8,
)

const after = memoised(
  (data: RecordedData, condition: string, channel: string, baseline: Baseline, chain: Chain): Float64Array | null => {
    const trials = trialsOf(data, condition, channel)
    if (trials.length < 2 || trials.length * data.timesMs.length > MAX_FILTERED_SAMPLES) return null
    const filtered = trials.map((trial) =>
      correctBaseline(filterRecordedWaveform(chain, trial), data.timesMs, baseline),
    )
    return standardErrorOfMean(filtered)
  },
  4,
)

/**
 * Of the chosen waveform; null without single trials. A difference wave has the root of the two conditions' squares, its trials being different ones.
 *
 * @throws RangeError as the filters do for an epoch that is too short.
 */
export function standardErrors(workspace: Workspace, data: RecordedData | null, chain: Chain): StandardErrors | null {
  if (workspace.source.kind !== 'recorded' || !hasTrials(data)) return null
  const { shown, baseline } = workspace
  const channel = shown.channel ?? data.channels[0]
  const difference = shown.chosen === DIFFERENCE ? shown.difference : null
  const names = difference ? [difference.first, difference.second] : [shown.chosen]
  const ofBefore = names.map((name) => before(data, name, channel, baseline))
  const ofAfter = names.map((name) => after(data, name, channel, baseline, chain))
  const [first, second] = [together(ofBefore), together(ofAfter)]
  return first && { before: first, after: second }
}

function together(errors: readonly (Float64Array | null)[]): Float64Array | null {
  const [first, second] = errors
  if (!first || errors.includes(null)) return null
  return second ? first.map((value, i) => Math.hypot(value, second[i])) : first
}
