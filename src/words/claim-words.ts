import type { ClaimForm, ClaimRow, ShownClaim, Unit } from '../evidence/claims/claim.ts'
import type { TimeWindow } from '../erp/time-axis.ts'
import type { CutoffMeaning } from '../filter/stage.ts'
import { exact } from './number.ts'
import { windowWords } from './protocol-line.ts'
import { type Piece, text, token } from './stage-words.ts'

/** What a form's sentence needs that the form itself does not hold. */
export interface ClaimSentenceContext {
  /** The unit of the score of the protocol line. */
  readonly scoreUnit?: Unit
}

/** What each row of the readout is called in a claim, with its article. */
export const CLAIM_ROW_WORDS: Record<ClaimRow, string> = {
  score: 'the score',
  'mean-amplitude': 'the mean amplitude',
  'peak-amplitude': 'the peak amplitude',
  'signed-area': 'the signed area',
  'peak-latency': 'the peak latency',
  'area-latency': 'the fractional-area latency',
  'onset-latency': 'the onset latency',
}

const ROW_UNIT: Record<Exclude<ClaimRow, 'score'>, Unit> = {
  'mean-amplitude': 'µV',
  'peak-amplitude': 'µV',
  'signed-area': 'µV·s',
  'peak-latency': 'ms',
  'area-latency': 'ms',
  'onset-latency': 'ms',
}

/** The unit in which a row is measured; null for the score where its unit is not known. */
export function claimRowUnit(row: ClaimRow, { scoreUnit }: ClaimSentenceContext = {}): Unit | null {
  return row === 'score' ? (scoreUnit ?? null) : ROW_UNIT[row]
}

/** What a cutoff is called by its meaning. */
export const CLAIM_MEANING_WORDS: Record<CutoffMeaning, string> = {
  'half-amplitude': 'half-amplitude cutoffs',
  'half-power': 'half-power cutoffs',
  design: 'design cutoffs (half-power of one pass, or the centre of the transition)',
}

/** What a form is called in a menu. */
const FORM_NAME: Record<ClaimForm['form'], string> = {
  change: 'a change of a score or latency',
  deflection: 'a deflection that the filter makes',
  'from-outside': 'a mean amplitude that comes from outside its window',
  effect: 'an effect between two conditions',
  onset: 'an onset that the filter moves',
  attenuation: 'the attenuation of a frequency',
  tone: 'a tone that is left in the average',
  twin: 'what a causal or zero-phase version would not show',
  meaning: 'a conclusion under another meaning of the cutoff',
  'late-only': 'a deflection that the filter alone can make',
}

export function claimFormName(form: ClaimForm['form'] | ClaimForm): string {
  return FORM_NAME[typeof form === 'string' ? form : form.form]
}

/**
 * A claim as one sentence: plain text and a token for every parameter of its form. The tokens of a statement within another have ids
 * that begin with 'inner:'.
 */
export function claimSentence(form: ClaimForm, context: ClaimSentenceContext = {}): Piece[] {
  return [...clause(form, context, ''), text('.')]
}

/** The same as plain text. */
export function claimText(form: ClaimForm, context: ClaimSentenceContext = {}): string {
  return claimSentence(form, context)
    .map((piece) => piece.text)
    .join('')
}

