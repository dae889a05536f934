import type { Component } from '../erp/component.ts'
import { absoluteSum, firstAfter, lastBefore } from '../filter/absolute-sum.ts'
import { appliedAmplifierStages, appliedOfflineStages, applyEpochs, type Extent } from '../filter/apply-chain.ts'
import { appliedStages, type Chain } from '../filter/chain.ts'
import { adjointEpochs } from '../filter/epoch-adjoint.ts'
import { convolveTaps } from '../filter/finite-response.ts'
import { adjointContinuous, runContinuous } from '../filter/stand-alone.ts'
import type { Stage } from '../filter/stage.ts'
import { stagesResponse } from '../filter/stage-response.ts'
import { type Interval, neighbourWaveform } from './event-train.ts'

/** What the kernel may leave out on either side, of its absolute sum. */
const LEFT_OUT = 2e-10

/** Samples before and after an epoch that the stages still see. */
function reachOf(stages: readonly Stage[]): { before: number; after: number } {
  if (stages.length === 0) return { before: 0, after: 0 }
  const sum = absoluteSum(stages, Float64Array.of(1), true)
  return {
    before: Math.max(0, firstAfter(sum, LEFT_OUT * sum.total)),
    after: Math.max(0, -lastBefore(sum, LEFT_OUT * sum.total)),
  }
}

/**
 * The neighbouring events' part of the unfiltered waveform, µV on the epoch's samples: add it to the waveform of the event that stands alone.
 *
 * @throws RangeError for a bad component or interval.
 */
export function neighboursBefore(
  components: readonly Component[],
  interval: Interval,
  timesMs: Float64Array,
  samplingRateHz: number,
): Float64Array {
  const { meanUv, from, deviation } = neighbourWaveform(components, interval, timesMs, samplingRateHz, 0, 0)
  return timesMs.map((_, m) => meanUv + (deviation[m - from] ?? 0))
}

/**
 * The same after a chain: add it to `filterBuiltWaveform`. What the train is far from this event, a constant, passes with the
 * gain at 0 Hz; under 'epochs' only amplifier stages see beyond the epoch.
 *
 * @throws RangeError as `neighboursBefore`, and for an epoch not longer than a stage's padding.
 */
export function neighboursAfter(
  chain: Chain,
  components: readonly Component[],
  interval: Interval,
  timesMs: Float64Array,
  extent: Extent,
): Float64Array {
  if (extent === 'continuous')
    return runOnTrain(appliedStages(chain), components, interval, timesMs, chain.samplingRateHz)
  const recorded = runOnTrain(appliedAmplifierStages(chain), components, interval, timesMs, chain.samplingRateHz)
  return applyEpochs(appliedOfflineStages(chain), recorded)
}

function runOnTrain(
  stages: readonly Stage[],
  components: readonly Component[],
  interval: Interval,
  timesMs: Float64Array,
  samplingRateHz: number,
): Float64Array {
  const n = timesMs.length
  const { before, after } = reachOf(stages)
  const { meanUv, from, deviation } = neighbourWaveform(components, interval, timesMs, samplingRateHz, before, after)
  const output = new Float64Array(n)
  if (deviation.length > 0) {
    // kernels go last, and over the epoch alone: the train is long
    const finite = stages.filter((stage) => stage.taps !== null)
    const recursive = stages.filter((stage) => stage.taps === null)
    const lead = finite.reduce((sum, stage) => sum + stage.leadSamples, 0)
    const lag = finite.reduce((sum, stage) => sum + (stage.taps as Float64Array).length - 1 - stage.leadSamples, 0)
    // what was made for another chain may be longer than this one sees
    const first = Math.max(0, -before - lag - from)
    const seen = deviation.subarray(first, Math.max(first, n + after + lead - from))
    let values: Float64Array = runContinuous(recursive, seen, -lag - from - first, n + lead - from - first)
    for (const { taps } of finite) {
      const kernel = taps as Float64Array
      values = convolveTaps(values, kernel).slice(kernel.length - 1, values.length)
    }
    output.set(values)
  }
  const constant = meanUv * gainAtZero(stages)
  for (let i = 0; i < n; i++) output[i] += constant
  return output
}

/**
 * What the neighbouring events contribute to a value, as a weighted sum of the unfiltered train.
 *
 * @param onAfter   weights on the filtered samples of the epoch.
 * @param onBefore  weights on its unfiltered samples that are subtracted, or null.
 * @throws RangeError as `neighboursAfter`.
 */
export function neighbourContribution(
  chain: Chain,
  components: readonly Component[],
  interval: Interval,
  timesMs: Float64Array,
  extent: Extent,
  onAfter: Float64Array,
  onBefore: Float64Array | null,
): number {
  const epochs = extent === 'epochs'
  const stages = epochs ? appliedAmplifierStages(chain) : appliedStages(chain)
  const w = epochs ? adjointEpochs(appliedOfflineStages(chain), onAfter) : onAfter
  const { before, after } = reachOf(stages)
  const train = neighbourWaveform(components, interval, timesMs, chain.samplingRateHz, before, after)
  const { meanUv, from, deviation } = train
  // what was made for another chain may be longer than this one sees
  const first = Math.max(from, -before)
  const last = Math.max(first, Math.min(from + deviation.length, timesMs.length + after))
  const g = adjointContinuous(stages, w, first, last)
  let value = 0
  for (let i = 0; i < g.length; i++) value += g[i] * deviation[first - from + i]
  value += meanUv * gainAtZero(stages) * sum(w)
  if (onBefore === null) return value
  for (let m = 0; m < onBefore.length; m++) value -= onBefore[m] * (meanUv + (deviation[m - from] ?? 0))
  return value
}

function gainAtZero(stages: readonly Stage[]): number {
  return stagesResponse(stages, Float64Array.of(0)).re[0]
}

function sum(values: Float64Array): number {
  let total = 0
  for (let i = 0; i < values.length; i++) total += values[i]
  return total
}
