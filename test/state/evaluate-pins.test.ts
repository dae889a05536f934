import Papa from 'papaparse'
import { describe, expect, test } from 'vitest'
import { SCENARIOS } from '../../src/erp/scenarios.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import { evaluate } from '../../src/state/evaluate.ts'
import { isHeavy } from '../../src/state/evaluation-cost.ts'
import type { Evaluation, PinnedResult } from '../../src/state/evaluation.ts'
import { pinChain } from '../../src/state/pin-actions.ts'
import { readoutCsv } from '../../src/state/readout-csv.ts'
import type { RecordedData } from '../../src/state/recorded-data.ts'
import { startWorkspace, type Workspace, workspaceOf } from '../../src/state/workspace.ts'
import { madeUpWorkspace } from './made-up-table.ts'

function evaluated(workspace: Workspace, data: RecordedData | null = null): Evaluation {
  const outcome = evaluate(workspace, data)
  if (!outcome.ok) throw new Error(outcome.problems.map(({ at, message }) => `${at}: ${message}`).join('\n'))
  return outcome.evaluation
}

const withCutoff = (workspace: Workspace, hz: number): Workspace => ({
  ...workspace,
  chain: workspace.chain.map((spec) => (spec.design === 'butterworth' ? { ...spec, cutoffsHz: [hz] } : spec)),
})

function only(evaluation: Evaluation, place = 0): PinnedResult {
  const pin = evaluation.pins[place]
  if ('reason' in pin) throw new Error(pin.reason)
  return pin
}

const recorded = madeUpWorkspace()
const filteredRecording: Workspace = {
  ...recorded.workspace,
  chain: [
    { design: 'butterworth', pass: 'low', order: 2, cutoffsHz: [20], meaning: 'half-amplitude', direction: 'both' },
  ],
}
const start = startWorkspace()
const cases: [string, Workspace, RecordedData | null][] = [
  ...SCENARIOS.map((entry): [string, Workspace, null] => [entry.id, workspaceOf(entry), null]),
  ['epochs', { ...start, extent: 'epochs' }, null],
  ['a peak amplitude', { ...start, score: { ...start.score, kind: 'peak-amplitude', fromMs: 200, toMs: 700 } }, null],
  ['a recorded table', filteredRecording, recorded.table],
]

describe('a pin', () => {
  test.each(cases)('of the present chain is the present result, to the last bit: %s', (_, workspace, data) => {
    // A copy, so that nothing is merely remembered from the present chain.
    const pinned = { ...workspace, pins: structuredClone(pinChain(workspace).pins) }
    const evaluation = evaluated(pinned, data)
    const pin = only(evaluation)
    expect(pin.after).toEqual(evaluation.curves[evaluation.chosen].after)
    expect(pin.window).toEqual(evaluation.window?.filtered ?? null)
    expect(pin.gain).toEqual(evaluation.frequency.gain)
    expect(pin.impulse).toEqual(evaluation.kernel.impulse)
    expect(pin.step).toEqual(evaluation.kernel.step)
    expect(pin.rows).toEqual(evaluation.rows)
    expect(pin.precision).toEqual(evaluation.precision)
  })

  test('keeps its own numbers when the present chain changes', () => {
    const alone = evaluated(start)
    const compared = evaluated(withCutoff(pinChain(start), 0.1))
    const pin = only(compared)
    expect(pin.name).toBe('high-pass 1 Hz')
    expect(pin.after).toEqual(alone.curves[alone.chosen].after)
    expect(pin.rows).toEqual(alone.rows)
    expect(pin.precision).toEqual(alone.precision)
    expect(compared.rows[0].after).not.toBe(pin.rows[0].after)
    expect(pin.window).toHaveLength(compared.window?.filtered.length ?? -1)
    expect(pin.gain).toHaveLength(compared.frequency.hz.length)
    expect(pin.impulse).toHaveLength(compared.kernel.impulse.length)
  })

  test.each(cases.slice(-3))('is not computed again while the present chain is dragged: %s', (_, workspace, data) => {
    const pinned = { ...workspace, pins: structuredClone(pinChain(workspace).pins) }
    const dragged = [0.9, 0.8, 0.7].map((hz) => only(evaluated(withCutoff(pinned, hz), data)))
    for (const later of dragged.slice(1)) {
      expect(later.after).toBe(dragged[0].after)
      expect(later.window).toBe(dragged[0].window)
      expect(later.rows).toBe(dragged[0].rows)
    }
  })

  test('three pins are remembered side by side, also where each holds its own peak', () => {
    const peak: Workspace = { ...start, score: { ...start.score, kind: 'peak-amplitude', fromMs: 200, toMs: 700 } }
    const full = [1, 0.5, 0.3].reduce((w, hz) => pinChain(withCutoff(w, hz)), peak)
    const [first, second] = [0.2, 0.1].map((hz) => evaluated(withCutoff(full, hz)))
    for (const place of [0, 1, 2]) {
      expect(only(second, place).after).toBe(only(first, place).after)
      expect(only(second, place).window).toBe(only(first, place).window)
      expect(only(second, place).rows).toBe(only(first, place).rows)
    }
  })

  test('that cannot be computed on this waveform gives the reason and leaves the rest as it is', () => {
    const impossible = structuredClone(start.chain)
    for (const spec of impossible) if (spec.design === 'butterworth') spec.cutoffsHz = [400]
    const pins = [{ name: 'above half the sampling rate', chain: impossible, extent: start.extent }]
    const evaluation = evaluated({ ...start, pins: [...pins, ...pinChain(start).pins] })
    const { pins: found, ...rest } = evaluation
    const { pins: none, ...alone } = evaluated(start)
    expect(none).toEqual([])
    expect(rest).toEqual(alone)
    expect(found[0]).toEqual({ name: 'above half the sampling rate', reason: expect.stringContaining('250') })
    expect(only(evaluation, 1).rows).toEqual(alone.rows)
  })

  test('whose padding the epoch is too short for says so', () => {
    const slow = withCutoff(start, 1).chain.map((spec) =>
      spec.design === 'windowed-sinc' ? { ...spec, transitionHz: 0.5 } : spec,
    )
    const evaluation = evaluated({ ...start, pins: [{ name: 'long', chain: slow, extent: 'epochs' }] })
    expect(evaluation.pins[0]).toEqual({ name: 'long', reason: expect.stringMatching(/needs \d+ samples/) })
  })

  test('goes to the worker where it is heavy by itself, and not for being one more', () => {
    const heavy = start.chain.map((spec) => (spec.design === 'windowed-sinc' ? { ...spec, transitionHz: 0.05 } : spec))
    expect(isHeavy({ ...start, pins: [{ name: '', chain: heavy, extent: 'continuous' }] }, null)).toBe(true)
    const full = [1, 0.5, 0.3].reduce((w, hz) => pinChain(withCutoff(w, hz)), start)
    expect(isHeavy(full, null)).toBe(false)
  })
})

