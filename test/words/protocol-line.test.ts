import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { SCENARIOS, type Scenario } from '../../src/erp/scenarios.ts'
import type { Score } from '../../src/erp/score.ts'
import type { Delay, StageSpec, WindowSpec } from '../../src/filter/stage.ts'
import { parseNumber } from '../../src/words/number.ts'
import {
  componentsWords,
  type Protocol,
  protocolLine,
  protocolText,
  scoreWords,
  windowWords,
} from '../../src/words/protocol-line.ts'
import type { Piece } from '../../src/words/stage-words.ts'
import { protocols } from './random-protocols.ts'

const sentence = (protocol: Protocol) => protocolText(protocolLine(protocol))

function ofScenario({ waveform, condition, chain, extent, baseline, trials, score }: Scenario): Protocol {
  const { components } = waveform.conditions.find(({ name }) => name === condition) ?? { components: [] }
  const { samplingRateHz } = waveform
  return {
    source: 'built',
    waveform: componentsWords(components),
    samplingRateHz,
    events: 'alone',
    chain,
    extent,
    baseline,
    trials,
    score,
  }
}

const recorded: Protocol = {
  source: 'recorded',
  waveform: 'PO7 of average.csv',
  samplingRateHz: 250,
  chain: [],
  extent: 'epochs',
  baseline: { fromMs: -200, toMs: 0 },
  trials: 40,
  score: { kind: 'mean', fromMs: 80, toMs: 140, polarity: 'negative' },
}

const amplifier: StageSpec = { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 1 / (2 * Math.PI * 10) }
const butterworth: StageSpec = {
  design: 'butterworth',
  pass: 'low',
  order: 2,
  cutoffsHz: [30],
  meaning: 'half-amplitude',
  direction: 'both',
}
const sinc: StageSpec = {
  design: 'windowed-sinc',
  pass: 'band',
  cutoffsHz: [1, 30],
  meaning: 'design',
  transitionHz: 1.5,
  window: { name: 'kaiser', attenuationDb: 60 },
  delay: 'minimum-phase',
}
const notch: StageSpec = {
  design: 'notch',
  frequencyHz: 50,
  bandwidthHz: 2,
  harmonics: 1,
  direction: 'forward',
}
const average: StageSpec = { design: 'moving-average', durationMs: 20, delay: 'causal' }

/** What follows the waveform and its sampling rate, up to the baseline. */
const chainWords = (change: Partial<Protocol>) =>
  /sampled at 250 Hz(.*) Over 40 trials/.exec(sentence({ ...recorded, ...change }))?.[1]

describe('the scenarios’ protocol lines', () => {
  test.each([
    [
      'late-positivity',
      'The built waveform, a late positivity sampled at 500 Hz, its events alone, passed an amplifier with a 10 s time constant. Offline it passed a Butterworth high-pass of order 2 per pass, run both ways, half-amplitude 1 Hz after both passes, and a Hamming-windowed sinc low-pass, zero-phase, half-amplitude 30 Hz, transition width 7.5 Hz. The chain ran on the continuous recording. Over 40 trials, with a baseline of −200 to 0 ms, the score is the mean amplitude from 80 to 140 ms.',
    ],
    [
      'slow-wave',
      'The built waveform, a visual positivity and a sustained negativity sampled at 250 Hz, its events alone, passed an amplifier with a 10 s time constant. Offline it passed a Butterworth high-pass of order 2 per pass, run both ways, half-amplitude 0.5 Hz after both passes. The chain ran on the continuous recording. Over 60 trials, with a baseline of −200 to 0 ms, the score is the mean amplitude from 600 to 1200 ms.',
    ],
    [
      'smeared-onset',
      'The built waveform is an early negativity sampled at 1000 Hz, its events alone. Offline it passed a Butterworth low-pass of order 4 per pass, run both ways, half-amplitude 6 Hz after both passes. The chain ran on the continuous recording. Over 80 trials, with a baseline of −200 to 0 ms, the score is the onset latency at 50 % of the negative peak from 100 to 300 ms.',
    ],
    [
      'delayed-peak',
      'The built waveform, three components sampled at 1000 Hz, its events alone, passed an amplifier with a 10 s time constant. Offline it passed a Butterworth low-pass of order 4, run forward, causal, half-power 15 Hz. The chain ran on the continuous recording. Over 100 trials, with a baseline of −100 to 0 ms, the score is the negative peak latency from 70 to 180 ms.',
    ],
    [
      'steady-interference',
      'The built waveform, four components sampled at 500 Hz, its events alone, passed an amplifier with a 10 s time constant. Offline it passed a notch at 75 Hz and no harmonics, run both ways, each 4 Hz wide at half-power after both passes. The chain ran on the continuous recording. Over 100 trials, with a baseline of −100 to 0 ms, the score is the positive peak amplitude from 85 to 130 ms.',
    ],
  ])('%s', (id, words) => {
    const scenario = SCENARIOS.find((entry) => entry.id === id)
    expect(sentence(ofScenario(scenario as Scenario))).toBe(words)
  })
})

