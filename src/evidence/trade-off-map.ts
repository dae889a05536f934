import { correctBaseline, type Baseline } from '../erp/baseline.ts'
import type { Component } from '../erp/component.ts'
import { noiseAutocovariance } from '../erp/noise-autocovariance.ts'
import { noiseLines, type NoiseLine, type NoiseSpec } from '../erp/noise.ts'
import { type Score, scoreLinearity, scoreOf, scoreWeights } from '../erp/score.ts'
import { seededRandom } from '../erp/seeded-random.ts'
import { supportMs, waveformAt } from '../erp/waveform.ts'
import { applyEpochs, type Extent } from '../filter/apply-chain.ts'
import { appliedStages, type Chain, designChain, stagesResponse } from '../filter/chain.ts'
import { adjointEpochs } from '../filter/epoch-adjoint.ts'
import { adjointContinuous, runContinuous } from '../filter/stand-alone.ts'
import { designStage, type Stage, type StageSpec } from '../filter/stage.ts'
import {
  breaksOf,
  drawFilteredNoise,
  type FilteredNoise,
  filteredNoise,
  type NoisePassed,
  noisePath,
  spectrumAfter,
} from './filtered-noise.ts'
import { lockedLineContribution, scoreVarianceOfResponse } from './score-noise.ts'
import { addDraw, BATCH_DRAWS, emptySums, mergeSums, scoreStretch, type SimulatedSums } from './simulated-score.ts'
import { type Candidate, type CandidatePlace, chainWithCandidate } from './trade-off-candidate.ts'
import { varianceOfWeights } from './variance-of-weights.ts'

/**
 * The trade-off map: what every filter of a grid (cutoff × roll-off) does to scores of waveforms and to their noise, the rest of the
 * chain as it is.
 *
 * Linear scores are exact and cheap: one adjoint a filter and score serves every waveform, and their variance is kept for one trial, so that
 * the number of trials can change without new work. The others are measured on filtered waveforms, their noise by seeded simulation.
 * Cells hang on nothing but the question and their index, so that they can be computed in any order and by any worker.
 */

/** A built waveform is a function of time on the whole axis; a recorded average is known on its epoch only. */
export type MapWaveform =
  | { readonly kind: 'built'; readonly components: readonly Component[] }
  | { readonly kind: 'recorded'; readonly values: Float64Array }

export interface MapScore {
  readonly score: Score
  /** Without noise for a score that is only asked for its bias (the shift of a latency). */
  readonly noise: 'with noise' | 'without noise'
}

/** Plain data: a worker can be sent it as it is. */
export interface MapQuestion {
  readonly samplingRateHz: number
  readonly timesMs: Float64Array
  readonly chain: readonly StageSpec[]
  readonly place: CandidatePlace
  readonly candidate: Candidate
  readonly cutoffsHz: readonly number[]
  /** Orders of one pass, or transition widths in Hz. */
  readonly rollOffs: readonly number[]
  readonly extent: Extent
  readonly baseline: Baseline
  readonly scores: readonly MapScore[]
  /** One waveform, or many for a worst and a typical case. */
  readonly waveforms: readonly MapWaveform[]
  readonly noise: NoiseSpec
  readonly noisePassed: NoisePassed
  /** N, which simulated scores hang on. */
  readonly trials: number
  readonly seed: number
}

/** One score of one filter. */
export interface CellScore {
  /** Noise-free score of each waveform, interference locked to the event left out for linear scores; NaN where there is none. */
  readonly after: Float64Array
  /** What locked interference adds (linear scores; for others it is in `after`). */
  readonly locked: number
  /** Of a linear score with noise. */
  readonly varianceOfOneTrial: number | null
  /** Of another score with noise, for each waveform; at the question's number of trials. */
  readonly simulated: readonly SimulatedSums[] | null
}

export interface MapCell {
  /** cutoffIndex + rollOffIndex·cutoffs. */
  readonly index: number
  readonly cutoffIndex: number
  readonly rollOffIndex: number
  /** Why the filter cannot be realised or applied; null where it can. */
  readonly error: string | null
  /** As many as the question's scores; none with an error. */
  readonly scores: readonly CellScore[]
}

