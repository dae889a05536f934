import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest'

const kept = vi.hoisted(() => ({ record: undefined as unknown, unread: undefined as unknown, full: false }))

vi.mock('../../src/state/browser-storage.ts', () => {
  const place = (key: string) => (key.endsWith('unread') ? 'unread' : 'record')
  const remember = (key: string, value: unknown) => {
    if (!kept.full) kept[place(key)] = structuredClone(value)
    return Promise.resolve(!kept.full)
  }
  return {
    recall: (key: string) => Promise.resolve(kept[place(key)]),
    remember,
    revise: (key: string, decide: (present: unknown) => unknown) => remember(key, decide(kept[place(key)])),
    forget: (key: string) => Promise.resolve((kept[place(key)] = undefined)),
  }
})

/** What a browser keeps of strings, as plain as it is asked here. */
class Strings {
  [key: string]: unknown
  constructor() {
    Object.defineProperties(this, {
      getItem: { value: (key: string) => (Object.hasOwn(this, key) ? this[key] : null) },
      setItem: { value: (key: string, value: string) => (this[key] = value) },
      removeItem: { value: (key: string) => delete this[key] },
    })
  }
}

type Autosave = typeof import('../../src/state/autosave.ts')
type Store = typeof import('../../src/state/store.ts')

/** Every test has a page of its own: a store, and one keeper of its changes. */
let keepChanges: Autosave['keepChanges']
let recallWork: Autosave['recallWork']
let takeUpWork: typeof import('../../src/state/keeping.ts').takeUpWork
let store: Store
let leave: (() => void)[] = []

type Kept = { workspace: { trials: number }; tab: string; savedAt: number; after?: number }
const record = () => kept.record as Kept
const trials = () => store.workspaceStore.getState().workspace.trials
/** A record as another tab writes it. */
const byAnother = (trials: number, savedAt = Date.now(), tab = 'another') => ({
  workspace: { ...structuredClone(store.workspaceStore.getState().workspace), trials },
  tab,
  savedAt,
})
/** The page goes away, whatever is under way. */
const goAway = () => {
  for (const listener of leave) listener()
}
const setTrials = (trials: number) => store.say((w) => ({ ...w, trials }), 'trials')

/** A new page in the same browser: what was kept is there, all else is fresh. */
async function openPage(at: number) {
  vi.resetModules()
  leave = []
  // a tab's name comes from the moment at which it was opened
  vi.spyOn(performance, 'timeOrigin', 'get').mockReturnValue(at)
  store = await import('../../src/state/store.ts')
  ;({ keepChanges, recallWork } = await import('../../src/state/autosave.ts'))
  ;({ takeUpWork } = await import('../../src/state/keeping.ts'))
}

beforeEach(async () => {
  kept.record = undefined
  kept.unread = undefined
  kept.full = false
  vi.stubGlobal('localStorage', new Strings())
  vi.stubGlobal('addEventListener', (kind: string, listener: () => void) => {
    if (kind === 'pagehide') leave.push(listener)
  })
  await openPage(1)
  vi.useFakeTimers()
})
afterEach(() => {
  vi.useRealTimers()
  vi.unstubAllGlobals()
  vi.restoreAllMocks()
})

describe('keeping changes', () => {
  test('writes within a second of a change, also while changes go on without a pause', async () => {
    keepChanges({ seenAt: 0 }, () => undefined)
    for (let i = 0; i < 60; i++) {
      setTrials(100 + i)
      await vi.advanceTimersByTimeAsync(16)
    }
    expect(record().workspace.trials).toBeGreaterThan(100)
    await vi.advanceTimersByTimeAsync(1000)
    expect(record().workspace.trials).toBe(159)
  })

  test('is taken up again as the newest record', async () => {
    keepChanges({ seenAt: 0 }, () => undefined)
    setTrials(77)
    await vi.advanceTimersByTimeAsync(1000)
    const { recalled } = await recallWork()
    expect(recalled?.workspace).toEqual(store.workspaceStore.getState().workspace)
    expect(recalled?.newest.savedAt).toBe(record().savedAt)
  })

  test('does not overwrite what another tab wrote meanwhile, and goes on once the user has chosen', async () => {
    const told: string[] = []
    const { keepMine } = keepChanges({ seenAt: 0 }, (state) => told.push(state.kind))
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
    keepChanges({ seenAt: 0 }, (state) => told.push(state.kind))
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
    keepChanges({ seenAt: 0 }, (state) => told.push(state.kind))
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
    expect(await recallWork()).toEqual({ recalled: null, unread: null })
  })
})

