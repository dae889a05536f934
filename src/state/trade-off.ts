/** The question that the trade-off desk asks, as a function of the workspace; and what picking a filter makes of it. */
import { type Score, scoreLinearity, scoreOf, scoreUnit } from '../erp/score.ts'
import { waveformAt } from '../erp/waveform.ts'
import { filterBuiltWaveform, filterRecordedWaveform } from '../evidence/filtered-waveform.ts'
import { largestAbsolute, scoreReference } from '../evidence/fidelity.ts'
import { correctBaseline } from '../erp/baseline.ts'
import { type Candidate, type CandidatePlace, chainWithCandidate, logCutoffs } from '../evidence/trade-off-candidate.ts'
import type { TradeOffLimits } from '../evidence/trade-off-answer.ts'
import type { MapQuestion, MapWaveform } from '../evidence/trade-off-map.ts'
import { type ComponentRanges, waveformSample } from '../evidence/waveform-sample.ts'
import type { StageSpec } from '../filter/stage.ts'
import { waveformOf } from '../files/index.ts'
import { inWords } from '../words/index.ts'
import { type ChosenNoise, chosenNoise } from './chosen-noise.ts'
import { designedChain } from './evaluate-chain.ts'
import { componentsOf, recordedValues, timeAxis } from './evaluate-curves.ts'
import { memoised } from './memo.ts'
import { questionKey } from './kept-entries.ts'
import type { RecordedData } from './recorded-data.ts'
import { DIFFERENCE, MAX_TRIALS, RANGE, type TradeOff, type Workspace } from './workspace.ts'

export { RANGE }

/** Unit of the score, and so of bias, noise and total error. */
export const scoreUnitOf = ({ score }: Pick<Workspace, 'score'>) => scoreUnit(score.kind)

export const MAP_CUTOFFS = 60
/** A worst case over fewer waveforms would miss it. */
export const ROBUST_WAVEFORMS = 64
const SEED = 1

/** A stage with one cutoff and a roll-off of its own, applied here: what a map can vary. */
export function canVary(spec: StageSpec | undefined): boolean {
  return (
    spec !== undefined &&
    (spec.design === 'butterworth' || spec.design === 'windowed-sinc') &&
    (spec.pass === 'low' || spec.pass === 'high') &&
    spec.inData !== true
  )
}

type ChainAndDesk = Pick<Workspace, 'chain' | 'tradeOff'>

/** Where the varied filter stands: a place that the chain no longer has, or that cannot be varied, is chosen anew. */
export function mapPlace({ chain, tradeOff }: ChainAndDesk): CandidatePlace {
  const { stage, pass } = tradeOff
  if (stage === 'insert') return { at: chain.length, replaces: false }
  if (stage !== null && canVary(chain[stage])) return { at: stage, replaces: true }
  const first = chain.findIndex(
    (spec) => canVary(spec) && spec.enabled !== false && (spec as { pass?: string }).pass === pass,
  )
  return first < 0 ? { at: chain.length, replaces: false } : { at: first, replaces: true }
}

/** Which filters a map holds, but for cutoff and roll-off. */
export type FilterKind = Pick<TradeOff, 'design' | 'direction'>

export const FILTER_KINDS: readonly FilterKind[] = [
  { design: 'butterworth', direction: 'both' },
  { design: 'butterworth', direction: 'forward' },
  { design: 'windowed-sinc', direction: 'both' },
  { design: 'windowed-sinc', direction: 'forward' },
]

export const sameKind = (a: FilterKind, b: FilterKind) => a.design === b.design && a.direction === b.direction

/** The kinds that are compared, each once, the desk's own first. */
export function comparedKinds({ design, direction, beside }: TradeOff): FilterKind[] {
  const all = [{ design, direction }, ...beside]
  return all.filter((kind, i) => all.findIndex((other) => sameKind(kind, other)) === i)
}

/** The workspace as if the desk were about this kind; roll-offs that were chosen for one design mean nothing for another. */
export function aboutKind<Part extends Pick<Workspace, 'tradeOff'>>(workspace: Part, kind: FilterKind): Part {
  const { tradeOff } = workspace
  if (sameKind(tradeOff, kind)) return workspace
  const rollOffs = kind.design === tradeOff.design ? tradeOff.rollOffs : null
  return { ...workspace, tradeOff: { ...tradeOff, ...kind, rollOffs } }
}

