import type {
  ChangeClaim,
  ClaimAnswer,
  ClaimForm,
  ClaimGrounds,
  ClaimVerdict,
  EffectClaim,
  ShownAnswer,
  Unit,
} from '../evidence/claims/claim.ts'
import {
  aboutTrials,
  changeWithUnit,
  decimalsAgainst,
  intervalWithUnit,
  sameNumber,
  toneWithUnit,
  valueWithUnit,
} from './claim-number.ts'
import { CLAIM_MEANING_WORDS, CLAIM_ROW_WORDS } from './claim-words.ts'
import { exact, fixed } from './number.ts'
import { momentWords } from './trace-words.ts'

/** What the reason of a verdict names besides the answer. */
export interface ClaimAnswerContext {
  /** What the chain is called, as a noun phrase with its article: 'the filter', 'the chain “as published”'. */
  readonly filter: string
  /** Per condition. */
  readonly trials: number
  readonly taken: 'as it stands' | 'as measured'
}

const VERDICT: Record<ClaimVerdict, string> = {
  holds: 'Holds',
  'does not hold': 'Does not hold',
  'cannot be told': 'Cannot be told',
}

export function claimVerdictWords(verdict: ClaimVerdict): string {
  return VERDICT[verdict]
}

/**
 * Why a claim has its verdict, in a sentence or two: the number with its unit, the amount that it is held against, its interval where it
 * has one, and for "cannot be told" what would settle it as far as that was computed.
 *
 * A comparison is only said where the numbers bear the verdict out.
 */
export function claimReason(form: ClaimForm, answer: ClaimAnswer, context: ClaimAnswerContext): string {
  const { grounds, verdict } = answer
  switch (grounds.kind) {
    case 'number':
      return `${capital(told(form, answer, context))}.`
    case 'within noise':
      return withinNoise(form, answer, grounds, context)
    case 'unseen':
      return unseen(form, answer, grounds, context)
    case 'filtered before':
      return (
        'Which filters the recording had passed before it came here is not known in full. ' +
        'To tell, each of them would have to be known and stated as in the data, if there were any.'
      )
    case 'no value':
      return `${noValue(grounds)} ${NO_VALUE_SETTLES[grounds.missing]}`
    case 'about zero':
      return (
        `${aboutZero(form)} is about zero (${valueWithUnit(grounds.valueUv, unitOfZero(form, answer))}), ` +
        `so that a share of it says nothing.${form.form === 'change' ? ' The same claim with an amount in the row’s own unit can be checked.' : ''}`
      )
    case 'already there': {
      const largest = changeWithUnit(grounds.largestUv, 'µV', [grounds.limitUv, -grounds.limitUv])
      const limit = valueWithUnit(grounds.limitUv, 'µV')
      const more = Math.abs(grounds.largestUv) > grounds.limitUv ? `, more than the ${limit} that count as none` : ''
      return `The unfiltered waveform has a deflection there already, of ${largest}${more}.`
    }
    case 'not shown': {
      if (form.form !== 'twin') return ''
      const why = lower(claimReason(form.shows, grounds.shown, context))
      if (grounds.shown.verdict === 'cannot be told')
        return `Whether ${context.filter} as it is shows it cannot be told: ${why}`
      if (grounds.shown.verdict === 'holds') return `As it is, ${context.filter} shows it: ${why}`
      return `${capital(context.filter)} as it is does not show it, so that there is nothing which a ${form.twin} version would not show: ${why}`
    }
    case 'compared':
      return compared(form, grounds, context)
    case 'no twin':
      return `There is no ${form.form === 'twin' ? `${form.twin} ` : 'such '}version to compare with: ${withoutEnd(grounds.why)}.`
    case 'no meaning':
      return `No stage of ${context.filter} states a cutoff with a meaning, so that no other meaning can be tried.`
    case 'late-only':
      return lateOnly(answer, grounds, verdict)
  }
}

/** The number and how it stands to the amount, without a full stop. */
function told(form: ClaimForm, answer: ShownAnswer, context: ClaimAnswerContext): string {
  const measured = numberWords(form, answer, context)
  const against = comparison(form, answer)
  const interval = answer.interval?.every(Number.isFinite)
    ? ` (95 % interval ${ofWhat(form, answer)}with ${trialsWords(context.trials)} ${intervalWords(form, answer)})`
    : ''
  const undecided =
    answer.verdict === 'cannot be told' && answer.number !== null && answer.grounds.kind === 'number'
      ? ', which does not decide it'
      : ''
  return `${measured}${interval}${against}${undecided}${readAs(form, answer)}`
}