describe('the protocol line', () => {
  test('of a recording without any filter is a whole sentence, and no chain ran on anything', () => {
    expect(sentence(recorded)).toBe(
      'The recorded waveform is PO7 of average.csv sampled at 250 Hz. Offline it passed no filter. Over 40 trials, with a baseline of −200 to 0 ms, the score is the mean amplitude from 80 to 140 ms.',
    )
  })

  test('says stages in the data in the past, and what is applied here apart from them', () => {
    expect(chainWords({ chain: [{ ...amplifier, inData: true }, butterworth] })).toBe(
      ', had passed an amplifier with a 10 s time constant. Offline it passed a Butterworth low-pass of order 2 per pass, run both ways, half-amplitude 30 Hz after both passes. The chain ran on the cut-out epochs.',
    )
    expect(chainWords({ chain: [{ ...butterworth, inData: true }, average] })).toBe(
      ', had passed a Butterworth low-pass of order 2 per pass, run both ways, half-amplitude 30 Hz after both passes. Here, offline, it passed a moving average of 20 ms, causal, its delay left in. The chain ran on the cut-out epochs.',
    )
    expect(chainWords({ chain: [{ ...butterworth, inData: true }] })).toBe(
      ', had passed a Butterworth low-pass of order 2 per pass, run both ways, half-amplitude 30 Hz after both passes. Here, offline, it passed no further filter.',
    )
    expect(
      chainWords({
        chain: [
          { ...amplifier, inData: true },
          { design: 'amplifier', pass: 'low', order: 4, cutoffHz: 100 },
        ],
        extent: 'continuous',
      }),
    ).toBe(
      ', had passed an amplifier with a 10 s time constant. Here it passed an amplifier low-pass of order 4, half-power 100 Hz. Offline it passed no filter. The chain ran on the continuous recording.',
    )
  })

  test('says each design with all that defines it', () => {
    const offline = (spec: StageSpec) =>
      /Offline it passed (.*?)\. The chain ran/.exec(sentence({ ...recorded, chain: [spec] }))?.[1]
    expect(offline(sinc)).toBe(
      'a Kaiser (60 dB)-windowed sinc band-pass, minimum-phase, causal, nominal cutoff (centre of the transition) 1 and 30 Hz, transition width 1.5 Hz',
    )
    expect(offline(notch)).toBe('a notch at 50 Hz and one harmonic, run forward, causal, each 2 Hz wide at half-power')
    expect(offline({ ...average, delay: 'compensated' })).toBe('a moving average of 20 ms, zero-phase')
    expect(offline({ ...butterworth, meaning: 'design' })).toBe(
      'a Butterworth low-pass of order 2 per pass, run both ways, design cutoff (half-power of one pass) 30 Hz',
    )
    expect(
      offline({ ...butterworth, pass: 'stop', cutoffsHz: [48, 52], meaning: 'half-power', direction: 'forward' }),
    ).toBe('a Butterworth band-stop of order 2, run forward, causal, half-power 48 and 52 Hz')
  })

  test('says one trial, no baseline and a moment as a person would', () => {
    const score: Score = { kind: 'moment', fromMs: 120.5, toMs: 120.5, polarity: 'positive' }
    expect(sentence({ ...recorded, trials: 1, baseline: 'none', score })).toMatch(
      /Over 1 trial, with no baseline correction, the score is the value at 120\.5 ms\.$/,
    )
  })

  test('leaves switched-off stages and the page’s own additions out of the copied text', () => {
    fc.assert(
      fc.property(protocols, (protocol) => {
        const on = protocol.chain.filter((spec) => spec.enabled !== false)
        const copied = sentence(protocol)
        expect(copied).toBe(sentence({ ...protocol, chain: on }))
        expect(copied).not.toContain('add a stage')
        const off = protocolLine(protocol).filter((piece) => piece.kind === 'token' && piece.off)
        expect(off).toHaveLength(protocol.chain.length - on.length)
      }),
    )
  })

  test('is made of whole sentences without a double space or a missing value', () => {
    fc.assert(
      fc.property(protocols, (protocol) => {
        const copied = sentence(protocol)
        expect(copied).toMatch(/^The .*\.$/)
        expect(copied).not.toMatch(/ {2}| [.,]|\.\.|,,|undefined|NaN|–/)
      }),
    )
  })

  test('gives every token an id of its own, a text and a label', () => {
    fc.assert(
      fc.property(protocols, (protocol) => {
        const tokens = protocolLine(protocol).filter((piece) => piece.kind !== 'text')
        expect(new Set(tokens.map(({ id }) => id)).size).toBe(tokens.length)
        for (const { text, label } of tokens) {
          expect(text.trim()).toBe(text)
          expect(text).not.toBe('')
          expect(label).not.toBe('')
        }
      }),
    )
  })

  test('says in the past exactly the stages that are in the data', () => {
    fc.assert(
      fc.property(protocols, (protocol) => {
        const pieces = protocolLine(protocol)
        const words = pieces.map((piece) => piece.text)
        const past = words.indexOf(', had passed ')
        const end = words.findIndex((word, place) => place > past && /^\. (Here|Offline)/.test(word))
        protocol.chain.forEach((spec, index) => {
          const place = pieces.findIndex((piece) => piece.kind === 'token' && piece.id === `stage:${index}:design`)
          const said = past >= 0 && place > past && place < end
          expect(said).toBe(spec.inData === true && spec.enabled !== false)
        })
      }),
    )
  })
})