describe('a page that goes away', () => {
  test('leaves what it has not written yet, and the next one takes it up and writes it', async () => {
    keepChanges({ seenAt: 0 }, () => undefined)
    setTrials(61)
    await vi.advanceTimersByTimeAsync(1000)
    setTrials(62)
    goAway()
    expect(record().workspace.trials).toBe(61)

    await openPage(2)
    const told: string[] = []
    await takeUpWork('', (state) => told.push(state.kind))
    expect(trials()).toBe(62)
    // it may go away again at once
    expect(Object.keys(localStorage)).toHaveLength(1)
    await vi.advanceTimersByTimeAsync(1000)
    expect(record().workspace.trials).toBe(62)
    expect(Object.keys(localStorage)).toHaveLength(0)
    expect(told).toEqual([])
  })

  test('does not pass its last half second off as newer than what another tab has said since', async () => {
    keepChanges({ seenAt: 0 }, () => undefined)
    setTrials(61)
    await vi.advanceTimersByTimeAsync(1000)
    kept.record = byAnother(700, Date.now() + 10)
    await vi.advanceTimersByTimeAsync(100)
    setTrials(62)
    goAway()

    await openPage(2)
    const told: unknown[] = []
    await takeUpWork('', (state) => told.push(state))
    expect(trials()).toBe(62)
    expect(told).toEqual([{ kind: 'last time', workspace: expect.objectContaining({ trials: 700 }) }])
    setTrials(63)
    await vi.advanceTimersByTimeAsync(5000)
    expect(record().workspace.trials).toBe(700)
  })
})

