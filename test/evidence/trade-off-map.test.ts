import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { correctBaseline } from '../../src/erp/baseline.ts'
import type { Component } from '../../src/erp/component.ts'
import { defaultNoise, type NoiseModel } from '../../src/erp/noise.ts'
import { type Score, scoreOf, scoreWeights } from '../../src/erp/score.ts'
import { epochTimesMs, waveformAt } from '../../src/erp/waveform.ts'
import { effectiveWindow } from '../../src/evidence/effective-window.ts'
import { filterBuiltWaveform, filterRecordedWaveform } from '../../src/evidence/filtered-waveform.ts'
import { lockedLineContribution, scoreVariance } from '../../src/evidence/score-noise.ts'
import { chainWithCandidate, logCutoffs } from '../../src/evidence/trade-off-candidate.ts'
import { cellFigures } from '../../src/evidence/trade-off-figures.ts'
import {
  computeCell,
  computeCells,
  type MapQuestion,
  mergeCells,
  planMap,
  prepareMap,
} from '../../src/evidence/trade-off-map.ts'
import { waveformSample } from '../../src/evidence/waveform-sample.ts'
import { designChain, type StageSpec, wholeResponseForTest } from './whole-response.ts'

const silent: NoiseModel = {
  kind: 'model',
  exponent: 1,
  levelAt1HzUv2PerHz: 0,
  flatBelowHz: 0.02,
  whiteUv2PerHz: 0,
  lines: [],
}

/** 10 µV at 400 ms with a standard deviation of 80 ms. */
const PULSE: Component = {
  name: 'late positivity',
  shape: 'gaussian',
  amplitudeUv: 10,
  latencyMs: 400,
  widthMs: 80 * 2 * Math.sqrt(2 * Math.LN2),
}

const question = (changes: Partial<MapQuestion>): MapQuestion => ({
  samplingRateHz: 250,
  timesMs: epochTimesMs(250, { fromMs: -400, toMs: 1000 }),
  chain: [],
  place: { at: 0, replaces: false },
  candidate: { design: 'butterworth', pass: 'high', meaning: 'half-amplitude', direction: 'both' },
  cutoffsHz: [0.1, 0.3, 1],
  rollOffs: [2],
  extent: 'continuous',
  baseline: { fromMs: -200, toMs: 0 },
  scores: [{ score: { kind: 'mean', fromMs: 300, toMs: 500, polarity: 'positive' }, noise: 'with noise' }],
  waveforms: [{ kind: 'built', components: [PULSE] }],
  noise: defaultNoise(),
  noisePassed: 'nothing',
  trials: 40,
  seed: 1,
  ...changes,
})

const moment = (atMs: number): Score => ({ kind: 'moment', fromMs: atMs, toMs: atMs, polarity: 'positive' })

