import fc from 'fast-check'
import type { Component } from '../../../src/erp/component.ts'
import { SCENARIOS } from '../../../src/erp/scenarios.ts'
import { epochTimesMs } from '../../../src/erp/waveform.ts'
import type { ClaimCurve, ClaimSetting } from '../../../src/evidence/claims/claim.ts'
import type { StageSpec } from '../../../src/filter/stage.ts'
import { chain } from '../../filter/arbitrary-chain.ts'
import { baselines, components, epochOf, scores } from '../arbitrary-traces.ts'

/** Settings for claims. */

const [latePositivity] = SCENARIOS

/** The first sight: a late positivity through 1 Hz high-pass, order 2 per pass both ways, and a 30 Hz low-pass. */
export const firstSight: ClaimSetting = {
  samplingRateHz: latePositivity.waveform.samplingRateHz,
  timesMs: epochTimesMs(latePositivity.waveform.samplingRateHz, latePositivity.waveform.epoch),
  chain: latePositivity.chain,
  extent: latePositivity.extent,
  baseline: latePositivity.baseline,
  score: latePositivity.score,
  measure: latePositivity.measure,
  conditions: latePositivity.waveform.conditions.map(({ name, components: parts }) => ({
    name,
    source: { kind: 'built', components: parts },
  })),
  chosen: { kind: 'condition', name: latePositivity.condition },
  noise: latePositivity.noise,
  noisePassed: 'nothing',
  trials: latePositivity.trials,
  taken: 'as it stands',
  filteredBefore: 'as stated',
  unseenThreshold: 0.1,
}

export const highPass = (cutoffHz: number): StageSpec => ({
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [cutoffHz],
  meaning: 'half-amplitude',
  direction: 'both',
})

export const lowPass = (cutoffHz: number, order = 4): StageSpec => ({
  design: 'butterworth',
  pass: 'low',
  order,
  cutoffsHz: [cutoffHz],
  meaning: 'half-power',
  direction: 'both',
})

/** One condition made of these. */
export const built = (parts: Component[], more: Partial<ClaimSetting> = {}): ClaimSetting => ({
  ...firstSight,
  conditions: [{ name: 'only', source: { kind: 'built', components: parts } }],
  chosen: { kind: 'condition', name: 'only' },
  ...more,
})

/** One recorded condition. */
export const recorded = (values: Float64Array, more: Partial<ClaimSetting> = {}): ClaimSetting => ({
  ...firstSight,
  conditions: [{ name: 'only', source: { kind: 'recorded', values } }],
  chosen: { kind: 'condition', name: 'only' },
  extent: 'epochs',
  ...more,
})

export const gaussian = (amplitudeUv: number, latencyMs: number, widthMs: number): Component => ({
  shape: 'gaussian',
  name: 'pulse',
  amplitudeUv,
  latencyMs,
  widthMs,
})

const N = 260

/** Random chains on random waveforms of one condition or a difference, built (with neighbours or without) or recorded. */
export const settings: fc.Arbitrary<ClaimSetting> = fc
  .record({
    some: chain,
    kind: fc.constantFrom('built' as const, 'recorded' as const),
    extent: fc.constantFrom('continuous' as const, 'epochs' as const),
    difference: fc.boolean(),
    train: fc.boolean(),
  })
  .chain(({ some, kind, extent, difference, train }) => {
    const timesMs = epochOf(N, some.samplingRateHz)
    const stepMs = 1000 / some.samplingRateHz
    const parts = components(N, stepMs)
    const values = fc
      .array(fc.integer({ min: -5000, max: 5000 }), { minLength: N, maxLength: N })
      .map((all) => Float64Array.from(all, (value) => value / 100))
    return fc
      .record({
        first: parts,
        second: parts,
        one: values,
        two: values,
        baseline: baselines(timesMs),
        score: scores(timesMs),
        window: scores(timesMs),
        peak: scores(timesMs).filter(({ kind: of }) => of !== 'moment'),
      })
      .map(({ first, second, one, two, baseline, score, window, peak }): ClaimSetting => {
        const events = train ? { fromMs: N * stepMs + 60, toMs: 2 * N * stepMs + 60 } : ('alone' as const)
        return {
          ...firstSight,
          samplingRateHz: some.samplingRateHz,
          timesMs,
          chain: some.stages.map(({ spec }) => spec),
          extent,
          baseline,
          score,
          measure: {
            mean: { fromMs: window.fromMs, toMs: window.toMs },
            peak: { fromMs: peak.fromMs, toMs: peak.toMs },
            polarity: peak.polarity,
          },
          conditions:
            kind === 'built'
              ? [
                  { name: 'one', source: { kind, components: first, events } },
                  { name: 'two', source: { kind, components: second, events } },
                ]
              : [
                  { name: 'one', source: { kind, values: one } },
                  { name: 'two', source: { kind, values: two } },
                ],
          chosen: difference ? { kind: 'difference', first: 'one', second: 'two' } : { kind: 'condition', name: 'one' },
          noise: { ...firstSight.noise, lines: [] } as ClaimSetting['noise'],
          unseenThreshold: 1,
        }
      })
  })

/** Runs a curve to its end. */
export function whole<T>(steps: Generator<unknown, T>): T {
  for (;;) {
    const step = steps.next()
    if (step.done) return step.value
  }
}

export function wholeCurve(steps: Generator<unknown, ClaimCurve | null>): ClaimCurve {
  const curve = whole(steps)
  if (curve === null) throw new Error('there is nothing to vary')
  return curve
}
