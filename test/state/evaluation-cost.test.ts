import { describe, expect, test } from 'vitest'
import { SCENARIOS } from '../../src/erp/scenarios.ts'
import type { ButterworthSpec, WindowedSincSpec } from '../../src/filter/stage.ts'
import { isHeavy } from '../../src/state/evaluation-cost.ts'
import { startWorkspace, type Workspace, workspaceOf } from '../../src/state/workspace.ts'

function withStage(spec: Workspace['chain'][number], samplingRateHz = 500): Workspace {
  const workspace = startWorkspace()
  if (workspace.source.kind === 'built') workspace.source.samplingRateHz = samplingRateHz
  return { ...workspace, chain: [spec] }
}

/** A Hamming window has 3.3·fs/Δf taps. */
const sinc = (taps: number, delay: WindowedSincSpec['delay'] = 'compensated'): WindowedSincSpec => ({
  design: 'windowed-sinc',
  pass: 'low',
  cutoffsHz: [30],
  meaning: 'half-amplitude',
  transitionHz: (3.3 * 500) / taps,
  window: { name: 'hamming' },
  delay,
})

const highPass = (cutoffHz: number): ButterworthSpec => ({
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [cutoffHz],
  meaning: 'half-amplitude',
  direction: 'both',
})

describe('an evaluation', () => {
  test.each(SCENARIOS.map((scenario) => [scenario.id, scenario] as const))(
    'of the scenario %s is light',
    (_, scenario) => {
      expect(isHeavy(workspaceOf(scenario), null)).toBe(false)
    },
  )

  test('of a windowed sinc is light up to 3301 taps and heavy with 33 001', () => {
    expect(isHeavy(withStage(sinc(3301)), null)).toBe(false)
    expect(isHeavy(withStage(sinc(33_001)), null)).toBe(true)
  })

  test('of a minimum phase is heavy with 3301 taps', () => {
    expect(isHeavy(withStage(sinc(3301, 'minimum-phase')), null)).toBe(true)
    expect(isHeavy(withStage(sinc(331, 'minimum-phase')), null)).toBe(false)
  })

  test('of a high-pass is light at 0.1 Hz, 500 Hz sampling and heavy at 0.01 Hz, 4096 Hz', () => {
    expect(isHeavy(withStage(highPass(0.1)), null)).toBe(false)
    expect(isHeavy(withStage(highPass(0.01), 4096), null)).toBe(true)
  })

  test('of an epoch of minutes is heavy', () => {
    const workspace = withStage(highPass(1), 4096)
    if (workspace.source.kind === 'built') workspace.source.epoch = { fromMs: 0, toMs: 120_000 }
    expect(isHeavy(workspace, null)).toBe(true)
  })

  test('does not count a stage that is switched off', () => {
    expect(isHeavy(withStage({ ...sinc(33_001), enabled: false }), null)).toBe(false)
  })

  test('of what cannot be designed is judged without an error', () => {
    for (const spec of [highPass(Number.NaN), { ...highPass(1), cutoffsHz: [] }, { ...sinc(331), transitionHz: 0 }])
      expect(typeof isHeavy(withStage(spec), null)).toBe('boolean')
  })
})
