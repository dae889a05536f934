import type { Candidate } from '../evidence/trade-off-candidate.ts'
import type { CutoffRun, LimitName, TradeOffAnswer, TradeOffLimits } from '../evidence/trade-off-answer.ts'
import type { CellFigures, OverWaveforms } from '../evidence/trade-off-figures.ts'
import { brief, exact, list, measured } from './number.ts'
import { inWords } from './problem.ts'
import { PASS_WORD } from './stage-words.ts'

/** What the words need besides the answer itself. */
export interface TradeOffWordsQuestion {
  readonly answer: TradeOffAnswer
  readonly candidate: Candidate
  readonly rollOff: number
  readonly limits: TradeOffLimits
  readonly trials: number
  readonly unit: 'µV' | 'ms' | 'µV·s'
  /** How many waveforms the answer is over, and which case it is. */
  readonly waveforms: number
  readonly over: OverWaveforms
}

/**
 * A row of the trade-off map in words: which cutoffs keep the limits, which of them has the least total error, and which are nearly as good.
 * A best one is never named without them, nor without the trials that it holds for.
 */
export function tradeOffWords(question: TradeOffWordsQuestion): string {
  const { answer, candidate, rollOff, limits, unit } = question
  if (answer.kind === 'nothing') return `Nothing can be said. ${inWords(answer.reason)}`
  const opening = `With ${exact(question.trials)} ${question.trials === 1 ? 'trial' : 'trials'}${caseWords(question)}, `
  const filter = `${PASS_WORD[candidate.pass]} cutoffs`
  const row = `(${rowWords(candidate, rollOff)})`
  const rowOf = `${filter} ${row}`
  const looked = `${exact(answer.lowestHz)} to ${exact(answer.highestHz)} Hz`
  const left =
    answer.left === 0
      ? ''
      : ` ${exact(answer.left)} ${answer.left === 1 ? 'cutoff' : 'cutoffs'} of the grid gave no figures.`
  if (answer.kind === 'none') {
    const { limit, size, multiples } = answer.tightest
    const times = !Number.isFinite(multiples)
      ? ''
      : multiples < 1.01
        ? ', just over the limit'
        : `, ${brief(multiples, 3)} times the limit`
    return (
      `${opening}no ${PASS_WORD[candidate.pass]} from ${looked} ${row} keeps ${limitList(limits, unit)}. ` +
      `What limits it most is the ${LIMIT_WORD[limit]}: ` +
      `the least violation is at ${exact(answer.least.cutoffHz)} Hz, ${measured(size, 3)} ${unitOf(limit, unit)}${times}.${left}`
    )
  }
  const limited = limitList(limits, unit)
  const region =
    answer.kind === 'all'
      ? limited === ''
        ? `all ${rowOf} from ${looked} are open, since no limit is set`
        : `all ${rowOf} from ${looked} keep ${limited}`
      : `${rowOf} ${list(answer.allowed.map((run) => allowedWords(run, answer)))} keep ${limited}`
  if (answer.best === null) return `${opening}${region}.${left}`
  return `${opening}${region}; ${bestWords(answer.best, question, answer)}; ${closeWords(answer.close, answer.best)}.${left}`
}

const LIMIT_WORD: Record<LimitName, string> = {
  bias: 'bias',
  noise: 'noise of the score',
  totalError: 'total error',
  latencyShiftMs: 'latency shift',
}

function caseWords({ waveforms, over }: TradeOffWordsQuestion): string {
  if (waveforms === 1 || typeof over === 'number') return ''
  return over === 'worst'
    ? ` and the worst of ${waveforms} waveforms`
    : ` and the typical one (median) of ${waveforms} waveforms`
}

/** "order 2 per pass, both ways" */
function rowWords(candidate: Candidate, rollOff: number): string {
  if (candidate.design === 'windowed-sinc') {
    const delay =
      candidate.delay === 'compensated' ? 'zero-phase' : candidate.delay === 'causal' ? 'causal' : 'minimum-phase'
    return `transition width ${exact(rollOff)} Hz, ${delay}`
  }
  return candidate.direction === 'both'
    ? `order ${exact(rollOff)} per pass, both ways`
    : `order ${exact(rollOff)}, forward`
}

function limitList(limits: TradeOffLimits, unit: string): string {
  return list(
    (Object.keys(LIMIT_WORD) as LimitName[])
      .filter((name) => limits[name] !== undefined)
      .map((name) => `the ${LIMIT_WORD[name]} within ${exact(limits[name] as number)} ${unitOf(name, unit)}`),
  )
}

const unitOf = (name: LimitName, unit: string) => (name === 'latencyShiftMs' ? 'ms' : unit)

/** A run that begins or ends where the grid does says so: nothing was looked at beyond. */
function allowedWords({ first, last }: CutoffRun, grid: { lowestHz: number; highestHz: number }): string {
  if (first.cutoffHz === last.cutoffHz) return `of ${exact(first.cutoffHz)} Hz only`
  if (first.cutoffHz === grid.lowestHz)
    return `up to ${exact(last.cutoffHz)} Hz (the grid begins at ${exact(first.cutoffHz)} Hz)`
  if (last.cutoffHz === grid.highestHz)
    return `from ${exact(first.cutoffHz)} Hz up (the grid ends at ${exact(last.cutoffHz)} Hz)`
  return `from ${exact(first.cutoffHz)} to ${exact(last.cutoffHz)} Hz`
}

