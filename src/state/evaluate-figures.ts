/** The part of evaluate() that makes the frequency figure, the kernel, the effective window and the chain table. */
import type { Component } from '../erp/component.ts'
import { noiseDensity, type NoiseSpec } from '../erp/noise.ts'
import { findPeak } from '../erp/peak.ts'
import type { Score } from '../erp/score.ts'
import { supportMs, waveformAt } from '../erp/waveform.ts'
import { amplitudeSpectrum, amplitudesAt } from '../evidence/amplitude-spectrum.ts'
import { effectiveWindowOn } from '../evidence/effective-window.ts'
import { unseenShare } from '../evidence/unseen-share.ts'
import { appliedAmplifierStages, appliedOfflineStages } from '../filter/apply-chain.ts'
import { appliedStages, type Chain } from '../filter/chain.ts'
import { stagesGroupDelaySeconds } from '../filter/group-delay.ts'
import { kernelOn, stepResponseOn } from '../filter/kernel.ts'
import { stagesPhaseRad } from '../filter/phase.ts'
import { reach } from '../filter/reach.ts'
import type { Stage, StageSpec } from '../filter/stage.ts'
import { stageResponse, stagesResponse } from '../filter/stage-response.ts'
import { brief, fixed, windowWords } from '../words/index.ts'
import type { RawCurves } from './evaluate-curves.ts'
import type { FrequencyFigure, KernelFigure, ReachMs, WindowFigure } from './evaluation.ts'
import type { ChosenNoise } from './chosen-noise.ts'
import { memoised } from './memo.ts'
import type { Workspace } from './workspace.ts'

const FREQUENCY_POINTS = 320

/**
 * The frequency axis: logarithmic from two decades below the lowest offline high-pass cutoff, at most 0.1 Hz, to half the sampling rate;
 * finer around what is narrow on it.
 */
const frequencyAxis = memoised((chain: Chain): Float64Array => {
  const highest = chain.samplingRateHz / 2
  let lowest = 0.1
  const places: number[] = []
  for (const { spec } of chain.stages) {
    if ((spec.design === 'butterworth' || spec.design === 'windowed-sinc') && spec.pass !== 'low')
      lowest = Math.min(lowest, roundBelow(spec.cutoffsHz[0] / 100))
    places.push(...narrowPlacesHz(spec, highest))
  }
  for (let i = 0; i < FREQUENCY_POINTS; i++) places.push(lowest * (highest / lowest) ** (i / (FREQUENCY_POINTS - 1)))
  places[places.length - 1] = highest
  return Float64Array.from(new Set(places.filter((hz) => hz >= lowest && hz <= highest))).sort()
})

/** The next 1, 2 or 5 times a power of ten at or below: the axis stays put while a cutoff is dragged a little. */
function roundBelow(hz: number): number {
  const decade = 10 ** Math.floor(Math.log10(hz) + 1e-9)
  return ([5, 2].find((step) => step * decade <= hz * (1 + 1e-9)) ?? 1) * decade
}

function narrowPlacesHz(spec: StageSpec, highestHz: number): number[] {
  const around = (centre: number, width: number) =>
    Array.from({ length: 41 }, (_, i) => centre + (width * (i - 20)) / 10)
  if (spec.design === 'notch')
    return Array.from({ length: spec.harmonics + 1 }, (_, k) =>
      around(spec.frequencyHz * (k + 1), spec.bandwidthHz),
    ).flat()
  if (spec.design === 'windowed-sinc') return spec.cutoffsHz.flatMap((hz) => around(hz, spec.transitionHz / 2))
  if (spec.design === 'moving-average') {
    const nullHz = 1000 / spec.durationMs
    const nulls = Math.min(40, Math.floor(highestHz / nullHz))
    return Array.from({ length: nulls * 8 }, (_, i) => (nullHz * (i + 1)) / 8)
  }
  return []
}

const gainOf = ({ re, im }: { re: Float64Array; im: Float64Array }) => re.map((value, i) => Math.hypot(value, im[i]))

const gains = memoised((chain: Chain) => {
  const hz = frequencyAxis(chain)
  const applied = appliedStages(chain)
  const groupDelayMs = stagesGroupDelaySeconds(applied, hz).map((seconds) => seconds * 1000)
  return {
    hz,
    stages: chain.stages.map((stage) => gainOf(stageResponse(stage, hz))),
    gain: gainOf(stagesResponse(applied, hz)),
    phaseRad: stagesPhaseRad(applied, hz),
    groupDelayMs,
  }
})