describe('a Gaussian pulse after known filters', () => {
  const timesMs = epochTimesMs(1000, { fromMs: -1500, toMs: 2500 })
  const whole = { fromMs: -1000, toMs: 2000 }
  const pulse = (changes: Partial<MapQuestion>) =>
    prepareMap(question({ samplingRateHz: 1000, timesMs, baseline: 'none', noise: silent, ...changes }))

  test('zero-phase high-passes give the peak, its latency and the false negativity that were derived for them', () => {
    // Source: derived and checked by a second implementation (two passes of order 2, −6 dB at the cutoff, long zero padding)
    const rows = [
      [0.1, 9.555, 400, -0.435, 56, -0.434],
      [0.3, 8.677, 400, -1.165, 118, -1.147],
      [0.5, 7.831, 400, -1.67, 149, -1.535],
      [1, 5.93, 400, -2.16, 193, -1.323],
      [2, 3.211, 400, -1.69, 235, -0.01],
    ]
    const without = (score: Score) => ({ score, noise: 'without noise' as const })
    const before = { fromMs: -1000, toMs: 390, polarity: 'negative' } as const
    const prepared = pulse({
      cutoffsHz: rows.map(([hz]) => hz),
      scores: [
        without({ kind: 'peak-amplitude', ...whole, polarity: 'positive' }),
        without({ kind: 'peak-latency', ...whole, polarity: 'positive' }),
        without({ kind: 'peak-amplitude', ...before }),
        without({ kind: 'peak-latency', ...before }),
        without(moment(80)),
      ],
    })
    rows.forEach(([, peak, latency, lowest, at, early], i) => {
      const after = computeCell(prepared, i).scores.map((score) => score.after[0])
      expect(Math.abs(after[0] - peak)).toBeLessThan(6e-4)
      expect(Math.abs(after[1] - latency)).toBeLessThan(0.1)
      expect(Math.abs(after[2] - lowest)).toBeLessThan(6e-4)
      expect(Math.abs(after[3] - at)).toBeLessThan(0.6)
      expect(Math.abs(after[4] - early)).toBeLessThan(6e-4)
    })
  })

  test('the false early negativity is not monotonic in the cutoff: largest near 0.5 Hz at 80 ms', () => {
    const cutoffsHz = logCutoffs(0.05, 3, 40)
    const prepared = pulse({ cutoffsHz, scores: [{ score: moment(80), noise: 'with noise' }] })
    const biases = cutoffsHz.map((_, i) => computeCell(prepared, i).scores[0].after[0] - prepared.before[0].after[0])
    const deepest = biases.indexOf(Math.min(...biases))
    expect(cutoffsHz[deepest]).toBeGreaterThan(0.4)
    expect(cutoffsHz[deepest]).toBeLessThan(0.8)
    for (let i = 1; i <= deepest; i++) expect(biases[i]).toBeLessThan(biases[i - 1])
    expect(Math.abs(biases[cutoffsHz.findIndex((hz) => hz >= 2)])).toBeLessThan(0.15)
  })

  test('for low cutoffs it nears area × 2·fc·(π/2n)/sin(π/2n) from below', () => {
    // Source: derived from the kernel of 1 − (two-pass gain) at 0, an upper bound in size; values from SciPy's sosfiltfilt on
    // 200 s of zeros on either side
    const area = 10 * 0.08 * Math.sqrt(2 * Math.PI)
    const lowest: Score = { kind: 'peak-amplitude', fromMs: -1000, toMs: 390, polarity: 'negative' }
    for (const [hz, reported] of [
      [0.1, -0.435],
      [0.05, -0.22105],
    ]) {
      const prepared = pulse({ cutoffsHz: [hz], scores: [{ score: lowest, noise: 'without noise' }] })
      const value = computeCell(prepared, 0).scores[0].after[0]
      const bound = (-area * 2 * hz * (Math.PI / 4)) / Math.sin(Math.PI / 4)
      expect(Math.abs(value)).toBeLessThan(Math.abs(bound))
      expect(value / bound).toBeGreaterThan(0.94)
      expect(Math.abs(value - reported)).toBeLessThan(6e-4)
    }
  })

  test('causal high-passes make it smaller and earlier, with a later negativity and nothing before the onset', () => {
    // Source: derived and checked (one pass of order 2)
    const rows = [
      [0.1, 9.157, 395, -1.54, 686],
      [0.3, 7.727, 385, -3.593, 628],
      [0.5, 6.572, 377, -4.737, 598],
      [1, 4.522, 360, -5.513, 553],
      [2, 2.391, 337, -4.309, 505],
    ]
    const kinds = [
      { kind: 'peak-amplitude', ...whole, polarity: 'positive' },
      { kind: 'peak-latency', ...whole, polarity: 'positive' },
      { kind: 'peak-amplitude', ...whole, polarity: 'negative' },
      { kind: 'peak-latency', ...whole, polarity: 'negative' },
      moment(-150),
    ] as const
    const prepared = pulse({
      candidate: { design: 'butterworth', pass: 'high', meaning: 'half-power', direction: 'forward' },
      cutoffsHz: rows.map(([hz]) => hz),
      scores: kinds.map((score) => ({ score, noise: 'without noise' })),
    })
    rows.forEach(([, peak, latency, lowest, at], i) => {
      const after = computeCell(prepared, i).scores.map((score) => score.after[0])
      expect(Math.abs(after[0] - peak)).toBeLessThan(6e-4)
      expect(Math.abs(after[1] - latency)).toBeLessThan(0.6)
      expect(Math.abs(after[2] - lowest)).toBeLessThan(6e-4)
      expect(Math.abs(after[3] - at)).toBeLessThan(0.6)
      expect(Math.abs(after[4])).toBeLessThan(1e-8)
    })
  })

  test('low-passes take from the peak by cutoff × SD alone', () => {
    // Source: derived and checked to 0.001: zero-phase of order 2 per pass, and one causal pass
    const table = [
      [0.1, 0.4885, 0.5965],
      [0.2, 0.7669, 0.8489],
      [0.4, 0.9511, 0.9732],
      [0.8, 0.9955, 0.9977],
    ]
    for (const sdMs of [10, 20, 40]) {
      const waveforms: MapQuestion['waveforms'] = [
        { kind: 'built', components: [{ ...PULSE, widthMs: sdMs * 2 * Math.sqrt(2 * Math.LN2) }] },
      ]
      for (const [direction, meaning, column] of [
        ['both', 'half-amplitude', 1],
        ['forward', 'half-power', 2],
      ] as const) {
        const peak: Score = { kind: 'peak-amplitude', ...whole, polarity: 'positive' }
        const prepared = pulse({
          waveforms,
          candidate: { design: 'butterworth', pass: 'low', meaning, direction },
          cutoffsHz: table.map(([product]) => (1000 * product) / sdMs),
          scores: [{ score: peak, noise: 'without noise' }],
        })
        table.forEach((row, i) => {
          expect(Math.abs(computeCell(prepared, i).scores[0].after[0] / 10 - row[column])).toBeLessThan(0.0012)
        })
      }
    }
  })
})

