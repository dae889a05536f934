import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { appliedStages } from '../../src/filter/chain.ts'
import {
  designChain,
  designCutoffsHz,
  designStage,
  epochPaddingSamples,
  type Stage,
  type StageSpec,
  stageCutoffPoints,
} from '../../src/filter/index.ts'
import { gainAt } from '../../src/filter/stage-response.ts'
import { methodsParagraph, parseNumber, STATEMENT_FIELDS, type WriteUpFacts } from '../../src/words/index.ts'
import { gainOf } from '../filter/measure.ts'
import { stages } from '../filter/random-specs.ts'
import { writeUps } from './random-write-ups.ts'

const FACTS: WriteUpFacts = {
  source: 'recorded',
  waveform: 'PO7 of average.csv',
  samplingRateHz: 250,
  chain: [],
  extent: 'epochs',
  baseline: { fromMs: -200, toMs: 0 },
  trials: 40,
  score: { kind: 'mean', fromMs: 300, toMs: 600, polarity: 'positive' },
}
const highPass: StageSpec = {
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [0.5],
  meaning: 'half-amplitude',
  direction: 'both',
}
const amplifier: StageSpec = { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.1 }
const notch: StageSpec = { design: 'notch', frequencyHz: 50, bandwidthHz: 2, harmonics: 1, direction: 'both' }
const sinc: StageSpec = {
  design: 'windowed-sinc',
  pass: 'low',
  cutoffsHz: [30],
  meaning: 'half-amplitude',
  transitionHz: 10,
  window: { name: 'hamming' },
  delay: 'compensated',
}
const average: StageSpec = { design: 'moving-average', durationMs: 40, delay: 'compensated' }

const NUMBER = '−?\\d+(?:\\.\\d+)?'
const LIST = `${NUMBER}(?:(?:, | and )${NUMBER})*`

/** A text that is read phrase by phrase; what has been read is struck out, so that a number that nobody read stays. */
class Reader {
  readonly whole: string
  rest: string
  constructor(whole: string) {
    this.whole = whole
    this.rest = whole
  }
  /** The numbers where the phrase has a #, lists of them included; null where the phrase is not there. */
  take(phrase: string): number[] | null {
    const pattern = phrase
      .replace(/[.()/]/g, '\\$&')
      .replaceAll('~', 's?')
      .replaceAll('#', `(${LIST})`)
    const found = new RegExp(pattern).exec(this.rest)
    if (!found) return null
    this.rest = this.rest.slice(0, found.index) + this.rest.slice(found.index + found[0].length)
    return found.slice(1).flatMap((list) => list.split(/, | and /).map(parseNumber))
  }
  /** As `take`, for a phrase that must be there. */
  read(phrase: string): number[] {
    const numbers = this.take(phrase)
    if (numbers === null) throw new Error(`“${phrase}” is not in: ${this.rest}\n\nof: ${this.whole}`)
    return numbers
  }
  expectReadThrough(): void {
    expect(this.rest, this.whole).not.toMatch(/\d/)
  }
}

/** What five significant digits can hide. */
const ROUNDING = 5.1e-5

function expectNear(read: readonly number[], computed: readonly number[], what: string, relative = ROUNDING): void {
  expect(read.length, `${what}: ${read}`).toBe(computed.length)
  computed.forEach((value, i) =>
    expect(Math.abs(read[i] - value), `${what}: ${read[i]}, ${value}`).toBeLessThanOrEqual(relative * Math.abs(value)),
  )
}

/** The gain crosses the level within the rounding of the frequency that was read. */
function expectCrossings(gain: (hz: number) => number, hz: readonly number[], level: number, what: string): void {
  for (const f of hz) {
    const below = gain(f * (1 - ROUNDING)) - level
    const above = gain(f * (1 + ROUNDING)) - level
    expect(below * above, `${what}: gain ${level} at ${f} Hz`).toBeLessThanOrEqual(0)
  }
}

function readCutoffs(reader: Reader, name: 'half-amplitude' | 'half-power', gain: '1/2' | '1/√2'): number[] {
  if (reader.take(`no ${name} cutoff (gain ${gain})`)) return []
  return reader.read(`${name} cutoff~ of # Hz (gain ${gain})`)
}

