import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { scoreOf } from '../../src/erp/score.ts'
import type { Component } from '../../src/erp/component.ts'
import { checkBuiltWaveform, epochTimesMs } from '../../src/erp/waveform.ts'
import { applyChain } from '../../src/filter/apply-chain.ts'
import { answerClaim } from '../../src/evidence/claims/answer-claim.ts'
import { lateOnlyClaim } from '../../src/evidence/claims/late-only-claim.ts'
import { firstSight as claimSetting } from '../evidence/claims/claim-settings.ts'
import { designChain } from '../../src/filter/chain.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import { inWords, partOfField } from '../../src/words/problem.ts'
import { protocolLine } from '../../src/words/protocol-line.ts'

interface Fault {
  message: string
  field?: string
  stageIndex?: number
}

function fault(compute: () => unknown): Fault {
  try {
    compute()
  } catch (error) {
    if (error instanceof RangeError) return error as Fault
    throw error
  }
  throw new Error('nothing was refused')
}

const said = (compute: () => unknown) => inWords(fault(compute).message)

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
  pass: 'high',
  cutoffsHz: [1],
  meaning: 'half-amplitude',
  transitionHz: 1,
  window: { name: 'hamming' },
  delay: 'compensated',
}
const design =
  (change: object, of: StageSpec = butterworth) =>
  () =>
    designChain([{ ...of, ...change } as StageSpec], 500)

describe('refused stages in words', () => {
  test.each<[string, () => unknown]>([
    ['Stage 1: the cutoff must lie between 0 and 250 (half the sampling rate), was 300.', design({ cutoffsHz: [300] })],
    ['Stage 1: the cutoff must lie between 0 and 250 (half the sampling rate), was −1.', design({ cutoffsHz: [-1] })],
    [
      'Stage 1: the cutoff must lie between 0 and 250 (half the sampling rate), was no number.',
      design({ cutoffsHz: [Number.NaN] }),
    ],
    [
      'Stage 1: the upper cutoff must lie between 0 and 250 (half the sampling rate), was 251.',
      design({ pass: 'band', cutoffsHz: [1, 251] }),
    ],
    ['Stage 1: the cutoffs must ascend, was 30 and 10.', design({ pass: 'stop', cutoffsHz: [30, 10] })],
    ['Stage 1: two cutoffs must be given for a band-pass, was 30.', design({ pass: 'band' })],
    ['Stage 1: one cutoff must be given for a low-pass, was none.', design({ cutoffsHz: [] })],
    ['Stage 1: the order must be a whole number from 1 to 12, was 0.', design({ order: 0 })],
    ['Stage 1: the order must be a whole number from 1 to 12, was 2.5.', design({ order: 2.5 })],
    ['Stage 1: the transition width must be a positive number, was 0.', design({ transitionHz: 0 }, sinc)],
    [
      'Stage 1: the transition width must keep the transition above 0 Hz: 3 about its centre at 1 Hz reaches from −0.5 to 2.5 Hz.',
      design({ transitionHz: 3 }, sinc),
    ],
    [
      'Stage 1: the transition width must keep the transition below 250 Hz (half the sampling rate): 30 about its centre at 240 Hz reaches from 225 to 255 Hz.',
      design({ cutoffsHz: [240], transitionHz: 30 }, sinc),
    ],
    [
      'Stage 1: the attenuation must lie between 8 and 200 dB, was 500.',
      design({ window: { name: 'kaiser', attenuationDb: 500 } }, sinc),
    ],
    [
      'Stage 1: the frequency must lie between 0 and 250 (half the sampling rate), was 0.',
      design({ design: 'notch', frequencyHz: 0, bandwidthHz: 2, harmonics: 0 }),
    ],
    [
      'Stage 1: the number of harmonics must be a whole number from 0 to 100, was −1.',
      design({ design: 'notch', frequencyHz: 50, bandwidthHz: 2, harmonics: -1 }),
    ],
    [
      'Stage 1: the duration must be at least 4 (two samples), was 0.0000001.',
      design({ design: 'moving-average', durationMs: 1e-7, delay: 'causal' }),
    ],
    [
      'Stage 1: the cutoff must lie between 0 and 250 (half the sampling rate), was infinite.',
      design({ design: 'amplifier', cutoffHz: Number.POSITIVE_INFINITY }),
    ],
  ])('%s', (words, compute) => {
    expect(said(compute)).toBe(words)
  })

  test('say of a claim what its phrases are called', () => {
    expect(said(() => answerClaim({ form: 'attenuation', hz: 300, db: 20 }, claimSetting))).toBe(
      'The frequency must lie between 0 and 250 (half the sampling rate), was 300.',
    )
    expect(
      said(() =>
        answerClaim({ form: 'change', row: 'peak-latency', relation: 'at least', amount: 10, unit: '%' }, claimSetting),
      ),
    ).toBe('A latency has no per cent of its value before; its change must be said in ms.')
    const window = { fromMs: 80, toMs: 140 }
    expect(
      said(() =>
        answerClaim(
          { form: 'effect', first: 'a', second: 'b', window, says: 'changes sign', leastUv: 0 },
          claimSetting,
        ),
      ),
    ).toBe('The smallest effect that counts must be above 0, was 0.')
    expect(
      said(() => lateOnlyClaim({ form: 'late-only', t0Ms: 9000, early: window, slackMs: 30 }, claimSetting)),
    ).toMatch(/^The onset of the activity must lie in the epoch \(−400 to 1000 ms\), was 9000\.$/)
  })

  test('name the stage by its place in the chain, and an amplifier that comes too late', () => {
    expect(said(() => designChain([butterworth, { ...sinc, transitionHz: -1 }], 500))).toMatch(
      /^Stage 2: the transition/,
    )
    expect(
      said(() => designChain([butterworth, { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.1 }], 500)),
    ).toBe('Stage 2: an amplifier stage must come before all offline stages, but follows stage 1.')
  })

  test('name an epoch too short by what it needs', () => {
    const short = (spec: StageSpec) => () => applyChain(designChain([spec], 500), new Float64Array(9), 'epochs')
    expect(said(short(butterworth))).toBe('The Butterworth low-pass of 30 Hz needs 10 samples, the epoch has 9.')
    expect(said(short(sinc))).toBe('The windowed-sinc high-pass of 1 Hz needs 826 samples, the epoch has 9.')
  })
})