/** Where a built waveform lives: its whole support and the epoch; tones, which never end, on the epoch. */
function wholeWaveform(components: readonly Component[], timesMs: Float64Array): Float64Array {
  const stepMs = timesMs[1] - timesMs[0]
  const support = supportMs(components) ?? { fromMs: 0, toMs: 0 }
  const before = Math.min(50_000, Math.max(0, Math.ceil((timesMs[0] - support.fromMs) / stepMs)))
  const after = Math.min(50_000, Math.max(0, Math.ceil((support.toMs - timesMs[timesMs.length - 1]) / stepMs)))
  const whole = new Float64Array(before + timesMs.length + after)
  const times = whole.map((_, i) => timesMs[0] + (i - before) * stepMs)
  whole.set(
    waveformAt(
      components.filter((component) => component.shape !== 'tone'),
      times,
    ),
  )
  const tones = waveformAt(
    components.filter((component) => component.shape === 'tone'),
    timesMs,
  )
  for (let i = 0; i < tones.length; i++) whole[before + i] += tones[i]
  return whole
}

function withoutMean(values: Float64Array): Float64Array {
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length
  return values.map((value) => value - mean)
}

const spectrumOfComponents = memoised(
  (components: readonly Component[], timesMs: Float64Array, samplingRateHz: number) =>
    amplitudeSpectrum(wholeWaveform(components, timesMs), samplingRateHz),
)
const spectrumOfEpoch = memoised((values: Float64Array, samplingRateHz: number) =>
  amplitudeSpectrum(withoutMean(values), samplingRateHz),
)

/** Spectra before and after: exact for what stands alone (|X|·|H|), of the epoch itself where epochs were filtered. */
const spectra = memoised((raw: RawCurves, chain: Chain, timesMs: Float64Array, extent: 'continuous' | 'epochs') => {
  const { hz, gain } = gains(chain)
  const { samplingRateHz } = chain
  const before = amplitudesAt(
    raw.components
      ? spectrumOfComponents(raw.components, timesMs, samplingRateHz)
      : spectrumOfEpoch(raw.before, samplingRateHz),
    hz,
  )
  const after =
    extent === 'epochs'
      ? amplitudesAt(spectrumOfEpoch(raw.after, samplingRateHz), hz)
      : before.map((value, i) => value * gain[i])
  return { before, after }
})

export function frequencyFigure(
  workspace: Workspace,
  { noise }: ChosenNoise,
  chain: Chain,
  raw: RawCurves,
  extent: 'continuous' | 'epochs',
  timesMs: Float64Array,
  points: { halfAmplitudeHz: number[]; halfPowerHz: number[] },
): FrequencyFigure {
  const { hz, stages, gain, phaseRad, groupDelayMs } = gains(chain)
  const on = workspace.chain.flatMap((spec, index) => (spec.enabled === false ? [] : [{ spec, index }]))
  return {
    hz,
    stages: on.map(({ spec, index }, i) => ({ index, inData: spec.inData === true, gain: stages[i] })),
    gain,
    phaseRad,
    groupDelayMs,
    ...spectra(raw, chain, timesMs, extent),
    noise: noiseOn(noise, hz),
    ...points,
  }
}

/** The gain of a pinned chain on the present chain's frequencies. */
export const gainOn = memoised((chain: Chain, hz: Float64Array) => {
  const applied = appliedStages(chain)
  return {
    gain: gainOf(stagesResponse(applied, hz)),
    phaseRad: stagesPhaseRad(applied, hz),
    groupDelayMs: stagesGroupDelaySeconds(applied, hz).map((seconds) => seconds * 1000),
  }
})

/** The reach that a kernel figure is about: of the offline stages, or of the amplifier where nothing else runs. */
export const drawnReach = memoised((chain: Chain): ReachMs => {
  const offline = appliedOfflineStages(chain).length > 0
  return (offline ? null : amplifierReach(chain)) ?? offlineReach(chain)
}, 12)

/** Impulse and step response of a pinned chain on the present kernel figure's lags. */
export const kernelOf = memoised((chain: Chain, from: number, samples: number) => {
  const stages = appliedStages(chain)
  return {
    impulse: kernelOn(stages, from, from + samples).map((value) => value * chain.samplingRateHz),
    step: stepResponseOn(stages, from, from + samples),
  }
})

const noiseOn = memoised((noise: NoiseSpec, hz: Float64Array) => noiseDensity(noise, hz).map(Math.sqrt))

/** How much more than the reach is drawn, and how far at most (in epochs): beyond that a kernel is a line at zero. */
const KERNEL_MARGIN = 1.1
const KERNEL_EPOCHS = 1.5

