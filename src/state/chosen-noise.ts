/** The noise that the page reckons with: the workspace's model, or the estimate from the loaded single trials. */
import { checkNoise, defaultNoise, noiseDensity, type NoiseSpec } from '../erp/noise.ts'
import { meanNoise } from '../erp/mean-noise.ts'
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
  /** Null where the model is in use; of a difference that of its first condition. */
  readonly estimate: EstimatedNoise | null
  /** Of the second condition of a difference, whose noise is in the mean; null elsewhere. */
  readonly estimateOfSecond: EstimatedNoise | null
}

export { checkNoise, defaultNoise, EXTRAPOLATED_MARK, noiseDensity }

const ofModel = memoised(
  (noise: NoiseSpec): ChosenNoise => ({
    noise,
    passed: 'nothing',
    estimate: null,
    estimateOfSecond: null,
  }),
)

const ofTrials = memoised((data: RecordedData, condition: string, channel: string): ChosenNoise => {
  const estimate = noiseFromTrials(trialsOf(data, condition, channel), data.samplingRateHz)
  return { noise: estimate.noise, passed: 'the stages in the data', estimate, estimateOfSecond: null }
})

/** Each condition with its own estimate: the readout and the map double the variance, so that theirs are added. */
const ofDifference = memoised((first: ChosenNoise, second: ChosenNoise): ChosenNoise => {
  if (!first.estimate || !second.estimate) return first
  const noise = meanNoise(first.estimate.noise, second.estimate.noise)
  return { ...first, noise, estimateOfSecond: second.estimate }
})

/** Whether the loaded table holds the single trials that a noise can be estimated from. */
export function hasTrials(data: RecordedData | null): data is RecordedData {
  return data?.trials !== undefined && data.trials.length > 1 && data.singles !== undefined
}

/** The conditions and the channel whose trials are taken: the chosen condition, or the two of a difference as far as the table has trials of both. */
export function trialsChosen({ shown }: Workspace, data: RecordedData): { conditions: string[]; channel: string } {
  const channel = shown.channel ?? data.channels[0]
  if (shown.chosen !== DIFFERENCE) return { conditions: [shown.chosen], channel }
  const { first, second } = shown.difference ?? { first: data.conditions[0], second: data.conditions[0] }
  const both = first !== second && trialsOf(data, second, channel).length > 1
  return { conditions: both ? [first, second] : [first], channel }
}

/**
 * The same object for the same question, since what was computed of a noise is kept by its identity. Another table without
 * trials brings the model back, which is what the page then says.
 *
 * @returns of a difference whose conditions both have trials the mean of their noises, so that its variance, which is twice that of as many trials of
 *   one condition, is S₁ and S₂ each over N.
 * @throws RangeError for trials that carry no estimate: too few, too short, all equal; for a condition that the table does not have.
 */
export function chosenNoise(workspace: Workspace, data: RecordedData | null): ChosenNoise {
  if (workspace.noiseFrom !== 'trials' || workspace.source.kind !== 'recorded' || !hasTrials(data))
    return ofModel(workspace.noise)
  const { conditions, channel } = trialsChosen(workspace, data)
  const [first, second] = conditions.map((condition) => ofTrials(data, condition, channel))
  return second ? ofDifference(first, second) : first
}

/** One trial of a noise on the times of the epoch, drawn from a seed, minus its mean: the same seed is the same trial. */
export const simulatedTrial = memoised(
  (noise: NoiseSpec, samplingRateHz: number, samples: number, seed: number): Float64Array => {
    const [trial] = drawNoise(noiseSource(noise, samplingRateHz, samples), seededRandom(seed, 0), 1)
    const mean = trial.reduce((sum, value) => sum + value, 0) / samples
    return trial.map((value) => value - mean)
  },
)