function bestWords(
  best: CellFigures,
  { unit, waveforms }: TradeOffWordsQuestion,
  grid: { lowestHz: number; highestHz: number },
): string {
  const end = best.cutoffHz === grid.lowestHz ? 'begins' : best.cutoffHz === grid.highestHz ? 'ends' : null
  const edge = end && grid.lowestHz < grid.highestHz ? ` (where the grid ${end}: what lies beyond was not tried)` : ''
  const total = `of these ${exact(best.cutoffHz)} Hz has the least total error, ${twoDigits(best.totalError as number)} ${unit}${edge}`
  const { equalTrialsFactor: factor, precisionFactor: precision } = best
  if (factor !== null) {
    return `${total}, and is worth ${factor < 0.001 ? '' : factor < 0.995 ? 'only ' : ''}${factor < 0.001 ? 'less than 0.001' : twoDigits(factor)} times the trials (equal-trials factor, so the effect’s own change counts)`
  }
  if (precision === null) return total
  const without = unit === 'ms' || waveforms > 1 ? '' : ' and no effect in this window to weigh it against'
  return `${total}, with a precision factor of ${twoDigits(precision)}${without}`
}

function closeWords(close: readonly CutoffRun[], best: CellFigures): string {
  const alone = close.length === 1 && close[0].first === best && close[0].last === best
  if (alone) return 'no other cutoff of the grid that is allowed is within 5 % of it'
  const runs = close.map(({ first, last }) => runText(first, last))
  return `${list(runs)} are within 5 % of it`
}

/** As many as limits are usually given with. */
const twoDigits = (value: number) => measured(value, 2)

/** "Butterworth high-pass run both ways" */
export function candidateWords(candidate: Candidate): string {
  const pass = PASS_WORD[candidate.pass]
  if (candidate.design === 'butterworth')
    return `Butterworth ${pass} ${candidate.direction === 'both' ? 'run both ways' : 'run forward'}`
  const delay =
    candidate.delay === 'compensated' ? 'zero-phase' : candidate.delay === 'causal' ? 'causal' : 'minimum-phase'
  return `${delay} windowed-sinc ${pass}`
}

/** "order 2", "0.5 Hz wide" */
export function rollOffWords(candidate: Candidate, rollOff: number): string {
  return candidate.design === 'butterworth' ? `order ${exact(rollOff)}` : `${exact(rollOff)} Hz wide`
}

/** What the short line of one map among several needs. */
export interface MapLine {
  /** Of the row at the cursor. */
  readonly answer: TradeOffAnswer
  readonly candidate: Candidate
  readonly rollOff: number
  readonly limits: TradeOffLimits
  readonly unit: TradeOffWordsQuestion['unit']
  /** The allowed filter of all rows with the least total error, or that no filter of the map keeps the limits, or neither is known. */
  readonly ofAllRows: CellFigures | 'none' | 'not known'
}

/** One of several maps in a line, so that they can be compared: the allowed cutoffs of its row, the least total error of the row and of all rows. */
export function mapLineWords({ answer, candidate, rollOff, limits, unit, ofAllRows }: MapLine): string {
  const row = capital(rollOffWords(candidate, rollOff))
  const best = typeof ofAllRows === 'string' ? null : ofAllRows
  const all = best && leastWords(best, unit, `, ${rollOffWords(candidate, best.rollOff)}`)
  if (answer.kind === 'nothing') return `${row}: nothing can be said. ${inWords(answer.reason)}`
  const limited = Object.values(limits).some((limit) => limit !== undefined)
  if (answer.kind === 'none') {
    const { least, tightest } = answer
    const by = Number.isFinite(tightest.multiples) ? ` (${brief(tightest.multiples, 3)} times the limit)` : ''
    const elsewhere = all
      ? `; other rows do, with a least total error of ${all}`
      : ofAllRows === 'none'
        ? '; nor does any other row'
        : ''
    return `${row}: no cutoff keeps ${limitsWord(limits)}, ${exact(least.cutoffHz)} Hz comes nearest${by}${elsewhere}.`
  }
  const runs = list(answer.allowed.map(({ first, last }) => runText(first, last)))
  const region = limited ? `${runs} ${one(answer.allowed) ? 'keeps' : 'keep'} ${limitsWord(limits)}` : `no limit is set`
  if (answer.best === null) return `${row}: ${region}.`
  const own = `least total error ${leastWords(answer.best, unit, '')}`
  const other = all && best !== answer.best ? `; of all rows ${all}` : ''
  return `${row}: ${region}, ${own}${other}.`
}

const capital = (text: string) => text[0].toUpperCase() + text.slice(1)

const limitsWord = (limits: TradeOffLimits) =>
  Object.values(limits).filter((limit) => limit !== undefined).length === 1 ? 'the limit' : 'the limits'

const one = (runs: readonly CutoffRun[]) => runs.length === 1 && runs[0].first === runs[0].last

const runText = (first: CellFigures, last: CellFigures) =>
  first === last ? `${exact(first.cutoffHz)} Hz` : `${exact(first.cutoffHz)} to ${exact(last.cutoffHz)} Hz`

const leastWords = (cell: CellFigures, unit: string, row: string) =>
  `${twoDigits(cell.totalError as number)} ${unit} at ${exact(cell.cutoffHz)} Hz${row}`