describe('the readout as CSV', () => {
  const compared = withCutoff(pinChain(start), 0.1)
  const rowsOf = (workspace: Workspace) => {
    const { data, errors } = Papa.parse<string[]>(readoutCsv(evaluated(workspace), workspace), { skipEmptyLines: true })
    expect(errors).toEqual([])
    return data
  }

  test('has a column for each pin, every digit of it, and the pinned protocol', () => {
    const [header, ...rows] = rowsOf(compared)
    const column = header.indexOf('after the pinned high-pass 1 Hz')
    expect(column).toBe(header.indexOf('after') + 1)
    const { pins, rows: present, precision } = evaluated(compared)
    const pin = pins[0] as PinnedResult
    pin.rows.forEach((row, i) => {
      expect(Number(rows[i][column])).toBe(row.after)
      expect(Number(rows[i][header.indexOf('change')])).toBe(present[i].change)
    })
    const line = (name: string) => rows.find(([first]) => first === name) ?? []
    expect(Number(line('noise of the score, 40 trials')[column])).toBe(pin.precision?.after)
    expect(Number(line('precision factor')[column])).toBe(pin.precision?.precisionFactor)
    expect(Number(line('precision factor')[column - 1])).toBe(precision?.precisionFactor)
    expect(line('protocol')[1]).toContain('half-amplitude 0.1 Hz after both passes')
    expect(line('pinned high-pass 1 Hz')[1]).toContain('half-amplitude 1 Hz after both passes')
    for (const row of rows) expect(row).toHaveLength(header.length)
  })

  test('keeps two pins of one name apart', () => {
    const same = pinChain(withCutoff(pinChain(start), 0.5)).pins.map((pin) => ({ ...pin, name: 'ours' }))
    const rows = rowsOf({ ...compared, pins: same })
    const lines = rows.filter(([first]) => first === 'pinned ours').map(([, words]) => words)
    expect(lines[0]).toContain('half-amplitude 1 Hz')
    expect(lines[1]).toContain('half-amplitude 0.5 Hz')
  })
})

describe('the figures beside a pinned chain', () => {
  const highPass = (cutoffHz: number): StageSpec => ({
    design: 'butterworth',
    pass: 'high',
    order: 2,
    cutoffsHz: [cutoffHz],
    meaning: 'half-amplitude',
    direction: 'forward',
  })
  const withPin = (chain: StageSpec[], pinned: StageSpec[]) => {
    const workspace = { ...startWorkspace(), chain, pins: [{ name: '', chain: pinned, extent: 'continuous' as const }] }
    const outcome = evaluate(workspace, null)
    if (!outcome.ok) throw new Error(outcome.problems[0].message)
    const [pin] = outcome.evaluation.pins
    if ('reason' in pin) throw new Error(pin.reason)
    return { evaluation: outcome.evaluation, pin }
  }

  test('hold its kernel as far as it reaches, where the present one is shorter or none at all', () => {
    for (const chain of [[], [highPass(10)]]) {
      const { evaluation, pin } = withPin(chain, [highPass(2)])
      const { fromIndex, impulse, stepMs } = evaluation.kernel
      expect(pin.reach.afterMs).toBeGreaterThan(100)
      expect((fromIndex + impulse.length) * stepMs).toBeGreaterThan(pin.reach.afterMs)
      expect(pin.impulse).toHaveLength(impulse.length)
    }
  })

  test('hold its phase and group delay, those of the same chain by itself', () => {
    const { evaluation, pin } = withPin([], [highPass(2)])
    const alone = withPin([highPass(2)], [highPass(2)])
    const at = (hz: Float64Array, values: Float64Array) => values[hz.findIndex((value) => value >= 5)]
    expect(evaluation.frequency.phaseRad.every((phase) => phase === 0)).toBe(true)
    expect(alone.pin.phaseRad).toEqual(alone.evaluation.frequency.phaseRad)
    expect(alone.pin.groupDelayMs).toEqual(alone.evaluation.frequency.groupDelayMs)
    expect(at(evaluation.frequency.hz, pin.groupDelayMs)).toBeGreaterThan(0)
  })
})
