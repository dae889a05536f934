import { describe, expect, test } from 'vitest'
import { scoreLinearity, scoreOf, scoreWeights } from '../../src/erp/score.ts'
import { SCENARIOS } from '../../src/erp/scenarios.ts'
import { waveformAt } from '../../src/erp/waveform.ts'
import { effectiveWindow } from '../../src/evidence/effective-window.ts'
import { scoreVariance } from '../../src/evidence/score-noise.ts'
import { designStage } from '../../src/filter/stage.ts'
import { stageResponse } from '../../src/filter/stage-response.ts'
import { evaluate } from '../../src/state/evaluate.ts'
import type { Evaluation } from '../../src/state/evaluation.ts'
import type { RecordedData } from '../../src/state/recorded-data.ts'
import { DIFFERENCE, startWorkspace, type Workspace, workspaceOf } from '../../src/state/workspace.ts'
import { expectClose, largest, sumOfProducts } from '../filter/expect-close.ts'
import { madeUpWorkspace } from './made-up-table.ts'

function evaluated(workspace: Workspace, data: RecordedData | null = null): Evaluation {
  const outcome = evaluate(workspace, data)
  if (!outcome.ok) throw new Error(outcome.problems.map(({ at, message }) => `${at}: ${message}`).join('\n'))
  return outcome.evaluation
}

/** Plain objects cannot be written to any more; typed arrays cannot be frozen, and are compared instead. */
function frozen<T>(value: T): T {
  if (typeof value === 'object' && value !== null && !ArrayBuffer.isView(value)) {
    Object.values(value).forEach(frozen)
    Object.freeze(value)
  }
  return value
}

const scenario = (id: string) => workspaceOf(SCENARIOS.find((entry) => entry.id === id) ?? SCENARIOS[0])

const recorded = madeUpWorkspace()
const filteredRecording: Workspace = {
  ...recorded.workspace,
  chain: [
    { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.016, inData: true },
    { design: 'butterworth', pass: 'low', order: 2, cutoffsHz: [20], meaning: 'half-amplitude', direction: 'both' },
  ],
}

const cases: [string, Workspace, RecordedData | null][] = [
  ...SCENARIOS.map((entry): [string, Workspace, null] => [entry.id, workspaceOf(entry), null]),
  ...SCENARIOS.slice(0, 2).map((entry): [string, Workspace, null] => [
    `${entry.id} as epochs`,
    { ...workspaceOf(entry), extent: 'epochs' },
    null,
  ]),
  [
    'the difference of conditions',
    {
      ...scenario('late-positivity'),
      shown: {
        conditions: ['rare targets', 'frequent standards'],
        difference: { first: 'rare targets', second: 'frequent standards' },
        chosen: DIFFERENCE,
        channel: 'Pz',
      },
    },
    null,
  ],
  ['a recorded table', filteredRecording, recorded.table],
]

describe('evaluate', () => {
  test.each(cases)('of %s is a pure function of what was said', (_, workspace, data) => {
    const asSaid = JSON.stringify(workspace)
    const values = data?.waveforms.map((waveform) => waveform.values.slice())
    const first = evaluated(frozen(structuredClone(workspace)), data)
    // Another copy, so that nothing is remembered from the first.
    const second = evaluated(structuredClone(workspace), structuredClone(data))
    expect(second).toEqual(first)
    expect(JSON.stringify(workspace)).toBe(asSaid)
    expect(data?.waveforms.map((waveform) => waveform.values)).toEqual(values)
  })

  test.each(cases)('of %s survives being sent to and from a worker', (_, workspace, data) => {
    const evaluation = evaluated(workspace, data)
    expect(structuredClone(evaluation)).toEqual(evaluation)
  })

  test('answers the same workspace with the same curves, so that nothing is drawn twice', () => {
    const workspace = startWorkspace()
    const once = evaluated(workspace)
    const again = evaluated({ ...workspace, title: 'renamed' })
    expect(again.curves[0]).toBe(once.curves[0])
    expect(again.chain).toBe(once.chain)
  })

  test('a new score does not design the chain anew', () => {
    const workspace = startWorkspace()
    const once = evaluated(workspace)
    const moved = evaluated({ ...workspace, score: { ...workspace.score, fromMs: 100 } })
    expect(moved.chain).toBe(once.chain)
    expect(moved.kernel).toBe(once.kernel)
    expect(moved.rows[0].after).not.toBe(once.rows[0].after)
  })
})

