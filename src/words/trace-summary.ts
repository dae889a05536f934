import type { PartRow } from '../evidence/trace-by-component.ts'
import type { MomentRow } from '../evidence/trace-by-moment.ts'
import type { Traced } from '../evidence/traced-weights.ts'
import { fixed, list } from './number.ts'
import { momentWords, shareWords, spanWords, traceDecimals, traceValueWords } from './trace-words.ts'

export interface TraceSummaryFacts {
  traced: Pick<Traced, 'atMs' | 'unit' | 'of'>
  value: number
  aboutZero: boolean
  /** The account by moment. */
  rows: readonly MomentRow[]
  /** The account by component; null for a recorded waveform. */
  components: readonly PartRow[] | null
  /** The same value of the unfiltered waveform. */
  unfiltered: number
}

/** A number that the sentence says, and what it is: the sum of the shares of these rows, or the value before the chain. */
export interface SaidNumber {
  readonly text: string
  readonly amount: number
  readonly form: 'share' | 'percent' | 'size'
  readonly of: { readonly rows: readonly number[] } | 'unfiltered'
}

export interface TraceSummary {
  readonly text: string
  readonly said: readonly SaidNumber[]
}

/** A value comes from its own window from this part of it on, and up to this one. */
const OWN_FROM = 0.8
const OWN_TO = 1.25
/** It is not made by the filter where the chain changed it by no more than this part of it. */
const UNCHANGED = 0.25
const MOST = 0.5
/** A window "gives only" what is at most this part of the value. */
const ONLY = 0.2
/** Two sides nearly cancel where the smaller one is at least this many times what is left. */
const CANCEL = 2

/** Rows that are said together: the halves of a component, the pieces of a window. */
interface Group {
  readonly kind: MomentRow['kind']
  readonly rows: number[]
  share: number
  fromMs: number
  toMs: number
  readonly component: string | null
}

/**
 * One sentence or two on where a value comes from, made from the rows of the account and true of them whatever they are.
 *
 * The value comes from its own window, unchanged by the chain: "not made by the filter". One stretch gives at least half of it: that
 * stretch, and what the own window gives. Its own window gives most, or more than all: that, and what else adds or takes away. Two sides
 * nearly cancel, or no stretch gives half: the largest ones. About zero: no per cent.
 */
export function traceSummary(facts: TraceSummaryFacts): TraceSummary {
  const said: SaidNumber[] = []
  return { text: sentences(facts, tellerOf(facts, said)).join(' '), said }
}

/** Writes every number down as it says it. */
interface Teller {
  readonly groups: readonly Group[]
  readonly sum: (rows: readonly number[]) => number
  /** "−1.12 µV" */
  readonly share: (rows: readonly number[]) => string
  /** "93 %" */
  readonly percent: (rows: readonly number[]) => string
  /** "2.60 µV", without a sign. */
  readonly size: (rows: readonly number[]) => string
  readonly unfiltered: () => string
}

function tellerOf({ rows: all, value, unfiltered, traced }: TraceSummaryFacts, said: SaidNumber[]): Teller {
  const { unit } = traced
  const sum = (rows: readonly number[]) => rows.reduce((total, i) => total + all[i].share, 0)
  const keep = (text: string, amount: number, form: SaidNumber['form'], of: SaidNumber['of']) => {
    said.push({ text, amount, form, of })
    return text
  }
  return {
    groups: groupsOf(all),
    sum,
    share: (rows) => keep(shareWords(sum(rows), unit), sum(rows), 'share', { rows }),
    percent: (rows) => {
      const amount = (100 * sum(rows)) / value
      // 49.8 % is less than half, and must not be printed as half
      const digits = Math.abs(Math.abs(amount) - 50) < 0.5 ? 1 : 0
      return keep(`${fixed(amount, digits)} %`, amount, 'percent', { rows })
    },
    size: (rows) => keep(traceValueWords(Math.abs(sum(rows)), unit), Math.abs(sum(rows)), 'size', { rows }),
    unfiltered: () => keep(traceValueWords(unfiltered, unit), unfiltered, 'share', 'unfiltered'),
  }
}

