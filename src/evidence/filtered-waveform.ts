import type { Component, ToneComponent } from '../erp/component.ts'
import { supportMs, waveformAt } from '../erp/waveform.ts'
import { applyChain, applyEpochs } from '../filter/apply-chain.ts'
import { appliedStages, type Chain, stagesResponse } from '../filter/chain.ts'
import { runContinuous } from '../filter/stand-alone.ts'
import type { Stage } from '../filter/stage.ts'

/** More samples than this on either side of the epoch are a slip of the hand (a component hours away), not a waveform. */
const MAX_SAMPLES_OUTSIDE = 4_000_000

/**
 * A built waveform after a chain, on the epoch's samples, in µV; baseline not yet corrected.
 *
 * Continuous: components are functions of time on the whole axis, so everything that ends is evaluated on its whole support and run as
 * a waveform that stands alone, and a steady tone, which never ends, is multiplied by the response at its frequency: both are exact,
 * nothing is cut. Epochs: the amplifier stages act on the whole axis, then the epoch is cut and the offline stages run by the epoch rules.
 *
 * @param timesMs evenly spaced sample times of the epoch.
 * @throws RangeError for a bad component, an epoch shorter than a stage's padding, or a component too far from the epoch.
 */
export function filterBuiltWaveform(
  chain: Chain,
  components: readonly Component[],
  timesMs: Float64Array,
  extent: 'continuous' | 'epochs',
): Float64Array {
  const stages = appliedStages(chain)
  if (extent === 'continuous') return onWholeAxis(stages, components, timesMs, chain.samplingRateHz)
  const amplifiers = stages.filter((stage) => stage.spec.design === 'amplifier')
  const offline = stages.filter((stage) => stage.spec.design !== 'amplifier')
  return applyEpochs(offline, onWholeAxis(amplifiers, components, timesMs, chain.samplingRateHz))
}

/** A recorded average after a chain: cut-out epochs are the only choice. */
export function filterRecordedWaveform(chain: Chain, values: Float64Array): Float64Array {
  return applyChain(chain, values, 'epochs')
}

function onWholeAxis(
  stages: readonly Stage[],
  components: readonly Component[],
  timesMs: Float64Array,
  samplingRateHz: number,
): Float64Array {
  if (stages.length === 0) return waveformAt(components, timesMs)
  const n = timesMs.length
  const support = supportMs(components)
  const output = new Float64Array(n)
  if (support) {
    const stepMs = 1000 / samplingRateHz
    const from = Math.floor(Math.min(0, (support.fromMs - timesMs[0]) / stepMs))
    const to = Math.ceil(Math.max(n, (support.toMs - timesMs[0]) / stepMs + 1))
    if (-from > MAX_SAMPLES_OUTSIDE || to - n > MAX_SAMPLES_OUTSIDE)
      throw new RangeError(
        `components must lie within ${MAX_SAMPLES_OUTSIDE} samples of the epoch, they reach from ${support.fromMs} to ${support.toMs} ms`,
      )
    const times = new Float64Array(to - from)
    for (let i = 0; i < times.length; i++) times[i] = timesMs[0] + (from + i) * stepMs
    const bounded = components.filter((component) => component.shape !== 'tone')
    output.set(runContinuous(stages, waveformAt(bounded, times), -from, n - from))
  }
  const tones = components.filter((component) => component.shape === 'tone')
  if (tones.length > 0) {
    const { re, im } = stagesResponse(
      stages,
      Float64Array.from(tones, (tone) => tone.frequencyHz),
    )
    const filtered = tones.map(
      (tone, i): ToneComponent => ({
        ...tone,
        amplitudeUv: tone.amplitudeUv * Math.hypot(re[i], im[i]),
        phaseRad: tone.phaseRad + Math.atan2(im[i], re[i]),
      }),
    )
    const steady = waveformAt(filtered, timesMs)
    for (let i = 0; i < n; i++) output[i] += steady[i]
  }
  return output
}