describe('computeCell', () => {
  const amplifier: StageSpec = { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.5 }
  const lowpass: StageSpec = {
    design: 'butterworth',
    pass: 'low',
    order: 2,
    cutoffsHz: [30],
    meaning: 'half-amplitude',
    direction: 'both',
  }
  const notch: StageSpec = {
    design: 'notch',
    frequencyHz: 50,
    bandwidthHz: 4,
    harmonics: 1,
    direction: 'both',
  }
  const tone: Component = { name: 'refresh', shape: 'tone', amplitudeUv: 1, frequencyHz: 60, phaseRad: 0.7 }
  const early: Component = {
    name: 'early',
    shape: 'ramp',
    amplitudeUv: -3,
    latencyMs: 120,
    widthMs: 40,
    riseShare: 0.4,
  }
  const outside: Component = { ...PULSE, name: 'next', latencyMs: 1400 }

  test.each<[string, StageSpec[], MapQuestion['candidate'], number[], number[]]>([
    [
      'a high-pass alone',
      [],
      { design: 'butterworth', pass: 'high', meaning: 'half-amplitude', direction: 'both' },
      [0.2, 1],
      [1, 3],
    ],
    [
      'a high-pass before a low-pass',
      [lowpass],
      { design: 'butterworth', pass: 'high', meaning: 'design', direction: 'forward' },
      [0.5],
      [2],
    ],
    [
      'a low-pass after an amplifier',
      [amplifier, notch],
      { design: 'butterworth', pass: 'low', meaning: 'half-power', direction: 'both' },
      [15],
      [4],
    ],
    [
      'a windowed sinc',
      [lowpass],
      {
        design: 'windowed-sinc',
        pass: 'low',
        meaning: 'half-amplitude',
        window: { name: 'hamming' },
        delay: 'compensated',
      },
      [12, 20],
      [8, 12],
    ],
    [
      'a high-pass over stages in the data',
      [
        { ...amplifier, inData: true },
        { ...lowpass, inData: true },
      ],
      { design: 'butterworth', pass: 'high', meaning: 'half-amplitude', direction: 'both' },
      [1],
      [2],
    ],
  ])('says of %s what filtering and scoring one by one say', (_, chain, candidate, cutoffsHz, rollOffs) => {
    const noise: NoiseModel = {
      ...defaultNoise(),
      lines: [
        { hz: 50, amplitudeUv: 2, locked: false },
        { hz: 75, amplitudeUv: 1.5, locked: true, phaseRad: 1 },
      ],
    }
    for (const extent of ['continuous', 'epochs'] as const) {
      const scores: Score[] = [
        { kind: 'mean', fromMs: 300, toMs: 500, polarity: 'positive' },
        moment(81),
        { kind: 'peak-amplitude', fromMs: 250, toMs: 600, polarity: 'positive' },
        { kind: 'area-latency', fromMs: 250, toMs: 600, polarity: 'positive' },
      ]
      const asked = question({
        chain,
        candidate,
        cutoffsHz,
        rollOffs,
        extent,
        noise,
        place: { at: chain.length, replaces: false },
        scores: scores.map((score, s) => ({ score, noise: s < 2 ? 'with noise' : 'without noise' })),
        waveforms: [
          { kind: 'built', components: [PULSE] },
          { kind: 'built', components: [PULSE, early, tone, outside] },
        ],
      })
      const prepared = prepareMap(asked)
      const { timesMs, baseline } = asked
      const past = chain.filter((spec) => spec.inData)
      for (let index = 0; index < cutoffsHz.length * rollOffs.length; index++) {
        const cell = computeCell(prepared, index)
        expect(cell.error).toBe(null)
        const specs = chainWithCandidate(
          chain,
          asked.place,
          candidate,
          cutoffsHz[cell.cutoffIndex],
          rollOffs[cell.rollOffIndex],
        )
        const designed = designChain(specs, 250)
        asked.waveforms.forEach((waveform, w) => {
          if (waveform.kind !== 'built') return
          const locked: Component = { name: 'locked', shape: 'tone', amplitudeUv: 1.5, frequencyHz: 75, phaseRad: 1 }
          const clean = filterBuiltWaveform(designed, waveform.components, timesMs, extent)
          const loud = filterBuiltWaveform(designed, [...waveform.components, locked], timesMs, extent)
          scores.forEach((score, s) => {
            const { after, locked: added } = cell.scores[s]
            const expected = scoreOf(correctBaseline(loud, timesMs, baseline), timesMs, score) as number
            expect(after[w] + added).toBeCloseTo(expected, 8)
            if (s >= 2) return
            expect(after[w]).toBeCloseTo(
              scoreOf(correctBaseline(clean, timesMs, baseline), timesMs, score) as number,
              8,
            )
          })
          scores.forEach((score, s) => {
            const x = correctBaseline(waveformAt(waveform.components, timesMs), timesMs, baseline)
            expect(prepared.before[s].after[w]).toBeCloseTo(scoreOf(x, timesMs, score) as number, 8)
          })
        })
        for (const s of [0, 1]) {
          const g = effectiveWindow(designed, scoreWeights(scores[s], baseline, timesMs), extent)
          const through = (values: Float64Array) => (past.length ? wholeResponseForTest(past, values, 250) : values)
          const exact = scoreVariance(through(g.values), noise, 250, 1)
          expect(Math.abs((cell.scores[s].varianceOfOneTrial as number) / exact - 1)).toBeLessThan(2e-5)
          const unfiltered = scoreVariance(through(scoreWeights(scores[s], baseline, timesMs)), noise, 250, 1)
          expect(Math.abs((prepared.before[s].varianceOfOneTrial as number) / unfiltered - 1)).toBeLessThan(2e-5)
          const locked = lockedLineContribution(g.values, timesMs[0] + 4 * g.start, 250, noise.lines[1])
          expect(cell.scores[s].locked).toBeCloseTo(locked, 8)
        }
      }
    }
  })

  test('of recorded averages is what filtering them says', () => {
    const timesMs = epochTimesMs(250, { fromMs: -400, toMs: 1000 })
    const values = timesMs.map((t, i) => 6 * Math.exp(-(((t - 350) / 90) ** 2)) + Math.sin(i * i))
    const asked = question({
      extent: 'epochs',
      cutoffsHz: [5, 20],
      candidate: { design: 'butterworth', pass: 'low', meaning: 'half-amplitude', direction: 'both' },
      waveforms: [{ kind: 'recorded', values }],
      scores: (['mean', 'peak-latency', 'area'] as const).map((kind) => ({
        score: { kind, fromMs: 250, toMs: 600, polarity: 'positive' },
        noise: kind === 'mean' ? 'with noise' : 'without noise',
      })),
    })
    const prepared = prepareMap(asked)
    for (const index of [0, 1]) {
      const cell = computeCell(prepared, index)
      const specs = chainWithCandidate([], asked.place, asked.candidate, asked.cutoffsHz[index], 2)
      const y = filterRecordedWaveform(designChain(specs, 250), values)
      asked.scores.forEach(({ score }, s) => {
        expect(cell.scores[s].after[0]).toBeCloseTo(
          scoreOf(correctBaseline(y, timesMs, asked.baseline), timesMs, score) as number,
          9,
        )
      })
    }
  })

  test('white noise gives σ²Σg²', () => {
    const white = { ...silent, whiteUv2PerHz: (2 * 15 * 15) / 250 }
    for (const extent of ['continuous', 'epochs'] as const) {
      const asked = question({ noise: white, extent, cutoffsHz: logCutoffs(0.3, 5, 5), rollOffs: [1, 2, 4] })
      const prepared = prepareMap(asked)
      const w = scoreWeights(asked.scores[0].score, asked.baseline, asked.timesMs)
      for (let index = 0; index < 15; index++) {
        const cell = computeCell(prepared, index)
        const specs = chainWithCandidate(
          [],
          asked.place,
          asked.candidate,
          asked.cutoffsHz[cell.cutoffIndex],
          asked.rollOffs[cell.rollOffIndex],
        )
        const g = effectiveWindow(designChain(specs, 250), w, extent).values
        const expected = 225 * g.reduce((s, v) => s + v * v, 0)
        expect(Math.abs((cell.scores[0].varianceOfOneTrial as number) / expected - 1)).toBeLessThan(1e-5)
      }
    }
  })

  test('noise falls with every higher high-pass and lower low-pass cutoff, whatever the score, since the gain does', () => {
    fc.assert(
      fc.property(
        fc.constantFrom('high' as const, 'low' as const),
        fc.integer({ min: 1, max: 6 }),
        fc.constantFrom('forward' as const, 'both' as const),
        fc.integer({ min: 0, max: 700 }),
        (pass, order, direction, atMs) => {
          const cutoffsHz = pass === 'high' ? logCutoffs(0.1, 8, 12) : logCutoffs(3, 90, 12)
          const prepared = prepareMap(
            question({
              cutoffsHz,
              rollOffs: [order],
              candidate: { design: 'butterworth', pass, meaning: 'half-amplitude', direction },
              scores: [{ score: moment(atMs), noise: 'with noise' }],
            }),
          )
          const variances = cutoffsHz.map((_, i) => computeCell(prepared, i).scores[0].varianceOfOneTrial as number)
          const falling = pass === 'high' ? variances : variances.slice().reverse()
          for (let i = 1; i < falling.length; i++) expect(falling[i]).toBeLessThan(falling[i - 1])
        },
      ),
      { numRuns: 12 },
    )
  })

  test('a filter that cannot be realised or applied has its reason, and the rest of the map stands', () => {
    const prepared = prepareMap(
      question({
        extent: 'epochs',
        candidate: {
          design: 'windowed-sinc',
          pass: 'low',
          meaning: 'half-amplitude',
          window: { name: 'hamming' },
          delay: 'compensated',
        },
        cutoffsHz: [20, 200],
        rollOffs: [0.5, 10],
      }),
    )
    const cells = computeCells(prepared, [0, 1, 2, 3])
    expect(cells.map(({ error }) => error === null)).toEqual([false, false, true, false])
    expect(cells[0].error).toMatch(/needs \d+ samples, the epoch has 351/)
    expect(cells[3].error).toMatch(/must lie/)
    const figures = cellFigures(prepared, cells[3], {
      score: 0,
      latency: null,
      trials: 40,
      over: 'worst',
      largest: [10],
    })
    expect(figures).toMatchObject({ error: cells[3].error, bias: null, noise: null, totalError: null })
  })

  test.each<[string, Partial<MapQuestion>, RegExp]>([
    ['no cutoff', { cutoffsHz: [] }, /cutoffsHz must hold at least one/],
    ['cutoffs that fall', { cutoffsHz: [2, 1] }, /cutoffsHz must ascend/],
    ['no waveform', { waveforms: [] }, /waveforms must hold/],
    ['no score', { scores: [] }, /scores must hold/],
    ['no trials', { trials: 0 }, /trials must be at least 1/],
    [
      'a recorded average that is to be continuous',
      { waveforms: [{ kind: 'recorded', values: new Float64Array(351) }] },
      /extent must be epochs/,
    ],
  ])('a question with %s is refused', (_, changes, message) => {
    expect(() => prepareMap(question(changes))).toThrow(RangeError)
    expect(() => prepareMap(question(changes))).toThrow(message)
  })
})

