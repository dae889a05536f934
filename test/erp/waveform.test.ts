import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import type { Component } from '../../src/erp/component.ts'
import {
  checkBuiltWaveform,
  differenceComponents,
  epochTimesMs,
  supportMs,
  waveformAt,
  type BuiltWaveform,
} from '../../src/erp/waveform.ts'

const n1: Component = { shape: 'gaussian', name: 'n1', amplitudeUv: -4, latencyMs: 100, widthMs: 40 }
const p3: Component = { shape: 'gaussian', name: 'p3', amplitudeUv: 8, latencyMs: 380, widthMs: 180 }
const hum: Component = { shape: 'tone', name: 'hum', amplitudeUv: 1, frequencyHz: 50, phaseRad: 0 }

describe('epochTimesMs', () => {
  test('holds both limits and time 0 exactly', () => {
    const times = epochTimesMs(500, { fromMs: -400, toMs: 1000 })
    expect(times.length).toBe(701)
    expect(times[0]).toBe(-400)
    expect(times[200]).toBe(0)
    expect(times[700]).toBe(1000)
  })

  test('puts time 0 on a sample at every sampling rate, and keeps the limits to 1e-6 sample', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 100, max: 4096, noNaN: true }),
        fc.integer({ min: 20, max: 500 }),
        fc.integer({ min: 20, max: 900 }),
        (fs, before, after) => {
          const times = epochTimesMs(fs, { fromMs: -(before * 1000) / fs, toMs: (after * 1000) / fs })
          expect(times.length).toBe(before + after + 1)
          expect(times[before]).toBe(0)
        },
      ),
    )
  })

  test.each([
    [99, { fromMs: 0, toMs: 1000 }, /samplingRateHz must lie between 100 and 4096, was 99/],
    [NaN, { fromMs: 0, toMs: 1000 }, /samplingRateHz .* was NaN/],
    [500, { fromMs: 10, toMs: -10 }, /epoch must begin before it ends, was 10 to -10 ms/],
    [500, { fromMs: 0, toMs: 20 }, /epoch must hold 16 to 1000000 samples/],
    [4096, { fromMs: 0, toMs: 1e9 }, /epoch must hold 16 to 1000000 samples/],
    [500, { fromMs: NaN, toMs: 20 }, /epoch must begin/],
  ])('refuses %d Hz, %j', (fs, epoch, message) => {
    expect(() => epochTimesMs(fs, epoch)).toThrow(message)
  })
})

describe('waveformAt', () => {
  test('adds its components', () => {
    const times = epochTimesMs(250, { fromMs: -200, toMs: 800 })
    const sum = waveformAt([n1, p3, hum], times)
    const parts = [n1, p3, hum].map((c) => waveformAt([c], times))
    sum.forEach((v, i) => expect(v).toBeCloseTo(parts[0][i] + parts[1][i] + parts[2][i], 13))
  })

  test('of a difference is the difference of the waveforms, and its components keep their condition', () => {
    const times = epochTimesMs(250, { fromMs: -200, toMs: 800 })
    const difference = differenceComponents(
      { name: 'rare', components: [n1, p3] },
      { name: 'frequent', components: [n1, hum] },
    )
    const a = waveformAt([n1, p3], times)
    const b = waveformAt([n1, hum], times)
    waveformAt(difference, times).forEach((v, i) => expect(v).toBeCloseTo(a[i] - b[i], 13))
    expect(difference.map((c) => c.name)).toEqual(['rare: n1', 'rare: p3', 'frequent: n1', 'frequent: hum'])
    expect(n1.amplitudeUv).toBe(-4)
  })
})

describe('supportMs', () => {
  test('spans the bounded components and leaves tones out', () => {
    const support = supportMs([n1, p3, hum])
    expect(support?.fromMs).toBeLessThan(-100)
    expect(support?.toMs).toBeGreaterThan(800)
    expect(supportMs([hum])).toBeNull()
    expect(supportMs([])).toBeNull()
  })
})

describe('checkBuiltWaveform', () => {
  const good: BuiltWaveform = {
    samplingRateHz: 500,
    epoch: { fromMs: -200, toMs: 800 },
    conditions: [{ name: 'rare', components: [n1, p3] }],
  }
  test('accepts a good one', () => expect(() => checkBuiltWaveform(good)).not.toThrow())
  test.each([
    [{ ...good, conditions: [] }, /at least one condition/],
    [{ ...good, conditions: [good.conditions[0], good.conditions[0]] }, /different names, "rare" came twice/],
    [
      { ...good, samplingRateHz: 100, conditions: [{ name: 'a', components: [hum] }] },
      /frequencyHz must lie below 50 .* was 50/,
    ],
    [{ ...good, conditions: [{ name: 'a', components: [{ ...n1, widthMs: -1 }] }] }, /widthMs/],
  ])('refuses a bad one (%#)', (waveform, message) => {
    expect(() => checkBuiltWaveform(waveform)).toThrow(message)
  })
})