/** A map's work in coarse-to-fine order. */
export interface MapPlan {
  /** Every cell's index once. */
  readonly order: readonly number[]
  /** `order[0 … levelEnds[l] − 1]` are a complete map at level l, the first the coarsest. */
  readonly levelEnds: readonly number[]
}

/**
 * @param cutoffs  how many.
 * @param rollOffs how many.
 * @param coarse   the first level takes about every `coarse`-th cutoff and every second roll-off, both ends included.
 * @throws RangeError for counts that are no positive whole numbers.
 */
export function planMap(cutoffs: number, rollOffs: number, coarse = 8): MapPlan {
  for (const [name, value] of Object.entries({ cutoffs, rollOffs, coarse })) {
    if (!Number.isInteger(value) || value < 1) {
      throw new RangeError(`${name} must be a positive whole number, was ${value}`)
    }
  }
  const order: number[] = []
  const levelEnds: number[] = []
  const taken = new Uint8Array(cutoffs * rollOffs)
  for (let step = coarse; ; step = Math.floor(step / 2)) {
    const skip = step > 2 ? 2 : 1
    for (let r = 0; r < rollOffs; r++) {
      if (r % skip !== 0 && r !== rollOffs - 1) continue
      for (let c = 0; c < cutoffs; c++) {
        if ((c % step !== 0 && c !== cutoffs - 1) || taken[r * cutoffs + c] === 1) continue
        taken[r * cutoffs + c] = 1
        order.push(r * cutoffs + c)
      }
    }
    levelEnds.push(order.length)
    if (step === 1) return { order, levelEnds }
  }
}

/** What the figures of a cell are held against. */
export interface AnsweredMap {
  readonly question: MapQuestion
  /** Unfiltered: the waveforms and the noise as they come to the chain. */
  readonly before: readonly CellScore[]
}

/** A question made ready: what every cell shares. Keep it for as long as its question is asked. */
export interface PreparedMap extends AnsweredMap {
  readonly shared: Shared
}

interface Shared {
  readonly weights: readonly (Float64Array | null)[]
  /** Bounded parts of all waveforms on samples from … to − 1 relative to the epoch's first, and their steady tones. */
  readonly from: number
  readonly to: number
  readonly bounded: readonly Float64Array[]
  readonly tones: readonly (readonly NoiseLine[])[]
  readonly locked: readonly NoiseLine[]
  /** Of the noise that comes to the epoch; null under the continuous extent, where every filter has its own. */
  readonly covariance: Float64Array | null
  /** Under epochs: waveforms after the amplifier stages, and the noise at their output. */
  readonly onEpoch: readonly Float64Array[] | null
  readonly epochNoise: FilteredNoise | null
  readonly rawDraws: Map<number, Float64Array[]>
  readonly amplifiers: readonly Stage[]
  readonly design: typeof designStage
}

/** More samples outside the epoch are a slip of the hand. */
const MAX_SAMPLES_OUTSIDE = 4_000_000

/**
 * Makes a question ready and answers it for the unfiltered waveforms.
 *
 * @param draws of every simulated score before filtering, a multiple of 50.
 * @throws RangeError for whatever is wrong with the question itself: axes, scores, waveforms, noise, trials, the rest of the chain.
 */
