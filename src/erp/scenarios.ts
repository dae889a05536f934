import type { StageSpec } from '../filter/stage.ts'
import type { Baseline } from './baseline.ts'
import type { Limits, Measure } from './figure.ts'
import { defaultNoise, type NoiseSpec } from './noise.ts'
import type { Score } from './score.ts'
import type { BuiltWaveform } from './waveform.ts'

/** A built waveform with everything that the page says about it. All data are invented. */
export interface Scenario {
  id: string
  title: string
  /** One plain sentence: what to look at. */
  sentence: string
  waveform: BuiltWaveform
  /** The condition shown first. */
  condition: string
  /** Where it is said to be recorded. */
  channel: string
  chain: StageSpec[]
  extent: 'continuous' | 'epochs'
  baseline: Baseline
  trials: number
  score: Score
  measure: Measure
  limits: Limits
  noise: NoiseSpec
}

/** 1/(2πτ): the half-power cutoff of a first-order high-pass with the time constant τ. */
function timeConstantHz(seconds: number): number {
  return 1 / (2 * Math.PI * seconds)
}

const latePositivity: Scenario = {
  id: 'late-positivity',
  title: 'Late positivity to rare targets',
  sentence:
    'Nothing but a late positivity was put in, and yet the filtered waveform shows a negativity at 80–140 ms that looks like an early component.',
  waveform: {
    samplingRateHz: 500,
    epoch: { fromMs: -400, toMs: 1000 },
    conditions: [
      {
        name: 'rare targets',
        components: [
          { shape: 'gaussian', name: 'late positivity', amplitudeUv: 7.9, latencyMs: 400, widthMs: 213 },
          { shape: 'gaussian', name: 'residual baseline', amplitudeUv: -0.05, latencyMs: -330, widthMs: 160 },
        ],
      },
      {
        name: 'frequent standards',
        components: [
          { shape: 'gaussian', name: 'small late positivity', amplitudeUv: 1.6, latencyMs: 370, widthMs: 200 },
          { shape: 'gaussian', name: 'residual baseline', amplitudeUv: -0.05, latencyMs: -330, widthMs: 160 },
        ],
      },
    ],
  },
  condition: 'rare targets',
  channel: 'Pz',
  chain: [
    { design: 'amplifier', pass: 'high', order: 1, cutoffHz: timeConstantHz(10) },
    { design: 'butterworth', pass: 'high', order: 2, cutoffsHz: [1], meaning: 'half-amplitude', direction: 'both' },
    {
      design: 'windowed-sinc',
      pass: 'low',
      cutoffsHz: [30],
      meaning: 'half-amplitude',
      transitionHz: 7.5,
      window: { name: 'hamming' },
      delay: 'compensated',
    },
  ],
  extent: 'continuous',
  baseline: { fromMs: -200, toMs: 0 },
  trials: 40,
  score: { kind: 'mean', fromMs: 80, toMs: 140, polarity: 'negative' },
  measure: { mean: { fromMs: 300, toMs: 500 }, peak: { fromMs: 200, toMs: 700 }, polarity: 'positive' },
  limits: {
    score: { value: 0.2, unit: 'µV' },
    'mean-amplitude': { value: 0.5, unit: 'µV' },
    'peak-amplitude': { value: 0.5, unit: 'µV' },
    'peak-latency': { value: 10, unit: 'ms' },
    'area-latency': { value: 10, unit: 'ms' },
    'onset-latency': { value: 10, unit: 'ms' },
    'false-deflection': { value: 0.2, unit: 'µV' },
  },
  noise: defaultNoise(),
}

