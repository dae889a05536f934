import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { checkComponent, componentAt, componentSupportMs, type Component } from '../../src/erp/component.ts'

type Transient = Exclude<Component, { shape: 'tone' }>

const at = (component: Component, ms: number) => componentAt(component, Float64Array.of(ms))[0]

const transient: fc.Arbitrary<Transient> = fc
  .record({
    shape: fc.constantFrom('gaussian', 'asymmetric', 'slow-wave', 'ramp', 'damped-oscillation'),
    amplitudeUv: fc.double({ min: 0.1, max: 50, noNaN: true }).chain((a) => fc.constantFrom(a, -a)),
    latencyMs: fc.double({ min: -500, max: 2000, noNaN: true }),
    widthMs: fc.double({ min: 5, max: 1000, noNaN: true }),
    riseShare: fc.double({ min: 0.02, max: 0.98, noNaN: true }),
    edgeShare: fc.double({ min: 0.01, max: 1, noNaN: true }),
    frequencyHz: fc.double({ min: 0.5, max: 40, noNaN: true }),
  })
  .map((r) => ({ ...r, name: 'c', edgeMs: r.edgeShare * r.widthMs }) as unknown as Transient)

/** The outermost moments at which |x| (of the envelope for an oscillation) is half the amplitude, by bisection on each side. */
function fullWidthAtHalfMaximum(c: Transient): number {
  const envelope = c.shape === 'damped-oscillation' ? ({ ...c, frequencyHz: 0.001 } as Transient) : c
  const support = componentSupportMs(envelope) as { fromMs: number; toMs: number }
  const half = Math.abs(c.amplitudeUv) / 2
  const crossing = (inside: number, outside: number) => {
    for (let i = 0; i < 200; i++) {
      const middle = (inside + outside) / 2
      if (Math.abs(at(envelope, middle)) >= half) inside = middle
      else outside = middle
    }
    return inside
  }
  return crossing(c.latencyMs, support.toMs) - crossing(c.latencyMs, support.fromMs)
}

