import fc from 'fast-check'
import type { Score, ScoreKind } from '../../src/erp/score.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import type { Protocol } from '../../src/words/index.ts'
import { stages } from '../filter/random-specs.ts'

/** Protocols with any chain of any flags; the sentence is asked for whether or not the chain could be run. */

const flagged: fc.Arbitrary<StageSpec> = fc
  .tuple(stages, fc.constantFrom(undefined, true, false), fc.constantFrom(undefined, true, false))
  .map(([{ spec }, enabled, inData]) => ({
    ...spec,
    ...(enabled === undefined ? {} : { enabled }),
    ...(inData === undefined ? {} : { inData }),
  }))

const thousandths = (from: number, to: number) => fc.integer({ min: from * 1000, max: to * 1000 }).map((n) => n / 1000)

const window = fc
  .tuple(thousandths(-500, 1000), thousandths(1, 500))
  .map(([fromMs, span]) => ({ fromMs, toMs: Number((fromMs + span).toFixed(3)) }))

const score: fc.Arbitrary<Score> = fc
  .record({
    kind: fc.constantFrom<ScoreKind>(
      'mean',
      'area',
      'peak-amplitude',
      'peak-latency',
      'area-latency',
      'onset-latency',
      'moment',
    ),
    window,
    polarity: fc.constantFrom('positive' as const, 'negative' as const),
    fraction: fc.constantFrom(0.1, 0.5, 0.75),
  })
  .map(({ kind, window, polarity, fraction }) => ({
    kind,
    ...(kind === 'moment' ? { fromMs: window.fromMs, toMs: window.fromMs } : window),
    polarity,
    ...(kind === 'area-latency' || kind === 'onset-latency' ? { fraction } : {}),
  }))

export const protocols: fc.Arbitrary<Protocol> = fc.record({
  source: fc.constantFrom('built' as const, 'recorded' as const),
  waveform: fc.constantFrom('a late positivity', 'PO7 of average.csv', 'the difference rare minus frequent'),
  samplingRateHz: fc.constantFrom(100, 256, 500, 1000, 2034.505),
  chain: fc.array(flagged, { maxLength: 5 }),
  extent: fc.constantFrom('continuous' as const, 'epochs' as const),
  baseline: fc.oneof(fc.constant('none' as const), window),
  trials: fc.integer({ min: 1, max: 1_000_000 }),
  score,
})