export function prepareMap(question: MapQuestion, draws = 4 * BATCH_DRAWS): PreparedMap {
  checkQuestion(question)
  const { samplingRateHz, timesMs, extent, baseline, scores, waveforms, noise, noisePassed, chain, place } = question
  const n = timesMs.length
  // the rest of the chain must stand by itself; stages that never change are designed once
  const kept = new Map<StageSpec, Stage>()
  const design: typeof designStage = (spec, rate) => {
    if (!chain.includes(spec)) return designStage(spec, rate)
    let stage = kept.get(spec)
    if (!stage) kept.set(spec, (stage = designStage(spec, rate)))
    return stage
  }
  const rest = designChain(
    chain.filter((_, i) => !(place.replaces && i === place.at)),
    samplingRateHz,
    design,
  )
  const { from, to } = rangeOf(waveforms, timesMs, samplingRateHz)
  const stepMs = 1000 / samplingRateHz
  const axis = Float64Array.from({ length: to - from }, (_, i) => timesMs[0] + (from + i) * stepMs)
  const bounded = waveforms.map((waveform) => {
    if (waveform.kind === 'built') return waveformAt(boundedOf(waveform.components), axis)
    const values = new Float64Array(to - from)
    values.set(waveform.values, -from)
    return values
  })
  const tones = waveforms.map((waveform) => (waveform.kind === 'built' ? tonesOf(waveform.components) : []))
  const locked = noiseLines(noise).filter((line) => line.locked && line.hz < samplingRateHz / 2)
  const weights = scores.map(({ score }) =>
    scoreLinearity(score.kind) === 'linear' ? scoreWeights(score, baseline, timesMs) : null,
  )
  const amplifiers = appliedStages(rest).filter((stage) => stage.spec.design === 'amplifier')
  const path = noisePath(rest, 'epochs', noisePassed)
  const simulated = scores.some(({ noise: of }, s) => of === 'with noise' && weights[s] === null)
  const epochs = extent === 'epochs'
  const shared: Shared = {
    weights,
    from,
    to,
    bounded,
    tones,
    locked,
    covariance: epochs
      ? noiseAutocovariance(withoutLines(spectrumAfter(path.continuous, noise, samplingRateHz)), samplingRateHz, n)
      : null,
    onEpoch: epochs
      ? bounded.map((x, w) => {
          const u = runContinuous(amplifiers, x, -from, n - from)
          addTones(u, [...tones[w], ...locked], amplifiers, timesMs, samplingRateHz)
          return u
        })
      : null,
    epochNoise:
      epochs && simulated
        ? filteredNoise({ continuous: path.continuous, onEpoch: [] }, noise, samplingRateHz, n)
        : null,
    rawDraws: new Map(),
    amplifiers,
    design,
  }
  const past = rest.stages.filter((stage) => stage.spec.inData === true)
  const prepared = { question, before: [], shared }
  const before = cellScores(prepared, { samplingRateHz, stages: past }, 'before', { from: 0, to: draws / BATCH_DRAWS })
  return { question, before, shared }
}

/**
 * One filter of the map.
 *
 * @param batches of simulated draws (50 each), from … to − 1: the same batches always draw the same noise, for every filter, so that
 *   cells differ by their filters and not by chance. Others can be added later with `mergeCells`.
 * @throws RangeError for an index outside the map; what is wrong with a filter is in the cell's `error`.
 */
export function computeCell(prepared: PreparedMap, index: number, batches = { from: 0, to: 4 }): MapCell {
  const { question, shared } = prepared
  const { cutoffsHz, rollOffs, samplingRateHz, chain, place, candidate } = question
  if (!Number.isInteger(index) || index < 0 || index >= cutoffsHz.length * rollOffs.length) {
    throw new RangeError(`index must lie in the map of ${cutoffsHz.length} × ${rollOffs.length} cells, was ${index}`)
  }
  const cutoffIndex = index % cutoffsHz.length
  const rollOffIndex = Math.floor(index / cutoffsHz.length)
  const where = { index, cutoffIndex, rollOffIndex }
  try {
    const specs = chainWithCandidate(chain, place, candidate, cutoffsHz[cutoffIndex], rollOffs[rollOffIndex])
    const designed = designChain(specs, samplingRateHz, shared.design)
    return { ...where, error: null, scores: cellScores(prepared, designed, 'after', batches) }
  } catch (error) {
    if (error instanceof RangeError) return { ...where, error: error.message, scores: [] }
    throw error
  }
}

/** Several cells, in the order asked. Throws as `computeCell`. */
export function computeCells(
  prepared: PreparedMap,
  indices: readonly number[],
  batches = { from: 0, to: 4 },
): MapCell[] {
  return indices.map((index) => computeCell(prepared, index, batches))
}