describe('simulated scores of the map', () => {
  const peak: Score = { kind: 'peak-amplitude', fromMs: 250, toMs: 600, polarity: 'positive' }
  const ask = (extent: 'continuous' | 'epochs') =>
    question({ extent, cutoffsHz: [0.3, 2], scores: [{ score: peak, noise: 'with noise' }], trials: 40 })

  test('are the same for the same seed, in any order and batch by batch', () => {
    for (const extent of ['continuous', 'epochs'] as const) {
      const prepared = prepareMap(ask(extent))
      const whole = computeCell(prepared, 1, { from: 0, to: 4 })
      computeCell(prepared, 0)
      const parts = mergeCells(
        computeCell(prepared, 1, { from: 2, to: 4 }),
        computeCell(prepared, 1, { from: 0, to: 2 }),
      )
      const [a, b] = [whole, parts].map((cell) => cell.scores[0].simulated?.[0])
      expect(a?.found).toBe(200)
      expect(b?.found).toBe(200)
      a?.powers.forEach((power, i) => expect(b?.powers[i]).toBeCloseTo(power, 8))
      expect(computeCell(prepareMap(ask(extent)), 1)).toEqual(whole)
    }
  })

  test('refuse another number of trials than they were drawn for', () => {
    const prepared = prepareMap(ask('epochs'))
    const cell = computeCell(prepared, 0)
    const asked = { score: 0, latency: null, trials: 41, over: 0, largest: [10] } as const
    expect(() => cellFigures(prepared, cell, asked)).toThrow(/trials must be 40/)
    expect(cellFigures(prepared, cell, { ...asked, trials: 40 }).noise).toBeGreaterThan(0)
  })
})