describe('every number of the sentence is the specification’s', () => {
  const numbers = (words: string) => [...words.matchAll(/−?\d+(?:\.\d+)?/g)].map(([number]) => parseNumber(number))

  function expected(spec: StageSpec): Record<string, number[]> {
    switch (spec.design) {
      case 'butterworth':
        return { order: [spec.order], cutoff: spec.cutoffsHz }
      case 'windowed-sinc':
        return { cutoff: spec.cutoffsHz, transition: [spec.transitionHz] }
      case 'amplifier':
        return spec.pass === 'high' && spec.order === 1
          ? { cutoff: [1 / (2 * Math.PI * spec.cutoffHz)] }
          : { order: [spec.order], cutoff: [spec.cutoffHz] }
      case 'notch':
        return {
          cutoff: [spec.frequencyHz],
          bandwidth: [spec.bandwidthHz],
          ...(spec.harmonics > 1 ? { harmonics: [spec.harmonics] } : {}),
        }
      case 'moving-average':
        return { duration: [spec.durationMs] }
    }
  }

  const expectNumbers = (piece: Piece | undefined, values: readonly number[]) => {
    expect(piece).toBeDefined()
    const said = numbers((piece as Piece).text)
    expect(said).toHaveLength(values.length)
    said.forEach((number, i) => {
      expect(Math.abs(number - values[i])).toBeLessThanOrEqual(1e-9 * Math.abs(values[i]))
    })
  }

  test('in the tokens of every stage, and in those around the chain', () => {
    fc.assert(
      fc.property(protocols, (protocol) => {
        const pieces = protocolLine(protocol)
        const find = (id: string) => pieces.find((piece) => piece.kind === 'token' && piece.id === id)
        protocol.chain.forEach((spec, index) => {
          if (spec.enabled === false) return
          for (const [part, values] of Object.entries(expected(spec)))
            expectNumbers(find(`stage:${index}:${part}`), values)
        })
        expectNumbers(find('rate'), [protocol.samplingRateHz])
        expectNumbers(find('trials'), [protocol.trials])
        const { baseline, score } = protocol
        expectNumbers(find('baseline'), baseline === 'none' ? [] : [baseline.fromMs, baseline.toMs])
        expectNumbers(find('score-window'), score.kind === 'moment' ? [score.fromMs] : [score.fromMs, score.toMs])
      }),
      { numRuns: 200 },
    )
  })
})

