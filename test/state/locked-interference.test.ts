import { describe, expect, test } from 'vitest'
import { evaluate } from '../../src/state/evaluate.ts'
import { mapSlice } from '../../src/state/map-worker.ts'
import { mapFigures } from '../../src/state/map-figures.ts'
import { mapStore, runMap } from '../../src/state/map-run.ts'
import { mapRequest } from '../../src/state/trade-off.ts'
import { DIFFERENCE, startWorkspace, type Workspace } from '../../src/state/workspace.ts'

const start = startWorkspace()
const withLines = (change: Partial<Workspace> = {}): Workspace => ({
  ...start,
  score: { ...start.score, fromMs: 300, toMs: 307 },
  noise: { ...start.noise, lines: [{ hz: 21, amplitudeUv: 3, locked: true, phaseRad: 0.4 }] },
  ...change,
})

function lockedOf(workspace: Workspace) {
  const outcome = evaluate(workspace, null)
  if (!outcome.ok) throw new Error('the workspace does not evaluate')
  return outcome.evaluation.locked
}

/** The map's bias of the filter in the chain. */
async function biasOnMap(workspace: Workspace): Promise<number> {
  const asked = { ...workspace, tradeOff: { ...workspace.tradeOff, fromHz: 1, toHz: 2, rollOffs: [2] } }
  const outcome = mapRequest(asked, null)
  if (!outcome.ok) throw new Error(outcome.reason)
  const { request } = outcome
  await runMap(
    request,
    async (...args) => mapSlice(...(args.slice(0, 6) as Parameters<typeof mapSlice>)),
    new AbortController().signal,
  )
  const figures = mapFigures(request, mapStore.getState().maps[request.key], 'worst', {})
  return figures.cells[0]?.bias as number
}

describe('interference locked to the event', () => {
  test.each(['continuous', 'epochs'] as const)(
    'adds to the filtered score what the map counts as bias (%s)',
    async (extent) => {
      const workspace = withLines({ extent })
      const added = (await biasOnMap(workspace)) - (await biasOnMap({ ...workspace, noise: start.noise }))
      expect(Math.abs(added)).toBeGreaterThan(0.05)
      expect(lockedOf(workspace)?.score?.after).toBeCloseTo(added, 6)
    },
  )

  test('adds to the unfiltered score the mean of its samples there, less that of the baseline', () => {
    const tone = (ms: number) => 3 * Math.cos((2 * Math.PI * 21 * ms) / 1000 + 0.4)
    const mean = (from: number, to: number) => {
      const times = Array.from({ length: Math.floor((to - from) / 2) + 1 }, (_, i) => from + 2 * i)
      return times.reduce((sum, ms) => sum + tone(ms), 0) / times.length
    }
    expect(lockedOf(withLines())?.score?.before).toBeCloseTo(mean(300, 307) - mean(-200, 0), 9)
  })

  test('has no number for a latency, cancels in a difference wave, and is none where no line is locked', () => {
    const lines = withLines().noise.lines
    const latency = withLines({ score: { kind: 'peak-latency', fromMs: 200, toMs: 700, polarity: 'positive' } })
    expect(lockedOf(latency)).toEqual({ lines, score: null })
    const shown = {
      ...start.shown,
      chosen: DIFFERENCE,
      difference: { first: 'rare targets', second: 'frequent standards' },
    }
    expect(lockedOf(withLines({ shown }))).toBeNull()
    expect(lockedOf(start)).toBeNull()
    expect(lockedOf(withLines({ noise: { ...start.noise, lines: [{ ...lines[0], locked: false }] } }))).toBeNull()
  })
})