/** Reads everything that stands about one stage, and leaves no number. */
function expectStage(text: string, stage: Stage, padded: boolean): void {
  const { spec, samplingRateHz, passes, taps } = stage
  const reader = new Reader(text)
  const points = stageCutoffPoints(stage)
  const lowestOnly = spec.design === 'notch' && spec.harmonics >= 4
  const listed = (hz: readonly number[]) => (lowestOnly ? hz.slice(0, 2) : hz).length
  const halfAmplitude = readCutoffs(reader, 'half-amplitude', '1/2')
  const halfPower = readCutoffs(reader, 'half-power', '1/√2')
  expect([halfAmplitude.length, halfPower.length], text).toEqual([
    listed(points.halfAmplitudeHz),
    listed(points.halfPowerHz),
  ])
  expectCrossings((hz) => gainOf(stage, hz), halfAmplitude, 0.5, text)
  expectCrossings((hz) => gainOf(stage, hz), halfPower, Math.SQRT1_2, text)
  const pass =
    'pass' in spec ? { low: 'low-pass', high: 'high-pass', band: 'band-pass', stop: 'band-stop' }[spec.pass] : ''
  expect(text).toContain(pass)
  expect(text.includes('after both passes'), text).toBe(passes === 2)
  expect(text.includes('forward and backward'), text).toBe(passes === 2)
  const ms = (samples: number) => (1000 * samples) / samplingRateHz

  switch (spec.design) {
    case 'butterworth': {
      const edge = spec.cutoffsHz.length === 2 ? ' per edge' : ''
      const orders =
        passes === 2
          ? reader.read(
              `filter of order #${edge && ' per edge and'}${edge ? '' : ' per'} pass (order #${edge} as applied)`,
            )
          : reader.read(`filter of order #${edge} (one pass)`)
      expect(orders, text).toEqual(passes === 2 ? [spec.order, spec.order * 2] : [spec.order])
      expectNear(reader.read('a roll-off approaching # dB per octave'), [6.0206 * spec.order * passes], text, 6e-4)
      expectNear(
        reader.read('design cutoff~ of # Hz (half power of a single pass)'),
        designCutoffsHz(spec, samplingRateHz),
        text,
      )
      // as designed: half power of the sections run once
      const single = { ...stage, passes: 1 as const }
      expectCrossings((hz) => gainOf(single, hz), designCutoffsHz(spec, samplingRateHz), Math.SQRT1_2, text)
      break
    }
    case 'amplifier':
      expect(reader.read('filter of order # (one pass), causal'), text).toEqual([spec.order])
      expectNear(reader.read('a roll-off approaching # dB per octave'), [6.0206 * spec.order], text, 6e-4)
      if (spec.pass === 'high' && spec.order === 1)
        expectNear(reader.read('a time constant of # s'), [1 / (2 * Math.PI * spec.cutoffHz)], text)
      // one that has more digits than anyone says follows from a time constant, and is rounded
      expectNear(
        halfPower,
        [spec.cutoffHz],
        text,
        Number(spec.cutoffHz.toPrecision(6)) === spec.cutoffHz ? 1e-11 : ROUNDING,
      )
      break
    case 'notch': {
      const count = spec.harmonics + 1
      const centres = Array.from({ length: count }, (_, k) => spec.frequencyHz * (k + 1))
      if (count === 1) expectNear(reader.read('a notch filter at # Hz without harmonics'), centres, text, 1e-11)
      else if (!lowestOnly) {
        expectNear(reader.read('a set of notch filters at # Hz'), centres, text, 1e-11)
        expectNear(reader.read('(# Hz and # harmonic~)'), [spec.frequencyHz, spec.harmonics], text, 1e-11)
      } else
        expectNear(
          reader.read('a set of notch filters at # Hz and its # harmonic~ up to # Hz'),
          [spec.frequencyHz, spec.harmonics, centres[count - 1]],
          text,
          1e-11,
        )
      expect(stage.sections?.length, text).toBe(6 * count)
      for (const centre of centres) expect(gainOf(stage, centre), text).toBeLessThan(1e-9)
      expect(
        reader.read(passes === 2 ? 'of order # per pass (order # as applied)' : 'of order # (one pass)'),
        text,
      ).toEqual(passes === 2 ? [2, 4] : [2])
      const per = count === 1 ? '' : ' per notch'
      expectNear(reader.read(`a half-power bandwidth${per} of # Hz as applied`), [spec.bandwidthHz], text, 1e-11)
      if (passes === 2) expectNear(reader.read('(# Hz in a single pass)'), [singlePassWidth(stage)], text)
      break
    }
    case 'windowed-sinc': {
      const count = (taps as Float64Array).length
      expect(reader.read('filter of # taps (order #, one pass)'), text).toEqual([count, count - 1])
      expectNear(reader.read('a transition width of # Hz'), [spec.transitionHz], text, 1e-11)
      expectNear(
        reader.read('design cutoff~ of # Hz (centre of the transition)'),
        designCutoffsHz(spec, samplingRateHz),
        text,
      )
      if (spec.window.name === 'kaiser')
        expectNear(
          reader.read('a Kaiser window (attenuation # dB, β = #)'),
          [spec.window.attenuationDb, kaiserShape(spec.window.attenuationDb)],
          text,
        )
      else expect(text.toLowerCase()).toContain(`a ${spec.window.name} window`)
      break
    }
    case 'moving-average': {
      const samples = Math.round((spec.durationMs * samplingRateHz) / 1000)
      const count = (taps as Float64Array).length
      expectNear(reader.read('a moving average over # samples (# ms)'), [samples, ms(samples)], text)
      expect(reader.read('of # taps (order #, one pass'), text).toEqual([count, count - 1])
      expect(text.includes('the first and the last tap halved'), text).toBe(count > samples)
      expectNear(reader.read('nulls at the multiples of # Hz'), [samplingRateHz / samples], text)
    }
  }
  if (taps !== null) {
    if (stage.leadSamples > 0) {
      const delay = reader.read('symmetric, its delay of # sample~ (# ms) compensated (zero phase)')
      expectNear(delay, [stage.leadSamples, ms(stage.leadSamples)], text)
    } else if (!reader.take('brought to minimum phase by the homomorphic method (causal, its delay left in)')) {
      const delay = reader.read('symmetric, its delay of # sample~ (# ms) left in (causal, linear phase)')
      expectNear(delay, [(taps.length - 1) / 2, ms((taps.length - 1) / 2)], text)
    }
  }
  const padding = epochPaddingSamples(stage)
  const both = passes === 2 || stage.leadSamples > 0
  if (padded && padding > 0)
    expectNear(
      reader.read(`padded by odd reflection of # sample~ (# ms) at ${both ? 'both ends' : 'the start'} of`),
      [padding, ms(padding)],
      text,
    )
  reader.expectReadThrough()
}