describe('cellFigures', () => {
  const components = waveformSample(
    [PULSE],
    [
      {
        component: 0,
        latencyMs: { from: 330, to: 470 },
        widthMs: { from: 100, to: 260 },
        amplitudeUv: { from: 4, to: 14 },
      },
    ],
    64,
  )
  const asked = question({
    cutoffsHz: logCutoffs(0.05, 4, 10),
    rollOffs: [1, 4],
    waveforms: components.map((list) => ({ kind: 'built', components: list })),
    scores: [
      { score: { kind: 'mean', fromMs: 300, toMs: 500, polarity: 'positive' }, noise: 'with noise' },
      { score: { kind: 'peak-latency', fromMs: 250, toMs: 600, polarity: 'positive' }, noise: 'without noise' },
    ],
  })
  const prepared = prepareMap(asked)
  const largest = components.map(([component]) => component.amplitudeUv)

  test('the worst and the typical case are those that a plain search over all waveforms finds', () => {
    for (let index = 0; index < 20; index++) {
      const cell = computeCell(prepared, index)
      const shared = { score: 0, latency: 1, trials: 40, largest }
      const each = components.map((_, w) => cellFigures(prepared, cell, { ...shared, over: w }))
      const worst = cellFigures(prepared, cell, { ...shared, over: 'worst' })
      const typical = cellFigures(prepared, cell, { ...shared, over: 'typical' })
      const sizes = each.map(({ bias }) => Math.abs(bias as number)).sort((a, b) => a - b)
      expect(Math.abs(worst.bias as number)).toBe(sizes[64])
      expect(Math.abs(typical.bias as number)).toBe(sizes[32])
      expect(worst.totalError).toBe(Math.max(...each.map(({ totalError }) => totalError as number)))
      expect(Math.abs(worst.latencyShiftMs as number)).toBe(
        Math.max(...each.map(({ latencyShiftMs }) => Math.abs(latencyShiftMs as number))),
      )
      const effects = each.flatMap(({ equalTrialsFactor }) => (equalTrialsFactor === null ? [] : [equalTrialsFactor]))
      expect(worst.equalTrialsFactor).toBe(effects.length > 0 ? Math.min(...effects) : null)
      for (const f of each) {
        expect(f.totalError).toBeCloseTo(Math.sqrt((f.bias as number) ** 2 + (f.noise as number) ** 2), 12)
        expect(f.noise).toBe(worst.noise)
      }
    }
  })

  test('trials change noise as 1/√N and leave bias and factors alone', () => {
    const cell = computeCell(prepared, 7)
    const at = (trials: number) => cellFigures(prepared, cell, { score: 0, latency: null, trials, over: 0, largest })
    expect(((at(10).noise as number) / (at(1000).noise as number)) ** 2).toBeCloseTo(100, 9)
    expect(at(10).bias).toBe(at(1000).bias)
    expect(at(10).equalTrialsFactor).toBeCloseTo(at(1000).equalTrialsFactor as number, 12)
  })

  test('a high-pass of 2 Hz on a late positivity gains precision and loses trials', () => {
    // Source: derived: precision factor 13, equal-trials factor 0.4 for a late positivity; here the same order of size
    const one = prepareMap(question({ cutoffsHz: [2] }))
    const figures = cellFigures(one, computeCell(one, 0), {
      score: 0,
      latency: null,
      trials: 40,
      over: 0,
      largest: [10],
    })
    expect(figures.precisionFactor).toBeGreaterThan(4)
    expect(figures.equalTrialsFactor).toBeLessThan(1)
  })
})

