import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import {
  designChain,
  designCutoffsHz,
  epochPaddingSamples,
  kaiserBeta,
  movingAverageSamples,
  type Stage,
  type StageSpec,
  stageCutoffPoints,
  tapsForTransition,
} from '../../src/filter/index.ts'
import { methodsParagraph, parseNumber, type WriteUpFacts } from '../../src/words/index.ts'
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

/** The phrases of the stages in the order of the text, in the data first, then amplifiers, then the others. */
function stageTexts(text: string): string[] {
  return text
    .split(/\. (?=[A-Z])/)
    .filter((sentence) => / filters?(, one after another in this order)?: /.test(sentence))
    .flatMap((sentence) => {
      const list = sentence.slice(sentence.indexOf(': ') + 2)
      return list.startsWith('(1) ') ? list.split(/; (?:and )?\(\d+\) /) : [list]
    })
}

const inOrder = (stages: readonly Stage[]) => [
  ...stages.filter(({ spec }) => spec.inData === true),
  ...stages.filter(({ spec }) => spec.inData !== true),
]

/** The numbers of "a half-power cutoff of 1 Hz", "half-power cutoffs of 1, 2 and 3 Hz"; none for "no half-power cutoff". */
function numbersAfter(text: string, phrase: RegExp): number[] {
  const found = new RegExp(`${phrase.source} ((?:[\\d.]+(?:, | and )?)+)`).exec(text)
  return found ? found[1].split(/, | and /).map(parseNumber) : []
}

/** Printed with five significant digits, or as stated. */
function expectSame(read: readonly number[], computed: readonly number[], what: string): void {
  expect(read.length, what).toBe(computed.length)
  computed.forEach((value, i) =>
    expect(Math.abs(read[i] - value), `${what}: ${read[i]}, ${value}`).toBeLessThanOrEqual(5.1e-5 * value),
  )
}