/** Width at half power of one pass, from the analogue row: the middle coefficient over 1 + the last. */
function singlePassWidth({ analogue, samplingRateHz }: Stage): number {
  const row = analogue as Float64Array
  return (Math.atan(row[4] / (1 + row[5])) * samplingRateHz) / Math.PI
}

/** Kaiser's formula as Oppenheim & Schafer print it (ch. 7). */
function kaiserShape(db: number): number {
  if (db > 50) return 0.1102 * (db - 8.7)
  return db < 21 ? 0 : 0.5842 * (db - 21) ** 0.4 + 0.07886 * (db - 21)
}

const sentencesOf = (text: string) => text.split(/(?<=\.) (?=[A-Z])/)

const NAMES = STATEMENT_FIELDS.map(({ name }) => name)
const isStatement = (sentence: string) => NAMES.some((name) => sentence.startsWith(`${name}: `))

const HAS_FILTERS = / filters?(, one after another in this order)?: /

/** The phrases of the stages in the order of the text. */
function stageTexts(text: string): string[] {
  return sentencesOf(text)
    .filter((sentence) => !isStatement(sentence) && HAS_FILTERS.test(sentence))
    .flatMap((sentence) => {
      const list = sentence.slice(sentence.indexOf(': ') + 2)
      return list.startsWith('(1) ') ? list.slice(4).split(/; (?:and )?\(\d+\) /) : [list]
    })
}

const isAmplifier = ({ spec }: Stage) => spec.design === 'amplifier'
const isInData = ({ spec }: Stage) => spec.inData === true

/** In the data, then the amplifier's, then the others. */
const inOrder = (stages: readonly Stage[]) => [
  ...stages.filter(isInData),
  ...stages.filter((stage) => !isInData(stage) && isAmplifier(stage)),
  ...stages.filter((stage) => !isInData(stage) && !isAmplifier(stage)),
]

/** Every number outside the lists of stages. */
function expectFacts(text: string, facts: WriteUpFacts, chain: ReturnType<typeof designChain>): void {
  const others = sentencesOf(text).filter((sentence) => !isStatement(sentence) && !HAS_FILTERS.test(sentence))
  const reader = new Reader(others.join(' ').replace(facts.waveform, ''))
  expect(reader.read('sampled at # Hz'), text).toEqual([facts.samplingRateHz])
  const { epoch, baseline, score, trials, events } = facts
  if (epoch)
    expect(reader.read('in an epoch from # to # ms (# samples)'), text).toEqual([
      epoch.fromMs,
      epoch.toMs,
      epoch.samples,
    ])
  if (facts.source === 'built' && events && events !== 'alone')
    expect(reader.read(events.fromMs === events.toMs ? 'another every # ms' : 'another every # to # ms'), text).toEqual(
      events.fromMs === events.toMs ? [events.fromMs] : [events.fromMs, events.toMs],
    )
  if (trials > 1) expect(reader.read('an average of # trials'), text).toEqual([trials])
  if (baseline !== 'none')
    expect(reader.read('over the baseline from # to # ms'), text).toEqual([baseline.fromMs, baseline.toMs])
  expect(reader.read(score.kind === 'moment' ? 'value at # ms' : `from # to # ms (`), text).toEqual(
    score.kind === 'moment' ? [score.fromMs] : [score.fromMs, score.toMs],
  )
  // science of the scores: ±10 ms around a peak, three samples of a parabola (in words), the fraction twice
  if (score.kind.startsWith('peak') || score.kind === 'onset-latency')
    expect(reader.read('within ±# ms'), text).toEqual([10])
  if (score.fraction !== undefined)
    for (let i = 0; i < 2; i++) expectNear(reader.read('# %'), [100 * score.fraction], text, 1e-11)
  if (facts.softwareVersion) {
    expect(text).toContain(`with Sidelobe ${facts.softwareVersion}`)
    reader.rest = reader.rest.replace(facts.softwareVersion, '')
  }
  const applied = appliedStages(chain)
  if (applied.length > 1) expectTogether(reader, applied, text)
  reader.expectReadThrough()
}