describe('refused waveforms and windows in words', () => {
  const built =
    (change: object, component: object = {}) =>
    () =>
      checkBuiltWaveform({
        samplingRateHz: 500,
        epoch: { fromMs: -100, toMs: 400 },
        conditions: [
          {
            name: 'rare',
            components: [
              {
                shape: 'gaussian',
                name: 'P3 [oddBall]',
                amplitudeUv: 5,
                latencyMs: 300,
                widthMs: 100,
                ...component,
              } as Component,
            ],
          },
        ],
        ...change,
      })
  const timesMs = epochTimesMs(500, { fromMs: -100, toMs: 400 })
  const score = (change: object) => () =>
    scoreOf(new Float64Array(timesMs.length), timesMs, {
      kind: 'mean',
      fromMs: 80,
      toMs: 140,
      polarity: 'positive',
      ...change,
    })

  test.each<[string, () => unknown]>([
    ['The sampling rate must lie between 100 and 4096, was 50.', () => epochTimesMs(50, { fromMs: 0, toMs: 500 })],
    [
      'The epoch must begin before it ends, was no number to 5 ms.',
      () => epochTimesMs(500, { fromMs: Number.NaN, toMs: 5 }),
    ],
    [
      'The epoch must hold 16 to 1000000 samples, 0 to 5 ms at 500 Hz hold 3.',
      built({ epoch: { fromMs: 0, toMs: 5 } }),
    ],
    ['Component "P3 [oddBall]": the width must lie between 0.1 and 1000000, was 0.', built({}, { widthMs: 0 })],
    [
      'Component "P3 [oddBall]": the share before the peak must lie between 0.02 and 0.98, was 1.',
      built({}, { shape: 'ramp', riseShare: 1 }),
    ],
    [
      'Component "P3 [oddBall]": the on- and offset must be positive and at most the width (100), was 200.',
      built({}, { shape: 'slow-wave', edgeMs: 200 }),
    ],
    [
      'Component "P3 [oddBall]": the frequency must lie below 250 (half the sampling rate), was 300.',
      built({}, { shape: 'tone', frequencyHz: 300, phaseRad: 0 }),
    ],
    ['The score window must lie in the epoch (−100 to 400 ms), was 80 to 500 ms.', score({ toMs: 500 })],
    ['The score window must begin before it ends, was 200 to 140 ms.', score({ fromMs: 200 })],
    ['The score window must have finite limits, was 80 to no number ms.', score({ toMs: Number.NaN })],
    ['The end of a moment’s window must equal its beginning (80), was 140.', score({ kind: 'moment' })],
    ['The fraction must lie between 0 and 1, was 1.5.', score({ kind: 'onset-latency', fraction: 1.5 })],
  ])('%s', (words, compute) => {
    expect(said(compute)).toBe(words)
  })

  test('a name in quotation marks stays as the user wrote it', () => {
    const name = 'widthMs [0] NaN -5 1e-7'
    expect(said(built({}, { name, latencyMs: Number.NaN }))).toBe(
      `Component "${name}": the latency must lie between −1000000 and 1000000, was no number.`,
    )
    expect(inWords(`the data of “${name}.csv” are not at hand: open the file again`)).toContain(`“${name}.csv”`)
  })
})