function groupsOf(rows: readonly MomentRow[]): Group[] {
  const groups: Group[] = []
  rows.forEach((row, i) => {
    const last = groups[groups.length - 1]
    const together =
      last !== undefined &&
      last.kind === row.kind &&
      (row.kind === 'score' ||
        row.kind === 'baseline' ||
        (row.kind === 'component' && facesSame(rows[last.rows[last.rows.length - 1]], row)))
    if (together) {
      last.rows.push(i)
      last.share += row.share
      last.toMs = row.toMs
    } else {
      const { kind, share, fromMs, toMs, component } = row
      groups.push({ kind, rows: [i], share, fromMs, toMs, component: component?.name ?? null })
    }
  })
  return groups
}

/** Halves of one component. */
function facesSame(a: MomentRow, b: MomentRow): boolean {
  return a.component !== null && b.component !== null && a.component.peakMs === b.component.peakMs
}

function sentences(facts: TraceSummaryFacts, tell: Teller): string[] {
  const { value, aboutZero, unfiltered, rows } = facts
  const positive = rows.flatMap(({ share }, i) => (share > 0 ? [i] : []))
  const negative = rows.flatMap(({ share }, i) => (share < 0 ? [i] : []))
  const bySize = [...tell.groups].sort((a, b) => Math.abs(b.share) - Math.abs(a.share))
  if (aboutZero) return zeroSentences(facts, tell, bySize, positive, negative)

  const own = tell.groups.filter(({ kind }) => kind === 'score').flatMap((group) => group.rows)
  const ownPart = tell.sum(own) / value
  const others = bySize.filter(({ kind }) => kind !== 'score')
  const unchanged = Math.abs(value - unfiltered) <= UNCHANGED * Math.abs(value)
  const itself = ownWindow(facts)

  if (own.length > 0 && ownPart >= OWN_FROM && ownPart <= OWN_TO && unchanged) {
    const begin = `The value is not made by the filter: ${tell.percent(own)} comes from ${itself} itself.`
    const loud = others[0]
    if (loud === undefined || Math.abs(loud.share) < UNCHANGED * Math.abs(value)) return [begin]
    return [begin, `Of the rest ${nameOf(loud)} has the largest share: ${tell.share(loud.rows)}.`]
  }

  const smaller = Math.min(Math.abs(tell.sum(positive)), Math.abs(tell.sum(negative)))
  if (smaller >= CANCEL * Math.abs(value))
    return [
      `The value is what is left of shares that nearly cancel: ${tell.share(positive)} and ${tell.share(negative)}.`,
      largest(tell, bySize.slice(0, 2)),
    ]

  const lead = others.find((group) => group.share / value >= MOST)
  if (lead !== undefined && lead.share / value >= ownPart) {
    const answer = [leadSentence(facts, tell, lead)]
    const against = bySize.find((group) => group.kind !== 'score' && group.share / value <= -UNCHANGED)
    if (against !== undefined) answer.push(`Against it ${nameOf(against)} gives most: ${tell.share(against.rows)}.`)
    if (own.length > 0) answer.push(ownSentence(facts, tell, own, ownPart))
    return answer
  }

  if (own.length > 0 && ownPart > OWN_TO) {
    const rest = rows.flatMap((_, i) => (own.includes(i) ? [] : [i]))
    const most = others.find((group) => group.share / value < 0)
    const begin = `${capital(itself)} itself gives ${tell.share(own)}, ${tell.percent(own)} of the value; the rest takes ${tell.size(rest)} of that away.`
    return most === undefined ? [begin] : [begin, `Most against it gives ${nameOf(most)}: ${tell.share(most.rows)}.`]
  }
  if (own.length > 0 && ownPart >= MOST) {
    // as it is printed: what rounds to 100 % is no more than all
    const part = ownPart >= 1.005 ? 'More than the whole value' : 'Most of the value'
    const begin = `${part}, ${tell.percent(own)}, comes from ${itself} itself: ${tell.share(own)}.`
    const next = others[0]
    const second =
      next === undefined || Math.abs(next.share) < ONLY * Math.abs(value)
        ? []
        : [
            `Of the rest ${nameOf(next)} has the largest share: ${tell.share(next.rows)}, ${tell.percent(next.rows)} of the value.`,
          ]
    const change = unchanged || facts.traced.of === 'change' ? [] : [`Before the chain it is ${tell.unfiltered()}.`]
    return [begin, ...second, ...change]
  }

  const answer = [
    'The value has more than one source: no stretch gives half of it.',
    largest(tell, bySize.slice(0, 3), true),
  ]
  if (own.length > 0 && !bySize.slice(0, 3).some(({ kind }) => kind === 'score'))
    answer.push(ownSentence(facts, tell, own, ownPart))
  return answer
}