function expectStage(text: string, stage: Stage, ends: boolean): void {
  const { spec, samplingRateHz, passes } = stage
  const { halfAmplitudeHz, halfPowerHz, rollOff } = stageCutoffPoints(stage)
  const first = <Value>(values: readonly Value[]) =>
    spec.design === 'notch' && spec.harmonics >= 4 ? values.slice(0, 2) : values
  expectSame(numbersAfter(text, /half-amplitude cutoffs? of/), first(halfAmplitudeHz), text)
  expectSame(numbersAfter(text, /half-power cutoffs? of/), first(halfPowerHz), text)
  if (spec.design === 'butterworth' || spec.design === 'amplifier') {
    expect(numbersAfter(text, /filter of order/), text).toEqual([spec.order])
    expectSame(
      numbersAfter(text, /a roll-off approaching/),
      [rollOff.kind === 'dB/octave' ? rollOff.value : Number.NaN],
      text,
    )
    expect(text.includes('forward and backward'), text).toBe(passes === 2)
    if (passes === 2) expect(numbersAfter(text, /\(order/), text).toEqual([2 * spec.order])
  }
  if (spec.design === 'butterworth' || spec.design === 'windowed-sinc')
    expectSame(numbersAfter(text, /design cutoffs? of/), designCutoffsHz(spec, samplingRateHz), text)
  if (spec.design === 'windowed-sinc') {
    expect(numbersAfter(text, /filter of/), text).toEqual([
      tapsForTransition(spec.window, spec.transitionHz, samplingRateHz),
    ])
    expectSame(numbersAfter(text, /a transition width of/), [spec.transitionHz], text)
    if (spec.window.name === 'kaiser')
      expectSame(numbersAfter(text, /β =/), [kaiserBeta(spec.window.attenuationDb)], text)
  }
  if (spec.design === 'amplifier' && spec.pass === 'high' && spec.order === 1)
    expectSame(numbersAfter(text, /a time constant of/), [1 / (2 * Math.PI * spec.cutoffHz)], text)
  if (spec.design === 'notch') {
    expectSame(
      numbersAfter(text, /a half-power bandwidth of/).slice(0, 1),
      [passes === 2 ? singlePassWidth(stage) : spec.bandwidthHz],
      text,
    )
    expectSame(numbersAfter(text, /notch filters? at/).slice(0, 1), [spec.frequencyHz], text)
  }
  if (spec.design === 'moving-average') {
    const samples = movingAverageSamples(spec.durationMs, samplingRateHz)
    expect(numbersAfter(text, /a moving average over/), text).toEqual([samples])
    expectSame(numbersAfter(text, /nulls at the multiples of/), [samplingRateHz / samples], text)
  }
  const padding = numbersAfter(text, /padded by odd reflection of/)
  if (ends && spec.design !== 'amplifier' && epochPaddingSamples(stage) > 0) {
    expect(padding, text).toEqual([epochPaddingSamples(stage)])
    const ms = numbersAfter(
      text,
      /padded by odd reflection of \d+ samples? \(/.source ? /odd reflection of \d+ samples? \(/ : /$/,
    )
    expect(ms.length, text).toBe(0)
  } else expect(padding, text).toEqual([])
}

/** Width at half power of one pass, measured on the analogue row: the quadratic's middle coefficient over 1 + its last. */
function singlePassWidth({ analogue, samplingRateHz }: Stage): number {
  const [, , , , beta, square] = analogue!
  return (Math.atan(beta / (1 + square)) * samplingRateHz) / Math.PI
}

describe('the methods paragraph', () => {
  test('gives every number of any chain as it was designed', () => {
    fc.assert(
      fc.property(writeUps, (facts) => {
        const stages = inOrder(designChain(facts.chain, facts.samplingRateHz).stages)
        const texts = stageTexts(methodsParagraph(facts))
        expect(texts.length).toBe(stages.length)
        const padded = facts.extent === 'epochs' || facts.source === 'recorded'
        stages.forEach((stage, i) => expectStage(texts[i], stage, padded && stage.spec.inData !== true))
      }),
      { numRuns: 300 },
    )
  })

  test('reads as sentences: no missing word, no unbalanced bracket, no number that is none, one of a thing in the singular', () => {
    fc.assert(
      fc.property(writeUps, (facts) => {
        const text = methodsParagraph(facts)
        expect(text).toMatch(/^The waveform was /)
        expect(text).toMatch(/\.$/)
        expect(text).not.toMatch(/ {2}|\( | \)|, ,|,\.|\.\.|undefined|NaN|null|Infinity|e-\d|e\+\d/)
        expect(text).not.toMatch(/(?<![\d.])1 (samples|taps|trials|harmonics)\b/)
        expect(text).not.toMatch(/(?<![\d.])(0|[2-9]|\d\d+) (sample|tap|trial|harmonic)\b/)
        expect(text.split('(').length).toBe(text.split(')').length)
        // each sentence begins with a capital letter and says something that was
        for (const sentence of text.split(/\. (?=[A-Z])/)) expect(sentence).toMatch(/^[A-Z]/)
      }),
      { numRuns: 300 },
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
        'not stated. Whether it had passed any filter before was not stated. No filter was applied offline. No baseline correction ' +
        'was made. The score was the mean amplitude from 300 to 600 ms (the mean of all samples whose time lay in this closed ' +
        'interval). The analysis was made with Sidelobe.',
    )
  })

  test('of one filter both ways leaves one reading', () => {
    expect(methodsParagraph({ ...FACTS, chain: [{ ...amplifier, inData: true }, highPass] })).toContain(
      'Before this analysis it had passed one filter: an amplifier high-pass filter of order 1 (one pass), causal, with a time ' +
        'constant of 1.5915 s, a half-amplitude cutoff of 0.057735 Hz (gain 1/2) and a half-power cutoff of 0.1 Hz (gain 1/√2) as ' +
        'applied, and a roll-off approaching 6.0206 dB per octave as applied. Whether it had passed any other filter before was not ' +
        'stated. Offline the cut-out epoch passed one filter: a Butterworth high-pass filter of order 2 per pass (order 4 as ' +
        'applied), realised as second-order sections and run forward and backward (zero phase, no delay), padded by odd reflection ' +
        'of 9 samples (36 ms) at both ends of the epoch and started in each pass in the steady state of its first sample, with a ' +
        'half-amplitude cutoff of 0.5 Hz (gain 1/2) and a half-power cutoff of 0.62327 Hz (gain 1/√2) after both passes, a design ' +
        'cutoff of 0.5 Hz (half power of a single pass), and a roll-off approaching 24.082 dB per octave as applied. After ' +
        'filtering, the mean of the waveform over the baseline from −200 to 0 ms was subtracted.',
    )
  })

  test('numbers several filters in their order, and says what they do together', () => {
    const lowPass: StageSpec = { ...highPass, pass: 'low', cutoffsHz: [30] }
    const text = methodsParagraph({ ...FACTS, chain: [highPass, lowPass] })
    expect(text).toMatch(
      /passed two filters, one after another in this order: \(1\) a Butterworth high-pass .*; and \(2\) a Butterworth low-pass /,
    )
    expect(text).toContain(
      'Each filter padded its input, ran, and was trimmed before the next. Together the filters applied',
    )
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

  test('states in the user’s words what the workspace cannot hold, and then no longer calls it unknown', () => {
    const statements = { amplifier: '0.1 to 100 Hz', 'earlier-filters': 'none', resampling: ' from 1000 to\n250 Hz. ' }
    const text = methodsParagraph({ ...FACTS, statements })
    expect(text).not.toContain('not stated')
    expect(text).toContain(
      'Amplifier and its filters: 0.1 to 100 Hz. Filters before this analysis: none. Resampling and its anti-alias filter: from 1000 to 250 Hz. The analysis',
    )
  })

  test('in LaTeX and Markdown nothing that the user typed acts as markup', () => {
    const facts = { ...FACTS, waveform: 'P_z of 50%_{x}$&#~^\\.csv *now* <b>', chain: [highPass] }
    const latex = methodsParagraph(facts, 'latex')
    expect(latex).toContain(
      'P\\_z of 50\\%\\_\\{x\\}\\$\\&\\#\\textasciitilde{}\\textasciicircum{}\\textbackslash{}.csv *now* \\textless{}b\\textgreater{}',
    )
    expect(latex).toContain('sampled at 250~Hz')
    expect(latex).toContain('(gain 1/$\\sqrt{2}$)')
    expect(latex).toContain('from $-$200 to 0~ms')
    expect(latex.replace(/\\[%$&#_{}]/g, '')).not.toMatch(/[%&#]|[^\x20-\x7e]/)
    const markdown = methodsParagraph(facts, 'markdown')
    expect(markdown).toContain('P\\_z of 50%\\_\\{x\\}\\$\\&\\#\\~^\\\\.csv \\*now\\* \\<b\\>')
    expect(markdown.replace(/\\([\\`*_{}[\]<>#|~$&])/g, '$1')).toBe(methodsParagraph(facts))
  })

  test('names the stage of a chain that cannot be designed', () => {
    expect(() => methodsParagraph({ ...FACTS, chain: [{ ...highPass, cutoffsHz: [200] }] })).toThrow(
      /^stage 1: cutoffsHz\[0\] must lie between 0 and 125/,
    )
  })
})