function expectTogether(reader: Reader, applied: readonly Stage[], text: string): void {
  for (const [name, level] of [
    ['half-amplitude', 0.5],
    ['half-power', Math.SQRT1_2],
  ] as const) {
    if (reader.take(`no ${name} point`)) continue
    const many = reader.take(`# ${name} points, the lowest at # Hz and the highest at # Hz`)
    const hz = many ? many.slice(1) : reader.read(`${name} point~ at # Hz`)
    if (many) expect(many[0], text).toBeGreaterThan(8)
    expect(hz.length, text).toBeLessThanOrEqual(8)
    expectCrossings((f) => gainAt(applied, f), hz, level, text)
  }
}

describe('the methods paragraph', () => {
  test('gives every number of any chain as it was designed, and no other number', () => {
    fc.assert(
      fc.property(writeUps, (facts) => {
        const chain = designChain(facts.chain, facts.samplingRateHz)
        const stages = inOrder(chain.stages)
        const text = methodsParagraph(facts)
        const texts = stageTexts(text)
        expect(texts.length).toBe(stages.length)
        const padded = facts.extent === 'epochs' || facts.source === 'recorded'
        stages.forEach((stage, i) => expectStage(texts[i], stage, padded && !isInData(stage) && !isAmplifier(stage)))
        expectFacts(text, facts, chain)
      }),
      { numRuns: 300 },
    )
  })

  test('gives the numbers of a notch with many harmonics and of a minimum-phase kernel', () => {
    const stages: StageSpec[] = [
      { ...notch, frequencyHz: 10, bandwidthHz: 1, harmonics: 9 },
      { ...sinc, delay: 'minimum-phase', window: { name: 'kaiser', attenuationDb: 40 } },
    ]
    const chain = designChain(stages, 250)
    const text = methodsParagraph({ ...FACTS, chain: stages })
    stageTexts(text).forEach((phrase, i) => expectStage(phrase, chain.stages[i], true))
    expect(stageTexts(text).length).toBe(2)
    expect(text).toContain('at 10 Hz and its 9 harmonics up to 100 Hz')
    expect(text).toContain('in the lowest notch')
    expectFacts(text, FACTS, chain)
    // two crossings for each notch in reach of the low-pass are no list for a paper
    const all = methodsParagraph({ ...FACTS, chain: [stages[0], highPass] })
    expect(all).toMatch(/had 2[01] half-amplitude points, the lowest at [\d.]+ Hz and the highest at [\d.]+ Hz and /)
  })

  test('reads as sentences: no missing word, one capital and one stop each, brackets closed, one of a thing in the singular', () => {
    fc.assert(
      fc.property(writeUps, (facts) => {
        const text = methodsParagraph(facts)
        expect(text).toMatch(/^The waveform was /)
        expect(text).not.toMatch(
          / {2}|\( | \)|, ,|,\.|;,|: \.|\.\.|\b(undefined|NaN|null|Infinity|object)\b|–|e-\d|e\+\d|\s$/,
        )
        expect(text).not.toMatch(/(?<![\d.])1 (samples|taps|trials|harmonics)\b/)
        expect(text).not.toMatch(/(?<![\d.])(0|[2-9]|\d\d+) (sample|tap|trial|harmonic)\b/)
        expect(text).not.toMatch(/\ba [aeio]\w|\ban [^aeio\W]\w/)
        expect(text).not.toMatch(/\b(\w+) \1\b/)
        // brackets are closed, and none stands inside another
        expect(text.replace(/\([^()]*\)/g, '')).not.toMatch(/[()]/)
        for (const sentence of sentencesOf(text)) {
          expect(sentence).toMatch(/^[A-Z].*[^.]\.$/)
          expect(sentence.slice(0, -1)).not.toMatch(/\.(?!\d|csv)/)
        }
      }),
      { numRuns: 300 },
    )
  })

  test('stands in the past tense throughout', () => {
    fc.assert(
      fc.property(writeUps, (facts) => {
        const own = sentencesOf(methodsParagraph(facts)).filter((sentence) => !isStatement(sentence))
        for (const sentence of own) {
          expect(sentence).toMatch(/\b(was|were|had|stood|followed|passed)\b/)
          expect(sentence).not.toMatch(
            /\b(is|are|be|has|have|does|do|can|will|may|must|runs|lies|exceeds|begins|ends at)\b/,
          )
        }
      }),
      { numRuns: 150 },
    )
  })

  test('is the same for stages that are switched off as without them', () => {
    fc.assert(
      fc.property(writeUps, (facts) => {
        const chain = facts.chain.filter(({ enabled }) => enabled !== false)
        expect(methodsParagraph({ ...facts, chain })).toBe(methodsParagraph(facts))
      }),
      { numRuns: 50 },
    )
  })

  test('of recorded epochs without a filter says what was not done and what is not known', () => {
    expect(methodsParagraph({ ...FACTS, baseline: 'none', trials: 1 })).toBe(
      'The waveform was recorded: PO7 of average.csv, sampled at 250 Hz. It was a single trial. The filters of the amplifier were ' +
        'not stated. Whether the waveform had passed any filter besides the amplifier’s before this analysis was not stated. No ' +
        'filter was applied offline. No baseline correction was made. The score was the mean amplitude from 300 to 600 ms (the mean ' +
        'of all samples whose time lay in this closed interval). The analysis was made with Sidelobe.',
    )
  })

  test('of a difference says that each of its two conditions has so many trials', () => {
    const of = (facts: Partial<WriteUpFacts>) => methodsParagraph({ ...FACTS, ofTwoConditions: true, ...facts })
    expect(of({})).toContain(`It was the difference of two averages of ${FACTS.trials} trials each.`)
    expect(of({ trials: 1 })).toContain('It was the difference of two single trials.')
    expect(of({ source: 'built' })).toContain(
      `Its precision was computed for the difference of two averages of ${FACTS.trials} trials each.`,
    )
  })

  test('of a recording that is said to have passed no other filter calls nothing unstated that was said', () => {
    const about = (facts: Partial<WriteUpFacts>) => methodsParagraph({ ...FACTS, noOtherFilters: true, ...facts })
    expect(about({})).toContain(
      'The waveform had passed no filter before this analysis. No filter was applied offline.',
    )
    expect(about({ chain: [{ ...amplifier, inData: true }] })).toContain(
      'The waveform had passed no other filter before this analysis.',
    )
    expect(about({ statements: { amplifier: 'DC to 131 Hz' } })).toContain(
      'The waveform had passed no filter besides the amplifier’s before this analysis.',
    )
    expect(about({})).not.toContain('not stated')
    // words of the user's own go before
    expect(about({ statements: { 'earlier-filters': 'a 30 Hz low-pass' } })).not.toContain('had passed no')
  })

  // 0.62325 = 0.5/(√2 − 1)^(1/4): half-amplitude of order 2 both ways is half power of one pass (B18, B19, B22: 0.8022)
  test('of one filter both ways leaves one reading', () => {
    expect(methodsParagraph({ ...FACTS, chain: [{ ...amplifier, inData: true }, highPass] })).toContain(
      'Before this analysis the waveform had passed one filter: an amplifier high-pass filter of order 1 (one pass), causal, with a ' +
        'time constant of 1.5915 s, a half-amplitude cutoff of 0.057735 Hz (gain 1/2) and a half-power cutoff of 0.1 Hz (gain 1/√2) ' +
        'as applied, and a roll-off approaching 6.021 dB per octave as applied. Whether the waveform had passed any filter besides ' +
        'the amplifier’s before this analysis was not stated. Offline the cut-out epoch passed one filter: a Butterworth high-pass ' +
        'filter of order 2 per pass (order 4 as applied), realised as second-order sections and run forward and backward (zero ' +
        'phase, no delay), padded by odd reflection of 9 samples (36 ms) at both ends of the epoch and started in each pass in the ' +
        'steady state of its first sample, with a half-amplitude cutoff of 0.5 Hz (gain 1/2) and a half-power cutoff of 0.62325 Hz ' +
        '(gain 1/√2) after both passes, a design cutoff of 0.5 Hz (half power of a single pass), and a roll-off approaching 24.08 dB ' +
        'per octave as applied. After filtering, the mean of the waveform over the baseline from −200 to 0 ms was subtracted.',
    )
  })

  test('numbers several filters in their order, and says what they do together', () => {
    const lowPass: StageSpec = { ...highPass, pass: 'low', cutoffsHz: [30] }
    const text = methodsParagraph({ ...FACTS, chain: [highPass, lowPass] })
    expect(text).toMatch(
      /passed two filters, one after another in this order: \(1\) a Butterworth high-pass .*; and \(2\) a Butterworth low-pass /,
    )
    expect(text).toContain(
      'What a filter had padded was trimmed off before the next filter ran. Together the filters applied',
    )
  })

  test('speaks of trimming only where something had been padded', () => {
    const forward: StageSpec = { ...highPass, direction: 'forward' }
    expect(methodsParagraph({ ...FACTS, chain: [forward, { ...forward, pass: 'low', cutoffsHz: [30] }] })).not.toMatch(
      /trimmed|odd reflection/,
    )
    expect(methodsParagraph({ ...FACTS, chain: [highPass] })).not.toContain('trimmed')
  })

  test('tells a built waveform on the whole axis, a built epoch and a recording’s stretches apart', () => {
    const built: WriteUpFacts = {
      ...FACTS,
      source: 'built',
      waveform: 'a late positivity',
      chain: [amplifier, highPass],
    }
    const alone = methodsParagraph({ ...built, extent: 'continuous' })
    expect(alone).toContain(
      'The amplifier was modelled on the continuous waveform, before any epoch was cut, by one filter: an',
    )
    expect(alone).toContain(
      'Offline the continuous waveform, before the epoch was cut, then passed one filter: a Butterworth',
    )
    expect(alone).toContain('no padding was needed')
    expect(alone).not.toContain('odd reflection')
    expect(alone).not.toContain('not stated')
    expect(methodsParagraph(built)).toContain('Offline the cut-out epoch then passed one filter')
    expect(methodsParagraph({ ...FACTS, chain: [highPass], extent: 'continuous' })).toContain(
      'Offline the continuous recording, before epochs were cut, passed one filter',
    )
    expect(methodsParagraph({ ...FACTS, chain: [highPass], extent: 'continuous' })).toContain(
      'odd reflection of 9 samples (36 ms) at both ends of each uninterrupted stretch',
    )
    expect(methodsParagraph({ ...built, events: { fromMs: 1000, toMs: 1400 } })).toContain(
      'Its events followed one another every 1000 to 1400 ms.',
    )
  })

  test('does not claim more of an amplifier modelled on recorded data than was there', () => {
    const chain = [amplifier]
    expect(methodsParagraph({ ...FACTS, chain })).toContain(
      'The amplifier was modelled on the epoch, as if zeros stood before and after it, by one filter: an',
    )
    expect(methodsParagraph({ ...FACTS, chain, extent: 'continuous' })).toContain(
      'The amplifier was modelled on each uninterrupted stretch of the recording, as if zeros stood before and after it, by',
    )
  })

  test('says of a window of one moment that the score stood at it', () => {
    const score = { ...FACTS.score, fromMs: 300, toMs: 300 }
    expect(methodsParagraph({ ...FACTS, score })).toContain('The score was the mean amplitude at 300 ms (')
    expect(methodsParagraph({ ...FACTS, baseline: { fromMs: 0, toMs: 0 } })).toContain('over the baseline at 0 ms was')
  })

  test('says how each score is computed, so that another program can give the same number', () => {
    const of = (kind: WriteUpFacts['score']['kind'], polarity: 'positive' | 'negative', fraction?: number) => {
      const toMs = kind === 'moment' ? 200 : 500
      const score = { kind, fromMs: 200, toMs, polarity, ...(fraction === undefined ? {} : { fraction }) }
      return /The score was (.*?\))\. The/.exec(methodsParagraph({ ...FACTS, score }))?.[1]
    }
    const refined = 'within ±10 ms, inside or outside the window, refined by a parabola through three samples'
    expect(of('peak-amplitude', 'positive')).toBe(
      `the positive peak amplitude from 200 to 500 ms (the amplitude of the largest of the samples in this window that exceeded every other sample ${refined})`,
    )
    expect(of('peak-latency', 'negative')).toBe(
      `the negative peak latency from 200 to 500 ms (the latency of the lowest of the samples in this window that lay below every other sample ${refined})`,
    )
    expect(of('area-latency', 'positive', 0.3)).toBe(
      'the 30 % latency of the positive area from 200 to 500 ms (the moment at which 30 % of the area over the positive values, all others set to zero, was reached)',
    )
    expect(of('onset-latency', 'negative')).toBe(
      'the onset latency at 50 % of the negative peak from 200 to 500 ms (going back from the peak, the first crossing of 50 % of its amplitude, ' +
        `interpolated linearly; the peak was the lowest of the samples in this window that lay below every other sample ${refined})`,
    )
    expect(of('moment', 'positive')).toBe('the value at 200 ms (interpolated linearly between samples)')
  })

  test('says which side of an area counted', () => {
    const score = { kind: 'area', fromMs: 200, toMs: 500, polarity: 'negative' } as const
    expect(methodsParagraph({ ...FACTS, score })).toContain(
      'The score was the negative area from 200 to 500 ms (by the trapezoidal rule, over the negative values, all others set to zero).',
    )
  })

  test('calls a single both-ways notch by its order per pass and as applied', () => {
    expect(methodsParagraph({ ...FACTS, chain: [{ ...notch, harmonics: 0 }] })).toContain(
      'passed one filter: a notch filter at 50 Hz without harmonics, of order 2 per pass (order 4 as applied), realised',
    )
    expect(methodsParagraph({ ...FACTS, chain: [notch] })).toContain(
      'passed one filter: a set of notch filters at 50 and 100 Hz (50 Hz and 1 harmonic), each of order 2 per pass (order 4 as applied), realised',
    )
  })

  test('states in the user’s words what the workspace cannot hold, and then no longer calls it unknown', () => {
    const statements = { amplifier: '0.1 to 100 Hz', 'earlier-filters': 'none', resampling: ' from 1000 to\n250 Hz. ' }
    const text = methodsParagraph({ ...FACTS, statements })
    expect(text).not.toContain('not stated')
    expect(text).toContain(
      'Amplifier and its filters: 0.1 to 100 Hz. Filters before this analysis: none. Resampling and its anti-alias filter: from 1000 to 250 Hz. The analysis',
    )
  })

  test('ends a statement once, however the user ended it', () => {
    const said = (reference: string) => methodsParagraph({ ...FACTS, statements: { reference } })
    expect(said('nose')).toContain('Reference: nose. The')
    expect(said('nose.')).toContain('Reference: nose. The')
    expect(said('as in “the nose.”')).toContain('Reference: as in “the nose.” The')
    expect(said('nose (tip)')).toContain('Reference: nose (tip). The')
    expect(said('nose or mastoids?')).toContain('Reference: nose or mastoids? The')
    expect(said('  ')).not.toContain('Reference')
  })

  test('names the stage of a chain that cannot be designed', () => {
    expect(() => methodsParagraph({ ...FACTS, chain: [{ ...highPass, cutoffsHz: [200] }] })).toThrow(
      /^stage 1: cutoffsHz\[0\] must lie between 0 and 125/,
    )
  })
})