describe('partOfField', () => {
  const fields = ['order', 'cutoffsHz', 'direction', 'meaning', 'pass', 'transitionHz', 'window', 'delay', 'cutoffHz']
  test.each([
    ['cutoffsHz', 'cutoff'],
    ['cutoffHz', 'cutoff'],
    ['frequencyHz', 'cutoff'],
    ['transitionHz', 'transition'],
    ['bandwidthHz', 'bandwidth'],
    ['durationMs', 'duration'],
    ['cutoffsHz[1]', 'cutoff'],
    ['window.attenuationDb', 'design'],
    [undefined, 'design'],
  ])('%s stands in the token %s', (field, part) => {
    expect(partOfField(field)).toBe(part)
  })

  test('is never empty for a field of a stage', () => {
    for (const field of fields) expect(partOfField(field)).toMatch(/^[a-z]+$/)
  })
})

/** Numbers that a field can hold once it is emptied, mistyped or dragged too far. */
const bad = fc.constantFrom(Number.NaN, Number.POSITIVE_INFINITY, 0, -0, -5, 1e-7, 0.30000000000000004, 1.5, 300, 1e21)
const pick = fc.oneof(fc.constantFrom(1, 2, 5, 30), bad)
const cutoffs = fc.array(pick, { maxLength: 3 })
const pass = fc.constantFrom('low' as const, 'high' as const, 'band' as const, 'stop' as const)
const direction = fc.constantFrom('forward' as const, 'both' as const)
const meaning = fc.constantFrom('half-amplitude' as const, 'half-power' as const, 'design' as const)

const badSpec: fc.Arbitrary<StageSpec> = fc.oneof(
  fc.record({ design: fc.constant('butterworth' as const), pass, order: pick, cutoffsHz: cutoffs, meaning, direction }),
  fc.record({
    design: fc.constant('windowed-sinc' as const),
    pass,
    cutoffsHz: cutoffs,
    meaning,
    transitionHz: pick,
    window: fc.oneof(
      fc.constant({ name: 'hann' as const }),
      pick.map((attenuationDb) => ({ name: 'kaiser' as const, attenuationDb })),
    ),
    delay: fc.constantFrom('compensated' as const, 'causal' as const, 'minimum-phase' as const),
  }),
  fc.record({
    design: fc.constant('amplifier' as const),
    pass: fc.constantFrom('low' as const, 'high' as const),
    order: pick,
    cutoffHz: pick,
  }),
  fc.record({
    design: fc.constant('notch' as const),
    frequencyHz: pick,
    bandwidthHz: pick,
    harmonics: pick,
    direction,
  }),
  fc.record({
    design: fc.constant('moving-average' as const),
    durationMs: pick,
    delay: fc.constantFrom('compensated' as const, 'causal' as const),
  }),
)

describe('whatever a stage holds', () => {
  test('its refusal is in words, and points at a token that the protocol line shows', () => {
    fc.assert(
      fc.property(fc.array(badSpec, { minLength: 1, maxLength: 3 }), (chain) => {
        let refused: Fault
        try {
          designChain(chain, 500)
          return
        } catch (error) {
          refused = error as Fault
        }
        const words = inWords(refused.message)
        expect(words.replaceAll('dB', '')).not.toMatch(
          /[a-z][A-Z]|\w[.]\w*[a-z]|\[|undefined|NaN|Infinity|null|\de[+-]?\d/,
        )
        expect(words).toMatch(/^[A-Z].*\.$/)
        const line = protocolLine({
          source: 'built',
          waveform: 'a bump',
          samplingRateHz: 500,
          chain,
          extent: 'continuous',
          baseline: 'none',
          trials: 1,
          score: { kind: 'mean', fromMs: 0, toMs: 1, polarity: 'positive' },
        })
        const at = `stage:${refused.stageIndex}:${partOfField(refused.field)}`
        expect(line.map((piece) => (piece.kind === 'token' ? piece.id : ''))).toContain(at)
      }),
      { numRuns: 1000 },
    )
  })
})
