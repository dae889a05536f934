import {
  amplifierWords,
  cutoffsAndDesign,
  each,
  extentWords,
  orderWords,
  phaseWords,
  rippleWords,
  tokenOf,
  typeWords,
} from './checklist-phrases.ts'
import { exact } from './number.ts'
import { eventsWords, windowWords } from './protocol-line.ts'
import { CAUTION, type PublishedSource, SOURCES } from './published-source.ts'
import { endsWords, stagePhrases } from './stage-report.ts'
import type { StatementField } from './statement-fields.ts'
import { stageName } from './stage-words.ts'
import {
  counted,
  type DesignedProtocol,
  designProtocol,
  endsOf,
  type PlacedStage,
  statementOf,
  type WriteUpFacts,
} from './write-up-facts.ts'

/** One thing that reporting recommendations ask for, and what the workspace says about it. */
export interface ChecklistItem {
  readonly id: string
  readonly item: string
  readonly sources: readonly PublishedSource[]
  readonly state: 'stated' | 'not stated' | 'does not apply'
  /** What is stated, or why it is not or does not apply. */
  readonly words: string
  /** Id of the token of the protocol line that states it or could ('add': a stage to be added). */
  readonly token?: string
  /** Key under which the user can state it in words (`WriteUpFacts.statements`). */
  readonly field?: StatementField
}

/**
 * What published recommendations ask a paper to report about filters, each item filled from the workspace, or "not stated" with the
 * token or the field that could state it.
 *
 * @throws RangeError for a chain that cannot be designed.
 */
export function reportingChecklist(facts: WriteUpFacts): {
  readonly caution: string
  readonly items: readonly ChecklistItem[]
} {
  const designed = designProtocol(facts)
  return {
    caution: CAUTION,
    items: [...recordingItems(facts, designed), ...filterItems(facts, designed), ...otherItems(facts, designed)],
  }
}

const { pernet, widmann, decheveigne, picton, practice } = SOURCES

/** What an item holds beside its name and sources. */
type Content = Pick<ChecklistItem, 'state' | 'words' | 'token' | 'field'>

function item(id: string, name: string, sources: readonly PublishedSource[], content: Content): ChecklistItem {
  return { id, item: name, sources, ...content }
}

const SIMULATED: Content = { state: 'does not apply', words: 'the waveform is simulated' }

function recordingItems(facts: WriteUpFacts, { inData, amplifiers }: DesignedProtocol): ChecklistItem[] {
  const { samplingRateHz, source } = facts
  const known = [...inData, ...amplifiers].filter(({ stage }) => stage.spec.design === 'amplifier')
  const earlier = inData.filter(({ stage }) => stage.spec.design !== 'amplifier')
  return [
    item('sampling-rate', 'Sampling rate, at least twice the highest frequency present', [picton], {
      state: 'stated',
      words: `${exact(samplingRateHz)} Hz, for frequencies below ${exact(samplingRateHz / 2)} Hz`,
      token: 'rate',
    }),
    item(
      'amplifier',
      'The amplifier’s own filters: type, cutoffs as −3 dB points, slopes in dB per octave',
      [widmann, picton],
      known.length > 0
        ? {
            state: 'stated',
            words: withStatement(facts, 'amplifier', amplifierWords(known)),
            token: tokenOf(known[0], 'cutoff'),
          }
        : source === 'built'
          ? SIMULATED
          : { ...saidOrNone(facts, 'amplifier', 'none'), token: 'add' },
    ),
    recordedOnly(facts, 'acquisition-software', 'Hardware, software and version of the recording', [pernet]),
    recordedOnly(facts, 'reference', 'Reference and re-referencing', [practice]),
    item(
      'earlier-filters',
      'Filters that the data had passed before this analysis',
      [widmann],
      earlier.length > 0
        ? {
            state: 'stated',
            words: withStatement(
              facts,
              'earlier-filters',
              `${each(earlier, ({ stage }) => stageName(stage.spec))}${facts.noOtherFilters ? '; no other' : ''}`,
            ),
            token: tokenOf(earlier[0], 'design'),
          }
        : source === 'built'
          ? SIMULATED
          : {
              ...saidOrNone(facts, 'earlier-filters', known.length > 0 ? 'none besides the amplifier’s' : 'none'),
              token: 'add',
            },
    ),
    item(
      'earlier-edges',
      'What earlier filters were applied to, and how they handled its ends',
      [widmann],
      earlier.length > 0 || saysFilters(statementOf(facts, 'earlier-filters'))
        ? saidOrNot(facts, 'earlier-edges')
        : { state: 'does not apply', words: 'no earlier filter is stated' },
    ),
  ]
}

