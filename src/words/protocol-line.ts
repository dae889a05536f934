import type { Baseline } from '../erp/baseline.ts'
import type { Score } from '../erp/score.ts'
import type { StageSpec } from '../filter/stage.ts'
import { exact, fixed } from './number.ts'
import { type Piece, stageName, stagePieces, text, token } from './stage-words.ts'

/** All that the protocol line states. */
export interface Protocol {
  /** 'built' from components, or 'recorded' and loaded from a file. */
  source: 'built' | 'recorded'
  /** A noun phrase with its article: "a late positivity", "PO7 of average.csv". */
  waveform: string
  samplingRateHz: number
  /** How the events of a built waveform stand; null for a recorded one, whose events are in the data. */
  events?: 'alone' | { fromMs: number; toMs: number } | null
  chain: readonly StageSpec[]
  extent: 'continuous' | 'epochs'
  baseline: Baseline
  trials: number
  score: Score
}

/** The name of a kind of score inside a sentence, with its article. */
export function scoreWords(score: Score): string {
  const side = score.polarity === 'negative' ? 'negative ' : 'positive '
  const percent = `${exact((score.fraction ?? 0.5) * 100)} %`
  switch (score.kind) {
    case 'mean':
      return 'the mean amplitude'
    case 'area':
      return `the ${side}area`
    case 'peak-amplitude':
      return `the ${side}peak amplitude`
    case 'peak-latency':
      return `the ${side}peak latency`
    case 'area-latency':
      return `the ${percent} latency of the ${side}area`
    case 'onset-latency':
      return `the onset latency at ${percent} of the ${side}peak`
    case 'moment':
      return 'the value'
  }
}

/** "−200 to 0 ms", or "at 120 ms" for a single moment. */
export function windowWords(fromMs: number, toMs: number): string {
  const ms = (value: number) => (Number.isInteger(value) ? fixed(value, 0) : exact(Number(value.toFixed(3))))
  return fromMs === toMs ? `${ms(fromMs)} ms` : `${ms(fromMs)} to ${ms(toMs)} ms`
}

/** "alone", or "every 1000 to 1400 ms". */
export function eventsWords(events: 'alone' | { fromMs: number; toMs: number }): string {
  if (events === 'alone') return 'alone'
  return `every ${windowWords(events.fromMs, events.toMs)}`
}

const article = (word: string) => (/^[aeiou]/i.test(word) ? 'an' : 'a')

/** A built waveform by its components: "a late positivity"; those under a twentieth of the largest are not worth a word. */
export function componentsWords(components: readonly { name: string; amplitudeUv: number }[]): string {
  const largest = Math.max(0, ...components.map((component) => Math.abs(component.amplitudeUv)))
  const main = components.filter((component) => Math.abs(component.amplitudeUv) > largest / 20)
  if (main.length === 0) return 'a flat line'
  if (main.length > 2) return `${COUNT[main.length] ?? exact(main.length)} components`
  return main.map(({ name }) => (/^\d/.test(name) ? `the ${name}` : `${article(name)} ${name}`)).join(' and ')
}

const COUNT = ['no', 'one', 'two', 'three', 'four', 'five', 'six', 'seven', 'eight', 'nine', 'ten']

/**
 * The protocol line: what was done to the data, in one paragraph, as text and tokens in reading order.
 *
 * Amplifier stages come first, then what else the loaded data had already passed, then the stages applied here. A stage
 * that is switched off stays as a token, marked `off`, and is no part of the copied text.
 */
export function protocolLine(protocol: Protocol): Piece[] {
  const indexed = protocol.chain.map((spec, index) => ({ spec, index }))
  const on = indexed.filter(({ spec }) => spec.enabled !== false)
  const off = indexed.filter(({ spec }) => spec.enabled === false)
  const past = on.filter(({ spec }) => spec.inData)
  const amplifiers = on.filter(({ spec }) => !spec.inData && spec.design === 'amplifier')
  const offline = on.filter(({ spec }) => !spec.inData && spec.design !== 'amplifier')

  const built = protocol.source === 'built'
  const pieces: Piece[] = [
    text('The '),
    token('source', built ? 'built waveform' : 'recorded waveform', 'source of the waveform'),
    text(past.length + amplifiers.length > 0 ? ', ' : ' is '),
    token('waveform', protocol.waveform, built ? 'components of the waveform' : 'condition and channel'),
    text(' sampled at '),
    token('rate', `${exact(protocol.samplingRateHz)} Hz`, 'sampling rate'),
  ]
  if (protocol.events)
    pieces.push(
      text(', its events '),
      token('events', eventsWords(protocol.events), 'how the events follow one another'),
    )
  if (past.length > 0) pieces.push(text(', had passed '), ...joined(past))
  if (amplifiers.length > 0)
    pieces.push(text(past.length > 0 ? '. Here it passed ' : ', passed '), ...joined(amplifiers))
  pieces.push(text(offlineLead(past, offline.length > 0)), ...joined(offline))
  for (const { spec, index } of off)
    pieces.push({
      kind: 'token',
      id: `stage:${index}:design`,
      text: stageName(spec),
      label: `stage ${index + 1}: ${stageName(spec)}, switched off`,
      off: true,
    })
  pieces.push({ kind: 'add', id: 'add', text: '+ add a stage', label: 'add a stage to the chain' }, text('. '))

  const applied = amplifiers.length + offline.length > 0
  if (applied)
    pieces.push(
      text('The chain ran on '),
      token(
        'extent',
        protocol.extent === 'continuous' ? 'the continuous recording' : 'the cut-out epochs',
        'what the chain is applied to',
      ),
      text('. '),
    )
  pieces.push(
    text('Over '),
    token('trials', protocol.trials === 1 ? '1 trial' : `${exact(protocol.trials)} trials`, 'number of trials'),
    text(', '),
  )
  if (protocol.baseline === 'none')
    pieces.push(text('with '), token('baseline', 'no baseline correction', 'baseline'), text(', the score is '))
  else
    pieces.push(
      text('with a baseline of '),
      token('baseline', windowWords(protocol.baseline.fromMs, protocol.baseline.toMs), 'baseline'),
      text(', the score is '),
    )
  const { score } = protocol
  pieces.push(
    token('score', scoreWords(score), 'score'),
    text(score.kind === 'moment' ? ' at ' : ' from '),
    token('score-window', windowWords(score.fromMs, score.toMs), 'score window'),
    text('.'),
  )
  return pieces
}

/** Leads over to the offline stages of this chain, which must not be taken for offline stages that the data had passed before. */
function offlineLead(past: readonly { spec: StageSpec }[], filtered: boolean): string {
  if (past.every(({ spec }) => spec.design === 'amplifier'))
    return filtered ? '. Offline it passed ' : '. Offline it passed no filter'
  return filtered ? '. Here, offline, it passed ' : '. Here, offline, it passed no further filter'
}

function joined(entries: readonly { spec: StageSpec; index: number }[]): Piece[] {
  return entries.flatMap(({ spec, index }, place) => {
    const lead = place === 0 ? [] : [text(place === entries.length - 1 ? ', and ' : ', ')]
    return [...lead, ...stagePieces(spec, index)]
  })
}

/** The paragraph as it is copied: plain text without the page's own additions. */
export function protocolText(pieces: readonly Piece[]): string {
  return pieces
    .filter((piece) => piece.kind === 'text' || (piece.kind === 'token' && !piece.off))
    .map((piece) => piece.text)
    .join('')
}