/** One cell from two, each with its own batches of draws. Throws RangeError for cells of different filters. */
export function mergeCells(first: MapCell, second: MapCell): MapCell {
  if (first.index !== second.index) {
    throw new RangeError(`cells must be of one filter to be merged, were ${first.index} and ${second.index}`)
  }
  return {
    ...first,
    scores: first.scores.map((score, s) => {
      const other = second.scores[s].simulated
      if (!score.simulated || !other) return score
      return { ...score, simulated: score.simulated.map((sums, w) => mergeSums(sums, other[w])) }
    }),
  }
}

function cellScores(
  { question, shared }: PreparedMap,
  chain: Chain,
  when: 'before' | 'after',
  batches: { from: number; to: number },
): CellScore[] {
  const { extent, scores, noise, noisePassed, samplingRateHz, timesMs } = question
  const applied = appliedStages(chain)
  const offline = applied.filter((stage) => stage.spec.design !== 'amplifier')
  // unfiltered interference is not wanted: it is no part of the score that a filter is held against
  const lines = when === 'before' ? [] : shared.locked
  const nonlinear = shared.weights.some((w) => w === null)
  const filtered = nonlinear ? filteredWaveforms(question, shared, applied, offline, when) : []
  const noises = scores.some((of, s) => of.noise === 'with noise' && shared.weights[s] === null)
    ? noiseDraws(question, shared, chain, offline, when, batches)
    : []
  const breaks =
    extent === 'continuous' ? breaksOf(noisePath(chain, extent, noisePassed).continuous, samplingRateHz) : []
  return scores.map(({ score, noise: withNoise }, s) => {
    const w = shared.weights[s]
    if (w === null) return nonlinearScore(question, score, withNoise, filtered, noises)
    const v = extent === 'epochs' ? adjointEpochs(offline, w) : w
    const around = extent === 'epochs' ? applied.filter((stage) => stage.spec.design === 'amplifier') : applied
    const g =
      around.length === 0 && shared.from === 0 && shared.to === w.length
        ? v
        : adjointContinuous(around, v, shared.from, shared.to)
    const steady = (line: NoiseLine) => steadyContribution(v, around, line, timesMs[0], samplingRateHz)
    const after = Float64Array.from(shared.bounded, (x, k) => {
      let sum = 0
      for (let i = 0; i < x.length; i++) sum += g[i] * x[i]
      for (const tone of shared.tones[k]) sum += steady(tone)
      return sum
    })
    let varianceOfOneTrial: number | null = null
    if (withNoise === 'with noise') {
      const path = noisePath(chain, extent, noisePassed)
      if (extent === 'continuous') {
        const response = (hz: Float64Array) => stagesResponse(path.continuous, hz)
        varianceOfOneTrial = scoreVarianceOfResponse(w, response, noise, samplingRateHz, 1, breaks)
      } else if (when === 'before' && shared.amplifiers.length > 0) {
        // before the amplifier too
        const unfiltered = withoutLines(spectrumAfter(path.continuous, noise, samplingRateHz))
        varianceOfOneTrial = varianceOfWeights(v, noiseAutocovariance(unfiltered, samplingRateHz, w.length))
      } else {
        varianceOfOneTrial = varianceOfWeights(v, shared.covariance as Float64Array)
      }
      if (extent === 'epochs') varianceOfOneTrial += varianceOfLines(v, path.continuous, noise, samplingRateHz)
    }
    return {
      after,
      locked: lines.reduce((sum, line) => sum + steady(line), 0),
      varianceOfOneTrial,
      simulated: null,
    }
  })
}

/** Filtered waveforms on the epoch, locked interference included after filtering, baseline-corrected. */
function filteredWaveforms(
  { extent, timesMs, samplingRateHz, baseline }: MapQuestion,
  shared: Shared,
  applied: readonly Stage[],
  offline: readonly Stage[],
  when: 'before' | 'after',
): Float64Array[] {
  const n = timesMs.length
  return shared.bounded.map((x, w) => {
    if (when === 'after' && extent === 'epochs') {
      return correctBaseline(applyEpochs(offline, (shared.onEpoch as Float64Array[])[w]), timesMs, baseline)
    }
    const y = runContinuous(applied, x, -shared.from, n - shared.from)
    const lines = when === 'before' ? shared.tones[w] : [...shared.tones[w], ...shared.locked]
    addTones(y, lines, applied, timesMs, samplingRateHz)
    return correctBaseline(y, timesMs, baseline)
  })
}

