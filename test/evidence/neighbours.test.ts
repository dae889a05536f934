import { describe, expect, test } from 'vitest'
import type { Component } from '../../src/erp/component.ts'
import { waveformAt } from '../../src/erp/waveform.ts'
import { checkEvents, type Interval, neighbourWaveform } from '../../src/evidence/event-train.ts'
import { filterBuiltWaveform } from '../../src/evidence/filtered-waveform.ts'
import { neighbourContribution, neighboursAfter, neighboursBefore } from '../../src/evidence/neighbours.ts'
import { applyEpochs } from '../../src/filter/apply-chain.ts'
import { designChain } from '../../src/filter/chain.ts'
import { runContinuous } from '../../src/filter/stand-alone.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import { largest } from '../filter/expect-close.ts'

const highPass: StageSpec = {
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [0.5],
  meaning: 'half-amplitude',
  direction: 'both',
}
const lowPass: StageSpec = {
  design: 'windowed-sinc',
  pass: 'low',
  cutoffsHz: [30],
  meaning: 'half-amplitude',
  transitionHz: 10,
  window: { name: 'hamming' },
  delay: 'compensated',
}
const amplifier: StageSpec = { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.1 }

/** Every shape, with bends where they have them. */
const every: Component[] = [
  { shape: 'gaussian', name: 'late', amplitudeUv: 8, latencyMs: 400, widthMs: 200 },
  { shape: 'asymmetric', name: 'skewed', amplitudeUv: -3, latencyMs: 150, widthMs: 80, riseShare: 0.3 },
  { shape: 'slow-wave', name: 'slow', amplitudeUv: -2, latencyMs: 600, widthMs: 500, edgeMs: 200 },
  { shape: 'ramp', name: 'ramp', amplitudeUv: 4, latencyMs: 500, widthMs: 300, riseShare: 0.8 },
  {
    shape: 'damped-oscillation',
    name: 'alpha',
    amplitudeUv: 2,
    latencyMs: 300,
    widthMs: 200,
    frequencyHz: 10,
    riseShare: 0.3,
  },
]
const rate = 250
const times = Float64Array.from({ length: 300 }, (_, i) => -300 + i * 4)

/** The waveform of a train of events at these moments, where it is not below 1e-12 of each event's. */
function trainAt(components: readonly Component[], events: readonly number[], timesMs: Float64Array): Float64Array {
  const sum = new Float64Array(timesMs.length)
  for (const event of events) {
    let from = timesMs.findIndex((ms) => ms > event - 800)
    if (from < 0) continue
    const x = waveformAt(
      components,
      timesMs.filter((ms) => ms > event - 800 && ms < event + 6000).map((ms) => ms - event),
    )
    for (const value of x) sum[from++] += value
  }
  return sum
}

/** Neighbours at k·interval, k ≠ 0, as far as they are near enough to matter. */
const fixedEvents = (intervalMs: number, count: number) =>
  Array.from({ length: 2 * count + 1 }, (_, i) => (i - count) * intervalMs).filter((ms) => ms !== 0)

function expectWithin(actual: Float64Array, expected: Float64Array, tolerance: number): void {
  expect(largest(actual.map((value, i) => value - expected[i]))).toBeLessThanOrEqual(tolerance)
}

describe('a train of fixed intervals', () => {
  test.each([700, 1000, 1201, 733.3])('of %s ms is the same as adding up its events one by one', (intervalMs) => {
    const interval = { fromMs: intervalMs, toMs: intervalMs }
    expectWithin(
      neighboursBefore(every, interval, times, rate),
      trainAt(every, fixedEvents(intervalMs, 9), times),
      1e-10,
    )
  })

  test('goes through a chain as a brute-force train of 99 events on either side does', () => {
    for (const specs of [[highPass, lowPass], [amplifier, highPass], [lowPass], []] as StageSpec[][]) {
      const chain = designChain(specs, rate)
      for (const intervalMs of [1000, 1201]) {
        const far = 25_000
        const long = Float64Array.from({ length: times.length + 2 * far }, (_, i) => -300 + (i - far) * 4)
        const train = trainAt(every, fixedEvents(intervalMs, 99), long)
        // a filter cannot tell where the train ends, 100 s away, from where it goes on
        const brute = runContinuous(chain.stages, train, far, far + times.length)
        const ours = neighboursAfter(chain, every, { fromMs: intervalMs, toMs: intervalMs }, times, 'continuous')
        expectWithin(ours, brute, 1e-6)
      }
    }
  })
})

/**
 * The average train by brute force: densities of the sum of k intervals, convolved on a fine grid, and the waveform's values weighed with
 * them, each at the middle of its cell.
 */