/** Which of several numbers an interval is of; '' where there is only one. */
function ofWhat(form: ClaimForm, answer: ShownAnswer): string {
  if (form.form === 'onset') return `of the shift towards ${form.direction} `
  if (form.form !== 'effect') return ''
  if (answer.number === named(answer, 'after')?.value) return 'of the effect with it '
  return answer.number === named(answer, 'before')?.value ? 'of the effect without it ' : ''
}

/** What must be known to read the number. */
function readAs(form: ClaimForm, answer: ShownAnswer): string {
  const { number, unit } = answer
  if (number === null) return ''
  const reference = named(answer, 'largest before')
  if (form.form === 'change' && unit === '%' && reference)
    return `; the per cent is of ${valueWithUnit(reference.value, reference.unit)}, which stands for the whole unfiltered waveform, because the value before is small against it`
  if (form.form !== 'from-outside') return ''
  // a share below nothing or above all: the two sides work against one another
  if (number < 0) return '; what comes from outside works against the value'
  return number > 100 ? '; what comes from inside the window works against it' : ''
}

/** What was measured, as a clause. */
function numberWords(form: ClaimForm, answer: ShownAnswer, { filter, trials }: ClaimAnswerContext): string {
  const { number, unit } = answer
  if (number === null || Number.isNaN(number)) return 'there is no number to hold against the claim'
  const amounts = amountsOf(form)
  switch (form.form) {
    case 'change':
      return `${CLAIM_ROW_WORDS[form.row]} changes by ${changeWithUnit(number, unit, amounts)}${unit === '%' && !named(answer, 'largest before') ? ' of its value before' : ''}${fromTo(answer)}`
    case 'deflection':
      return `the deflection that ${filter} makes there is ${changeWithUnit(number, unit, amounts)}${unit === '%' ? ' of the whole unfiltered waveform’s largest absolute value' : ''}${atWords(answer)}`
    case 'from-outside':
      return `${valueWithUnit(number, unit, [...amounts, 0, 100])} of the filtered mean amplitude comes from outside the window`
    case 'effect':
      return effectWords(form, answer, filter)
    case 'onset': {
      // the number is counted in the direction claimed
      const size = valueWithUnit(Math.abs(number), unit, amounts)
      if (!(parseFloat(size) > 0)) return `the onset does not move${fromTo(answer)}`
      if (number > 0) return `the onset moves ${form.direction} by ${size}${fromTo(answer)}`
      const other = form.direction === 'earlier' ? 'later' : 'earlier'
      return `the onset moves ${other} by ${size}${fromTo(answer)}, not ${form.direction}`
    }
    case 'attenuation':
      if (number === Infinity) return `${filter} lets nothing of ${exact(form.hz)} Hz through`
      if (number >= MOST_DB)
        return `${filter} attenuates ${exact(form.hz)} Hz by ${MOST_DB} dB, the most that is counted`
      if (amplifies(number, unit))
        return `${filter} does not attenuate ${exact(form.hz)} Hz but amplifies it by ${valueWithUnit(-number, unit, [0, ...amounts.map((amount) => -amount)])}`
      return `${filter} attenuates ${exact(form.hz)} Hz by ${valueWithUnit(number, unit, amounts)}`
    case 'tone': {
      const left = toneWithUnit(number, unit, amounts)
      if (form.locked)
        return `${left} of the tone, which is locked to the event and does not average out, is left in the filtered average`
      return trials === 1
        ? `${left} of the tone is left in the filtered trial`
        : `a root mean square amplitude of ${left} of the tone is left in the filtered average of ${trialsWords(trials)}`
    }
    case 'twin':
    case 'meaning':
      return numberWords(form.form === 'twin' ? form.shows : form.conclusion, answer, {
        filter,
        trials,
        taken: 'as it stands',
      })
    case 'late-only':
      return `the fit estimates early activity of ${changeWithUnit(number, unit, [0])} in the unfiltered waveform`
  }
}

/** Where a gain is taken to be rounding. */
const MOST_DB = 300

/** ", at 112 ms" */
function atWords(answer: ShownAnswer): string {
  const at = named(answer, 'at')
  return at ? `, at ${momentWords(at.value)}` : ''
}

/** Below nothing in what is printed. */
const amplifies = (db: number, unit: Unit) => db < 0 && Number(db.toFixed(decimalsAgainst(db, unit, []))) !== 0