/** Averages of noise on the epoch, baseline-corrected; the same for every filter but for what the filter makes of them. */
function noiseDraws(
  { extent, timesMs, samplingRateHz, noise, noisePassed, trials, baseline, seed }: MapQuestion,
  shared: Shared,
  chain: Chain,
  offline: readonly Stage[],
  when: 'before' | 'after',
  batches: { from: number; to: number },
): Float64Array[] {
  const draws: Float64Array[] = []
  if (extent === 'epochs' && when === 'after') {
    for (let batch = batches.from; batch < batches.to; batch++) {
      for (const raw of rawDraws(shared, seed, batch, trials)) {
        draws.push(correctBaseline(applyEpochs(offline, raw), timesMs, baseline))
      }
    }
    return draws
  }
  const ready = filteredNoise(noisePath(chain, extent, noisePassed), noise, samplingRateHz, timesMs.length)
  for (let batch = batches.from; batch < batches.to; batch++) {
    for (const drawn of drawBatch(ready, seed, batch, trials)) draws.push(correctBaseline(drawn, timesMs, baseline))
  }
  return draws
}

function drawBatch(source: FilteredNoise, seed: number, batch: number, trials: number): Float64Array[] {
  const random = seededRandom(seed, batch)
  const draws: Float64Array[] = []
  for (let pair = 0; pair < BATCH_DRAWS / 2; pair++) draws.push(...drawFilteredNoise(source, random, trials))
  return draws
}

/** Batches of unfiltered epochs that are kept for the next filter, as long as they take no more than 64 MB. */
const KEPT_VALUES = 2 ** 23

/** Noise as it comes to the cut-out epochs, the same for every filter. */
function rawDraws(shared: Shared, seed: number, batch: number, trials: number): Float64Array[] {
  let draws = shared.rawDraws.get(batch)
  if (!draws) {
    const source = shared.epochNoise as FilteredNoise
    draws = drawBatch(source, seed, batch, trials)
    if ((shared.rawDraws.size + 1) * BATCH_DRAWS * source.source.samples > KEPT_VALUES) shared.rawDraws.clear()
    shared.rawDraws.set(batch, draws)
  }
  return draws
}

function nonlinearScore(
  { timesMs }: MapQuestion,
  score: Score,
  withNoise: MapScore['noise'],
  filtered: readonly Float64Array[],
  draws: readonly Float64Array[],
): CellScore {
  const after = new Float64Array(filtered.length)
  const { from, to } = scoreStretch(score, timesMs)
  const times = timesMs.subarray(from, to)
  const noisy = new Float64Array(to - from)
  const simulated = filtered.map((y, w) => {
    const clean = scoreOf(y, timesMs, score)
    after[w] = typeof clean === 'number' ? clean : NaN
    let sums = emptySums(typeof clean === 'number' ? clean : 0)
    if (withNoise === 'without noise') return sums
    for (const drawn of draws) {
      for (let i = from; i < to; i++) noisy[i - from] = y[i] + drawn[i]
      sums = addDraw(sums, scoreOf(noisy, times, score))
    }
    return sums
  })
  return { after, locked: 0, varianceOfOneTrial: null, simulated: withNoise === 'with noise' ? simulated : null }
}

/** The score of a steady tone by the weights v on what the stages make of it. */
function steadyContribution(
  v: Float64Array,
  stages: readonly Stage[],
  line: NoiseLine,
  startMs: number,
  samplingRateHz: number,
): number {
  return lockedLineContribution(v, startMs, samplingRateHz, throughStages(line, stages))
}

function throughStages(line: NoiseLine, stages: readonly Stage[]): NoiseLine {
  if (stages.length === 0) return line
  const { re, im } = stagesResponse(stages, Float64Array.of(line.hz))
  return {
    ...line,
    amplitudeUv: line.amplitudeUv * Math.hypot(re[0], im[0]),
    phaseRad: (line.phaseRad ?? 0) + Math.atan2(im[0], re[0]),
  }
}

