/**
 * evaluate(workspace, data): every number and curve on the page, as a pure function of what the user said. It is computed in parts, each
 * remembered by what it depends on, so that dragging the score window does not redesign the chain.
 */
import { type Baseline, baselineWeights } from '../erp/baseline.ts'
import { checkNoise } from '../erp/noise.ts'
import { type NoScore, type Score, scoreLinearity, scoreOf, scoreUnit, scoreWeights } from '../erp/score.ts'
import { samplesInWindow, type TimeWindow } from '../erp/time-axis.ts'
import { type FidelityRow, fidelityRows, largestAbsolute } from '../evidence/fidelity.ts'
import { onsetOfBuilt } from '../evidence/onset-of-built.ts'
import { type NoiseRow, noiseRow, varianceOfDifference } from '../evidence/precision.ts'
import { unseenShare, unseenShareBySample } from '../evidence/unseen-share.ts'
import { appliedOfflineStages } from '../filter/apply-chain.ts'
import { appliedStages, type Chain, designChain } from '../filter/chain.ts'
import { designStage, type Stage, type StageSpec } from '../filter/stage.ts'
import { inWords, partOfField, remarkWords } from '../words/index.ts'
import { correctedCurves, drawnNames, type RawCurves, rawCurves, type TimeAxis, timeAxis } from './evaluate-curves.ts'
import {
  amplifierReach,
  delays,
  frequencyFigure,
  kernelFigure,
  offlineReach,
  windowFigure,
} from './evaluate-figures.ts'
import { scoreVariances } from './evaluate-precision.ts'
import { chainPoints, chainTable } from './evaluate-table.ts'
import type { Curves, Evaluation, Outcome, Problem } from './evaluation.ts'
import { memoised } from './memo.ts'
import type { RecordedData } from './recorded-data.ts'
import { DIFFERENCE, type Workspace } from './workspace.ts'

const MAX_TRIALS = 1_000_000

/** Everything on the page, or what stands in the way, at the tokens that say it. */
export function evaluate(workspace: Workspace, data: RecordedData | null): Outcome {
  const problems: Problem[] = []
  const attempt = <T>(at: string | ((error: RangeError) => string), compute: () => T): T | null => {
    try {
      return compute()
    } catch (error) {
      if (!(error instanceof RangeError)) throw error
      problems.push({ at: typeof at === 'string' ? at : at(error), message: inWords(error.message) })
      return null
    }
  }
  const { source, shown, score, baseline, trials, measure } = workspace

  // What was said, part by part: every part that cannot be computed is named, not only the first.
  const axis = attempt(
    (error) => (source.kind === 'recorded' ? 'source' : error.message.includes('samplingRateHz') ? 'rate' : 'waveform'),
    () => timeAxis(source, data),
  )
  const chain = axis && attempt(stageAt, () => designed(workspace.chain, axis.samplingRateHz))
  attempt('trials', () => checkTrials(trials))
  attempt('trials', () => checkNoise(workspace.noise))
  if (axis) {
    const flat = new Float64Array(axis.timesMs.length)
    attempt('baseline', () => baselineWeights(baseline, axis.timesMs))
    attempt('score-window', () => scoreOf(flat, axis.timesMs, score))
    attempt('measure:mean', () => samplesInWindow(axis.timesMs, measure.mean, 'the window of the mean amplitude'))
    attempt('measure:peak', () => checkPeakWindow(axis.timesMs, measure.peak))
  }
  if (!axis || !chain || problems.length > 0) return { ok: false, problems }

  const { timesMs } = axis
  const extent = source.kind === 'recorded' ? 'epochs' : workspace.extent
  const names = drawnNames(shown)
  const raw = attempt(
    (error) => (/needs \d+ samples/.test(error.message) ? 'extent' : 'waveform'),
    () => names.map((name) => rawCurves(source, data, shown.channel, shown.difference, name, timesMs, chain, extent)),
  )
  if (!raw) return { ok: false, problems }
  // Nothing more to refuse is known; numbers too large for any sum must still not take the page down.
  const evaluation = attempt('waveform', () => evaluationOf(workspace, axis, chain, extent, raw, names))
  return evaluation ? { ok: true, evaluation } : { ok: false, problems }
}

function evaluationOf(
  workspace: Workspace,
  axis: TimeAxis,
  chain: Chain,
  extent: 'continuous' | 'epochs',
  raw: readonly RawCurves[],
  names: readonly string[],
): Evaluation {
  const { shown, score, baseline, measure } = workspace
  const { timesMs } = axis
  const curves = raw.map((entry, i): Curves => correctedCurves(entry, names[i], timesMs, baseline))
  const chosen = names.indexOf(shown.chosen)
  const { before, after } = curves[chosen]

  const rows = rowsOf(before, after, raw[chosen], timesMs, score, measure, workspace.onsetMs)
  const weights = weightsOf(score, baseline, timesMs, before, after)
  const unseen = weights && (extent === 'continuous' ? 0 : unseenOf(chain, weights.after))
  return {
    samplingRateHz: axis.samplingRateHz,
    timesMs,
    chain,
    curves,
    chosen,
    delayIncluded: appliedStages(chain).some(delays),
    unseenBySample: extent === 'epochs' ? unseenAtEachSample(chain, timesMs.length) : null,
    window: weights && windowFigure(chain, weights.after, extent, score, after, timesMs),
    frequency: frequencyFigure(workspace, chain, raw[chosen], extent, timesMs, chainPoints(chain)),
    kernel: kernelFigure(chain, timesMs),
    table: chainTable(workspace.chain, chain),
    reach: offlineReach(chain),
    amplifierReach: amplifierReach(chain),
    unseenShare: unseen,
    rows,
    precision: weights && precisionOf(workspace, chain, weights, extent, rows[0], before),
    remark: remarkWords({
      score,
      unit: rows[0].unit,
      before: rows[0].before as number | NoScore,
      after: rows[0].after as number | NoScore,
      largestUv: largestAbsolute(before),
      unseenShare: unseen,
      extent,
      noFilter: appliedStages(chain).length === 0,
    }),
  }
}