/** ", from 0.10 to −1.09 µV", where both values are there. */
function fromTo(answer: ShownAnswer): string {
  const before = named(answer, 'before')
  const after = named(answer, 'after')
  if (!before || !after) return ''
  if (before.unit !== after.unit)
    return `, from ${valueWithUnit(before.value, before.unit)} to ${valueWithUnit(after.value, after.unit)}`
  const decimals = Math.max(
    decimalsAgainst(before.value, before.unit, []),
    decimalsAgainst(after.value, after.unit, []),
  )
  return `, from ${fixed(before.value, decimals)} to ${fixed(after.value, decimals)} ${after.unit}`
}

function named({ values }: ShownAnswer, name: string) {
  return values.find((entry) => entry.name === name && Number.isFinite(entry.value))
}

function effectWords(form: EffectClaim, answer: ShownAnswer, filter: string): string {
  const before = named(answer, 'before')
  const after = named(answer, 'after')
  const least = form.leastUv
  const size = (value: number, unit: Unit) => {
    const absent = Math.abs(value) < least && !sameNumber(Math.abs(value), least)
    return `${changeWithUnit(value, unit, [least, -least, 0])}${absent ? ` (absent: under ${exact(least)} µV)` : ''}`
  }
  if (!before || !after) return `the effect is ${size(answer.number ?? 0, answer.unit)}`
  return `the effect is ${size(before.value, before.unit)} without ${filter} and ${size(after.value, after.unit)} with it`
}

/** Amounts whose sides matter in print. */
function amountsOf(form: ClaimForm): number[] {
  switch (form.form) {
    case 'change':
    case 'deflection':
      return [form.amount, -form.amount]
    case 'from-outside':
      return [form.percent]
    case 'effect':
      return [form.leastUv, -form.leastUv, 0]
    case 'onset':
      return [form.ms]
    case 'attenuation':
      return [form.db]
    case 'tone':
      return [form.belowUv]
    case 'twin':
      return amountsOf(form.shows)
    case 'meaning':
      return amountsOf(form.conclusion)
    case 'late-only':
      return [0]
  }
}

/** ", more than the 0.5 µV claimed": only where that is so of the numbers and in keeping with the verdict. */
function comparison(form: ClaimForm, { number, unit, verdict }: ShownAnswer): string {
  if (number === null || Number.isNaN(number) || verdict === 'cannot be told') return ''
  const held = heldAgainst(form, number)
  if (!held) return ''
  const { size, amount, relation } = held
  const same = sameNumber(size, amount)
  const claimed = `the ${exact(amount)} ${unit} claimed`
  const keeps =
    relation === 'at least'
      ? size > amount || same
      : relation === 'at most'
        ? size < amount || same
        : size < amount && !same
  if (keeps !== (verdict === 'holds')) return ''
  // more than zero by what no print shows: nothing is compared
  const printed = Number(size.toFixed(Math.min(100, decimalsAgainst(size, unit, amountsOf(form)))))
  if (!same && Number.isFinite(size) && Math.sign(printed - amount) !== Math.sign(size - amount)) return ''
  if (same) return relation === 'below' ? `, not below ${claimed}` : `, exactly ${claimed}`
  if (relation === 'at least') return keeps ? `, more than ${claimed}` : `, short of ${claimed}`
  if (relation === 'at most') return keeps ? `, within ${claimed}` : `, more than ${claimed}`
  return keeps ? `, below ${claimed}` : `, not below ${claimed}`
}

function heldAgainst(
  form: ClaimForm,
  number: number,
): { size: number; amount: number; relation: ChangeClaim['relation'] | 'below' } | null {
  switch (form.form) {
    case 'change':
      return { size: Math.abs(number), amount: form.amount, relation: form.relation }
    case 'deflection':
      return { size: Math.abs(number), amount: form.amount, relation: 'at least' }
    case 'from-outside':
      return { size: number, amount: form.percent, relation: 'at least' }
    case 'onset':
      // the other direction is said in words
      if (number < 0) return null
      return { size: number, amount: form.ms, relation: 'at least' }
    case 'attenuation':
      // an amplification is said as one
      if (amplifies(number, 'dB')) return null
      return { size: number, amount: form.db, relation: 'at least' }
    case 'tone':
      return { size: number, amount: form.belowUv, relation: 'below' }
    default:
      return null
  }
}