function addTones(
  y: Float64Array,
  lines: readonly NoiseLine[],
  stages: readonly Stage[],
  timesMs: Float64Array,
  samplingRateHz: number,
): void {
  for (const line of lines) {
    const { hz, amplitudeUv, phaseRad = 0 } = throughStages(line, stages)
    for (let i = 0; i < y.length; i++) {
      const turns = hz * (timesMs[0] / 1000 + i / samplingRateHz)
      y[i] += amplitudeUv * Math.cos(2 * Math.PI * (turns - Math.round(turns)) + phaseRad)
    }
  }
}

/** Lines of random phase, for one trial: (A²/2)·|H·V|². */
function varianceOfLines(v: Float64Array, stages: readonly Stage[], noise: NoiseSpec, samplingRateHz: number): number {
  let variance = 0
  for (const line of noiseLines(noise)) {
    if (line.locked || line.hz >= samplingRateHz / 2) continue
    const through = throughStages({ ...line, phaseRad: 0 }, stages)
    const inPhase = lockedLineContribution(v, 0, samplingRateHz, through)
    const quarterOn = lockedLineContribution(v, 0, samplingRateHz, {
      ...through,
      phaseRad: (through.phaseRad ?? 0) + Math.PI / 2,
    })
    variance += (inPhase * inPhase + quarterOn * quarterOn) / 2
  }
  return variance
}

const withoutLines = <T extends { lines: readonly unknown[] }>(spectrum: T): T => ({ ...spectrum, lines: [] })

const boundedOf = (components: readonly Component[]) => components.filter((component) => component.shape !== 'tone')

function tonesOf(components: readonly Component[]): NoiseLine[] {
  return components.flatMap((c) =>
    c.shape === 'tone' ? [{ hz: c.frequencyHz, amplitudeUv: c.amplitudeUv, phaseRad: c.phaseRad, locked: true }] : [],
  )
}

function rangeOf(waveforms: readonly MapWaveform[], timesMs: Float64Array, samplingRateHz: number) {
  const n = timesMs.length
  const stepMs = 1000 / samplingRateHz
  let from = 0
  let to = n
  for (const waveform of waveforms) {
    const support = waveform.kind === 'built' ? supportMs(waveform.components) : null
    if (!support) continue
    from = Math.min(from, Math.floor((support.fromMs - timesMs[0]) / stepMs))
    to = Math.max(to, Math.ceil((support.toMs - timesMs[0]) / stepMs) + 1)
  }
  if (-from > MAX_SAMPLES_OUTSIDE || to - n > MAX_SAMPLES_OUTSIDE) {
    throw new RangeError(
      `components must lie within ${MAX_SAMPLES_OUTSIDE} samples of the epoch, they reach from sample ${from} to ${to}`,
    )
  }
  return { from, to }
}

function checkQuestion(question: MapQuestion): void {
  const { cutoffsHz, rollOffs, scores, waveforms, timesMs, trials, extent } = question
  const ascends = (name: string, values: readonly number[]) => {
    if (values.length === 0) throw new RangeError(`${name} must hold at least one value, had none`)
    values.forEach((value, i) => {
      if (!Number.isFinite(value) || (i > 0 && !(value > values[i - 1]))) {
        throw new RangeError(`${name} must ascend, ${name}[${i}] was ${value}`)
      }
    })
  }
  ascends('cutoffsHz', cutoffsHz)
  ascends('rollOffs', rollOffs)
  if (scores.length === 0) throw new RangeError('scores must hold at least one score, had none')
  if (waveforms.length === 0) throw new RangeError('waveforms must hold at least one waveform, had none')
  if (!(trials >= 1) || !Number.isFinite(trials)) throw new RangeError(`trials must be at least 1, was ${trials}`)
  waveforms.forEach((waveform, i) => {
    if (waveform.kind !== 'recorded') return
    if (extent !== 'epochs') {
      throw new RangeError(`extent must be epochs for a recorded average (waveforms[${i}]), was ${extent}`)
    }
    if (waveform.values.length !== timesMs.length) {
      throw new RangeError(
        `waveforms[${i}] must hold one value per time (${timesMs.length}), had ${waveform.values.length}`,
      )
    }
  })
}