/** An area needs two samples. */
function checkPeakWindow(timesMs: Float64Array, window: TimeWindow): void {
  const what = 'the window of the peak and the area'
  const { first, last } = samplesInWindow(timesMs, window, what)
  if (first === last)
    throw new RangeError(`${what} must hold at least 2 samples, ${window.fromMs} to ${window.toMs} ms holds 1`)
}

function checkTrials(trials: number): void {
  if (Number.isInteger(trials) && trials >= 1 && trials <= MAX_TRIALS) return
  throw new RangeError(`the number of trials must be a whole number from 1 to ${MAX_TRIALS}, was ${trials}`)
}

/** Stages by the specification that they were designed from: dragging one cutoff leaves the others as they are. */
const stages = new WeakMap<StageSpec, Stage>()

function designedStage(spec: StageSpec, samplingRateHz: number): Stage {
  const kept = stages.get(spec)
  if (kept?.samplingRateHz === samplingRateHz) return kept
  const stage = designStage(spec, samplingRateHz)
  stages.set(spec, stage)
  return stage
}

const designed = memoised(
  (specs: readonly StageSpec[], samplingRateHz: number): Chain => designChain(specs, samplingRateHz, designedStage),
)

function stageAt(error: RangeError & { stageIndex?: number; field?: string }): string {
  return `stage:${error.stageIndex ?? 0}:${partOfField(error.field)}`
}

const rowsOf = memoised(
  (
    before: Float64Array,
    after: Float64Array,
    raw: RawCurves,
    timesMs: Float64Array,
    score: Score,
    measure: Workspace['measure'],
    statedOnsetMs: number | null,
  ): FidelityRow[] => {
    const onsetMs = raw.components ? onsetOfBuilt(raw.components, timesMs) : statedOnsetMs
    return fidelityRows({ timesMs, before, after, score, measure, onsetMs })
  },
)

interface Weights {
  /** On the unfiltered and on the filtered waveform: the same for linear scores, each at its own peak or side for the others. */
  before: Float64Array
  after: Float64Array
}

/** The same array for the same score, whatever the chain: what hangs on it alone is kept by its identity. */
const linearWeights = memoised((score: Score, baseline: Baseline, timesMs: Float64Array) =>
  scoreWeights(score, baseline, timesMs),
)

const heldWeights = memoised((score: Score, baseline: Baseline, timesMs: Float64Array, y: Float64Array) =>
  scoreWeights(score, baseline, timesMs, y),
)

/** Null for a latency, which is no weighted sum, and for a peak that is not there. */
function weightsOf(
  score: Score,
  baseline: Baseline,
  timesMs: Float64Array,
  before: Float64Array,
  after: Float64Array,
): Weights | null {
  switch (scoreLinearity(score.kind)) {
    case 'linear': {
      const weights = linearWeights(score, baseline, timesMs)
      return { before: weights, after: weights }
    }
    case 'held fixed':
      if ([before, after].some((y) => typeof scoreOf(y, timesMs, score) === 'string')) return null
      return {
        before: heldWeights(score, baseline, timesMs, before),
        after: heldWeights(score, baseline, timesMs, after),
      }
    case 'none':
      return null
  }
}

const unseenOf = memoised((chain: Chain, weights: Float64Array) => unseenShare(chain, weights, 0, weights.length))

const unseenAtEachSample = memoised((chain: Chain, samples: number) =>
  unseenShareBySample(appliedOfflineStages(chain), samples),
)

function precisionOf(
  workspace: Workspace,
  chain: Chain,
  weights: Weights,
  extent: 'continuous' | 'epochs',
  scoreRow: FidelityRow,
  before: Float64Array,
): NoiseRow {
  const { noise, trials, score } = workspace
  let variances = scoreVariances(chain, weights.before, weights.after, extent, noise, trials)
  if (workspace.shown.chosen === DIFFERENCE) {
    // Two conditions of as many trials each, independent of one another.
    const { before: b, after: a } = variances
    variances = { before: varianceOfDifference(b, b), after: varianceOfDifference(a, a) }
  }
  const unit = scoreUnit(score.kind) === 'µV·s' ? 'µV·s' : 'µV'
  const effect =
    typeof scoreRow.before === 'number' && typeof scoreRow.after === 'number'
      ? { before: scoreRow.before, after: scoreRow.after }
      : null
  const largest = largestAbsolute(before) * (unit === 'µV·s' ? (score.toMs - score.fromMs) / 1000 : 1)
  return noiseRow(unit, trials, variances.before, variances.after, effect, largest)
}
