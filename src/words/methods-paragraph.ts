import { chainCutoffPoints } from '../filter/cutoff-points.ts'
import { epochPaddingSamples } from '../filter/epoch-rules.ts'
import type { Score } from '../erp/score.ts'
import { inMarkup, type Markup } from './markup.ts'
import { exact } from './number.ts'
import { scoreWords, windowWords } from './protocol-line.ts'
import { STATEMENT_FIELDS } from './statement-fields.ts'
import { cutoffList, stageReport } from './stage-report.ts'
import {
  counted,
  type DesignedProtocol,
  designProtocol,
  type Ends,
  endsOf,
  type PlacedStage,
  sentence,
  statementOf,
  type WriteUpFacts,
} from './write-up-facts.ts'

/**
 * The methods paragraph: what was done to the waveform, in the past tense, ready to paste. Every number follows from the chain as
 * designed, and what is not known is said to be so.
 *
 * @param markup  'text', 'markdown' or 'latex', in which everything that could act as markup is escaped.
 * @throws RangeError for a chain that cannot be designed.
 */
export function methodsParagraph(facts: WriteUpFacts, markup: Markup = 'text'): string {
  const designed = designProtocol(facts)
  const sentences = [
    ...sourceSentences(facts),
    ...historySentences(facts, designed),
    ...filterSentences(facts, designed),
    baselineSentence(facts),
    ...scoreSentences(facts),
    ...statementSentences(facts),
    softwareSentence(facts, designed),
  ]
  return inMarkup(sentences.join(' '), markup)
}

/** What was averaged, as a noun phrase. */
function trialsWords({ trials, ofTwoConditions }: WriteUpFacts): string {
  if (ofTwoConditions)
    return trials === 1
      ? 'the difference of two single trials'
      : `the difference of two averages of ${counted(trials, 'trial')} each`
  return trials === 1 ? 'a single trial' : `an average of ${counted(trials, 'trial')}`
}

function sourceSentences(facts: WriteUpFacts): string[] {
  const { source, waveform, samplingRateHz, epoch, events } = facts
  const limits = epoch
    ? `, in an epoch from ${windowWords(epoch.fromMs, epoch.toMs)} (${counted(epoch.samples, 'sample')})`
    : ''
  const sampled = `sampled at ${exact(samplingRateHz)} Hz${limits}`
  if (source === 'recorded')
    return [`The waveform was recorded: ${waveform}, ${sampled}.`, `It was ${trialsWords(facts)}.`]
  const train =
    events && events !== 'alone'
      ? [`Its events followed one another every ${windowWords(events.fromMs, events.toMs)}.`]
      : ['Its event stood alone.']
  return [`The waveform was simulated: ${waveform}, ${sampled}.`, ...train]
}

/** What the data had passed before: in the pluperfect, and what is not known of it. */
function historySentences(facts: WriteUpFacts, { inData, amplifiers }: DesignedProtocol): string[] {
  const sentences: string[] = []
  if (inData.length > 0)
    sentences.push(`Before this analysis the waveform had passed ${filterList(inData, () => 'none')}.`)
  const filtered = inData.some(({ stage }) => stage.spec.design !== 'amplifier')
  if (filtered && statementOf(facts, 'earlier-edges') === '')
    sentences.push('How the ends of the data had been handled then was not stated.')
  if (facts.source === 'built') return sentences
  if (facts.noOtherFilters && statementOf(facts, 'earlier-filters') === '') {
    const besides = statementOf(facts, 'amplifier') === '' ? '' : ' besides the amplifier’s'
    sentences.push(
      `The waveform had passed no ${inData.length > 0 ? 'other ' : ''}filter${besides} before this analysis.`,
    )
    return sentences
  }
  const amplifierKnown = [...inData, ...amplifiers].some(({ stage }) => stage.spec.design === 'amplifier')
  if (!amplifierKnown && statementOf(facts, 'amplifier') === '')
    sentences.push('The filters of the amplifier were not stated.')
  if (statementOf(facts, 'earlier-filters') === '')
    sentences.push(
      `Whether the waveform had passed any ${filtered ? 'other filter' : 'filter besides the amplifier’s'} before this analysis was not stated.`,
    )
  return sentences
}

function filterSentences(facts: WriteUpFacts, { chain, inData, amplifiers, offline }: DesignedProtocol): string[] {
  const sentences: string[] = []
  const { source, extent } = facts
  if (amplifiers.length > 0)
    sentences.push(
      `The amplifier was modelled on ${amplifierInput(facts)}, by ${filterList(amplifiers, () => 'none')}.`,
    )
  const had = inData.some(({ stage }) => stage.spec.design !== 'amplifier')
  if (offline.length === 0) {
    sentences.push(had ? 'No further filter was applied offline.' : 'No filter was applied offline.')
  } else {
    const ends = endsOf(facts)
    const where =
      extent === 'epochs'
        ? 'the cut-out epoch'
        : source === 'recorded'
          ? 'the continuous recording, before epochs were cut,'
          : 'the continuous waveform, before the epoch was cut,'
    sentences.push(
      `${had ? 'In this analysis' : 'Offline'} ${where} ${amplifiers.length > 0 ? 'then ' : ''}passed ${filterList(offline, () => ends)}.`,
    )
    if (ends === 'none')
      sentences.push(
        'The waveform was defined on the whole time axis and evaluated as far outside the epoch as the filters reached, so that no padding was needed.',
      )
    else if (offline.slice(0, -1).some(({ stage }) => epochPaddingSamples(stage) > 0))
      sentences.push('What a filter had padded was trimmed off before the next filter ran.')
  }
  if (amplifiers.length + offline.length > 1) {
    const { halfAmplitudeHz, halfPowerHz } = chainCutoffPoints(chain)
    sentences.push(
      `Together the filters applied in this analysis had ${together('half-amplitude', halfAmplitudeHz)} and ${together('half-power', halfPowerHz)}.`,
    )
  }
  return sentences
}