describe('planMap', () => {
  test('visits every cell once, and its first level spans the map', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 70 }), fc.integer({ min: 1, max: 9 }), (cutoffs, rollOffs) => {
        const { order, levelEnds } = planMap(cutoffs, rollOffs)
        expect([...order].sort((a, b) => a - b)).toEqual(Array.from({ length: cutoffs * rollOffs }, (_, i) => i))
        expect(levelEnds[levelEnds.length - 1]).toBe(order.length)
        const first = new Set(order.slice(0, levelEnds[0]))
        for (const r of [0, rollOffs - 1])
          for (const c of [0, cutoffs - 1]) expect(first.has(r * cutoffs + c)).toBe(true)
        // every level is a complete grid: whatever cutoffs it has, it has for the same roll-offs
        for (const end of levelEnds) {
          const seen = order.slice(0, end)
          const columns = new Set(seen.map((i) => i % cutoffs))
          const rows = new Set(seen.map((i) => Math.floor(i / cutoffs)))
          expect(end).toBe(columns.size * rows.size)
        }
      }),
      { numRuns: 60 },
    )
  })

  test('of 60 × 8 begins with 50 cells or fewer', () => {
    expect(planMap(60, 8).levelEnds[0]).toBeLessThanOrEqual(50)
  })
})