/** The kind of filter; the stage that it replaces hands on what its cutoff means, one of the same design its window too. */
export function mapCandidate(workspace: ChainAndDesk): Candidate {
  const { design, pass, direction } = workspace.tradeOff
  const place = mapPlace(workspace)
  const present = place.replaces ? workspace.chain[place.at] : undefined
  const meaning = present && 'meaning' in present ? present.meaning : 'half-amplitude'
  if (design === 'butterworth') return { design, pass, meaning, direction }
  return {
    design,
    pass,
    meaning,
    window: present?.design === 'windowed-sinc' ? present.window : { name: 'hamming' },
    delay: direction === 'both' ? 'compensated' : 'causal',
  }
}

export const ORDERS = [1, 2, 3, 4, 5, 6, 7, 8]
const WIDTHS_HZ = { high: [0.1, 0.2, 0.5, 1, 2, 4], low: [1, 2, 4, 7.5, 10, 15] }

/** Rows of the map, ascending. */
export function mapRollOffs({ rollOffs, design, pass }: TradeOff): readonly number[] {
  if (rollOffs) return [...new Set(rollOffs)].sort((a, b) => a - b)
  return design === 'butterworth' ? ORDERS : WIDTHS_HZ[pass]
}

/** The desk's own limits without those that were written for a score in another unit: 1 µV of noise is no limit of 1 ms. */
export function limitsInUnit({ limits }: TradeOff, unit: ReturnType<typeof scoreUnit>): TradeOff['limits'] {
  if (limits.unit === undefined || limits.unit === unit) return limits
  const { bias, latencyShiftMs } = limits
  return { ...(bias === 'none' ? { bias } : {}), ...(latencyShiftMs === undefined ? {} : { latencyShiftMs }) }
}

/** The limits in force. The bias that is accepted is the limit of the score, unless the desk was given its own. */
export function mapLimits({ tradeOff, limits, score }: Workspace, scoreBefore: number | null): TradeOffLimits {
  const { bias, noise, totalError, latencyShiftMs } = limitsInUnit(tradeOff, scoreUnit(score.kind))
  const of: { -readonly [K in keyof TradeOffLimits]: TradeOffLimits[K] } = {}
  if (typeof bias === 'number') of.bias = bias
  else if (bias === undefined && limits.score) {
    const { value, unit } = limits.score
    if (unit === scoreUnit(score.kind)) of.bias = value
    else if (unit === '%' && scoreBefore !== null && scoreUnit(score.kind) !== 'ms')
      of.bias = Number(((Math.abs(scoreBefore) * value) / 100).toPrecision(3))
  }
  if (noise !== undefined) of.noise = noise
  if (totalError !== undefined) of.totalError = totalError
  if (latencyShiftMs !== undefined) of.latencyShiftMs = latencyShiftMs
  return of
}

export const TRIALS_RULE = 'The number of trials must be a whole number from 1 to 1000000.'

/** Why a map has no noise at this number of trials; null where it has. */
export function trialsProblem({ trials, shown }: Pick<Workspace, 'trials' | 'shown'>): string | null {
  if (!(Number.isInteger(trials) && trials >= 1 && trials <= MAX_TRIALS)) return TRIALS_RULE
  return shown.chosen === DIFFERENCE && trials < 2 ? 'A difference needs at least 2 trials of each condition.' : null
}

export interface MapRequest {
  readonly question: MapQuestion
  /** What the map hangs on, as text: two equal keys are one map. */
  readonly key: string
  /** Of each waveform unfiltered, in the score's unit; null for latencies. */
  readonly largest: readonly (number | null)[]
  /** Index of the latency whose shift is asked for. */
  readonly latency: number | null
  /** N for the figures: of a difference half the trials of one condition, since the variance is twice as large. */
  readonly trials: number
  /** A score whose noise is drawn, not computed. */
  readonly simulated: boolean
  /** Index of the roll-off that the desk begins with: that of the filter in the chain, or the second. */
  readonly row: number
}

export type MapRequestOutcome = { ok: true; request: MapRequest } | { ok: false; reason: string }

/** What the map computes for this workspace, or why it cannot be asked. */
export function mapRequest(workspace: Workspace, data: RecordedData | null): MapRequestOutcome {
  const { trials, shown, source, chain, extent, baseline, score, measure, tradeOff } = workspace
  const problem = trialsProblem(workspace)
  if (problem !== null) return { ok: false, reason: problem }
  const effective = shown.chosen === DIFFERENCE ? trials / 2 : trials
  const linear = scoreLinearity(score.kind) === 'linear'
  try {
    const noise = chosenNoise(workspace, data)
    const parts = { source, shown, chain, extent, baseline, score, measure }
    const asked = questionOf(
      ...(Object.values(parts) as PartValues),
      data,
      noise,
      settingsOf(tradeOff),
      linear ? 1 : effective,
    )
    const row = asked.question.rollOffs.indexOf(filterInChain(workspace)?.rollOff ?? Number.NaN)
    return { ok: true, request: { ...asked, trials: effective, simulated: !linear, row: row < 0 ? 1 : row } }
  } catch (error) {
    if (!(error instanceof RangeError)) throw error
    return { ok: false, reason: inWords(error.message) }
  }
}