function averagedTrain(
  components: readonly Component[],
  { fromMs, toMs }: Interval,
  events: number,
  timesMs: Float64Array,
): Float64Array {
  const cellMs = 1
  const cells = (toMs - fromMs) / cellMs
  let density = Float64Array.of(1)
  const sum = new Float64Array(timesMs.length)
  for (let k = 1; k <= events; k++) {
    const next = new Float64Array(density.length + cells - 1)
    let running = 0
    for (let i = 0; i < next.length; i++) {
      running += (density[i] ?? 0) - (density[i - cells] ?? 0)
      next[i] = running / cells
    }
    density = next
    for (const sign of [1, -1]) {
      for (let i = 0; i < density.length; i++) {
        if (density[i] === 0) continue
        // the middle of k cells' middles
        const event = sign * (k * fromMs + (i + k / 2) * cellMs)
        if (Math.abs(event) > 4000) continue
        const x = waveformAt(
          components,
          timesMs.map((ms) => ms - event),
        )
        for (let m = 0; m < sum.length; m++) sum[m] += density[i] * x[m]
      }
    }
  }
  return sum
}

describe('a train of random intervals', () => {
  test('has the average waveform of all its events, to the error of the brute-force grid', () => {
    const interval = { fromMs: 500, toMs: 700 }
    const smooth = every.slice(0, 2)
    const some = times.filter((_, i) => i % 20 === 0)
    const brute = averagedTrain(smooth, interval, 8, some)
    const ours = neighboursBefore(smooth, interval, times, rate).filter((_, i) => i % 20 === 0)
    // cells of 1 ms under waveforms of 80 ms and more: (1 ms)²/24 of their curvature for each of the events that matter
    expectWithin(ours, brute, 3e-3)
  })

  test('becomes its fixed interval as the two limits meet', () => {
    const fixed = neighboursBefore(every, { fromMs: 900, toMs: 900 }, times, rate)
    // an average over ± 0.05 ms is off by the curvature alone, but for the alpha’s and the ramp’s bends
    const near = neighboursBefore(every.slice(0, 3), { fromMs: 899.95, toMs: 900.05 }, times, rate)
    const same = neighboursBefore(every.slice(0, 3), { fromMs: 900, toMs: 900 }, times, rate)
    expectWithin(near, same, 1e-5)
    expect(largest(fixed)).toBeGreaterThan(1)
  })

  test('satisfies the renewal equation: the events that follow are the next event and those that follow it', () => {
    // the neighbours far after the epoch all lie on one side, so that N is N⁺ there
    const interval = { fromMs: 400, toMs: 650 }
    const { meanUv, from, deviation } = neighbourWaveform(every, interval, times, rate, 4000, 4000)
    const at = (sample: number) => meanUv + (deviation[sample - from] ?? 0)
    const first = 1600
    for (let m = first; m < first + 200; m += 7) {
      // Simpson's rule over [m − 162.5, m − 100] samples, its half sample at the far end by interpolation
      let sum = 0
      const low = m - 162
      for (let k = low; k < m - 100; k += 2) sum += (at(k) + 4 * at(k + 1) + at(k + 2)) / 3
      const edge = 0.5 * at(low) - 0.125 * (at(low + 1) - at(low - 1)) * 0.5
      expect(Math.abs((sum + edge) / 62.5 - at(m))).toBeLessThan(1e-6)
    }
  })

  test.each([
    [500, 1100],
    [800, 840],
    [800, 803],
  ])('every %s to %s ms does not depend on the grid it is solved on', (fromMs, toMs) => {
    const interval = { fromMs, toMs }
    const fine = Float64Array.from({ length: 300 * 16 }, (_, i) => -300 + i / 4)
    const finely = neighboursBefore(every, interval, fine, 16 * rate).filter((_, i) => i % 16 === 0)
    const coarsely = neighboursBefore(every, interval, times, rate)
    expectWithin(coarsely, finely, 1e-5)
    // where a component bends the value of one sample is off; a score adds up many
    const mean = (values: Float64Array) => values.slice(90, 110).reduce((sum, value) => sum + value, 0) / 20
    expect(Math.abs(mean(coarsely) - mean(finely))).toBeLessThan(1e-6)
  })

  test('is its mean far away: the area over the mean interval', () => {
    const interval = { fromMs: 1000, toMs: 1400 }
    const { meanUv, deviation, from } = neighbourWaveform(every, interval, times, rate, 2 ** 20, 2 ** 20)
    expect(Math.abs(deviation[0])).toBeLessThan(1e-9)
    expect(Math.abs(deviation[deviation.length - 1])).toBeLessThan(1e-9)
    expect(deviation.length).toBeLessThan(2 ** 18)
    expect(from).toBeLessThan(0)
    // the same area by sums on a fine grid
    let plain = 0
    for (let ms = -1000; ms < 9000; ms += 0.5) plain += waveformAt(every, Float64Array.of(ms))[0] * 0.5
    expect(meanUv).toBeCloseTo(plain / 1200, 5)
  })

  test('goes through chains as the long average train does', () => {
    const interval = { fromMs: 500, toMs: 1100 }
    const far = 30_000
    const { meanUv, from, deviation } = neighbourWaveform(every, interval, times, rate, far, far)
    const train = Float64Array.from(
      { length: times.length + 2 * far },
      (_, i) => meanUv + (deviation[i - far - from] ?? 0),
    )
    for (const specs of [[highPass, lowPass], [amplifier, highPass, lowPass], [lowPass]] as StageSpec[][]) {
      const chain = designChain(specs, rate)
      expectWithin(
        neighboursAfter(chain, every, interval, times, 'continuous'),
        runContinuous(chain.stages, train, far, far + times.length),
        1e-6,
      )
    }
    const chain = designChain([amplifier, highPass], rate)
    const recorded = runContinuous(chain.stages.slice(0, 1), train, far, far + times.length)
    expectWithin(
      neighboursAfter(chain, every, interval, times, 'epochs'),
      applyEpochs(chain.stages.slice(1), recorded),
      1e-6,
    )
  })

  test('agrees with 20 000 drawn trains to their scatter', () => {
    const interval = { fromMs: 600, toMs: 900 }
    const smooth = every.slice(0, 1)
    let state = 12345
    const draw = () => {
      state = (Math.imul(state, 1664525) + 1013904223) >>> 0
      return state / 2 ** 32
    }
    const at = Float64Array.of(-200, 100, 700)
    const sum = new Float64Array(3)
    const squares = new Float64Array(3)
    const draws = 20_000
    for (let k = 0; k < draws; k++) {
      const events: number[] = []
      for (const sign of [1, -1]) for (let t = 0, j = 0; j < 4; j++) events.push(sign * (t += 600 + 300 * draw()))
      trainAt(smooth, events, at).forEach((value, i) => {
        sum[i] += value
        squares[i] += value * value
      })
    }
    const ours = neighboursBefore(smooth, interval, times, rate)
    at.forEach((ms, i) => {
      const mean = sum[i] / draws
      const error = Math.sqrt((squares[i] / draws - mean * mean) / draws)
      expect(Math.abs(ours[(ms + 300) / 4] - mean)).toBeLessThan(5 * error + 1e-9)
    })
  })
})

