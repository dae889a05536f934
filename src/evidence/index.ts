export { effectiveWindow, effectiveWindowOn } from './effective-window.ts'
export { type FurtherData, furtherData } from './further-data.ts'
export { shareOutside, unseenShare, unseenShareBySample } from './unseen-share.ts'

export { largestAbsolute, fidelityRows, judge, scoreReference } from './fidelity.ts'
export type { FidelityInput, FidelityRow, FigureGroup, Judgement, NoValue } from './fidelity.ts'
export { onsetOfBuilt } from './onset-of-built.ts'
export { lockedLineContribution, scoreVariance, scoreVarianceOfResponse } from './score-noise.ts'
export { responseBreaksHz } from './response-breaks.ts'
export { equalTrialsFactor, noiseRow, precisionFactor, varianceOfDifference, type NoiseRow } from './precision.ts'
export { type AmplitudeSpectrum, amplitudesAt, amplitudeSpectrum } from './amplitude-spectrum.ts'
export { filterBuiltWaveform, filterRecordedWaveform } from './filtered-waveform.ts'
export {
  isTraced,
  type NotTraced,
  type Traced,
  type TracedInput,
  type TracedOf,
  tracedWeights,
} from './traced-weights.ts'
export type { Events, TraceSource } from './traced-waveform.ts'
export { checkEvents, type Interval } from './event-train.ts'
export { neighbourContribution, neighboursAfter, neighboursBefore } from './neighbours.ts'
export {
  type Boundary,
  boundaryAt,
  moveBoundary,
  removeBoundary,
  splitStretch,
  type Stretches,
} from './stretches.ts'
export { type LargeComponent, largeComponents } from './large-components.ts'
export { defaultStretches, type StretchMarks } from './default-stretches.ts'
export { isAboutZero, type TraceInput } from './trace-input.ts'
export { type MomentRow, type MomentTrace, momentRows, shareDensity, traceByMoment } from './trace-by-moment.ts'
export {
  type PartRow,
  type PartTrace,
  type SignedCondition,
  traceByComponent,
  traceByCondition,
} from './trace-by-component.ts'
export { type StageRow, type StageTrace, traceByStage } from './trace-by-stage.ts'
export { type TraceBack, traceBack, type TraceTrust, traceTrust, UNSEEN_THRESHOLD } from './trace-back.ts'

export { extrapolatedShare } from './extrapolated-share.ts'
export {
  drawFilteredNoise,
  type FilteredNoise,
  filteredNoise,
  type NoisePassed,
  type NoisePath,
  noisePath,
  spectrumAfter,
} from './filtered-noise.ts'
export {
  BATCH_DRAWS,
  type Estimate,
  type ScoreSimulation,
  scoreSimulation,
  simulateBatch,
  type SimulatedFigures,
  simulatedFigures,
  type SimulationQuestion,
  type SimulationState,
  simulationStart,
} from './simulated-score.ts'
export { type ComponentRanges, type Range, waveformSample } from './waveform-sample.ts'
export {
  type Candidate,
  type CandidatePlace,
  candidateSpec,
  chainWithCandidate,
  logCutoffs,
} from './trade-off-candidate.ts'
export {
  type CellScore,
  computeCell,
  computeCells,
  type MapCell,
  type MapPlan,
  type MapQuestion,
  type MapScore,
  type MapWaveform,
  mergeCells,
  planMap,
  type PreparedMap,
  prepareMap,
} from './trade-off-map.ts'
export { type CellFigures, cellFigures, type FiguresQuestion, type OverWaveforms } from './trade-off-figures.ts'
export { paretoFront } from './pareto-front.ts'
export {
  CLOSE,
  type CutoffRun,
  keepsLimits,
  type LimitName,
  type LimitVerdict,
  type TradeOffAnswer,
  tradeOffAnswer,
  type TradeOffLimits,
} from './trade-off-answer.ts'

export { type LateOnlyFit, fitLateOnly, lateOnlyFit } from './late-only-fit.ts'
export { type LateOnlyModel, type LateOnlyOptions, lateOnlyModel } from './late-only-model.ts'
export type { LateOnlyVerdict, VerdictConditions, VerdictGrounds } from './late-only-verdict.ts'
export { robustOf, robustOptions, type RobustVariant, type RobustVerdict, robustVerdict } from './robust-verdict.ts'
export { latestOnset, type OnsetRow, type OnsetScan, type ScanProgress, scanOnsets } from './onset-scan.ts'
export { type BumpOptions, type BumpRow, type BumpScan, scanBumps } from './bump-scan.ts'
export type { CalibrationRow } from './calibration-row.ts'
export { CALIBRATION } from './calibration-table.ts'

export { type NoiseProbe, type NoiseTerm, scoreCovariance } from './score-covariance.ts'
export { type AnsweredForm, answerClaim, claimBounds } from './claims/answer-claim.ts'
export { claimCurve, type CurveProgress } from './claims/claim-curve.ts'
export { type VariedRange, variedByDefault, variedChain, variedRange } from './claims/varied-chain.ts'
export {
  type LateOnlyAnswer,
  lateOnlyClaim,
  lateOnlyCurve,
  variedByDefaultOfFit,
} from './claims/late-only-claim.ts'
export type {
  ClaimAnswer,
  ClaimChain,
  ClaimCurve,
  ClaimFlip,
  ClaimForm,
  ClaimGrounds,
  ClaimPoint,
  ClaimRow,
  ClaimSetting,
  ClaimVerdict,
  ShownAnswer,
  ShownClaim,
  Varied,
} from './claims/claim.ts'