describe('the curves', () => {
  test.each(cases)(
    'of %s: what is taken out is before − after, and each has its baseline at zero',
    (_, workspace, data) => {
      const { curves, timesMs } = evaluated(workspace, data)
      const { baseline } = workspace
      for (const { before, after, takenOut } of curves) {
        expect(before.length).toBe(timesMs.length)
        takenOut.forEach((value, i) => {
          expect(value).toBe(before[i] - after[i])
        })
        if (baseline === 'none') continue
        for (const curve of [before, after]) {
          const mean = scoreOf(curve, timesMs, { kind: 'mean', ...baseline, polarity: 'positive' })
          expect(Math.abs(mean as number)).toBeLessThan(1e-12 * (1 + largest(curve)))
        }
      }
    },
  )

  test('of a built waveform before the chain are its components', () => {
    const workspace = { ...scenario('delayed-peak'), baseline: 'none' as const }
    const { curves, timesMs, chosen } = evaluated(workspace)
    if (workspace.source.kind !== 'built') throw new Error('a scenario is built')
    expectClose(curves[chosen].before, waveformAt(workspace.source.conditions[0].components, timesMs), 0)
  })

  test('of a difference are the difference of the conditions’', () => {
    const [, workspace] = cases.find(([name]) => name === 'the difference of conditions') ?? cases[0]
    const { curves, chosen } = evaluated(workspace)
    const [rare, frequent, difference] = curves
    expect(curves.map(({ name }) => name)).toEqual(['rare targets', 'frequent standards', DIFFERENCE])
    expect(chosen).toBe(2)
    for (const part of ['before', 'after', 'takenOut'] as const)
      expectClose(
        difference[part],
        rare[part].map((value, i) => value - frequent[part][i]),
        1e-9,
      )
  })

  test('of a recorded table before the chain are its values', () => {
    const { table, workspace } = recorded
    const { curves, chosen } = evaluated({ ...workspace, baseline: 'none' }, table)
    expect(curves[chosen].before).toEqual(table.waveforms[0].values)
    expect(curves[chosen].after).toEqual(curves[chosen].before)
  })

  test('a stage in the data is not run again', () => {
    const without = { ...filteredRecording, chain: filteredRecording.chain.slice(1) }
    expect(evaluated(filteredRecording, recorded.table).curves).toEqual(evaluated(without, recorded.table).curves)
  })

  test('a stage that is switched off changes nothing, whatever it holds', () => {
    const workspace = startWorkspace()
    const off: Workspace = {
      ...workspace,
      chain: [
        ...workspace.chain,
        { ...workspace.chain[1], enabled: false, cutoffsHz: [Number.NaN] } as Workspace['chain'][number],
      ],
    }
    const { table, ...rest } = evaluated(off)
    const { table: expectedTable, ...expected } = evaluated(workspace)
    expect(rest).toEqual(expected)
    expect(table).toEqual(expectedTable)
  })

  test('say that a causal stage’s delay is in what was taken out', () => {
    expect(evaluated(scenario('delayed-peak')).delayIncluded).toBe(true)
    expect(evaluated(scenario('late-positivity')).delayIncluded).toBe(false)
  })
})