/** Ways in which one thing about a stage can be another; each gives another filter. */
function changesOf(spec: StageSpec): StageSpec[] {
  const more = (value: number) => value * 1.01
  switch (spec.design) {
    case 'butterworth':
      return [
        { ...spec, order: spec.order + 1 },
        { ...spec, direction: spec.direction === 'both' ? 'forward' : 'both' },
        { ...spec, cutoffsHz: spec.cutoffsHz.map(more) },
        { ...spec, pass: { low: 'high', high: 'low', band: 'stop', stop: 'band' }[spec.pass] as 'low' },
        { ...spec, meaning: spec.meaning === 'half-power' ? 'half-amplitude' : 'half-power' },
      ]
    case 'windowed-sinc':
      return [
        { ...spec, transitionHz: more(spec.transitionHz) },
        { ...spec, cutoffsHz: spec.cutoffsHz.map(more) },
        { ...spec, delay: spec.delay === 'compensated' ? 'causal' : 'compensated' },
        { ...spec, pass: { low: 'high', high: 'low', band: 'stop', stop: 'band' }[spec.pass] as 'low' },
        { ...spec, window: { name: spec.window.name === 'hann' ? 'hamming' : 'hann' } },
        ...(spec.window.name === 'kaiser'
          ? [{ ...spec, window: { ...spec.window, attenuationDb: spec.window.attenuationDb + 1 } }]
          : []),
        { ...spec, meaning: spec.meaning === 'half-power' ? 'half-amplitude' : 'half-power' },
      ]
    case 'amplifier':
      return [
        { ...spec, order: spec.order + 1 },
        { ...spec, cutoffHz: more(spec.cutoffHz) },
        { ...spec, pass: spec.pass === 'high' ? 'low' : 'high' },
      ]
    case 'notch':
      return [
        { ...spec, frequencyHz: spec.frequencyHz / 1.01 },
        { ...spec, bandwidthHz: more(spec.bandwidthHz) },
        { ...spec, harmonics: spec.harmonics === 0 ? 1 : spec.harmonics - 1 },
        { ...spec, direction: spec.direction === 'both' ? 'forward' : 'both' },
      ]
    case 'moving-average':
      return [
        { ...spec, durationMs: 2 * spec.durationMs },
        { ...spec, delay: spec.delay === 'compensated' ? 'causal' : 'compensated' },
      ]
  }
}