type PartValues = [
  Workspace['source'],
  Workspace['shown'],
  Workspace['chain'],
  Workspace['extent'],
  Workspace['baseline'],
  Score,
  Workspace['measure'],
]

interface MapSettings extends TradeOff {
  /** A latency is watched beside the score. */
  watched: boolean
}

/** What the computation hangs on, as text: another limit or layer is no other question, unless it asks for a latency. */
function settingsOf(tradeOff: TradeOff): string {
  const watched = tradeOff.layer === 'latency shift' || tradeOff.limits.latencyShiftMs !== undefined
  const settings: MapSettings = { ...tradeOff, limits: {}, over: 'worst', layer: 'bias', beside: [], watched }
  return JSON.stringify(settings)
}

/** Of every kind the present one and a few before it. */
const KEPT_QUESTIONS = 12

const questionOf = memoised((...args: [...PartValues, RecordedData | null, ChosenNoise, string, number]) => {
  const [source, shown, chain, extent, baseline, score, measure, data, { noise, passed }, settings, trials] = args
  const tradeOff = JSON.parse(settings) as MapSettings
  const workspace = { source, shown, chain, tradeOff }
  const { samplingRateHz, timesMs } = timeAxis(source, data)
  const waveforms = waveformsOf(workspace, data)
  const difference = shown.chosen === DIFFERENCE
  const place = mapPlace(workspace)
  const question: MapQuestion = {
    samplingRateHz,
    timesMs,
    // without the filter that is varied, so that picking another asks no other question
    chain: chain.filter((_, i) => !(place.replaces && i === place.at)),
    place: { at: place.at, replaces: false },
    candidate: mapCandidate(workspace),
    cutoffsHz: logCutoffs(tradeOff.fromHz, tradeOff.toHz, MAP_CUTOFFS),
    rollOffs: mapRollOffs(tradeOff),
    extent: source.kind === 'recorded' ? 'epochs' : extent,
    baseline,
    scores: [
      { score, noise: 'with noise' },
      ...(tradeOff.watched
        ? [
            {
              score: { kind: 'peak-latency' as const, ...measure.peak, polarity: measure.polarity },
              noise: 'without noise' as const,
            },
          ]
        : []),
    ],
    waveforms,
    // what is locked to the event is the same in both conditions of a difference
    noise:
      difference && noise.kind === 'model' ? { ...noise, lines: noise.lines.filter((line) => !line.locked) } : noise,
    noisePassed: passed,
    trials,
    seed: SEED,
  }
  const largest = waveforms.map((waveform) => {
    const values = waveform.kind === 'built' ? waveformAt(waveform.components, timesMs) : waveform.values
    return scoreReference(score, largestAbsolute(correctBaseline(values, timesMs, baseline)))
  })
  const key = questionKey(question)
  return {
    question,
    key,
    largest,
    latency: tradeOff.watched ? 1 : null,
  }
}, KEPT_QUESTIONS)

function waveformsOf(
  { source, shown, tradeOff }: Pick<Workspace, 'source' | 'shown' | 'tradeOff'>,
  data: RecordedData | null,
): MapWaveform[] {
  if (source.kind === 'recorded') {
    const values =
      tradeOff.waveform === 'average' && data
        ? averageOver(data, shown.channel)
        : recordedValues(source, data, shown.chosen, shown.channel, shown.difference)
    return [{ kind: 'recorded', values }]
  }
  const components = componentsOf(source, shown.chosen, shown.difference)
  const { robust } = tradeOff
  if (!robust) return [{ kind: 'built', components }]
  const around = (value: number, by: number) => ({ from: value - by, to: value + by })
  const ranges = components.map((entry, component): ComponentRanges => {
    const amplitude = Math.abs(entry.amplitudeUv * robust.amplitudePercent) / 100
    return {
      component,
      ...(amplitude > 0 ? { amplitudeUv: around(entry.amplitudeUv, amplitude) } : {}),
      ...(entry.shape !== 'tone' && robust.latencyMs > 0
        ? { latencyMs: around(entry.latencyMs, robust.latencyMs) }
        : {}),
      ...(entry.shape !== 'tone' && robust.widthPercent > 0
        ? { widthMs: around(entry.widthMs, (entry.widthMs * robust.widthPercent) / 100) }
        : {}),
    }
  })
  return waveformSample(components, ranges, ROBUST_WAVEFORMS, SEED).map((sample) => ({
    kind: 'built',
    components: sample,
  }))
}

