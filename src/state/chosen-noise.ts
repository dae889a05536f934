/** The noise that the page reckons with: the workspace's model, or the estimate from the loaded single trials. */
import { checkNoise, defaultNoise, noiseDensity, type NoiseSpec } from '../erp/noise.ts'
import { seededRandom } from '../erp/seeded-random.ts'
import { drawNoise, noiseSource } from '../erp/simulate-noise.ts'
import { EXTRAPOLATED_MARK, type EstimatedNoise, noiseFromTrials } from '../erp/noise-from-trials.ts'
import type { NoisePassed } from '../evidence/filtered-noise.ts'
import { trialsOf } from '../files/index.ts'
import { memoised } from './memo.ts'
import type { RecordedData } from './recorded-data.ts'
import { DIFFERENCE, type Workspace } from './workspace.ts'

export interface ChosenNoise {
  readonly noise: NoiseSpec
  /** An estimate was measured behind the stages in the data; a model is of the noise before anything. */
  readonly passed: NoisePassed
  /** Null where the model is in use. */
  readonly estimate: EstimatedNoise | null
}

export { checkNoise, defaultNoise, EXTRAPOLATED_MARK, noiseDensity }

const ofModel = memoised((noise: NoiseSpec): ChosenNoise => ({ noise, passed: 'nothing', estimate: null }))

const ofTrials = memoised((data: RecordedData, condition: string, channel: string): ChosenNoise => {
  const estimate = noiseFromTrials(trialsOf(data, condition, channel), data.samplingRateHz)
  return { noise: estimate.noise, passed: 'the stages in the data', estimate }
})

/** Whether the loaded table holds the single trials that a noise can be estimated from. */
export function hasTrials(data: RecordedData | null): data is RecordedData {
  return data?.trials !== undefined && data.trials.length > 1 && data.singles !== undefined
}

/** The condition and channel whose trials are taken: the chosen condition, of a difference the first of the two. */
export function trialsChosen({ shown }: Workspace, data: RecordedData): { condition: string; channel: string } {
  const condition = shown.chosen === DIFFERENCE ? (shown.difference?.first ?? data.conditions[0]) : shown.chosen
  return { condition, channel: shown.channel ?? data.channels[0] }
}

/**
 * The same object for the same question, since what was computed of a noise is kept by its identity. Another table without
 * trials brings the model back, which is what the page then says.
 *
 * @throws RangeError for trials that carry no estimate: too few, too short, all equal.
 */
export function chosenNoise(workspace: Workspace, data: RecordedData | null): ChosenNoise {
  if (workspace.noiseFrom !== 'trials' || workspace.source.kind !== 'recorded' || !hasTrials(data))
    return ofModel(workspace.noise)
  const { condition, channel } = trialsChosen(workspace, data)
  return ofTrials(data, condition, channel)
}

/** One trial of a noise on the times of the epoch, drawn from a seed, minus its mean: the same seed is the same trial. */
export const simulatedTrial = memoised(
  (noise: NoiseSpec, samplingRateHz: number, samples: number, seed: number): Float64Array => {
    const [trial] = drawNoise(noiseSource(noise, samplingRateHz, samples), seededRandom(seed, 0), 1)
    const mean = trial.reduce((sum, value) => sum + value, 0) / samples
    return trial.map((value) => value - mean)
  },
)