describe('componentAt', () => {
  test('takes its amplitude at its latency and nowhere exceeds it', () => {
    fc.assert(
      fc.property(transient, fc.double({ min: -3, max: 3, noNaN: true }), (c, widths) => {
        expect(at(c, c.latencyMs)).toBeCloseTo(c.amplitudeUv, 12)
        expect(Math.abs(at(c, c.latencyMs + widths * c.widthMs))).toBeLessThanOrEqual(
          Math.abs(c.amplitudeUv) * (1 + 1e-12),
        )
      }),
    )
  })

  test('has exactly the stated full width at half maximum (an oscillation: its envelope)', () => {
    fc.assert(
      fc.property(transient, (c) => {
        // the oscillation's envelope is reached by a carrier so slow (1000 s) that it is 1 to 1e-5
        const tolerance = c.shape === 'damped-oscillation' ? 1e-4 : 1e-9
        expect(Math.abs(fullWidthAtHalfMaximum(c) / c.widthMs - 1)).toBeLessThan(tolerance)
      }),
    )
  })

  test('is below 1e-12 of its amplitude outside its support', () => {
    fc.assert(
      fc.property(transient, fc.double({ min: 1e-6, max: 100, noNaN: true }), (c, beyond) => {
        const { fromMs, toMs } = componentSupportMs(c) as { fromMs: number; toMs: number }
        const bound = 1e-12 * Math.abs(c.amplitudeUv)
        expect(Math.abs(at(c, fromMs - beyond))).toBeLessThan(bound)
        expect(Math.abs(at(c, toMs + beyond))).toBeLessThan(bound)
      }),
    )
  })

  test('has the closed-form areas of its docstring', () => {
    // a fine midpoint sum; kinks of the ramp cost second order only
    const area = (c: Transient) => {
      const { fromMs, toMs } = componentSupportMs(c) as { fromMs: number; toMs: number }
      const n = 200_000
      const h = (toMs - fromMs) / n
      const x = componentAt(
        c,
        Float64Array.from({ length: n }, (_, i) => fromMs + (i + 0.5) * h),
      )
      return x.reduce((s, v) => s + v, 0) * h
    }
    const common = { name: 'c', amplitudeUv: 10, latencyMs: 400, widthMs: 120 }
    // Source: textbook, recomputed: a Gaussian's area is s·√(2π), with s = W/(2√(2 ln 2))
    expect(area({ ...common, shape: 'gaussian' })).toBeCloseTo(10 * 120 * Math.sqrt(Math.PI / (4 * Math.LN2)), 6)
    expect(area({ ...common, shape: 'asymmetric', riseShare: 0.3 })).toBeCloseTo(
      10 * 120 * Math.sqrt(Math.PI / (4 * Math.LN2)),
      4,
    )
    expect(area({ ...common, shape: 'slow-wave', edgeMs: 40 })).toBeCloseTo(1200, 4)
    expect(area({ ...common, shape: 'ramp', riseShare: 0.25 })).toBeCloseTo(1200, 4)
  })

  test('a Gaussian of SD 80 ms and 10 µV has the area 2.00530 µV·s', () => {
    // derived: A·s·√(2π) with s = 80 ms
    const sd = 80
    const widthMs = 2 * Math.sqrt(2 * Math.LN2) * sd
    expect((10 * widthMs * Math.sqrt(Math.PI / (4 * Math.LN2))) / 1000).toBeCloseTo(2.0053, 5)
    expect(at({ shape: 'gaussian', name: 'c', amplitudeUv: 10, latencyMs: 400, widthMs }, 400 + sd)).toBeCloseTo(
      10 * Math.exp(-0.5),
      12,
    )
  })

  test('an asymmetric component with riseShare 0.5 is the Gaussian', () => {
    const common = { name: 'c', amplitudeUv: -3, latencyMs: 210, widthMs: 90 }
    for (const ms of [100, 190, 210, 240, 400]) {
      expect(at({ ...common, shape: 'asymmetric', riseShare: 0.5 }, ms)).toBeCloseTo(
        at({ ...common, shape: 'gaussian' }, ms),
        14,
      )
    }
  })

  test('a ramp rises linearly from exactly its onset', () => {
    const ramp: Component = { shape: 'ramp', name: 'r', amplitudeUv: 6, latencyMs: 180, widthMs: 50, riseShare: 0.3 }
    expect(at(ramp, 150)).toBe(0)
    expect(at(ramp, 149.9)).toBe(0)
    expect(at(ramp, 165)).toBeCloseTo(3, 12)
    expect(at(ramp, 172.5)).toBeCloseTo(4.5, 12)
    expect(at(ramp, 180 + 35)).toBeCloseTo(3, 12)
    expect(at(ramp, 180 + 70)).toBe(0)
  })

  test('a slow wave is exactly flat on its top', () => {
    const wave: Component = {
      shape: 'slow-wave',
      name: 's',
      amplitudeUv: -4,
      latencyMs: 500,
      widthMs: 400,
      edgeMs: 100,
    }
    for (const ms of [350, 400, 500, 650]) expect(at(wave, ms)).toBe(-4)
    expect(at(wave, 300)).toBeCloseTo(-2, 12)
    expect(at(wave, 700)).toBeCloseTo(-2, 12)
    expect(at(wave, 250)).toBeCloseTo(0, 14)
    expect(at(wave, 750.01)).toBe(0)
  })

  test('a damped oscillation starts at nothing, turns over every period and halves every D', () => {
    const c: Component = {
      shape: 'damped-oscillation',
      name: 'd',
      amplitudeUv: 5,
      latencyMs: 100,
      widthMs: 100,
      riseShare: 0.2,
      frequencyHz: 20,
    }
    expect(at(c, 60)).toBe(0)
    expect(at(c, 100 + 25)).toBeCloseTo(-5 * 2 ** (-25 / 80), 12)
    expect(at(c, 100 + 50)).toBeCloseTo(5 * 2 ** (-50 / 80), 12)
    expect(at(c, 100 + 80 * 3)).toBeCloseTo((5 / 8) * Math.cos(2 * Math.PI * 0.02 * 240), 12)
  })

  test('a tone is steady, has its phase at the event and never ends', () => {
    const tone: Component = { shape: 'tone', name: 't', amplitudeUv: 1.5, frequencyHz: 75, phaseRad: 0.9 }
    expect(at(tone, 0)).toBeCloseTo(1.5 * Math.cos(0.9), 14)
    expect(at(tone, 1000)).toBeCloseTo(1.5 * Math.cos(0.9), 12)
    expect(at(tone, 1e6 + 2)).toBeCloseTo(1.5 * Math.cos(2 * Math.PI * 0.15 + 0.9), 9)
    expect(componentSupportMs(tone)).toBe('unbounded')
  })
})

describe('checkComponent', () => {
  const good: Component = { shape: 'gaussian', name: 'n1', amplitudeUv: 1, latencyMs: 100, widthMs: 50 }
  test.each([
    [{ ...good, name: ' ' }, /must have a name/],
    [{ ...good, amplitudeUv: NaN }, /amplitudeUv must lie between .* was NaN/],
    [{ ...good, latencyMs: Infinity }, /latencyMs must lie between .* was Infinity/],
    [{ ...good, widthMs: 0 }, /widthMs must lie between 0.1 and 1000000, was 0/],
    [{ ...good, shape: 'asymmetric', riseShare: 1 }, /riseShare must lie between 0.02 and 0.98, was 1/],
    [{ ...good, shape: 'slow-wave', edgeMs: 51 }, /edgeMs must be positive and at most widthMs \(50\), was 51/],
    [{ ...good, shape: 'damped-oscillation', riseShare: 0.5, frequencyHz: -1 }, /frequencyHz must lie .* was -1/],
    [{ shape: 'tone', name: 't', amplitudeUv: 1, frequencyHz: 10, phaseRad: NaN }, /phaseRad must be finite, was NaN/],
    [{ ...good, shape: 'square' }, /shape must be one of gaussian, .*, was square/],
  ])('refuses %j', (component, message) => {
    expect(() => checkComponent(component as Component)).toThrow(RangeError)
    expect(() => checkComponent(component as Component)).toThrow(message)
    expect(() => componentAt(component as Component, Float64Array.of(0))).toThrow(message)
  })
})