describe('the readout', () => {
  test.each(cases)('of %s agrees with the scores of its curves', (_, workspace, data) => {
    const { rows, curves, chosen, timesMs } = evaluated(workspace, data)
    const { before, after } = curves[chosen]
    const { score, measure } = workspace
    const { polarity } = measure
    const expected = {
      score,
      'mean-amplitude': { kind: 'mean', ...measure.mean, polarity },
      'peak-amplitude': { kind: 'peak-amplitude', ...measure.peak, polarity },
      'signed-area': { kind: 'area', ...measure.peak, polarity },
      'peak-latency': { kind: 'peak-latency', ...measure.peak, polarity },
      'area-latency': { kind: 'area-latency', ...measure.peak, polarity },
      'onset-latency': { kind: 'onset-latency', ...measure.peak, polarity },
    } as const
    for (const row of rows) {
      if (row.id === 'false-deflection') continue
      expect(row.before).toBe(scoreOf(before, timesMs, expected[row.id]))
      expect(row.after).toBe(scoreOf(after, timesMs, expected[row.id]))
    }
    expect(rows).toHaveLength(8)
  })

  test.each(cases)('of %s: a mean is the plain mean of the samples in the window', (_, workspace, data) => {
    const { rows, curves, chosen, timesMs } = evaluated(workspace, data)
    const { fromMs, toMs } = workspace.measure.mean
    const inside = [...curves[chosen].after].filter((_, i) => timesMs[i] >= fromMs - 1e-6 && timesMs[i] <= toMs + 1e-6)
    const mean = inside.reduce((sum, value) => sum + value, 0) / inside.length
    expect(Math.abs((rows[1].after as number) - mean)).toBeLessThan(1e-12 * (1 + largest(curves[chosen].after)))
  })

  test('asks for the onset of a recorded waveform, and uses the one that is stated', () => {
    const asked = evaluated(filteredRecording, recorded.table).rows[7]
    expect(asked.before).toBe('onset not given')
    const { rows, curves, timesMs } = evaluated({ ...filteredRecording, onsetMs: 60 }, recorded.table)
    const { takenOut } = curves[0]
    let strongest = 0
    timesMs.forEach((ms, i) => {
      if (ms <= 60) strongest = Math.max(strongest, Math.abs(takenOut[i]))
    })
    expect(Math.abs(Math.abs(rows[7].change as number) - strongest)).toBeLessThan(1e-12)
  })

  test('first sight: a deflection at 80–140 ms that the input does not have', () => {
    const { rows, remark } = evaluated(startWorkspace())
    expect(Math.abs(rows[0].before as number)).toBeLessThan(0.1)
    expect(rows[0].after as number).toBeLessThan(-1)
    expect(remark).toContain('was not in the input')
  })
})

describe('the effective window', () => {
  test.each(cases)('of %s, summed over the unfiltered waveform, is the score', (_, workspace, data) => {
    const { window, chain, curves, chosen, timesMs, rows, samplingRateHz } = evaluated(workspace, data)
    if (scoreLinearity(workspace.score.kind) === 'none') {
      expect(window).toBeNull()
      return
    }
    const { after } = curves[chosen]
    const extent = workspace.source.kind === 'recorded' ? 'epochs' : workspace.extent
    const weights = scoreWeights(workspace.score, workspace.baseline, timesMs, after)
    const whole = effectiveWindow(chain, weights, extent)
    // The unfiltered waveform wherever the window reaches; a recording has nothing outside its epoch.
    const x = Float64Array.from(whole.values, (_, i) => {
      const sample = whole.start + i
      if (data) return data.waveforms[0].values[sample] ?? 0
      return 0
    })
    if (workspace.source.kind === 'built') {
      const { conditions } = workspace.source
      const places = x.map((_, i) => timesMs[0] + ((whole.start + i) * 1000) / samplingRateHz)
      const part = (name: string) =>
        waveformAt(conditions.find((entry) => entry.name === name)?.components ?? [], places)
      const { difference, chosen: name } = workspace.shown
      const values = name === DIFFERENCE && difference ? part(difference.first) : part(name)
      x.set(values)
      if (name === DIFFERENCE && difference) part(difference.second).forEach((value, i) => (x[i] -= value))
    }
    const { sum, absolute } = sumOfProducts(whole.values, x)
    expect(Math.abs(sum - (rows[0].after as number))).toBeLessThanOrEqual(1e-8 * absolute)
    if (!window) throw new Error('a weighted sum has a window')
    window.filtered.forEach((value, i) => {
      const sample = window.fromIndex + i - whole.start
      expect(Math.abs(value - (whole.values[sample] ?? 0))).toBeLessThanOrEqual(1e-9 * largest(whole.values))
    })
    weights.forEach((value, i) => {
      expect(window.unfiltered[i - window.fromIndex]).toBe(value)
    })
    expect(window.unfiltered.length).toBe(window.filtered.length)
    expect(window.shareOutside).toBeGreaterThanOrEqual(0)
    expect(window.shareOutside).toBeLessThanOrEqual(1)
  })

  test('of a peak says the moment that it is held fixed at', () => {
    const { window, rows } = evaluated(scenario('steady-interference'))
    expect(window?.heldFixed).toBe(`for the peak at ${Math.round(rows[4].after as number)} ms, held fixed`)
  })
})