function filterItems(facts: WriteUpFacts, { inData, amplifiers, offline, chain }: DesignedProtocol): ChecklistItem[] {
  const filters = [...inData.filter(({ stage }) => stage.spec.design !== 'amplifier'), ...offline]
  const applied = [...amplifiers, ...offline]
  const amplified = chain.stages.some(({ spec }) => spec.design === 'amplifier')
  const none: Content = {
    state: 'does not apply',
    words: amplified ? 'no filter but the amplifier’s' : 'no filter is applied',
    token: 'add',
  }
  const noneHere: Content = { ...none, words: 'no filter is applied here' }
  const noneOffline: Content = { ...none, words: 'no filter is applied offline' }
  const about = (
    id: string,
    name: string,
    sources: readonly PublishedSource[],
    some: readonly PlacedStage[],
    words: (placed: PlacedStage) => string,
    part: string,
    absent: Content = none,
  ) =>
    item(
      id,
      name,
      sources,
      some.length === 0 ? absent : { state: 'stated', words: each(some, words), token: tokenOf(some[0], part) },
    )
  const windowed = filters.filter(({ stage }) => stage.spec.design === 'windowed-sinc')
  const noWindow: Content = { state: 'does not apply', words: 'no windowed sinc in the chain' }
  const latency = facts.score.kind.endsWith('latency')
  const ends = endsOf(facts)
  return [
    item(
      'order-of-steps',
      'Order of the filters among all steps',
      [pernet],
      chain.stages.length === 0
        ? none
        : { state: 'stated', words: orderWords({ inData, amplifiers, offline }), token: 'extent' },
    ),
    about('type', 'Type of each filter', [pernet, widmann, picton], filters, ({ stage }) => typeWords(stage), 'design'),
    about(
      'cutoffs',
      'Cutoffs with their definition (−3 or −6 dB)',
      [pernet, widmann],
      filters,
      ({ stage }) => cutoffsAndDesign(stage),
      'cutoff',
    ),
    about('order', 'Order or length', [pernet, widmann], filters, ({ stage }) => stagePhrases(stage).order, 'order'),
    about(
      'roll-off',
      'Roll-off or transition width',
      [pernet, widmann],
      filters,
      ({ stage }) => stagePhrases(stage).rollOff,
      'transition',
    ),
    about(
      'window',
      'Window of each windowed sinc',
      [widmann],
      windowed,
      ({ stage }) => stagePhrases(stage).window ?? '',
      'design',
      noWindow,
    ),
    about(
      'ripple',
      'Pass-band ripple and stop-band attenuation',
      [widmann],
      filters,
      ({ stage }) => rippleWords(stage),
      'design',
    ),
    about(
      'direction',
      'Causality, number of passes and handling of the delay',
      [widmann],
      filters,
      ({ stage }) => stagePhrases(stage).run,
      'direction',
    ),
    item(
      'latency-phase',
      'Zero-phase filters where latencies are measured',
      [picton],
      !latency
        ? { state: 'does not apply', words: 'the score is not a latency' }
        : chain.stages.length === 0
          ? none
          : phaseWords([...inData, ...applied], facts.source === 'recorded' && !amplified),
    ),
    item(
      'extent',
      'Applied to the continuous recording or to epochs',
      [widmann],
      offline.length === 0 ? noneOffline : { state: 'stated', words: extentWords(facts), token: 'extent' },
    ),
    about(
      'edges',
      'Padding and handling of the ends',
      [widmann],
      offline,
      ({ stage }) =>
        endsWords(stage, ends).join('') || 'nothing to pad: the waveform is defined on the whole time axis',
      'design',
      noneOffline,
    ),
    item(
      'coefficients',
      'Coefficients that do not depend on software',
      [widmann],
      applied.length === 0 ? noneHere : saidOrNot(facts, 'coefficients'),
    ),
    item(
      'response-figure',
      'A plot of the impulse or step response',
      [decheveigne],
      applied.length === 0 ? noneHere : saidOrNot(facts, 'response-figure'),
    ),
  ]
}

