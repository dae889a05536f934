import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest'

const kept = vi.hoisted(() => ({ record: undefined as unknown, full: false }))

vi.mock('../../src/state/browser-storage.ts', () => ({
  recall: () => Promise.resolve(kept.record),
  remember: (_key: string, value: unknown) => {
    if (kept.full) return Promise.resolve(false)
    kept.record = structuredClone(value)
    return Promise.resolve(true)
  },
}))

type Autosave = typeof import('../../src/state/autosave.ts')
type Store = typeof import('../../src/state/store.ts')

/** Every test has a page of its own: a store, and one keeper of its changes. */
let keepChanges: Autosave['keepChanges']
let recallWork: Autosave['recallWork']
let store: Store

type Kept = { workspace: { trials: number }; tab: string; savedAt: number }
const record = () => kept.record as Kept
const setTrials = (trials: number) => store.say((w) => ({ ...w, trials }), 'trials')

beforeEach(async () => {
  vi.resetModules()
  store = await import('../../src/state/store.ts')
  ;({ keepChanges, recallWork } = await import('../../src/state/autosave.ts'))
  vi.useFakeTimers()
  kept.record = undefined
  kept.full = false
})
afterEach(() => {
  vi.useRealTimers()
})

describe('keeping changes', () => {
  test('writes within a second of a change, also while changes go on without a pause', async () => {
    keepChanges(0, () => undefined)
    for (let i = 0; i < 60; i++) {
      setTrials(100 + i)
      await vi.advanceTimersByTimeAsync(16)
    }
    expect(record().workspace.trials).toBeGreaterThan(100)
    await vi.advanceTimersByTimeAsync(1000)
    expect(record().workspace.trials).toBe(159)
  })

  test('is taken up again as the newest record', async () => {
    keepChanges(0, () => undefined)
    setTrials(77)
    await vi.advanceTimersByTimeAsync(1000)
    const found = await recallWork()
    expect(found?.workspace).toEqual(store.workspaceStore.getState().workspace)
    expect(found?.savedAt).toBe(record().savedAt)
  })

  test('does not overwrite what another tab wrote meanwhile, and goes on once the user has chosen', async () => {
    const told: string[] = []
    const { keepMine } = keepChanges(0, (state) => told.push(state.kind))
    setTrials(50)
    await vi.advanceTimersByTimeAsync(1000)
    const other = {
      workspace: { ...store.workspaceStore.getState().workspace, trials: 999 },
      tab: 'another',
      savedAt: Date.now() + 5000,
    }
    kept.record = structuredClone(other)
    setTrials(51)
    await vi.advanceTimersByTimeAsync(1000)
    setTrials(52)
    await vi.advanceTimersByTimeAsync(3000)
    expect(told).toEqual(['other tab'])
    expect(record()).toEqual(other)
    await vi.advanceTimersByTimeAsync(10_000)
    keepMine()
    await vi.advanceTimersByTimeAsync(1000)
    expect(record().workspace.trials).toBe(52)
    expect(record().tab).not.toBe('another')
  })

  test('asks nothing when the other record holds the same work', async () => {
    const told: string[] = []
    keepChanges(0, (state) => told.push(state.kind))
    setTrials(60)
    kept.record = {
      workspace: structuredClone(store.workspaceStore.getState().workspace),
      tab: 'another',
      savedAt: Date.now() + 9000,
    }
    await vi.advanceTimersByTimeAsync(1000)
    expect(told).toEqual([])
    expect(record().tab).not.toBe('another')
  })

  test('says once that nothing can be stored, and tries again at the next change', async () => {
    const told: string[] = []
    kept.full = true
    keepChanges(0, (state) => told.push(state.kind))
    setTrials(70)
    await vi.advanceTimersByTimeAsync(1000)
    setTrials(71)
    await vi.advanceTimersByTimeAsync(1000)
    expect(told).toEqual(['no storage'])
    kept.full = false
    setTrials(72)
    await vi.advanceTimersByTimeAsync(1000)
    expect(record().workspace.trials).toBe(72)
  })

  test('ignores a record that is none', async () => {
    kept.record = 'something else'
    expect(await recallWork()).toBeUndefined()
  })
})