const slowWave: Scenario = {
  id: 'slow-wave',
  title: 'A slow wave eaten by a high-pass',
  sentence:
    'The sustained negativity while items are kept in mind is mostly gone after a half-hertz high-pass, and a positivity that was never there follows it.',
  waveform: {
    samplingRateHz: 250,
    epoch: { fromMs: -500, toMs: 2000 },
    conditions: [
      {
        name: 'four items',
        components: [
          { shape: 'gaussian', name: 'visual positivity', amplitudeUv: 2.4, latencyMs: 120, widthMs: 60 },
          {
            shape: 'slow-wave',
            name: 'sustained negativity',
            amplitudeUv: -4.5,
            latencyMs: 900,
            widthMs: 1100,
            edgeMs: 300,
          },
        ],
      },
      {
        name: 'one item',
        components: [
          { shape: 'gaussian', name: 'visual positivity', amplitudeUv: 2.4, latencyMs: 120, widthMs: 60 },
          {
            shape: 'slow-wave',
            name: 'sustained negativity',
            amplitudeUv: -1.5,
            latencyMs: 900,
            widthMs: 1100,
            edgeMs: 300,
          },
        ],
      },
    ],
  },
  condition: 'four items',
  channel: 'PO7',
  chain: [
    { design: 'amplifier', pass: 'high', order: 1, cutoffHz: timeConstantHz(10) },
    { design: 'butterworth', pass: 'high', order: 2, cutoffsHz: [0.5], meaning: 'half-amplitude', direction: 'both' },
  ],
  extent: 'continuous',
  baseline: { fromMs: -200, toMs: 0 },
  trials: 60,
  score: { kind: 'mean', fromMs: 600, toMs: 1200, polarity: 'negative' },
  measure: { mean: { fromMs: 400, toMs: 1400 }, peak: { fromMs: 250, toMs: 1700 }, polarity: 'negative' },
  limits: {
    score: { value: 10, unit: '%' },
    'mean-amplitude': { value: 10, unit: '%' },
    'signed-area': { value: 10, unit: '%' },
    'area-latency': { value: 20, unit: 'ms' },
    'onset-latency': { value: 20, unit: 'ms' },
    'false-deflection': { value: 0.3, unit: 'µV' },
  },
  noise: defaultNoise(),
}

const smearedOnset: Scenario = {
  id: 'smeared-onset',
  title: 'An onset smeared early by a low-pass',
  sentence:
    'The negativity begins at 130 ms and not a moment sooner, but a zero-phase low-pass at 6 Hz spreads it to both sides, so its onset comes out too early.',
  waveform: {
    samplingRateHz: 1000,
    epoch: { fromMs: -300, toMs: 700 },
    conditions: [
      {
        name: 'pictures',
        components: [
          { shape: 'ramp', name: 'early negativity', amplitudeUv: -6, latencyMs: 172, widthMs: 70, riseShare: 0.3 },
        ],
      },
      {
        name: 'scrambled pictures',
        components: [
          { shape: 'ramp', name: 'early negativity', amplitudeUv: -3.2, latencyMs: 172, widthMs: 70, riseShare: 0.3 },
        ],
      },
    ],
  },
  condition: 'pictures',
  channel: 'P8',
  chain: [
    { design: 'butterworth', pass: 'low', order: 4, cutoffsHz: [6], meaning: 'half-amplitude', direction: 'both' },
  ],
  extent: 'continuous',
  baseline: { fromMs: -200, toMs: 0 },
  trials: 80,
  score: { kind: 'onset-latency', fromMs: 100, toMs: 300, polarity: 'negative', fraction: 0.5 },
  measure: { mean: { fromMs: 150, toMs: 210 }, peak: { fromMs: 100, toMs: 300 }, polarity: 'negative' },
  limits: {
    score: { value: 5, unit: 'ms' },
    'mean-amplitude': { value: 10, unit: '%' },
    'peak-amplitude': { value: 10, unit: '%' },
    'peak-latency': { value: 5, unit: 'ms' },
    'area-latency': { value: 5, unit: 'ms' },
    'onset-latency': { value: 5, unit: 'ms' },
    'false-deflection': { value: 0.2, unit: 'µV' },
  },
  noise: defaultNoise(),
}