function otherItems(facts: WriteUpFacts, { offline }: DesignedProtocol): ChecklistItem[] {
  const { baseline, trials, softwareVersion, events } = facts
  return [
    recordedOnly(facts, 'resampling', 'Resampling, with its anti-alias filter', [pernet]),
    recordedOnly(facts, 'detrending', 'Detrending, with its polynomial order', [pernet]),
    item('baseline', 'Baseline correction, with its method', [pernet], {
      state: 'stated',
      words:
        baseline === 'none'
          ? 'none'
          : `the mean from ${windowWords(baseline.fromMs, baseline.toMs)} is subtracted${offline.length > 0 ? ' after the filters' : ''}`,
      token: 'baseline',
    }),
    recordedOnly(facts, 'artifacts', 'Rejection or correction of artifacts', [practice]),
    recordedOnly(facts, 'processing-order', 'Order of the steps outside this workspace', [pernet]),
    item('trials', 'Number of epochs in each condition', [pernet], {
      state: 'stated',
      words: `${counted(trials, 'trial')}${eventsPhrase(events)}`,
      token: 'trials',
    }),
    item('software', 'Software and version of the filters', [pernet], {
      state: softwareVersion ? 'stated' : 'not stated',
      words: softwareVersion ? `Sidelobe ${softwareVersion}` : 'Sidelobe, version not stated',
    }),
    item('spectral', 'Spectral steps before or after segmentation', [pernet], {
      state: 'does not apply',
      words: 'no spectral step among the scores',
    }),
  ]
}

function eventsPhrase(events: WriteUpFacts['events']): string {
  if (!events) return ''
  return events === 'alone' ? ', the event alone' : `, one event ${eventsWords(events)}`
}

/** Whether a statement about earlier filters speaks of any: "none" does not. */
function saysFilters(statement: string): boolean {
  return statement !== '' && !/^(no|none|nothing)\b/i.test(statement)
}

/** What only a recording can have. */
function recordedOnly(
  facts: WriteUpFacts,
  field: StatementField,
  name: string,
  sources: readonly PublishedSource[],
): ChecklistItem {
  return item(field, name, sources, facts.source === 'built' ? SIMULATED : saidOrNot(facts, field))
}

function saidOrNot(facts: WriteUpFacts, field: StatementField): Content {
  const said = statementOf(facts, field)
  return said === '' ? { state: 'not stated', words: 'not stated', field } : { state: 'stated', words: said, field }
}

/** What nobody has described, and yet it has been said that there was nothing to describe. */
function saidOrNone(facts: WriteUpFacts, field: StatementField, none: string): Content {
  const said = saidOrNot(facts, field)
  return said.state === 'not stated' && facts.noOtherFilters ? { ...said, state: 'stated', words: none } : said
}

function withStatement(facts: WriteUpFacts, field: StatementField, words: string): string {
  const said = statementOf(facts, field)
  return said === '' ? words : `${words}; ${said}`
}
