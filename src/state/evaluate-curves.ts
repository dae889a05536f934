/** The part of evaluate() that makes time courses: the time axis, and each condition before and after the chain. */
import { type Baseline, correctBaseline } from '../erp/baseline.ts'
import type { Component } from '../erp/component.ts'
import { checkBuiltWaveform, differenceComponents, epochTimesMs, waveformAt } from '../erp/waveform.ts'
import { neighboursAfter, neighboursBefore } from '../evidence/neighbours.ts'
import { filterBuiltWaveform, filterRecordedWaveform } from '../evidence/filtered-waveform.ts'
import { waveformOf } from '../files/index.ts'
import type { Chain } from '../filter/chain.ts'
import type { Curves } from './evaluation.ts'
import { memoised } from './memo.ts'
import type { RecordedData } from './recorded-data.ts'
import { DIFFERENCE, type Source, type Workspace } from './workspace.ts'

export interface TimeAxis {
  samplingRateHz: number
  timesMs: Float64Array
}

/** Before and after the chain on the epoch, baseline not yet corrected; the components where there are any. */
export interface RawCurves {
  before: Float64Array
  after: Float64Array
  components: readonly Component[] | null
}

type Shown = Workspace['shown']

/** @throws RangeError where a built waveform or its epoch is impossible, or the recorded file is not at hand. */
export const timeAxis = memoised((source: Source, data: RecordedData | null): TimeAxis => {
  if (source.kind === 'recorded') {
    if (!data) throw new RangeError(`the data of “${source.fileName}” are not at hand: open the file again`)
    return { samplingRateHz: data.samplingRateHz, timesMs: data.timesMs }
  }
  checkBuiltWaveform(source)
  return { samplingRateHz: source.samplingRateHz, timesMs: epochTimesMs(source.samplingRateHz, source.epoch) }
})

/** The conditions that are drawn, the difference wave last. */
export function drawnNames(shown: Shown): string[] {
  const names = [...shown.conditions]
  if (shown.difference) names.push(DIFFERENCE)
  if (!names.includes(shown.chosen)) names.push(shown.chosen)
  return names
}

/** The components of a condition or of the difference wave. @throws RangeError for a name that the waveform does not have. */
export const componentsOf = memoised(
  (source: Extract<Source, { kind: 'built' }>, name: string, difference: Shown['difference']): Component[] => {
    const named = (wanted: string) => {
      const condition = source.conditions.find((entry) => entry.name === wanted)
      if (!condition) throw new RangeError(`the waveform has no condition “${wanted}”`)
      return condition
    }
    if (name !== DIFFERENCE) return named(name).components
    if (!difference) throw new RangeError('no difference wave is defined')
    return differenceComponents(named(difference.first), named(difference.second))
  },
  12,
)

/** @throws RangeError where the file is not at hand, or has no such condition or channel. */
export function recordedValues(
  source: Extract<Source, { kind: 'recorded' }>,
  data: RecordedData | null,
  name: string,
  channel: string | null,
  difference: Shown['difference'],
): Float64Array {
  if (!data) throw new RangeError(`the data of ${source.fileName} are not at hand: open the file again`)
  const where = channel ?? data.channels[0]
  if (name !== DIFFERENCE) return waveformOf(data, name, where).values
  if (!difference) throw new RangeError('no difference wave is defined')
  const second = waveformOf(data, difference.second, where).values
  return waveformOf(data, difference.first, where).values.map((value, i) => value - second[i])
}

/** @throws RangeError as its parts do: a missing condition, an epoch shorter than a stage's padding. */
export const rawCurves = memoised(
  (
    source: Source,
    data: RecordedData | null,
    channel: string | null,
    difference: Shown['difference'],
    name: string,
    timesMs: Float64Array,
    chain: Chain,
    extent: 'continuous' | 'epochs',
  ): RawCurves => {
    if (source.kind === 'built') {
      const components = componentsOf(source, name, difference)
      const before = waveformAt(components, timesMs)
      const after = filterBuiltWaveform(chain, components, timesMs, extent)
      const { events } = source
      if (events !== 'alone') {
        add(before, neighboursBefore(components, events, timesMs, chain.samplingRateHz))
        add(after, neighboursAfter(chain, components, events, timesMs, extent))
      }
      return { before, after, components }
    }
    if (!data) throw new RangeError(`the data of “${source.fileName}” are not at hand: open the file again`)
    const before = recordedValues(source, data, name, channel, difference)
    return { before, after: filterRecordedWaveform(chain, before), components: null }
  },
  24,
)

function add(sum: Float64Array, values: Float64Array): void {
  for (let i = 0; i < sum.length; i++) sum[i] += values[i]
}

export const correctedCurves = memoised(
  (raw: RawCurves, name: string, timesMs: Float64Array, baseline: Baseline): Curves => {
    const before = correctBaseline(raw.before, timesMs, baseline)
    const after = correctBaseline(raw.after, timesMs, baseline)
    return { name, before, after, takenOut: before.map((value, i) => value - after[i]) }
  },
  24,
)
