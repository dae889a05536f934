import { describe, expect, test } from 'vitest'
import { type Component, COMPONENT_SHAPES } from '../../src/erp/component.ts'
import { componentWords } from '../../src/words/component-words.ts'

const transient = { name: 'bump', amplitudeUv: -4.5, latencyMs: 900, widthMs: 1100 }
const of: Readonly<Record<Component['shape'], Component>> = {
  gaussian: { ...transient, shape: 'gaussian' },
  asymmetric: { ...transient, shape: 'asymmetric', riseShare: 0.4 },
  'slow-wave': { ...transient, shape: 'slow-wave', edgeMs: 300 },
  ramp: { ...transient, shape: 'ramp', riseShare: 0.3 },
  'damped-oscillation': { ...transient, shape: 'damped-oscillation', riseShare: 0.29, frequencyHz: 10.5 },
  tone: { shape: 'tone', name: '75 Hz refresh', amplitudeUv: 1.5, frequencyHz: 75, phaseRad: 0.9 },
}

describe('componentWords', () => {
  test('says every number of every shape', () => {
    const place = '−4.5 µV at 900 ms, 1100 ms wide at half maximum'
    expect(COMPONENT_SHAPES.map((shape) => componentWords(of[shape]))).toEqual([
      `bump (Gaussian, ${place})`,
      `bump (asymmetric, ${place}, 40 % of the width before the peak)`,
      `bump (slow wave, ${place}, on- and offset of 300 ms)`,
      `bump (ramp, ${place}, 30 % of the width before the peak)`,
      `bump (damped oscillation, ${place}, 29 % of the width before the peak, 10.5 Hz)`,
      '75 Hz refresh (steady tone, 1.5 µV at 75 Hz, phase 0.9 rad at 0 ms)',
    ])
  })
})
