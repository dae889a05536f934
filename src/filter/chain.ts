import type { Complex } from './fourier.ts'
import { checkSamplingRate, type SpecFault, specError } from './spec-error.ts'
import { designStage, type Stage, type StageSpec } from './stage.ts'
import { stagesResponse } from './stage-response.ts'

/** Enabled stages in order, amplifier stages first; those that are in the data (`spec.inData`) included. */
export interface Chain {
  readonly samplingRateHz: number
  readonly stages: readonly Stage[]
}

/**
 * Designs a chain: its enabled stages in order. A stage that is switched off is left out, whatever it holds.
 *
 * @param specs           stages in the order in which they act; amplifier stages come first.
 * @param samplingRateHz  samples per second, positive.
 * @param design          designs one stage; a caller that designs often hands in one that remembers.
 * @throws RangeError     whose message begins `stage n: ` (n from 1) and which carries `stageIndex` (from 0) and, where one
 *                        property is at fault, its name in `field`.
 */
export function designChain(
  specs: readonly StageSpec[],
  samplingRateHz: number,
  design: typeof designStage = designStage,
): Chain {
  checkSamplingRate(samplingRateHz)
  const stages: Stage[] = []
  let offline = -1
  for (let index = 0; index < specs.length; index++) {
    const spec = specs[index]
    if (spec?.enabled === false) continue
    if (spec?.design === 'amplifier' && offline >= 0) {
      throw stageError(
        index,
        specError('design', `an amplifier stage must come before all offline stages, but follows stage ${offline + 1}`),
      )
    }
    try {
      stages.push(design(spec, samplingRateHz))
    } catch (error) {
      throw error instanceof RangeError ? stageError(index, error) : error
    }
    if (spec.design !== 'amplifier') offline = index
  }
  return { samplingRateHz, stages }
}

/** The stages of a chain that are applied here: those that are not in the data already, nor switched off. */
export function appliedStages(chain: Chain): readonly Stage[] {
  return chain.stages.filter(({ spec }) => spec.inData !== true && spec.enabled !== false)
}

/**
 * Frequency response of a chain as applied, stages that are in the data left out.
 *
 * @param frequenciesHz  any finite frequencies.
 * @returns  real and imaginary parts, one value a frequency; 1 for an empty chain.
 */
export function chainResponse(chain: Chain, frequenciesHz: Float64Array): Complex {
  return stagesResponse(appliedStages(chain), frequenciesHz)
}

export { stagesResponse }

function stageError(stageIndex: number, error: RangeError & SpecFault): RangeError & SpecFault {
  const located = new RangeError(`stage ${stageIndex + 1}: ${error.message}`)
  return Object.assign(located, error.field === undefined ? { stageIndex } : { stageIndex, field: error.field })
}
