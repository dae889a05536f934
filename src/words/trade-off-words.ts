import type { Candidate } from '../evidence/trade-off-candidate.ts'
import type { CutoffRun, LimitName, TradeOffAnswer, TradeOffLimits } from '../evidence/trade-off-answer.ts'
import type { CellFigures, OverWaveforms } from '../evidence/trade-off-figures.ts'
import { brief, exact, list } from './number.ts'
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
  if (answer.kind === 'nothing') return `Nothing can be said: ${answer.reason}.`
  const opening = `With ${exact(question.trials)} ${question.trials === 1 ? 'trial' : 'trials'}${caseWords(question)}, `
  const filter = `${PASS_WORD[candidate.pass]} cutoffs`
  const row = `(${rowWords(candidate, rollOff)})`
  const looked = `${exact(answer.lowestHz)} to ${exact(answer.highestHz)} Hz`
  const left =
    answer.left === 0
      ? ''
      : ` ${exact(answer.left)} ${answer.left === 1 ? 'cutoff' : 'cutoffs'} of the grid could not be used.`
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
      `the least violation is at ${exact(answer.least.cutoffHz)} Hz, ${brief(size, 3)} ${unitOf(limit, unit)}${times}.${left}`
    )
  }
  const limited = limitList(limits, unit)
  const region =
    answer.kind === 'all'
      ? limited === ''
        ? `all ${filter} from ${looked} ${row} are open, since no limit is set`
        : `all ${filter} from ${looked} ${row} keep ${limited}`
      : `${filter} ${list(answer.allowed.map((run) => allowedWords(run, answer)))} ${row} keep ${limited}`
  if (answer.best === null) return `${opening}${region}.${left}`
  return `${opening}${region}; ${bestWords(answer.best, unit)}; ${closeWords(answer.close, answer.best)}.${left}`
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
  if (first.cutoffHz === grid.lowestHz) return `up to ${exact(last.cutoffHz)} Hz (from ${exact(first.cutoffHz)} Hz)`
  if (last.cutoffHz === grid.highestHz) return `from ${exact(first.cutoffHz)} Hz up (to ${exact(last.cutoffHz)} Hz)`
  return `from ${exact(first.cutoffHz)} to ${exact(last.cutoffHz)} Hz`
}

function bestWords(best: CellFigures, unit: string): string {
  const total = `of these ${exact(best.cutoffHz)} Hz has the least total error, ${measured(best.totalError as number)} ${unit}`
  const { equalTrialsFactor: factor, precisionFactor: precision } = best
  if (factor !== null) {
    return `${total}, and is worth ${measured(factor)} times the trials (equal-trials factor, so the effect's own change counts)`
  }
  return precision === null ? total : `${total}, with a precision factor of ${measured(precision)}`
}

function closeWords(close: readonly CutoffRun[], best: CellFigures): string {
  const alone = close.length === 1 && close[0].first === best && close[0].last === best
  if (alone) return 'no other cutoff of the grid that is allowed is within 5 % of it'
  const runs = close.map(({ first, last }) =>
    first === last ? `${exact(first.cutoffHz)} Hz` : `${exact(first.cutoffHz)} to ${exact(last.cutoffHz)} Hz`,
  )
  return `${list(runs)} are within 5 % of it`
}

/** Two significant digits below 10, all whole ones above. */
function measured(value: number): string {
  return Math.abs(value) < 9.95 ? brief(value, 2) : brief(value, 3)
}
