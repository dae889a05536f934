import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import type { Table } from '../../src/files/index.ts'
import { evaluate } from '../../src/state/evaluate.ts'
import { workspaceOnTable } from '../../src/state/open-table.ts'
import { readWorkspace, startWorkspace } from '../../src/state/workspace.ts'
import { madeUpSource, madeUpTable, madeUpWorkspace } from './made-up-table.ts'

/** Tables of any sampling rate, first time and length that the reader lets through, with values of any size. */
const tables: fc.Arbitrary<Table> = fc
  .record({
    samplingRateHz: fc.constantFrom(1, 20, 100, 160, 250, 512, 1000, 2034.505, 4096, 100_000),
    first: fc.oneof(fc.integer({ min: -500, max: 20 }), fc.double({ min: -500, max: 20, noNaN: true })),
    onGrid: fc.boolean(),
    samples: fc.integer({ min: 16, max: 300 }),
    seed: fc.integer({ min: 1, max: 1000 }),
    size: fc.constantFrom(0, 1e-3, 5, 1e4),
    trialsAveraged: fc.option(fc.integer({ min: 1, max: 500 }), { nil: undefined }),
  })
  .map(({ samplingRateHz, first, onGrid, samples, seed, size, trialsAveraged }) => {
    const stepMs = 1000 / samplingRateHz
    const firstMs = onGrid ? Math.round(first / stepMs) * stepMs : first
    const timesMs = Float64Array.from({ length: samples }, (_, i) => firstMs + i * stepMs)
    const values = timesMs.map((_, i) => size * Math.sin(seed * i + 0.1 * i * i))
    return {
      ok: true as const,
      layout: 'wide' as const,
      samplingRateHz,
      timesMs,
      conditions: ['condition'],
      channels: ['Cz', 'Pz'],
      waveforms: ['Cz', 'Pz'].map((channel) => ({ condition: 'condition', channel, values, averaged: 1 })),
      roundingUv: 0.01,
      guesses: [],
      warnings: [],
      ...(trialsAveraged === undefined ? {} : { trialsAveraged }),
    }
  })

describe('workspaceOnTable', () => {
  test('lays its windows inside the epoch, and all of it can be evaluated, for any table', () => {
    fc.assert(
      fc.property(tables, (table) => {
        const workspace = workspaceOnTable(startWorkspace(), madeUpSource, table)
        const { timesMs } = table
        const stepMs = 1000 / table.samplingRateHz
        const { baseline, score, measure } = workspace
        for (const window of [score, measure.mean, measure.peak, ...(baseline === 'none' ? [] : [baseline])]) {
          expect(window.fromMs).toBeLessThanOrEqual(window.toMs)
          expect(window.fromMs).toBeGreaterThanOrEqual(timesMs[0] - 1e-6 * stepMs)
          expect(window.toMs).toBeLessThanOrEqual(timesMs[timesMs.length - 1] + 1e-6 * stepMs)
        }
        expect(readWorkspace(JSON.parse(JSON.stringify(workspace)))).toEqual({ ok: true, workspace })
        const outcome = evaluate(workspace, table)
        expect(outcome.ok ? [] : outcome.problems).toEqual([])
      }),
      { numRuns: 150 },
    )
  })

  test('takes the first condition and channel, and the largest deflection after the event', () => {
    const { workspace } = madeUpWorkspace()
    expect(workspace.shown).toEqual({ conditions: ['rare'], difference: null, chosen: 'rare', channel: 'Cz' })
    expect(workspace.title).toBe('average-2024.csv')
    expect(workspace.baseline).toEqual({ fromMs: -200, toMs: 0 })
    expect(workspace.score).toEqual({ kind: 'mean', fromMs: 355, toMs: 405, polarity: 'positive' })
    expect(workspace.measure.peak).toEqual({ fromMs: 300, toMs: 460 })
    expect(workspace.trials).toBe(40)
    expect(workspace.onsetMs).toBeNull()
  })

  test('does not take what came before the event for the deflection', () => {
    const table = madeUpTable()
    const values = table.waveforms[0].values.slice()
    values[0] = -500
    table.waveforms[0] = { ...table.waveforms[0], values }
    expect(workspaceOnTable(startWorkspace(), madeUpSource, table).score).toMatchObject({
      fromMs: 355,
      polarity: 'positive',
    })
  })

  test('starts with no chain after a built waveform, and keeps the chain from one recording to the next', () => {
    const { workspace, table } = madeUpWorkspace()
    expect(workspace.chain).toEqual([])
    const filtered = {
      ...workspace,
      chain: startWorkspace().chain,
      trials: 77,
      shown: { ...workspace.shown, channel: 'PO7' },
    }
    const next = workspaceOnTable(filtered, { ...madeUpSource, fileName: 'next.csv' }, table)
    expect(next.chain).toBe(filtered.chain)
    expect(next.trials).toBe(77)
    // and so with what the stages in the data ran on, which after a built waveform is the usual
    expect(workspace.extent).toBe('continuous')
    const cut = workspaceOnTable({ ...filtered, extent: 'epochs' }, { ...madeUpSource, fileName: 'next.csv' }, table)
    expect(cut.extent).toBe('epochs')
    expect(workspaceOnTable({ ...startWorkspace(), extent: 'epochs' }, madeUpSource, table).extent).toBe('continuous')
    expect(next.shown.channel).toBe('PO7')
  })

  test('takes the number of trials that the table holds', () => {
    const table = { ...madeUpTable(), trialsAveraged: 31 }
    expect(workspaceOnTable(startWorkspace(), madeUpSource, table).trials).toBe(31)
  })
})
