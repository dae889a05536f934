import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest'
import { endGesture, onRefusal, redo, say, undo, workspaceStore } from '../../src/state/store.ts'
import { startWorkspace, type Workspace } from '../../src/state/workspace.ts'

const trials = () => workspaceStore.getState().workspace.trials
const steps = () => workspaceStore.temporal.getState().pastStates.length
const count = (n: number) => (workspace: Workspace) => ({ ...workspace, trials: n })

beforeEach(() => {
  vi.useFakeTimers()
  endGesture()
  say(() => ({ ...startWorkspace(), trials: 1 }))
  workspaceStore.temporal.getState().clear()
})
afterEach(() => {
  vi.useRealTimers()
})

describe('undo and redo', () => {
  test('go back and forth over single changes', () => {
    for (const n of [2, 3, 4]) say(count(n))
    undo()
    undo()
    expect(trials()).toBe(2)
    redo()
    expect(trials()).toBe(3)
    undo()
    undo()
    expect(trials()).toBe(1)
  })

  test('stop at the ends of the history', () => {
    undo()
    expect(trials()).toBe(1)
    say(count(2))
    redo()
    expect(trials()).toBe(2)
  })

  test('a change after an undo ends the way forward', () => {
    say(count(2))
    say(count(3))
    undo()
    say(count(9))
    redo()
    expect(trials()).toBe(9)
    undo()
    expect(trials()).toBe(2)
  })

  test('bring back the very object, so that nothing is computed anew', () => {
    const { workspace } = workspaceStore.getState()
    say(count(2))
    undo()
    expect(workspaceStore.getState().workspace).toBe(workspace)
  })

  test('reach back more than 200 steps', () => {
    for (let n = 2; n <= 301; n++) say(count(n))
    expect(steps()).toBe(300)
    for (let n = 0; n < 300; n++) undo()
    expect(trials()).toBe(1)
  })

  test('the history has an end', () => {
    for (let n = 2; n <= 1000; n++) say(count(n))
    expect(steps()).toBe(400)
  })
})

describe('a change that changes nothing', () => {
  test('is no step', () => {
    say((workspace) => workspace)
    expect(steps()).toBe(0)
  })

  test('does not break into a gesture', () => {
    say(count(2), 'trials')
    say((workspace) => workspace)
    say(count(3), 'trials')
    expect(steps()).toBe(1)
  })
})

describe('changes of one group', () => {
  test('that follow one another are one step', () => {
    for (let n = 2; n <= 60; n++) {
      vi.advanceTimersByTime(16)
      say(count(n), 'trials')
    }
    expect(steps()).toBe(1)
    undo()
    expect(trials()).toBe(1)
    redo()
    expect(trials()).toBe(60)
  })

  test('are two steps after a pause', () => {
    say(count(2), 'trials')
    vi.advanceTimersByTime(1499)
    say(count(3), 'trials')
    vi.advanceTimersByTime(1500)
    say(count(4), 'trials')
    expect(steps()).toBe(2)
    undo()
    expect(trials()).toBe(3)
  })

  test('are two steps when the gesture was ended between them', () => {
    say(count(2), 'trials')
    endGesture()
    say(count(3), 'trials')
    expect(steps()).toBe(2)
  })

  test('are their own step beside another group, and beside a change without one', () => {
    say(count(2), 'trials')
    say(count(3), 'stage:0:cutoff')
    say(count(4))
    say(count(5), 'trials')
    expect(steps()).toBe(4)
  })

  test('are a new step after an undo, which they do not swallow', () => {
    say(count(2), 'trials')
    say(count(3), 'trials')
    undo()
    say(count(4), 'trials')
    undo()
    expect(trials()).toBe(1)
    redo()
    expect(trials()).toBe(4)
  })
})

describe('a change that could not be read again after a reload', () => {
  test.each<[string, (w: Workspace) => Workspace, RegExp]>([
    ['a number that is none', (w) => ({ ...w, trials: Number.NaN }), /^trials: /],
    ['one stage too many', (w) => ({ ...w, chain: Array.from({ length: 61 }, () => w.chain[0]) }), /^chain: /],
    [
      'a name as long as a page',
      (w) => ({ ...w, shown: { ...w.shown, channel: 'x'.repeat(401) } }),
      /^shown.channel: /,
    ],
    ['noise that cannot be', (w) => ({ ...w, noise: { ...w.noise, exponent: 9 } }), /^noise: The exponent/],
  ])('is not taken, and the reason is told: %s', (_, change, words) => {
    const { workspace } = workspaceStore.getState()
    const told: string[] = []
    onRefusal((fault) => told.push(fault))
    say(change)
    expect(told).toEqual([expect.stringMatching(words)])
    expect(workspaceStore.getState().workspace).toBe(workspace)
    expect(steps()).toBe(0)
  })
})
