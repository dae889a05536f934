export type {
  AmplifierSpec,
  ButterworthSpec,
  CutoffMeaning,
  Delay,
  Direction,
  MovingAverageSpec,
  NotchSpec,
  Pass,
  Stage,
  StageSpec,
  WindowedSincSpec,
  WindowSpec,
} from './stage.ts'
export { designStage } from './stage.ts'
export { type Chain, appliedStages, chainResponse, designChain, stagesResponse } from './chain.ts'
export { type SpecFault, specError } from './spec-error.ts'

export { MAX_BUTTERWORTH_ORDER } from './butterworth.ts'
export { designCutoffsHz } from './cutoff-meaning.ts'
export { KAISER_DB, kaiserBeta, tapsForTransition } from './window.ts'
export { MAX_AMPLIFIER_ORDER, hzToTimeConstant, timeConstantToHz } from './amplifier.ts'
export { MAX_HARMONICS, notchDesignBandwidthHz } from './notch.ts'
export { movingAverageSamples } from './moving-average.ts'
export { MAX_TAPS } from './tap-limit.ts'
export { minimumPhase } from './minimum-phase.ts'
export { causalTwin, zeroPhaseTwin } from './twins.ts'

export { gainAt, stageResponse } from './stage-response.ts'
export { stageGroupDelaySeconds, stagesGroupDelaySamples, stagesGroupDelaySeconds } from './group-delay.ts'
export { stagePhaseRad, stagesPhaseRad } from './phase.ts'
export {
  type CrossingPoints,
  type CutoffPoints,
  type RollOff,
  chainCutoffPoints,
  stageCutoffPoints,
} from './cutoff-points.ts'

export {
  type Complex,
  convolve,
  forwardTransform,
  inverseRealTransform,
  inverseTransform,
  nextPowerOfTwo,
  realTransform,
} from './fourier.ts'

export { type Extent, appliedAmplifierStages, appliedOfflineStages, applyChain } from './apply-chain.ts'
export { applyEpochs, epochPaddingSamples } from './epoch-rules.ts'
export { adjointEpochs } from './epoch-adjoint.ts'
export { adjointContinuous, runContinuous } from './stand-alone.ts'
export { type Located, chainKernel, kernelOn, stepResponseOn } from './kernel.ts'
export { type Reach, reach } from './reach.ts'
export { type AbsoluteSum, absoluteBefore, absoluteSum } from './absolute-sum.ts'
export { requireFinite } from './missing-values.ts'