const delayedPeak: Scenario = {
  id: 'delayed-peak',
  title: 'A causal filter that delays a peak',
  sentence:
    'A low-pass run forward only keeps everything before the onset clean, and pays for it with a peak that comes tens of milliseconds late.',
  waveform: {
    samplingRateHz: 1000,
    epoch: { fromMs: -200, toMs: 600 },
    conditions: [
      {
        name: 'tones',
        components: [
          { shape: 'gaussian', name: 'first positivity', amplitudeUv: 1.8, latencyMs: 55, widthMs: 28 },
          { shape: 'gaussian', name: 'negativity', amplitudeUv: -5.2, latencyMs: 105, widthMs: 48 },
          {
            shape: 'asymmetric',
            name: 'second positivity',
            amplitudeUv: 4.1,
            latencyMs: 190,
            widthMs: 90,
            riseShare: 0.4,
          },
        ],
      },
    ],
  },
  condition: 'tones',
  channel: 'Cz',
  chain: [
    { design: 'amplifier', pass: 'high', order: 1, cutoffHz: timeConstantHz(10) },
    { design: 'butterworth', pass: 'low', order: 4, cutoffsHz: [15], meaning: 'half-power', direction: 'forward' },
  ],
  extent: 'continuous',
  baseline: { fromMs: -100, toMs: 0 },
  trials: 100,
  score: { kind: 'peak-latency', fromMs: 70, toMs: 180, polarity: 'negative' },
  measure: { mean: { fromMs: 85, toMs: 125 }, peak: { fromMs: 70, toMs: 180 }, polarity: 'negative' },
  limits: {
    score: { value: 5, unit: 'ms' },
    'mean-amplitude': { value: 0.5, unit: 'µV' },
    'peak-amplitude': { value: 0.5, unit: 'µV' },
    'peak-latency': { value: 5, unit: 'ms' },
    'area-latency': { value: 5, unit: 'ms' },
    'onset-latency': { value: 5, unit: 'ms' },
    // the rise up to the onset, 5 % of the largest value, is what a delay takes away
    'false-deflection': { value: 0.3, unit: 'µV' },
  },
  noise: defaultNoise(),
}

const steadyInterference: Scenario = {
  id: 'steady-interference',
  title: 'Steady interference at one frequency',
  sentence:
    'The display’s 75 Hz refresh is locked to the stimulus and never averages out: switch the notch off and the low-pass on, and see what each leaves of the interference and of the sharp early peak.',
  waveform: {
    samplingRateHz: 500,
    epoch: { fromMs: -200, toMs: 500 },
    conditions: [
      {
        name: 'checkerboards',
        components: [
          { shape: 'gaussian', name: 'first negativity', amplitudeUv: -2.6, latencyMs: 76, widthMs: 20 },
          { shape: 'gaussian', name: 'sharp positivity', amplitudeUv: 7.5, latencyMs: 104, widthMs: 26 },
          { shape: 'gaussian', name: 'second negativity', amplitudeUv: -3.8, latencyMs: 142, widthMs: 38 },
          { shape: 'tone', name: '75 Hz refresh', amplitudeUv: 1.5, frequencyHz: 75, phaseRad: 0.9 },
        ],
      },
    ],
  },
  condition: 'checkerboards',
  channel: 'Oz',
  chain: [
    { design: 'amplifier', pass: 'high', order: 1, cutoffHz: timeConstantHz(10) },
    { design: 'notch', frequencyHz: 75, bandwidthHz: 4, harmonics: 0, direction: 'both' },
    {
      enabled: false,
      design: 'windowed-sinc',
      pass: 'low',
      cutoffsHz: [40],
      meaning: 'half-amplitude',
      transitionHz: 10,
      window: { name: 'hamming' },
      delay: 'compensated',
    },
  ],
  extent: 'continuous',
  baseline: { fromMs: -100, toMs: 0 },
  trials: 100,
  score: { kind: 'peak-amplitude', fromMs: 85, toMs: 130, polarity: 'positive' },
  measure: { mean: { fromMs: 95, toMs: 115 }, peak: { fromMs: 85, toMs: 130 }, polarity: 'positive' },
  limits: {
    score: { value: 0.5, unit: 'µV' },
    'mean-amplitude': { value: 0.5, unit: 'µV' },
    'peak-amplitude': { value: 0.5, unit: 'µV' },
    'peak-latency': { value: 3, unit: 'ms' },
    'area-latency': { value: 3, unit: 'ms' },
    'onset-latency': { value: 3, unit: 'ms' },
    'false-deflection': { value: 0.5, unit: 'µV' },
  },
  noise: defaultNoise(),
}

/** The invented scenarios, in the order in which the page offers them; the first is the first sight. */
export const SCENARIOS: readonly Scenario[] = [latePositivity, slowWave, smearedOnset, delayedPeak, steadyInterference]