function intervalWords(form: ClaimForm, answer: ShownAnswer): string {
  return intervalWithUnit(answer.interval as readonly [number, number], answer.unit, amountsOf(form))
}

function withinNoise(
  form: ClaimForm,
  answer: ShownAnswer,
  { trialsNeeded }: Extract<ClaimGrounds, { kind: 'within noise' }>,
  context: ClaimAnswerContext,
): string {
  const { number, interval, unit } = answer
  const measured = capital(numberWords(form, answer, context))
  const settles = settledBy(trialsNeeded, context.trials, interval !== null)
  if (!interval?.every(Number.isFinite))
    return `${measured}, but the noise of ${trialsWords(context.trials)} does not let it be told.${settles}`
  const signMatters = form.form !== 'effect' || form.says === 'changes sign'
  const inside = amountsOf(form)
    .filter((amount) => signMatters || amount !== 0)
    .filter((amount) => interval[0] <= amount && amount <= interval[1])
    .sort((a, b) => Math.abs(a - (number ?? 0)) - Math.abs(b - (number ?? 0)))
  const range = `95 % interval ${ofWhat(form, answer)}with ${trialsWords(context.trials)} ${intervalWords(form, answer)}`
  if (inside.length === 0) {
    // a claim of several parts: the noise leaves another of them open
    const open =
      form.form === 'deflection'
        ? 'whether the unfiltered waveform has none there'
        : 'whether every part of the claim holds'
    return `${measured} (${range}), but the noise does not let it be told ${open}.${settles}`
  }
  return (
    `${measured}, but with ${trialsWords(context.trials)} the 95 % interval ${ofWhat(form, answer) || 'of that '}is ${intervalWords(form, answer)}, ` +
    `and ${insideWords(form, inside[0], unit)} lies within it.${settles}`
  )
}

function settledBy(trialsNeeded: number | null, trials: number, known: boolean): string {
  if ((trialsNeeded === null || !Number.isFinite(trialsNeeded)) && !known)
    return ' How many trials would settle it cannot be said.'
  if (trialsNeeded === null || !Number.isFinite(trialsNeeded))
    return ' No number of trials would settle it if the numbers stayed as they are.'
  // so many there are already: then nothing was computed of more
  if (trialsNeeded <= trials) return ''
  return ` About ${trialsWords(trialsNeeded, aboutTrials(trialsNeeded))} would settle it if the numbers stayed as they are.`
}

function insideWords(form: ClaimForm, amount: number, unit: Unit): string {
  if (form.form === 'effect')
    return amount === 0 && form.leastUv !== 0 ? 'zero' : `the limit of ${exact(amount)} ${unit}`
  return amount < 0 && form.form !== 'attenuation'
    ? `${exact(amount)} ${unit}, of the size claimed,`
    : `the claimed ${exact(amount)} ${unit}`
}

function unseen(
  form: ClaimForm,
  answer: ShownAnswer,
  { share, threshold, furtherMs }: Extract<ClaimGrounds, { kind: 'unseen' }>,
  context: ClaimAnswerContext,
): string {
  const part = valueWithUnit(100 * share, '%', [100 * threshold])
  const limit = exact(Number((100 * threshold).toPrecision(6)))
  const more = share > threshold ? `, more than the ${limit} % allowed` : ''
  const number = answer.number === null ? '' : ` From the data that there are, ${numberWords(form, answer, context)}.`
  const reach = [
    ...(furtherMs && furtherMs.back > 0 ? [`${reachWords(furtherMs.back)} ms further back`] : []),
    ...(furtherMs && furtherMs.on > 0 ? [`${reachWords(furtherMs.on)} ms further on`] : []),
  ]
  const settles =
    reach.length > 0
      ? `Data that reach ${reach.join(' and ')} would bring that share within what is allowed.`
      : 'Data that hold more of those samples are needed to tell.'
  return `${part} of the weight falls on samples outside the data${more}, so that the number cannot be trusted.${number} ${settles}`
}

/** Never less than was computed. */
const reachWords = (ms: number) => exact(Math.ceil(ms - 1e-6))

const MISSING = { 'no peak': 'no peak', 'no area': 'no area of the stated side', 'no onset': 'no onset' } as const

function noValue({ missing, where }: Extract<ClaimGrounds, { kind: 'no value' }>): string {
  const waveform = where === 'before' ? 'unfiltered' : 'filtered'
  return `The ${waveform} waveform has ${MISSING[missing]} in the window, so that there is no number to hold against the claim.`
}

