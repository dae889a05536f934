/**
 * evaluate(workspace, data): every number and curve on the page, as a pure function of what the user said. It is computed in parts, each
 * remembered by what it depends on, so that dragging the score window does not redesign the chain.
 */
import { baselineWeights } from '../erp/baseline.ts'
import { checkNoise } from '../erp/noise.ts'
import { type NoScore, scoreLinearity, scoreOf } from '../erp/score.ts'
import { samplesInWindow, type TimeWindow } from '../erp/time-axis.ts'
import { largestAbsolute } from '../evidence/fidelity.ts'
import { unseenShare, unseenShareBySample } from '../evidence/unseen-share.ts'
import { appliedOfflineStages } from '../filter/apply-chain.ts'
import { appliedStages, type Chain } from '../filter/chain.ts'
import { inWords, partOfField, remarkWords } from '../words/index.ts'
import { type ChosenNoise, chosenNoise } from './chosen-noise.ts'
import { designedChain } from './evaluate-chain.ts'
import { standardErrors } from './evaluate-errors.ts'
import { correctedCurves, drawnNames, type RawCurves, rawCurves, type TimeAxis, timeAxis } from './evaluate-curves.ts'
import {
  amplifierReach,
  delays,
  frequencyFigure,
  kernelFigure,
  offlineReach,
  windowFigure,
} from './evaluate-figures.ts'
import { longestReach, pinnedResult } from './evaluate-pins.ts'
import { extrapolatedParts } from './evaluate-precision.ts'
import { precisionOf, rowsOf, weightsOf } from './evaluate-score.ts'
import { chainPoints, chainTable } from './evaluate-table.ts'
import type { Curves, Evaluation, Outcome, Problem } from './evaluation.ts'
import { lockedInterference } from './locked-interference.ts'
import { memoised } from './memo.ts'
import { namesOfPins } from './pin-actions.ts'
import type { RecordedData } from './recorded-data.ts'
import { DIFFERENCE, MAX_TRIALS, type Workspace } from './workspace.ts'

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
  const chain = axis && attempt(stageAt, () => designedChain(workspace.chain, axis.samplingRateHz))
  attempt('trials', () => checkTrials(trials))
  attempt('noise', () => checkNoise(workspace.noise))
  const noise = attempt('noise', () => chosenNoise(workspace, data))
  if (axis) {
    const flat = new Float64Array(axis.timesMs.length)
    attempt('baseline', () => baselineWeights(baseline, axis.timesMs))
    attempt('score-window', () => scoreOf(flat, axis.timesMs, score))
    attempt('measure:mean', () => samplesInWindow(axis.timesMs, measure.mean, 'the window of the mean amplitude'))
    attempt('measure:peak', () => checkPeakWindow(axis.timesMs, measure.peak))
  }
  if (!axis || !chain || !noise || problems.length > 0) return { ok: false, problems }

  const { timesMs } = axis
  const extent = source.kind === 'recorded' ? 'epochs' : workspace.extent
  const names = drawnNames(shown)
  const raw = attempt(
    (error) =>
      /needs \d+ samples/.test(error.message) ? 'extent' : /interval/.test(error.message) ? 'events' : 'waveform',
    () => names.map((name) => rawCurves(source, data, shown.channel, shown.difference, name, timesMs, chain, extent)),
  )
  if (!raw) return { ok: false, problems }
  // Nothing more to refuse is known; numbers too large for any sum must still not take the page down.
  const evaluation = attempt('waveform', () => evaluationOf(workspace, data, noise, axis, chain, extent, raw, names))
  return evaluation ? { ok: true, evaluation } : { ok: false, problems }
}

function evaluationOf(
  workspace: Workspace,
  data: RecordedData | null,
  noise: ChosenNoise,
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
  const frequency = frequencyFigure(workspace, noise, chain, raw[chosen], extent, timesMs, chainPoints(chain))
  const beside = longestReach(workspace.pins, axis.samplingRateHz)
  const kernel = kernelFigure(chain, timesMs, beside.beforeMs, beside.afterMs)
  const pinned = namesOfPins(workspace)
  return {
    samplingRateHz: axis.samplingRateHz,
    timesMs,
    chain,
    curves,
    chosen,
    standardErrors: standardErrors(workspace, data, chain),
    delayIncluded: appliedStages(chain).some(delays),
    unseenBySample: extent === 'epochs' ? unseenAtEachSample(chain, timesMs.length) : null,
    window: weights && windowFigure(chain, weights.after, extent, score, after, timesMs),
    frequency,
    kernel,
    table: chainTable(workspace.chain, chain),
    reach: offlineReach(chain),
    amplifierReach: amplifierReach(chain),
    unseenShare: unseen,
    rows,
    precision: weights && precisionOf(workspace, noise, chain, weights, extent, rows[0], before),
    noiseOf: {
      from: noise.estimate ? 'trials' : 'model',
      extrapolated: noise.estimate && weights && extrapolatedParts(chain, weights, extent, noise),
    },
    locked:
      shown.chosen === DIFFERENCE || noise.estimate
        ? null
        : lockedInterference(
            workspace.noise,
            chain,
            weights && scoreLinearity(score.kind) === 'linear' ? weights.after : null,
            extent,
            timesMs,
          ),
    pins: workspace.pins.map((pin, i) =>
      pinnedResult(pin, pinned[i], workspace, data, noise, axis, frequency.hz, kernel),
    ),
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

function stageAt(error: RangeError & { stageIndex?: number; field?: string }): string {
  return `stage:${error.stageIndex ?? 0}:${partOfField(error.field)}`
}

const unseenOf = memoised((chain: Chain, weights: Float64Array) => unseenShare(chain, weights, 0, weights.length))

const unseenAtEachSample = memoised((chain: Chain, samples: number) =>
  unseenShareBySample(appliedOfflineStages(chain), samples),
)
