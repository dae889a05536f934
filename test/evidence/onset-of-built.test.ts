import { describe, expect, test } from 'vitest'
import type { Component } from '../../src/erp/component.ts'
import { epochTimesMs } from '../../src/erp/waveform.ts'
import { onsetOfBuilt } from '../../src/evidence/onset-of-built.ts'

const times = epochTimesMs(500, { fromMs: -200, toMs: 800 })
const ramp: Component = { shape: 'ramp', name: 'r', amplitudeUv: -6, latencyMs: 180, widthMs: 50, riseShare: 0.3 }

describe('onsetOfBuilt', () => {
  test('of a linear rise is 5 % of the way up, whatever the polarity', () => {
    // from 150 to 180 ms
    expect(onsetOfBuilt([ramp], times)).toBeCloseTo(151.5, 9)
    expect(onsetOfBuilt([{ ...ramp, amplitudeUv: 6 }], times)).toBeCloseTo(151.5, 9)
  })

  test('of a Gaussian is where it takes 5 % of its peak', () => {
    const c: Component = { shape: 'gaussian', name: 'g', amplitudeUv: 8, latencyMs: 400, widthMs: 200 }
    expect(onsetOfBuilt([c], times)).toBeCloseTo(400 - 100 * Math.sqrt(Math.log2(20)), 9)
  })

  test('is the earliest, of a small component before a large one too', () => {
    const small: Component = { shape: 'ramp', name: 's', amplitudeUv: 0.6, latencyMs: 60, widthMs: 20, riseShare: 0.5 }
    // 5 % of 6 µV is half of 0.6
    expect(onsetOfBuilt([ramp, small], times)).toBeCloseTo(50, 9)
  })

  test('leaves steady tones out', () => {
    expect(
      onsetOfBuilt([ramp, { shape: 'tone', name: 't', amplitudeUv: 3, frequencyHz: 75, phaseRad: 0 }], times),
    ).toBeCloseTo(151.5, 9)
  })

  test('is "no onset" without any activity, and the epoch’s start where it is up already', () => {
    expect(onsetOfBuilt([], times)).toBe('no onset')
    expect(onsetOfBuilt([{ ...ramp, amplitudeUv: 0 }], times)).toBe('no onset')
    expect(
      onsetOfBuilt(
        [{ shape: 'slow-wave', name: 'w', amplitudeUv: 2, latencyMs: -100, widthMs: 600, edgeMs: 100 }],
        times,
      ),
    ).toBe(-200)
  })
})
