export { stepMs, samplesInWindow, type TimeWindow } from './time-axis.ts'
export {
  COMPONENT_SHAPES,
  checkComponent,
  componentAt,
  componentSupportMs,
  type AsymmetricComponent,
  type Component,
  type DampedOscillationComponent,
  type GaussianComponent,
  type RampComponent,
  type SlowWaveComponent,
  type ToneComponent,
} from './component.ts'
export {
  checkBuiltWaveform,
  differenceComponents,
  epochTimesMs,
  supportMs,
  waveformAt,
  type BuiltWaveform,
  type Condition,
} from './waveform.ts'
export { baselineWeights, correctBaseline, type Baseline } from './baseline.ts'
export { findPeak, type Peak, type Polarity } from './peak.ts'
export { scoreLinearity, scoreOf, scoreUnit, scoreWeights, type NoScore, type Score, type ScoreKind } from './score.ts'
export type { FigureId, Limit, Limits, Measure } from './figure.ts'
export {
  checkNoise,
  defaultNoise,
  noiseDensity,
  noiseDensityAt,
  noiseKinksHz,
  noiseLines,
  type NoiseLine,
  type NoiseModel,
  type NoiseSpec,
  type NoiseTable,
} from './noise.ts'
export { noiseAutocovariance, noiseSpectrum, type NoiseSpectrum } from './noise-autocovariance.ts'
export { seededRandom, type SeededRandom } from './seeded-random.ts'
export { drawNoise, noiseSource, type NoiseSource } from './simulate-noise.ts'
export { meanNoise } from './mean-noise.ts'
export {
  EXTRAPOLATED_MARK,
  noiseFromTrials,
  summariseTrials,
  type EstimatedNoise,
  type TrialsSummary,
} from './noise-from-trials.ts'
export { SCENARIOS, type Scenario } from './scenarios.ts'