/**
 * The bias that the rest of the chain has alone, without the filter that is varied: every filter of the map is judged with it. Null where there is
 * no other stage, or no such score.
 *
 * @throws RangeError as the chain and the waveform do.
 */
export function biasOfRest(workspace: Workspace, data: RecordedData | null): number | null {
  const { source, shown, extent, baseline, score } = workspace
  const place = mapPlace(workspace)
  const rest = workspace.chain.filter((_, i) => !(place.replaces && i === place.at))
  if (!rest.some((spec) => spec.enabled !== false && spec.inData !== true)) return null
  const { samplingRateHz, timesMs } = timeAxis(source, data)
  const chain = designedChain(rest, samplingRateHz)
  const [waveform] = waveformsOf({ source, shown, tradeOff: { ...workspace.tradeOff, robust: null } }, data)
  const { before, after } =
    waveform.kind === 'built'
      ? {
          before: waveformAt(waveform.components, timesMs),
          after: filterBuiltWaveform(chain, waveform.components, timesMs, extent),
        }
      : { before: waveform.values, after: filterRecordedWaveform(chain, waveform.values) }
  const [first, second] = [before, after].map((y) => scoreOf(correctBaseline(y, timesMs, baseline), timesMs, score))
  return typeof first === 'number' && typeof second === 'number' ? second - first : null
}

/** The mean over all conditions of a table, at the channel in use. */
function averageOver(data: RecordedData, channel: string | null): Float64Array {
  const all = data.conditions.map((condition) => waveformOf(data, condition, channel ?? data.channels[0]).values)
  return all[0].map((_, i) => all.reduce((sum, values) => sum + values[i], 0) / all.length)
}

/** The workspace with a filter of a map in its chain; of the desk's own kind unless another is given. */
export function withFilter(
  workspace: Workspace,
  cutoffHz: number,
  rollOff: number,
  kind: FilterKind = workspace.tradeOff,
): Workspace {
  const place = mapPlace(workspace)
  const candidate = mapCandidate(aboutKind(workspace, kind))
  const chain = chainWithCandidate(workspace.chain, place, candidate, cutoffHz, rollOff)
  // a filter that was put in is the one that the map goes on with
  const tradeOff = place.replaces ? workspace.tradeOff : { ...workspace.tradeOff, stage: place.at }
  return { ...workspace, chain, tradeOff }
}

/** The filter of the chain that stands where the map's filters would, if it is one of their kind. */
export function filterInChain(workspace: Workspace): { cutoffHz: number; rollOff: number } | null {
  const place = mapPlace(workspace)
  const spec = place.replaces ? workspace.chain[place.at] : undefined
  const candidate = mapCandidate(workspace)
  if (!spec || spec.enabled === false) return null
  if (spec.design === 'butterworth' && candidate.design === 'butterworth') {
    if (spec.pass !== candidate.pass || spec.direction !== candidate.direction) return null
    return { cutoffHz: spec.cutoffsHz[0], rollOff: spec.order }
  }
  if (spec.design === 'windowed-sinc' && candidate.design === 'windowed-sinc') {
    if (spec.pass !== candidate.pass || spec.delay !== candidate.delay) return null
    return { cutoffHz: spec.cutoffsHz[0], rollOff: spec.transitionHz }
  }
  return null
}

/** Another stage to vary brings its own pass, design and direction, and a range around its cutoff. */
export function varyingStage(workspace: Workspace, stage: number | 'insert'): Workspace {
  const { tradeOff, chain } = workspace
  if (stage === 'insert') return { ...workspace, tradeOff: { ...tradeOff, stage } }
  const spec = chain[stage]
  if (!spec || (spec.design !== 'butterworth' && spec.design !== 'windowed-sinc')) return workspace
  if (spec.pass !== 'high' && spec.pass !== 'low') return workspace
  const direction = spec.design === 'butterworth' ? spec.direction : spec.delay === 'compensated' ? 'both' : 'forward'
  return {
    ...workspace,
    tradeOff: {
      ...tradeOff,
      ...RANGE[spec.pass],
      stage,
      pass: spec.pass,
      design: spec.design,
      direction,
      rollOffs: null,
    },
  }
}