function zeroSentences(
  facts: TraceSummaryFacts,
  tell: Teller,
  bySize: readonly Group[],
  positive: readonly number[],
  negative: readonly number[],
): string[] {
  const resolution = 10 ** -traceDecimals(facts.traced.unit)
  const most = bySize[0]
  if (most === undefined || Math.abs(most.share) < 2 * resolution || positive.length === 0 || negative.length === 0)
    return [`The value is about zero, and no stretch gives more than ${most ? tell.size(most.rows) : 'nothing'}.`]
  return [
    `The value is about zero because shares cancel: ${tell.share(positive)} and ${tell.share(negative)}.`,
    largest(tell, bySize.slice(0, 2)),
  ]
}

function largest(tell: Teller, groups: readonly Group[], withPercent = false): string {
  const items = groups.map((group) => {
    const percent = withPercent ? `, ${tell.percent(group.rows)}` : ''
    return `${nameOf(group)} (${tell.share(group.rows)}${percent})`
  })
  return groups.length === 1 ? `The largest is ${items[0]}.` : `The largest are ${list(items)}.`
}

function leadSentence(facts: TraceSummaryFacts, tell: Teller, lead: Group): string {
  const gives = (verb: string) => `${verb} ${tell.share(lead.rows)}, ${tell.percent(lead.rows)} of the value.`
  switch (lead.kind) {
    case 'invented':
      return `From samples that the padding invented: they ${gives('give')}`
    case 'neighbours':
      return `From the neighbouring events: they ${gives('give')}`
    case 'component': {
      const part = facts.components?.find(({ name, kind }) => kind === 'component' && name === lead.component)
      // only where the account by component says so too
      if (part !== undefined && part.share / facts.value >= MOST)
        return `From the ${lead.component}: its stretch ${spanWords(lead.fromMs, lead.toMs)} ${gives('gives')}`
      return `From ${nameOf(lead)}: it ${gives('gives')}`
    }
    default:
      return `From ${nameOf(lead)}: it ${gives('gives')}`
  }
}

function ownSentence(facts: TraceSummaryFacts, tell: Teller, own: readonly number[], ownPart: number): string {
  const only = Math.abs(ownPart) <= ONLY ? 'only ' : ''
  return `${capital(ownWindow(facts))} itself gives ${only}${tell.share(own)}.`
}

function ownWindow({ traced }: TraceSummaryFacts): string {
  return traced.atMs === null ? 'the score window' : `the time around ${momentWords(traced.atMs)}`
}

/** A group as the sentence names it, with its article. */
function nameOf(group: Group): string {
  switch (group.kind) {
    case 'score':
      return `the score window, ${spanWords(group.fromMs, group.toMs)}`
    case 'baseline':
      return 'the baseline window'
    case 'before':
      return `the time before ${momentWords(group.toMs)}`
    case 'after':
      return `the time after ${momentWords(group.fromMs)}`
    case 'invented':
      return 'what the padding invented'
    case 'neighbours':
      return 'what the neighbouring events add'
    default:
      return `the stretch ${spanWords(group.fromMs, group.toMs)}`
  }
}

function capital(words: string): string {
  return words.charAt(0).toUpperCase() + words.slice(1)
}