describe('the question which of two works is kept', () => {
  /** This tab has said 50 and 51, another one 999 in between. */
  async function asked() {
    const told: { kind: string; workspace?: unknown }[] = []
    const answers = keepChanges({ seenAt: 0 }, (state) => told.push(state))
    setTrials(50)
    await vi.advanceTimersByTimeAsync(1000)
    kept.record = byAnother(999, Date.now() + 10)
    setTrials(51)
    await vi.advanceTimersByTimeAsync(1000)
    expect(told).toMatchObject([{ kind: 'other tab' }])
    return { told, answers }
  }

  test('outlives a crash of the tab: its work is back, the other’s is there, and it is asked again, each time', async () => {
    await asked()
    setTrials(52)
    await vi.advanceTimersByTimeAsync(1000)
    // no pagehide: the tab has crashed
    for (const at of [2, 3, 4]) {
      await openPage(at)
      const told: unknown[] = []
      await takeUpWork('', (state) => told.push(state))
      expect(trials()).toBe(50 + at)
      expect(told).toEqual([{ kind: 'last time', workspace: expect.objectContaining({ trials: 999 }) }])
      setTrials(50 + at + 1)
      await vi.advanceTimersByTimeAsync(1000)
      expect(record().workspace.trials).toBe(999)
    }
  })

  test('is answered by keeping one’s own: after a reload nothing is asked any more', async () => {
    await asked()
    await openPage(2)
    const told: { kind: string }[] = []
    const { keepMine } = await takeUpWork('', (state) => told.push(state))
    keepMine()
    await vi.advanceTimersByTimeAsync(1000)
    expect(record().workspace.trials).toBe(51)
    await openPage(3)
    await takeUpWork('', (state) => told.push(state))
    expect(trials()).toBe(51)
    expect(told.map(({ kind }) => kind)).toEqual(['last time', 'kept'])
  })

  test('is answered by taking the other’s, as it is by then; one’s own is one undo away', async () => {
    const { told, answers } = await asked()
    kept.record = byAnother(1001, Date.now() + 10)
    await answers.takeOther()
    expect(trials()).toBe(1001)
    await vi.advanceTimersByTimeAsync(1000)
    expect(told.map(({ kind }) => kind)).toEqual(['other tab', 'kept'])
    store.undo()
    expect(trials()).toBe(51)
    await vi.advanceTimersByTimeAsync(1000)
    expect(record().workspace.trials).toBe(51)
  })

  test('is asked anew where the other goes on after “keep what is on this screen”', async () => {
    const { told, answers } = await asked()
    kept.record = byAnother(1001, Date.now() + 10)
    answers.keepMine()
    await vi.advanceTimersByTimeAsync(1000)
    expect(told.map(({ kind }) => kind)).toEqual(['other tab', 'kept', 'other tab'])
    expect(record().workspace.trials).toBe(1001)
  })

  test('is asked before a link takes the place of work from last time, not of an untouched scenario', async () => {
    const { workspaceToFragment } = await import('../../src/state/keeping.ts')
    const { workspaceOf, SCENARIOS } = await import('../../src/state/workspace.ts')
    const link = workspaceToFragment({ ...workspaceOf(SCENARIOS[1]), trials: 7 })
    for (const [before, kinds] of [
      [workspaceOf(SCENARIOS[2]), []],
      [{ ...workspaceOf(SCENARIOS[2]), trials: 8 }, ['last time']],
    ] as const) {
      kept.record = { workspace: before, tab: 'earlier', savedAt: Date.now() - 5000 }
      await openPage(2)
      const told: string[] = []
      await takeUpWork(link, (state) => told.push(state.kind))
      expect(trials()).toBe(7)
      await vi.advanceTimersByTimeAsync(1000)
      expect(told).toEqual(kinds)
      expect(record().workspace.trials).toBe(kinds.length > 0 ? 8 : 7)
    }
  })

  test('is asked where the user had begun before a slow storage answered', async () => {
    kept.record = byAnother(8, Date.now() - 5000)
    const told: string[] = []
    const taking = takeUpWork('', (state) => told.push(state.kind))
    setTrials(9)
    await taking
    expect(trials()).toBe(9)
    await vi.advanceTimersByTimeAsync(1000)
    expect(told).toEqual(['last time'])
    expect(record().workspace.trials).toBe(8)
  })
})

describe('work of a newer page', () => {
  const newer = () => ({ workspace: { version: 99, all: 'new' }, tab: 'newer', savedAt: Date.now() })

  test('is set aside before anything is written, and offered until it is dropped', async () => {
    kept.record = newer()
    const first = await takeUpWork('')
    expect(first.said).toContain('version 99')
    expect(JSON.parse(first.unread?.text ?? '')).toEqual({ version: 99, all: 'new' })
    await vi.advanceTimersByTimeAsync(1000)
    expect(record().tab).not.toBe('newer')

    await openPage(2)
    const second = await takeUpWork('')
    expect(second.said).toBeNull()
    expect(JSON.parse(second.unread?.text ?? '')).toEqual({ version: 99, all: 'new' })
    second.unread?.drop()
    await openPage(3)
    expect((await takeUpWork('')).unread).toBeNull()
  })

  test('in another tab is not overwritten; if the user does so, it is set aside', async () => {
    const told: unknown[] = []
    const { keepMine, takeOther } = keepChanges({ seenAt: 0 }, (state) => told.push(state))
    setTrials(50)
    await vi.advanceTimersByTimeAsync(1000)
    kept.record = { ...newer(), savedAt: Date.now() + 10 }
    setTrials(51)
    await vi.advanceTimersByTimeAsync(1000)
    expect(told).toEqual([{ kind: 'other tab', workspace: null }])
    await takeOther()
    expect(trials()).toBe(51)
    expect(record().tab).toBe('newer')
    keepMine()
    await vi.advanceTimersByTimeAsync(1000)
    expect(record().workspace.trials).toBe(51)
    expect(kept.unread).toEqual({ version: 99, all: 'new' })
  })
})
