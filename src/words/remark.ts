import type { NoScore, Score } from '../erp/score.ts'
import { fixed, signed } from './number.ts'
import { windowWords } from './protocol-line.ts'

export interface RemarkFacts {
  score: Score
  unit: string
  before: number | NoScore
  after: number | NoScore
  /** Largest absolute value of the unfiltered waveform, µV. */
  largestUv: number
  /** Share of the score's weight on samples that are not in the data, 0 to 1; null where it does not apply. */
  unseenShare: number | null
  extent: 'continuous' | 'epochs'
  /** No stage is applied. */
  noFilter: boolean
}

/** A change is worth a sentence from this share of the waveform's largest value, or of the score itself, on. */
const NOTEWORTHY = 0.05
/** Below this share of the largest value a waveform counts as having nothing in a window. */
const NOTHING = 0.1

const NO_SCORE = { 'no peak': 'has no peak', 'no area': 'has no area', 'no onset': 'has no onset' } as const

function decimals(unit: string, value: number): number {
  if (unit === 'ms') return Math.abs(value) < 10 ? 1 : 0
  return unit === 'µV·s' ? 3 : 2
}

/** "at 80 to 140 ms" as it reads beside a deflection: "80–140 ms". */
function spanWords(score: Score): string {
  return windowWords(score.fromMs, score.toMs).replace(' to ', score.fromMs < 0 || score.toMs < 0 ? ' to ' : '–')
}

/**
 * One sentence or two under the figures on what the chain did to the score; true of the numbers whatever they are. The last sentence says
 * how much of the score leans on samples that the filter had to invent, where epochs were filtered.
 */
export function remarkWords(facts: RemarkFacts): string {
  return [effectWords(facts), unseenWords(facts)].filter((sentence) => sentence !== '').join(' ')
}

/**
 * A deflection that the chain made: the score has a value after it, and before it as good as none, or one of the other sign. The first
 * sentence of the remark then says that it was not in the input.
 */
export function isFalseDeflection({ unit, before, after, largestUv, noFilter }: RemarkFacts): boolean {
  if (noFilter || unit !== 'µV' || typeof before === 'string' || typeof after === 'string' || largestUv === 0)
    return false
  const noteworthy = NOTEWORTHY * Math.max(largestUv * NOTHING, Math.abs(before))
  return Math.abs(after - before) >= noteworthy && Math.abs(before) < NOTHING * largestUv && isNew(before, after)
}

function effectWords(facts: RemarkFacts): string {
  const { score, unit, before, after, largestUv, noFilter } = facts
  if (noFilter) return 'No filter is applied here: before and after are the same.'
  const where = spanWords(score)
  if (typeof before === 'string' && typeof after === 'string')
    return `The waveform ${NO_SCORE[before]} in ${where}, with the chain or without.`
  if (typeof before === 'string')
    return `Before the chain the waveform ${NO_SCORE[before]} in ${where}; after it there is one.`
  if (typeof after === 'string')
    return `After the chain the waveform ${NO_SCORE[after]} in ${where}; before it there was one.`
  const change = after - before
  const said = (value: number) => `${fixed(value, decimals(unit, value))} ${unit}`
  const saidChange = `${signed(change, decimals(unit, change))} ${unit}`
  if (unit === 'ms') {
    const ms = (value: number) => `${fixed(value, decimals(unit, change))} ms`
    if (Math.abs(change) < 0.5) return `The chain leaves the latency at ${ms(after)}.`
    return `The chain moves the latency from ${ms(before)} to ${ms(after)}: ${change < 0 ? 'earlier' : 'later'} by ${ms(Math.abs(change))}.`
  }
  const scale = unit === 'µV' ? largestUv : Math.max(Math.abs(before), Math.abs(after))
  if (scale === 0 || Math.abs(change) < NOTEWORTHY * Math.max(scale * (unit === 'µV' ? NOTHING : 1), Math.abs(before)))
    return `The chain leaves the score nearly as it was: ${said(before)} before, ${said(after)} after.`
  if (isFalseDeflection(facts)) return `The deflection of ${said(after)} at ${where} was not in the input.`
  if (before * after < 0 && Math.abs(after) >= NOTEWORTHY * Math.abs(before))
    return `The chain turns the sign of the score: ${said(before)} before, ${said(after)} after.`
  const percent = Math.min(100, Math.round((100 * Math.abs(change)) / Math.abs(before)))
  if (Math.abs(after) < Math.abs(before))
    return `The chain takes ${percent} % of the score: ${said(before)} before, ${said(after)} after.`
  return `The chain changes the score by ${saidChange}: ${said(before)} before, ${said(after)} after.`
}

/** What is after the chain was not there before it: of the other sign, or so much larger that hardly any of it was. */
function isNew(before: number, after: number): boolean {
  return Math.abs(after) > (before * after < 0 ? 2 : 10) * Math.abs(before)
}

function unseenWords({ unseenShare, extent, noFilter }: RemarkFacts): string {
  if (extent !== 'epochs' || unseenShare === null || noFilter) return ''
  const share = `${fixed(unseenShare * 100, unseenShare < 0.1 ? 1 : 0)} %`
  if (unseenShare < 0.0005)
    return 'Filtered as epochs, less than 0.05 % of the score’s weight falls on samples outside the data.'
  return `Filtered as epochs, ${share} of the score’s weight falls on samples outside the data, which had to be invented.`
}