/** @param beforeMs @param afterMs the longest reach of all pinned chains, so that theirs is drawn as well. */
export const kernelFigure = memoised(
  (chain: Chain, timesMs: Float64Array, beforeMs: number, afterMs: number): KernelFigure => {
    const stages = appliedStages(chain)
    const own = drawnReach(chain)
    const beforeSamples = (Math.max(own.beforeMs, beforeMs) * chain.samplingRateHz) / 1000
    const afterSamples = (Math.max(own.afterMs, afterMs) * chain.samplingRateHz) / 1000
    const most = Math.ceil(timesMs.length * KERNEL_EPOCHS)
    const least = Math.max(4, Math.ceil(0.02 * chain.samplingRateHz))
    const drawn = (samples: number) => Math.min(most, Math.max(least, Math.ceil(samples * KERNEL_MARGIN)))
    const from = -drawn(Math.max(beforeSamples, afterSamples / 8))
    const to = drawn(Math.max(afterSamples, beforeSamples / 8)) + 1
    return {
      stepMs: 1000 / chain.samplingRateHz,
      fromIndex: from,
      impulse: kernelOn(stages, from, to).map((value) => value * chain.samplingRateHz),
      step: stepResponseOn(stages, from, to),
    }
  },
)

function reachMs(stages: readonly Stage[], samplingRateHz: number): ReachMs {
  const { beforeSamples, afterSamples } = reach(stages)
  const ms = 1000 / samplingRateHz
  return { beforeMs: beforeSamples * ms, afterMs: afterSamples * ms }
}

/** Reach of the offline stages applied here; an amplifier's long tail has a row of its own. */
export const offlineReach = memoised(
  (chain: Chain): ReachMs => reachMs(appliedOfflineStages(chain), chain.samplingRateHz),
)

const amplifierReaches = new Map<string, ReachMs>()

/** Reach of the amplifier stages; kept by what they are, since they seldom change while offline stages are dragged. */
export function amplifierReach(chain: Chain): ReachMs | null {
  const stages = appliedAmplifierStages(chain)
  if (stages.length === 0) return null
  const key = JSON.stringify([chain.samplingRateHz, stages.map((stage) => stage.spec)])
  const kept = amplifierReaches.get(key)
  if (kept) return kept
  if (amplifierReaches.size > 50) amplifierReaches.clear()
  const found = reachMs(stages, chain.samplingRateHz)
  amplifierReaches.set(key, found)
  return found
}

/** Share of the epoch that the strip shows on either side of it. */
const STRIP_MARGIN = 1 / 28

/** How many samples of the time axis are drawn on either side of the epoch. */
export const stripMargin = (samples: number) => Math.max(2, Math.round(samples * STRIP_MARGIN))

export const windowFigure = memoised(
  (
    chain: Chain,
    weights: Float64Array,
    extent: 'continuous' | 'epochs',
    score: Score,
    after: Float64Array,
    timesMs: Float64Array,
  ): WindowFigure => {
    const n = weights.length
    const margin = stripMargin(n)
    const unfiltered = new Float64Array(n + 2 * margin)
    unfiltered.set(weights, margin)
    return {
      fromIndex: -margin,
      unfiltered,
      filtered: effectiveWindowOn(chain, weights, extent, -margin, n + margin),
      shareOutside: unseenShare(chain, weights, 0, n),
      heldFixed: heldFixed(score, after, timesMs),
    }
  },
)

function heldFixed(score: Score, after: Float64Array, timesMs: Float64Array): string | null {
  if (score.kind === 'area')
    return `for the ${score.polarity} samples of ${windowWords(score.fromMs, score.toMs)}, held fixed`
  if (score.kind !== 'peak-amplitude') return null
  const peak = findPeak(after, timesMs, score, score.polarity)
  return peak === 'no peak' ? null : `for the peak at ${fixed(peak.latencyMs, 0)} ms, held fixed`
}

/** Half-amplitude and half-power of a stage as the chain table prints them. */
export function hzText(values: readonly number[]): string {
  if (values.length === 0) return 'none'
  if (values.length > 2) return `${values.length} points`
  return `${values.map((hz) => threeDigits(hz)).join(', ')} Hz`
}

function threeDigits(hz: number): string {
  if (hz >= 100) return fixed(hz, 0)
  if (hz >= 10) return fixed(hz, 1)
  return hz >= 1 ? fixed(hz, 2) : brief(hz, 2)
}

/** An applied stage that delays: its result contains its delay. */
export function delays(stage: Stage): boolean {
  const { spec } = stage
  if (spec.design === 'amplifier') return false
  return ('direction' in spec && spec.direction === 'forward') || ('delay' in spec && spec.delay !== 'compensated')
}