function clause(form: ClaimForm, context: ClaimSentenceContext, prefix: '' | 'inner:'): Piece[] {
  const part = (id: string, words: string, label: string) => token(`${prefix}${id}`, words, label)
  switch (form.form) {
    case 'change': {
      const own = claimRowUnit(form.row, context)
      return [
        text('The filter changes '),
        part('row', CLAIM_ROW_WORDS[form.row], 'what is changed'),
        text(' by '),
        part('relation', form.relation, 'at least or at most'),
        text(' '),
        part('amount', exact(form.amount), 'amount claimed'),
        text(' '),
        part('unit', form.unit === '%' ? '% of its value before' : (own ?? 'in its own unit'), 'unit of the amount'),
      ]
    }
    case 'deflection':
      return [
        text('The filter makes a deflection of at least '),
        part('amount', exact(form.amount), 'amount claimed'),
        text(' '),
        part(
          'unit',
          form.unit === '%' ? '% (of the whole unfiltered waveform’s largest absolute value)' : form.unit,
          'unit of the amount',
        ),
        ...between(form.window, part),
        text(', where the unfiltered waveform has none'),
      ]
    case 'from-outside':
      return [
        text('At least '),
        part('amount', `${exact(form.percent)} %`, 'share claimed'),
        text(' of the filtered mean amplitude '),
        ...fromTo(form.window, part),
        text(' comes from outside that window'),
      ]
    case 'effect':
      return [
        text('The effect '),
        part('first', form.first.trim() || '(no condition)', 'first condition'),
        text(' minus '),
        part('second', form.second.trim() || '(no condition)', 'second condition'),
        text(', as the difference in mean amplitude '),
        ...fromTo(form.window, part),
        text(', '),
        part('says', EFFECT_SAYS[form.says], 'what is said of the effect'),
        text(', where an effect smaller than '),
        part('least', `${exact(form.leastUv)} µV`, 'smallest effect that counts'),
        text(' counts as absent'),
      ]
    case 'onset':
      return [
        text('The filter moves the onset of the waveform '),
        part('direction', form.direction, 'earlier or later'),
        text(' by at least '),
        part('amount', `${exact(form.ms)} ms`, 'shift claimed'),
      ]
    case 'attenuation':
      return [
        text('The filter attenuates '),
        part('hz', `${exact(form.hz)} Hz`, 'frequency'),
        text(' by at least '),
        part('amount', `${exact(form.db)} dB`, 'attenuation claimed'),
      ]
    case 'tone':
      return [
        text('A tone of '),
        part('hz', `${exact(form.hz)} Hz`, 'frequency of the tone'),
        text(' with an amplitude (half of peak to peak) of '),
        part('amplitude', `${exact(form.amplitudeUv)} µV`, 'amplitude of the tone in single trials'),
        text(' in single trials before the filter, '),
        part('locked', form.locked ? 'locked to the event' : 'not locked to the event', 'locked to the event or not'),
        text(', falls below '),
        part('below', `${exact(form.belowUv)} µV`, 'amplitude claimed'),
        text(' in the filtered average'),
      ]
    case 'twin':
      return [
        text('The filter shows the following, and a '),
        part('twin', form.twin, 'causal or zero-phase'),
        text(' version of it would not: '),
        ...inner(form.shows, context),
      ]
    case 'meaning':
      return [
        text('The reported cutoffs are '),
        part('stated', CLAIM_MEANING_WORDS[form.stated], 'meaning of the cutoffs as stated'),
        text('; if they were '),
        part('other', CLAIM_MEANING_WORDS[form.other], 'other meaning of the cutoffs'),
        text(' instead, the answer to the following would be the same: '),
        ...inner(form.conclusion, context),
      ]
    case 'late-only':
      return [
        text('The filter alone can make the deflection'),
        ...between(form.early, part),
        text(' from activity that begins no earlier than '),
        part('onset', windowWords(form.t0Ms, form.t0Ms), 'onset of the activity'),
        text(', or at most '),
        part('slack', `${exact(form.slackMs)} ms`, 'how much earlier activity may begin'),
        text(' before that'),
      ]
  }
}

const EFFECT_SAYS = {
  'exists without the filter': 'exists without the filter',
  'is absent without the filter': 'is absent without the filter and present with it',
  'changes sign': 'has opposite signs without and with the filter',
} as const

type Part = (id: string, words: string, label: string) => Piece

function between(window: TimeWindow, part: Part): Piece[] {
  if (window.fromMs === window.toMs) return [text(' at '), windowToken(window, part)]
  return [
    text(' between '),
    part('window', windowWords(window.fromMs, window.toMs).replace(' to ', ' and '), 'window of the claim'),
  ]
}

function fromTo(window: TimeWindow, part: Part): Piece[] {
  return [text(window.fromMs === window.toMs ? 'at ' : 'from '), windowToken(window, part)]
}

function windowToken({ fromMs, toMs }: TimeWindow, part: Part): Piece {
  return part('window', windowWords(fromMs, toMs), 'window of the claim')
}

/** A statement within another one begins in lower case. */
function inner(form: ShownClaim, context: ClaimSentenceContext): Piece[] {
  const pieces = clause(form, context, 'inner:')
  const [first, ...rest] = pieces
  return [text(first.text.charAt(0).toLowerCase() + first.text.slice(1)), ...rest]
}