describe('the neighbours’ contribution', () => {
  const w = times.map((ms) => (ms >= 80 && ms <= 140 ? 1 / 16 : ms >= -200 && ms <= 0 ? -1 / 51 : 0))

  test('is the weighted sum of their filtered part, under both extents, of a value and of a change', () => {
    const chain = designChain([amplifier, highPass, lowPass], rate)
    for (const interval of [
      { fromMs: 1000, toMs: 1400 },
      { fromMs: 900, toMs: 900 },
    ])
      for (const extent of ['continuous', 'epochs'] as const) {
        const y = neighboursAfter(chain, every, interval, times, extent)
        const x = neighboursBefore(every, interval, times, rate)
        const dot = (v: Float64Array) => v.reduce((sum, value, m) => sum + w[m] * value, 0)
        expect(neighbourContribution(chain, every, interval, times, extent, w, null)).toBeCloseTo(dot(y), 8)
        expect(neighbourContribution(chain, every, interval, times, extent, w, w)).toBeCloseTo(dot(y) - dot(x), 8)
      }
  })

  test('of a slow train is nothing after a high-pass that has forgotten', () => {
    const chain = designChain([{ ...highPass, cutoffsHz: [5] } as StageSpec], rate)
    expect(
      Math.abs(
        neighbourContribution(chain, every.slice(0, 1), { fromMs: 9000, toMs: 12_000 }, times, 'continuous', w, null),
      ),
    ).toBeLessThan(1e-9)
  })

  test('adds to the event that stands alone what the whole train is', () => {
    const chain = designChain([highPass], rate)
    const whole = trainAt(
      every,
      [0, ...fixedEvents(1000, 40)],
      Float64Array.from({ length: 20_300 }, (_, i) => -300 + (i - 10_000) * 4),
    )
    const brute = runContinuous(chain.stages, whole, 10_000, 10_300)
    const alone = filterBuiltWaveform(chain, every, times, 'continuous')
    const around = neighboursAfter(chain, every, { fromMs: 1000, toMs: 1000 }, times, 'continuous')
    expectWithin(
      alone.map((y, m) => y + around[m]),
      brute,
      1e-6,
    )
  })

  test('leaves steady tones alone', () => {
    const tone: Component = { shape: 'tone', name: 'hum', amplitudeUv: 3, frequencyHz: 50, phaseRad: 0 }
    expect(largest(neighboursBefore([tone], { fromMs: 500, toMs: 600 }, times, rate))).toBe(0)
  })
})

test('intervals that no experiment has are refused', () => {
  expect(() => checkEvents('alone')).not.toThrow()
  expect(() => checkEvents({ fromMs: 10, toMs: 500 })).toThrow('events.fromMs must be at least 50 ms, was 10')
  expect(() => checkEvents({ fromMs: 500, toMs: 400 })).toThrow('events.toMs')
  expect(() => checkEvents({ fromMs: NaN, toMs: 400 })).toThrow(RangeError)
  expect(() => neighbourWaveform(every, { fromMs: 500, toMs: 501 }, times, rate, 5_000_000, 0)).toThrow(
    '4000000 samples',
  )
})