describe('waveformSample', () => {
  test('fills every range evenly, ends included, and no two waveforms nearly coincide', () => {
    const ranges = {
      latencyMs: { from: 300, to: 500 },
      widthMs: { from: 100, to: 200 },
      amplitudeUv: { from: 2, to: 9 },
    }
    const sample = waveformSample([PULSE], [{ component: 0, ...ranges }], 64, 5)
    expect(sample.length).toBe(65)
    expect(sample[0]).toEqual([PULSE])
    for (const field of ['latencyMs', 'widthMs', 'amplitudeUv'] as const) {
      const { from, to } = ranges[field]
      const places = sample
        .slice(1)
        .map(([c]) => ((c.shape === 'gaussian' ? c[field] : 0) - from) / (to - from))
        .sort((a, b) => a - b)
      places.forEach((place, i) => expect(place).toBeCloseTo(i / 63, 9))
    }
    expect(waveformSample([PULSE], [{ component: 0, ...ranges }], 64, 5)).toEqual(sample)
    expect(waveformSample([PULSE], [{ component: 0, ...ranges }], 64, 6)).not.toEqual(sample)
  })

  test('refuses ranges that make no sense', () => {
    const tone: Component = { name: 'hum', shape: 'tone', amplitudeUv: 1, frequencyHz: 50, phaseRad: 0 }
    expect(() => waveformSample([PULSE], [{ component: 1, latencyMs: { from: 0, to: 1 } }], 64)).toThrow(
      /component must be/,
    )
    expect(() => waveformSample([PULSE], [{ component: 0, latencyMs: { from: 2, to: 1 } }], 64)).toThrow(
      /range upwards/,
    )
    expect(() => waveformSample([tone], [{ component: 0, latencyMs: { from: 0, to: 1 } }], 64)).toThrow(
      /has no latencyMs/,
    )
    expect(() => waveformSample([PULSE], [{ component: 0, widthMs: { from: -5, to: 1 } }], 64)).toThrow(
      /widthMs must lie/,
    )
  })
})