/** Whether a specification can be designed and gives another filter than the first: half power of one pass is the design cutoff. */
function isOther(first: StageSpec, second: StageSpec, samplingRateHz: number): boolean {
  try {
    const [one, other] = [first, second].map((spec) => designStage(spec, samplingRateHz))
    const same = (a: Float64Array | null, b: Float64Array | null) =>
      a?.length === b?.length && (a ?? []).every((value, i) => Math.abs(value - (b as Float64Array)[i]) <= 1e-12)
    return !(
      same(one.sections, other.sections) &&
      same(one.taps, other.taps) &&
      one.passes === other.passes &&
      one.leadSamples === other.leadSamples
    )
  } catch {
    return false
  }
}

describe('one paragraph has one reading', () => {
  test('no two filters that differ in one thing share a paragraph, in the data or applied here', () => {
    fc.assert(
      fc.property(
        stages,
        fc.nat(6),
        fc.boolean(),
        fc.constantFrom('continuous', 'epochs'),
        (made, nth, inData, extent) => {
          const { spec, samplingRateHz } = made
          const changes = changesOf(spec)
          const other = changes[nth % changes.length]
          fc.pre(isOther(spec, other, samplingRateHz))
          const of = (one: StageSpec) =>
            methodsParagraph({ ...FACTS, samplingRateHz, extent, chain: [{ ...one, inData }] })
          expect(of(other)).not.toBe(of(spec))
        },
      ),
      { numRuns: 300 },
    )
  })

  test('a cutoff stated in two ways that mean one filter gives one paragraph', () => {
    // both ways, half-amplitude as applied is half power of one pass (B18); forward, half power is the design cutoff (B5)
    const both = (meaning: 'design' | 'half-amplitude') =>
      methodsParagraph({ ...FACTS, chain: [{ ...highPass, meaning }] })
    expect(both('design')).toBe(both('half-amplitude'))
    const forward = (meaning: 'design' | 'half-power') =>
      methodsParagraph({ ...FACTS, chain: [{ ...highPass, direction: 'forward', meaning }] })
    expect(forward('design')).toBe(forward('half-power'))
  })

  test('no other fact can change without the paragraph', () => {
    const facts: WriteUpFacts = {
      ...FACTS,
      chain: [amplifier, highPass, average],
      epoch: { fromMs: -200, toMs: 996, samples: 300 },
      softwareVersion: '0.3.0',
    }
    const { score } = facts
    const area = { ...score, kind: 'area' as const }
    const half = { ...score, kind: 'area-latency' as const, fraction: 0.5 }
    const built = { ...facts, source: 'built' as const }
    const all: WriteUpFacts[] = [
      facts,
      { ...facts, samplingRateHz: 500 },
      { ...facts, waveform: 'PO8 of average.csv' },
      { ...facts, extent: 'continuous' },
      built,
      { ...built, extent: 'continuous' },
      { ...built, events: { fromMs: 1000, toMs: 1400 } },
      { ...built, events: { fromMs: 1000, toMs: 1500 } },
      { ...facts, trials: 41 },
      { ...facts, trials: 1 },
      { ...facts, baseline: 'none' },
      { ...facts, baseline: { fromMs: -100, toMs: 0 } },
      { ...facts, epoch: { fromMs: -200, toMs: 1000, samples: 301 } },
      { ...facts, softwareVersion: '0.3.1' },
      { ...facts, score: { ...score, toMs: 601 } },
      { ...facts, score: area },
      { ...facts, score: { ...area, polarity: 'negative' } },
      { ...facts, score: { ...score, kind: 'peak-amplitude' } },
      { ...facts, score: { ...score, kind: 'peak-latency' } },
      { ...facts, score: { ...score, kind: 'peak-latency', polarity: 'negative' } },
      { ...facts, score: half },
      { ...facts, score: { ...half, fraction: 0.3 } },
      { ...facts, score: { ...half, kind: 'onset-latency' } },
      { ...facts, score: { ...score, kind: 'moment', toMs: 300 } },
      { ...facts, chain: [amplifier, average, highPass] },
      { ...facts, chain: [{ ...amplifier, inData: true }, highPass, average] },
      { ...facts, chain: [amplifier, { ...highPass, inData: true }, average] },
      { ...facts, chain: [amplifier, highPass] },
      { ...facts, chain: [amplifier, highPass, { ...average, enabled: false }], statements: { reference: 'nose' } },
      { ...facts, statements: { reference: 'nose' } },
      { ...facts, statements: { detrending: 'nose' } },
    ]
    const texts = all.map((one) => methodsParagraph(one))
    expect(new Set(texts).size).toBe(all.length)
  })
})
