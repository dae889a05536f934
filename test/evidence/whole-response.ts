import { wholeResponse } from '../../src/filter/kernel.ts'
import { designStage, type StageSpec } from '../../src/filter/stage.ts'

export { designChain } from '../../src/filter/chain.ts'
export type { StageSpec }

/** A window carried through stages that are in the data: their transpose as continuous. */
export function wholeResponseForTest(specs: readonly StageSpec[], window: Float64Array, rate: number): Float64Array {
  const stages = specs.map((spec) => designStage({ ...spec, inData: false }, rate))
  return wholeResponse(stages, window.slice().reverse()).values
}
