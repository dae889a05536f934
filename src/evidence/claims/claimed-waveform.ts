import { correctBaseline } from '../../erp/baseline.ts'
import { differenceComponents, waveformAt } from '../../erp/waveform.ts'
import type { Extent } from '../../filter/apply-chain.ts'
import { type Chain, designChain } from '../../filter/chain.ts'
import { designStage, type Stage, type StageSpec } from '../../filter/stage.ts'
import { filterBuiltWaveform, filterRecordedWaveform } from '../filtered-waveform.ts'
import { neighboursAfter, neighboursBefore } from '../neighbours.ts'
import type { TraceSource } from '../traced-waveform.ts'
import type { ClaimSetting } from './claim.ts'

/** A setting made ready: what no chain changes is computed once, and a stage that does not change is designed once. */
export interface PreparedClaim {
  readonly setting: ClaimSetting
  /** Draws of noise for numbers that are no weighted sums. */
  readonly draws: number
  readonly design: typeof designStage
  readonly waveforms: Map<string, UnfilteredWaveform>
  /** Whatever else hangs on the setting alone, by name. */
  readonly kept: Map<string, unknown>
}

export interface UnfilteredWaveform {
  readonly source: TraceSource
  /** Baseline-corrected, µV on the epoch's samples. */
  readonly before: Float64Array
  /** Independent averages that it is made of: 1, or 2 of a difference. */
  readonly averages: 1 | 2
  /** What the offline stages are run on. */
  readonly extent: Extent
}

/** A waveform and what a chain makes of it, both baseline-corrected: the readout's own numbers. */
export interface ClaimedWaveform extends UnfilteredWaveform {
  readonly chain: Chain
  readonly after: Float64Array
}

export type Chosen = ClaimSetting['chosen']

/** The standard deviation of so many draws is right to 5 %. */
const DRAWS = 200

/** @param draws of noise, an even number. */
export function prepareClaim(setting: ClaimSetting, draws = DRAWS): PreparedClaim {
  const stages = new WeakMap<StageSpec, Stage>()
  const design: typeof designStage = (spec, samplingRateHz) => {
    let stage = stages.get(spec)
    if (!stage) stages.set(spec, (stage = designStage(spec, samplingRateHz)))
    return stage
  }
  return { setting, draws, design, waveforms: new Map(), kept: new Map() }
}

/** What is computed once for a prepared setting. */
export function once<T>({ kept }: PreparedClaim, key: string, compute: () => T): T {
  if (!kept.has(key)) kept.set(key, compute())
  return kept.get(key) as T
}

/**
 * @param specs the chain; the setting's own, a twin of it, or one with another cutoff.
 * @throws RangeError for a chain that cannot be designed.
 */
export function claimChain({ setting, design }: PreparedClaim, specs: readonly StageSpec[]): Chain {
  return designChain(specs, setting.samplingRateHz, design)
}

/**
 * The unfiltered condition or difference.
 *
 * @throws RangeError for a condition that the setting does not have, a bad component or interval, a baseline outside the epoch.
 */
export function unfilteredWaveform(prepared: PreparedClaim, chosen: Chosen): UnfilteredWaveform {
  const key = JSON.stringify(chosen)
  const known = prepared.waveforms.get(key)
  if (known) return known
  const { setting } = prepared
  const { timesMs, samplingRateHz, baseline } = setting
  const source = sourceOf(setting, chosen)
  let raw: Float64Array
  if (source.kind === 'recorded') raw = source.values
  else {
    raw = waveformAt(source.components, timesMs)
    const { events = 'alone' } = source
    if (events !== 'alone') add(raw, neighboursBefore(source.components, events, timesMs, samplingRateHz))
  }
  const waveform: UnfilteredWaveform = {
    source,
    before: correctBaseline(raw, timesMs, baseline),
    averages: chosen.kind === 'difference' ? 2 : 1,
    // of a recorded average nothing is known outside the epoch
    extent: source.kind === 'recorded' ? 'epochs' : setting.extent,
  }
  prepared.waveforms.set(key, waveform)
  return waveform
}

/** The same after a chain. @throws RangeError as `unfilteredWaveform`, and for an epoch not longer than a stage's padding. */
export function claimedWaveform(prepared: PreparedClaim, chosen: Chosen, chain: Chain): ClaimedWaveform {
  const unfiltered = unfilteredWaveform(prepared, chosen)
  const after = filteredValues(prepared, unfiltered, chain)
  const { timesMs, baseline } = prepared.setting
  return { ...unfiltered, chain, after: correctBaseline(after, timesMs, baseline, after) }
}

/** Filtered values, baseline not corrected. Throws as `claimedWaveform`. */
export function filteredValues(
  { setting }: PreparedClaim,
  { source, extent }: UnfilteredWaveform,
  chain: Chain,
): Float64Array {
  if (source.kind === 'recorded') return filterRecordedWaveform(chain, source.values)
  const { timesMs } = setting
  const { components, events = 'alone' } = source
  const after = filterBuiltWaveform(chain, components, timesMs, extent)
  if (events !== 'alone') add(after, neighboursAfter(chain, components, events, timesMs, extent))
  return after
}

function sourceOf(setting: ClaimSetting, chosen: Chosen): TraceSource {
  const named = (name: string) => {
    const condition = setting.conditions.find((entry) => entry.name === name)
    if (!condition) throw new RangeError(`the waveform has no condition “${name}”`)
    return condition
  }
  if (chosen.kind === 'condition') return named(chosen.name).source
  const first = named(chosen.first)
  const second = named(chosen.second)
  if (first.source.kind === 'recorded' && second.source.kind === 'recorded') {
    const subtracted = second.source.values
    return { kind: 'recorded', values: first.source.values.map((value, i) => value - subtracted[i]) }
  }
  if (first.source.kind === 'built' && second.source.kind === 'built') {
    const components = differenceComponents(
      { name: first.name, components: [...first.source.components] },
      { name: second.name, components: [...second.source.components] },
    )
    return { kind: 'built', components, events: first.source.events }
  }
  throw new RangeError('the conditions of a difference must both be built or both be recorded')
}

function add(sum: Float64Array, values: Float64Array): void {
  for (let i = 0; i < sum.length; i++) sum[i] += values[i]
}