describe('the sentence has one reading only', () => {
  const passes = ['low', 'high', 'band', 'stop'] as const
  const meanings = ['half-amplitude', 'half-power', 'design'] as const
  const directions = ['forward', 'both'] as const
  const delays: Delay[] = ['compensated', 'causal', 'minimum-phase']
  const windows: WindowSpec[] = [
    { name: 'rectangular' },
    { name: 'hann' },
    { name: 'hamming' },
    { name: 'blackman' },
    { name: 'kaiser', attenuationDb: 60 },
    { name: 'kaiser', attenuationDb: 60.5 },
  ]
  const cutoffsHz = (pass: string) => (pass === 'low' || pass === 'high' ? [5] : [5, 20])

  const everyStage: StageSpec[] = passes.flatMap((pass) => [
    ...meanings.flatMap((meaning) => [
      ...directions.flatMap((direction) =>
        [1, 2].map(
          (order): StageSpec => ({
            design: 'butterworth',
            pass,
            order,
            cutoffsHz: cutoffsHz(pass),
            meaning,
            direction,
          }),
        ),
      ),
      ...delays.flatMap((delay) =>
        windows.map(
          (window): StageSpec => ({
            design: 'windowed-sinc',
            pass,
            cutoffsHz: cutoffsHz(pass),
            meaning,
            transitionHz: 3,
            window,
            delay,
          }),
        ),
      ),
    ]),
  ])
  everyStage.push(
    ...(['low', 'high'] as const).flatMap((pass) =>
      [1, 2].map((order): StageSpec => ({ design: 'amplifier', pass, order, cutoffHz: 5 })),
    ),
    ...directions.flatMap((direction) =>
      [0, 1, 2].map(
        (harmonics): StageSpec => ({ design: 'notch', frequencyHz: 50, bandwidthHz: 2, harmonics, direction }),
      ),
    ),
    ...(['compensated', 'causal'] as const).map(
      (delay): StageSpec => ({ design: 'moving-average', durationMs: 20, delay }),
    ),
  )

  test('no two different stages are said alike, in the data or applied here', () => {
    const said = everyStage.flatMap((spec) => [
      sentence({ ...recorded, chain: [spec] }),
      sentence({ ...recorded, chain: [{ ...spec, inData: true }] }),
    ])
    expect(new Set(said).size).toBe(2 * everyStage.length)
  })

  test('no two different scores are said alike', () => {
    const sides = ['positive', 'negative'] as const
    const scores: Score[] = [
      { kind: 'mean', fromMs: 80, toMs: 140, polarity: 'positive' },
      { kind: 'moment', fromMs: 80, toMs: 80, polarity: 'positive' },
      ...sides.flatMap((polarity): Score[] => [
        ...(['area', 'peak-amplitude', 'peak-latency'] as const).map(
          (kind): Score => ({ kind, fromMs: 80, toMs: 140, polarity }),
        ),
        ...(['area-latency', 'onset-latency'] as const).flatMap((kind) =>
          [0.25, 0.5].map((fraction): Score => ({ kind, fromMs: 80, toMs: 140, polarity, fraction })),
        ),
      ]),
    ]
    expect(new Set(scores.map(scoreWords)).size).toBe(scores.length)
  })

  test('source, waveform, rate, extent, baseline, trials and the order of the stages each change it', () => {
    const base: Protocol = { ...recorded, chain: [notch, butterworth] }
    const changes: Partial<Protocol>[] = [
      {},
      { source: 'built' },
      { waveform: 'Cz of average.csv' },
      { samplingRateHz: 256 },
      { extent: 'continuous' },
      { baseline: 'none' },
      { baseline: { fromMs: -100, toMs: 0 } },
      { trials: 41 },
      { chain: [butterworth, notch] },
    ]
    expect(new Set(changes.map((change) => sentence({ ...base, ...change }))).size).toBe(changes.length)
  })

  test('a fraction that is not stated is said as the half that it is', () => {
    const score: Score = { kind: 'onset-latency', fromMs: 0, toMs: 100, polarity: 'positive' }
    expect(scoreWords(score)).toBe(scoreWords({ ...score, fraction: 0.5 }))
  })
})

describe('componentsWords', () => {
  const named = (...entries: [string, number][]) => entries.map(([name, amplitudeUv]) => ({ name, amplitudeUv }))
  test.each([
    [named(), 'a flat line'],
    [named(['late positivity', 0]), 'a flat line'],
    [named(['early negativity', -6]), 'an early negativity'],
    [named(['late positivity', 8], ['residual baseline', -0.05]), 'a late positivity'],
    [named(['75 Hz refresh', 1.5]), 'the 75 Hz refresh'],
    [named(['dip', -1], ['bump', 1], ['wave', 2]), 'three components'],
    [named(...Array.from({ length: 12 }, (_, i): [string, number] => [`c${i}`, 1])), '12 components'],
  ])('%j is %s', (components, words) => {
    expect(componentsWords(components)).toBe(words)
  })
})

describe('windowWords', () => {
  test.each([
    [-200, 0, '−200 to 0 ms'],
    [80.5, 140.25, '80.5 to 140.25 ms'],
    [99.609375, 200, '99.609 to 200 ms'],
    [120, 120, '120 ms'],
  ])('%d, %d is %s', (fromMs, toMs, words) => {
    expect(windowWords(fromMs, toMs)).toBe(words)
  })
})