describe('the frequency figure', () => {
  test.each(cases)(
    'of %s: the gain is the product of the applied stages’, each as its design has it',
    (_, workspace, data) => {
      const { frequency, chain, samplingRateHz } = evaluated(workspace, data)
      const { hz } = frequency
      hz.forEach((f, i) => {
        if (i > 0) expect(f).toBeGreaterThan(hz[i - 1])
      })
      expect(hz[hz.length - 1]).toBe(samplingRateHz / 2)
      expect(hz[0]).toBeLessThanOrEqual(0.1)
      const product = new Float64Array(hz.length).fill(1)
      for (const { index, inData, gain } of frequency.stages) {
        const { re, im } = stageResponse(designStage(workspace.chain[index], samplingRateHz), hz)
        expectClose(
          gain,
          re.map((value, i) => Math.hypot(value, im[i])),
          0,
        )
        if (!inData) for (let i = 0; i < product.length; i++) product[i] *= gain[i]
      }
      expectClose(frequency.gain, product, 1e-9 * Math.max(1, largest(product)))
      expect(frequency.stages).toHaveLength(chain.stages.length)
    },
  )

  test.each(cases)('of %s: the half-amplitude and half-power points lie on the gain', (_, workspace, data) => {
    const { frequency } = evaluated(workspace, data)
    const gainAt = (f: number) => {
      const { hz, gain } = frequency
      const i = Math.max(
        1,
        hz.findIndex((value) => value >= f),
      )
      return gain[i - 1] + ((gain[i] - gain[i - 1]) * (f - hz[i - 1])) / (hz[i] - hz[i - 1])
    }
    for (const f of frequency.halfAmplitudeHz) if (f >= frequency.hz[0]) expect(gainAt(f)).toBeCloseTo(0.5, 1)
    for (const f of frequency.halfPowerHz) if (f >= frequency.hz[0]) expect(gainAt(f)).toBeCloseTo(Math.SQRT1_2, 1)
  })

  test('of a waveform that stands alone: the spectrum after is the one before times the gain', () => {
    const { before, after, gain } = evaluated(startWorkspace()).frequency
    expectClose(
      after,
      before.map((value, i) => value * gain[i]),
      1e-15 * largest(before),
    )
  })
})

describe('the kernel figure', () => {
  test('of a low-pass sums to its gain at 0 Hz, and its step response ends there', () => {
    const { kernel } = evaluated(scenario('smeared-onset'))
    const sum = kernel.impulse.reduce((total, value) => total + value, 0) * (kernel.stepMs / 1000)
    expect(sum).toBeCloseTo(1, 2)
    expect(kernel.step[kernel.step.length - 1]).toBeCloseTo(1, 2)
    expect(kernel.step[0]).toBeCloseTo(0, 2)
  })

  test.each(cases)('of %s: the step response is the running sum of the impulse response', (_, workspace, data) => {
    const { kernel } = evaluated(workspace, data)
    const { impulse, step, stepMs } = kernel
    expect(impulse.length).toBe(step.length)
    expect(kernel.fromIndex).toBeLessThanOrEqual(0)
    const scale = largest(step)
    for (let i = 1; i < step.length; i++)
      expect(Math.abs(step[i] - step[i - 1] - impulse[i] * (stepMs / 1000))).toBeLessThanOrEqual(1e-9 * scale)
  })

  test('of a causal chain is nothing before lag 0', () => {
    const { kernel, reach } = evaluated(scenario('delayed-peak'))
    for (let i = 0; i < -kernel.fromIndex; i++) expect(Math.abs(kernel.impulse[i])).toBe(0)
    expect(reach.beforeMs).toBe(0)
    expect(reach.afterMs).toBeGreaterThan(10)
  })

  test('of no filter is a single sample', () => {
    const { kernel } = evaluated({ ...startWorkspace(), chain: [] })
    const at = -kernel.fromIndex
    kernel.impulse.forEach((value, i) => {
      expect(value).toBe(i === at ? 500 : 0)
    })
  })
})