/** A recording's ends are unknown to its amplifier, which is taken to have rested on either side. */
function amplifierInput({ source, extent }: WriteUpFacts): string {
  if (source === 'built') return 'the continuous waveform, before any epoch was cut'
  return extent === 'epochs'
    ? 'the epoch, as if zeros stood before and after it'
    : 'each uninterrupted stretch of the recording, as if zeros stood before and after it'
}

/** More points than these are not listed one by one. */
const LISTED_POINTS = 8

function together(name: string, hz: readonly number[]): string {
  if (hz.length === 0) return `no ${name} point`
  if (hz.length > LISTED_POINTS) {
    const [lowest, highest] = [hz[0], hz[hz.length - 1]].map((value) => cutoffList([value], []))
    return `${exact(hz.length)} ${name} points, the lowest at ${lowest} Hz and the highest at ${highest} Hz`
  }
  return `${hz.length === 1 ? `a ${name} point` : `${name} points`} at ${cutoffList(hz, [])} Hz`
}

/** "one filter: a …" or "three filters, one after another in this order: (1) a …; (2) a …; and (3) a …" */
function filterList(placed: readonly PlacedStage[], ends: (stage: PlacedStage) => Ends): string {
  const reports = placed.map((entry) => stageReport(entry.stage, ends(entry)))
  if (reports.length === 1) return `one filter: ${reports[0]}`
  const numbered = reports.map((report, i) => `(${i + 1}) ${report}`)
  const last = numbered.pop()
  return `${COUNT[reports.length] ?? exact(reports.length)} filters, one after another in this order: ${numbered.join('; ')}; and ${last}`
}

const COUNT = ['no', 'one', 'two', 'three', 'four', 'five', 'six', 'seven', 'eight', 'nine', 'ten']

function baselineSentence({ baseline, chain }: WriteUpFacts): string {
  if (baseline === 'none') return 'No baseline correction was made.'
  const filtered = chain.some(({ enabled, inData }) => enabled !== false && inData !== true)
  const mean = `mean of the waveform over the baseline ${span(baseline)}`
  return filtered ? `After filtering, the ${mean} was subtracted.` : `The ${mean} was subtracted.`
}

function scoreSentences(facts: WriteUpFacts): string[] {
  const { score, source } = facts
  const defined = `The score was ${scoreWords(score)} ${span(score)} (${definition(score)}).`
  return source === 'recorded' ? [defined] : [defined, `Its precision was computed for ${trialsWords(facts)}.`]
}

/** "from −200 to 0 ms", "at 120 ms" */
function span({ fromMs, toMs }: { fromMs: number; toMs: number }): string {
  return `${fromMs === toMs ? 'at' : 'from'} ${windowWords(fromMs, toMs)}`
}

/** How the number is computed, so that another program can give the same one. */
function definition({ kind, polarity, fraction = 0.5 }: Score): string {
  const peak =
    'the largest of the samples in this window that exceeded every other sample within ±10 ms, inside or outside the window, refined by a parabola through three samples'
  const largest = polarity === 'negative' ? peak.replace('exceeded', 'lay below').replace('largest', 'lowest') : peak
  switch (kind) {
    case 'mean':
      return 'the mean of all samples whose time lay in this closed interval'
    case 'area':
      return `by the trapezoidal rule, over the ${polarity} values, all others set to zero`
    case 'peak-amplitude':
      return `the amplitude of ${largest}`
    case 'peak-latency':
      return `the latency of ${largest}`
    case 'area-latency':
      return `the moment at which ${exact(fraction * 100)} % of the area over the ${polarity} values, all others set to zero, was reached`
    case 'onset-latency':
      return `going back from the peak, the first crossing of ${exact(fraction * 100)} % of its amplitude, interpolated linearly; the peak was ${largest}`
    case 'moment':
      return 'interpolated linearly between samples'
  }
}

/** What the user has said in words, each under its name. */
function statementSentences(facts: WriteUpFacts): string[] {
  return STATEMENT_FIELDS.flatMap(({ field, name }) => {
    const said = statementOf(facts, field)
    return said === '' ? [] : [sentence(`${name}: ${said}`)]
  })
}

function softwareSentence({ softwareVersion }: WriteUpFacts, { chain, amplifiers, offline }: DesignedProtocol): string {
  const version = softwareVersion ? ` ${softwareVersion}` : ''
  if (amplifiers.length + offline.length === 0) return `The analysis was made with Sidelobe${version}.`
  const recursive = chain.stages.some(({ spec, sections }) => spec.inData !== true && sections !== null)
  const how = recursive ? ', the recursive ones by the bilinear transform with prewarping' : ''
  return `The filters were designed and applied in double precision with Sidelobe${version}${how}.`
}