const NO_VALUE_SETTLES = {
  'no peak': 'A window in which both waveforms have a peak is needed to tell.',
  'no area': 'A window in which both waveforms have such an area is needed to tell.',
  'no onset': 'An epoch and a window in which both waveforms have an onset are needed to tell.',
} as const

function aboutZero(form: ClaimForm): string {
  if (form.form === 'twin') return aboutZero(form.shows)
  if (form.form === 'meaning') return aboutZero(form.conclusion)
  if (form.form === 'from-outside') return 'The filtered mean amplitude in the window'
  if (form.form === 'change') return `${capital(CLAIM_ROW_WORDS[form.row])} before`
  return 'The value'
}

function unitOfZero(form: ClaimForm, answer: ShownAnswer): Unit {
  const before = form.form === 'change' ? named(answer, 'before') : undefined
  return before?.unit ?? 'µV'
}

function compared(
  form: ClaimForm,
  { present, compared: other }: Extract<ClaimGrounds, { kind: 'compared' }>,
  context: ClaimAnswerContext,
): string {
  const because = (inner: ClaimForm, answer: ShownAnswer, of: ClaimAnswerContext) =>
    lower(claimReason(inner, answer, of))
  if (form.form === 'twin') {
    const twin = `the ${form.twin} version`
    return (
      `${shows(`${context.filter} as it is`, present.verdict, null)}: ${because(form.shows, present, context)} ` +
      `${shows(twin, other.verdict, present.verdict)}: ${because(form.shows, other, { ...context, filter: twin })}`
    )
  }
  if (form.form !== 'meaning') return ''
  const same =
    present.verdict === 'cannot be told' || other.verdict === 'cannot be told'
      ? ''
      : present.verdict === other.verdict
        ? ' The answer is the same.'
        : ' The answer is not the same.'
  return (
    `With ${meaningShort(form.stated)} it ${present.verdict}: ${because(form.conclusion, present, context)} ` +
    `With ${meaningShort(form.other)} it ${other.verdict}: ${because(form.conclusion, other, context)}${same}`
  )
}

const meaningShort = (meaning: keyof typeof CLAIM_MEANING_WORDS) => CLAIM_MEANING_WORDS[meaning].replace(/ \(.*/, '')

/** @param same  the verdict that was said before, where this one is said to be the same. */
function shows(what: string, verdict: ClaimVerdict, same: ClaimVerdict | null): string {
  if (verdict === 'cannot be told') return `Whether ${what} shows it cannot be told`
  if (verdict === 'holds') return `${capital(what)} shows it${same === verdict ? ' as well' : ''}`
  return `${capital(what)} does not show it${same === verdict ? ' either' : ''}`
}

function lateOnly(
  answer: ShownAnswer,
  { verdict, changed }: Extract<ClaimGrounds, { kind: 'late-only' }>,
  claimed: ClaimVerdict,
): string {
  const { number, interval, unit } = answer
  const range = interval?.every(Number.isFinite)
    ? ` (95 % interval ${intervalWithUnit(interval, unit, [0])}${interval[0] > 0 || interval[1] < 0 ? ', without zero' : ', with zero in it'})`
    : ''
  const estimate =
    number === null || !Number.isFinite(number)
      ? ''
      : `The fit estimates early activity of ${changeWithUnit(number, unit, [0])} in the unfiltered waveform${range}. `
  if (changed)
    return `${estimate}The answer changes when late activity is taken to be five times as large or twice as smooth; how large and how smooth it is would have to be known to tell.`
  if (claimed !== LATE_CLAIM[verdict]) return estimate.trim()
  switch (verdict) {
    case 'it can':
      return `${estimate}Activity from the stated onset on is enough to make the deflection, which does not prove that it did.`
    case 'not by late activity alone':
      return `${estimate}Late activity alone does not account for the deflection.`
    case 'cannot be told':
      return `${estimate}The data neither rule out late activity alone nor show it to be enough; how many trials would was not computed.`
  }
}

const LATE_CLAIM = {
  'it can': 'holds',
  'not by late activity alone': 'does not hold',
  'cannot be told': 'cannot be told',
} as const

function trialsWords(trials: number, said = exact(trials)): string {
  return `${said} ${said === '1' ? 'trial' : 'trials'}`
}

const capital = (words: string) => words.charAt(0).toUpperCase() + words.slice(1)
const lower = (words: string) => words.charAt(0).toLowerCase() + words.slice(1)
const withoutEnd = (words: string) => words.trim().replace(/[.!?]+$/, '')