describe('the noise row', () => {
  test('is the square root of the variance over trials', () => {
    const workspace = scenario('late-positivity')
    const { precision, timesMs } = evaluated(workspace)
    const weights = scoreWeights(workspace.score, workspace.baseline, timesMs)
    const variance = scoreVariance(weights, workspace.noise, 500, 40)
    expect(precision?.before).toBeCloseTo(Math.sqrt(variance), 9)
    const fourfold = evaluated({ ...workspace, trials: 160 }).precision
    expect(fourfold?.before).toBeCloseTo((precision?.before ?? 0) / 2, 9)
    expect(fourfold?.after).toBeCloseTo((precision?.after ?? 0) / 2, 9)
    expect(fourfold?.precisionFactor).toBeCloseTo(precision?.precisionFactor ?? 0, 9)
  })

  test('of a difference wave is that of two independent conditions', () => {
    const [, difference] = cases.find(([name]) => name === 'the difference of conditions') ?? cases[0]
    const both = evaluated(difference).precision
    const one = evaluated({ ...difference, shown: { ...difference.shown, chosen: 'rare targets' } }).precision
    expect(both?.after).toBeCloseTo((one?.after ?? 0) * Math.SQRT2, 9)
  })

  test('is missing for a latency, which is no weighted sum', () => {
    expect(evaluated(scenario('smeared-onset')).precision).toBeNull()
  })

  test('of no filter has a precision factor of 1', () => {
    const { precision } = evaluated({ ...startWorkspace(), chain: [] })
    expect(precision?.precisionFactor).toBeCloseTo(1, 4)
  })

  test('of the same windows as epochs, where nothing reaches outside, is that of the continuous recording', () => {
    const workspace = startWorkspace()
    const short: Workspace = {
      ...workspace,
      chain: [{ design: 'moving-average', durationMs: 20, delay: 'compensated' }],
    }
    const continuous = evaluated(short).precision
    const epochs = evaluated({ ...short, extent: 'epochs' }).precision
    expect((epochs?.after ?? 0) / (continuous?.after ?? 1)).toBeCloseTo(1, 4)
  })
})

describe('what leans on invented samples', () => {
  test('is nothing for a waveform that stands alone, and a share for epochs', () => {
    const alone = evaluated(startWorkspace())
    expect(alone.unseenBySample).toBeNull()
    expect(alone.unseenShare).toBe(0)
    const cut = evaluated({ ...startWorkspace(), extent: 'epochs' })
    expect(cut.unseenShare).toBeGreaterThan(0.01)
    expect(cut.unseenShare).toBe(cut.window?.shareOutside)
    expect(cut.remark).toMatch(/Filtered as epochs, \d+(\.\d)? % of the score’s weight/)
    const shares = cut.unseenBySample ?? new Float64Array(0)
    expect(shares).toHaveLength(cut.timesMs.length)
    expect(shares[0]).toBeGreaterThan(shares[Math.floor(shares.length / 2)])
  })

  test('a recorded table is always filtered as epochs, whatever was said of a built waveform before it', () => {
    const continuous = evaluated({ ...filteredRecording, extent: 'continuous' }, recorded.table)
    expect(continuous.unseenBySample).not.toBeNull()
    expect(continuous.curves).toEqual(evaluated(filteredRecording, recorded.table).curves)
  })
})

describe('the chain table', () => {
  test('says of each stage its points and its roll-off', () => {
    expect(evaluated(startWorkspace()).table).toEqual([
      {
        index: 0,
        name: 'amplifier',
        inData: false,
        halfAmplitude: '0.0092 Hz',
        halfPower: '0.016 Hz',
        rollOff: '6 dB/octave',
        remark: null,
      },
      {
        index: 1,
        name: 'high-pass',
        inData: false,
        halfAmplitude: '1.00 Hz',
        halfPower: '1.25 Hz',
        rollOff: '24 dB/octave',
        remark: null,
      },
      {
        index: 2,
        name: 'low-pass',
        inData: false,
        halfAmplitude: '30.0 Hz',
        halfPower: '29.1 Hz',
        rollOff: '7.5 Hz wide',
        remark: null,
      },
    ])
  })

  test('leaves out what is switched off, and keeps each stage’s place', () => {
    const { table } = evaluated(scenario('steady-interference'))
    expect(table.map(({ index }) => index)).toEqual([0, 1])
  })

  test('remarks that an amplifier’s low-pass near half the sampling rate is not faithful in its delay', () => {
    const workspace = startWorkspace()
    const steep: Workspace = { ...workspace, chain: [{ design: 'amplifier', pass: 'low', order: 4, cutoffHz: 200 }] }
    expect(evaluated(steep).table[0].remark).toMatch(/Its delay is 2\.08 ms, in this model [\d.]+ ms/)
    const gentle: Workspace = { ...workspace, chain: [{ design: 'amplifier', pass: 'low', order: 4, cutoffHz: 40 }] }
    expect(evaluated(gentle).table[0].remark).toBeNull()
  })
})
