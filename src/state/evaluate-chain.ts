/** The part of evaluate() that designs chains. */
import { type Chain, designChain } from '../filter/chain.ts'
import { designStage, type Stage, type StageSpec } from '../filter/stage.ts'
import { memoised } from './memo.ts'

/** Stages by the specification that they were designed from: dragging one cutoff leaves the others as they are. */
const stages = new WeakMap<StageSpec, Stage>()

function designedStage(spec: StageSpec, samplingRateHz: number): Stage {
  const kept = stages.get(spec)
  if (kept?.samplingRateHz === samplingRateHz) return kept
  const stage = designStage(spec, samplingRateHz)
  stages.set(spec, stage)
  return stage
}

/** @throws RangeError as `designChain`, with the stage and the field at fault. */
export const designedChain = memoised(
  (specs: readonly StageSpec[], samplingRateHz: number): Chain => designChain(specs, samplingRateHz, designedStage),
)
