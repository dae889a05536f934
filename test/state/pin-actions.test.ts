import { describe, expect, test } from 'vitest'
import {
  workspaceFromFragment,
  workspaceFromText,
  workspaceToFragment,
  workspaceToText,
} from '../../src/state/keeping.ts'
import { isInUse, namesOfPins, pinChain, renamePin, swapPin, unpin, whyNotPinned } from '../../src/state/pin-actions.ts'
import { startWorkspace, type Workspace } from '../../src/state/workspace.ts'
import { madeUpWorkspace } from './made-up-table.ts'

/** The start's chain with another high-pass cutoff. */
const withCutoff = (workspace: Workspace, hz: number): Workspace => ({
  ...workspace,
  chain: workspace.chain.map((spec) => (spec.design === 'butterworth' ? { ...spec, cutoffsHz: [hz] } : spec)),
})

const start = startWorkspace()

describe('pinning', () => {
  test('keeps the very chain, and names it by what changes afterwards', () => {
    const pinned = pinChain(start)
    expect(pinned.pins).toEqual([{ name: '', chain: start.chain, extent: start.extent }])
    expect(pinned.pins[0].chain).toBe(start.chain)
    expect(namesOfPins(pinned)).toEqual(['chain as pinned'])
    expect(namesOfPins(withCutoff(pinned, 0.1))).toEqual(['high-pass 1 Hz'])
  })

  test('is refused for a chain that is pinned, and for a fourth', () => {
    const once = pinChain(start)
    expect(whyNotPinned(once)).toContain('this chain is pinned')
    expect(pinChain(once)).toBe(once)
    const full = [0.5, 0.3].reduce((w, hz) => pinChain(withCutoff(w, hz)), once)
    expect(full.pins).toHaveLength(3)
    const fourth = withCutoff(full, 0.1)
    expect(whyNotPinned(fourth)).toContain('three chains are pinned')
    expect(pinChain(fourth)).toBe(fourth)
  })

  test('survives the link and the workspace file, own names included', () => {
    const kept = renamePin(pinChain(withCutoff(pinChain(start), 0.1)), 1, 'slow')
    expect(workspaceFromFragment(workspaceToFragment(kept))).toMatchObject({ ok: true, workspace: kept })
    expect(workspaceFromText(workspaceToText(kept))).toMatchObject({ ok: true, workspace: kept })
  })

  test('a fourth pin in a file is refused by name of the field', () => {
    const pins = Array.from({ length: 4 }, () => pinChain(start).pins[0])
    const read = workspaceFromText(workspaceToText({ ...start, pins }))
    expect(read.ok).toBe(false)
    expect(!read.ok && read.reason).toContain('pins')
  })
})

describe('using a pinned chain', () => {
  test('swaps it with the present one, and back', () => {
    const compared = withCutoff(pinChain(start), 0.1)
    const swapped = swapPin(compared, 0)
    expect(swapped.chain).toBe(start.chain)
    expect(swapped.pins[0].chain).toBe(compared.chain)
    expect(namesOfPins(swapped)).toEqual(['high-pass 0.1 Hz'])
    expect(swapPin(swapped, 0)).toEqual(compared)
  })

  test('brings back what it ran on', () => {
    const epochs = swapPin({ ...pinChain(start), extent: 'epochs' }, 0)
    expect(epochs.extent).toBe('continuous')
    expect(epochs.pins[0].extent).toBe('epochs')
  })

  test('loses no pin where the present chain is kept by another one', () => {
    const two = pinChain(withCutoff(pinChain(start), 0.1))
    const used = swapPin(two, 0)
    expect(used.chain).toBe(start.chain)
    expect(used.pins).toBe(two.pins)
    expect(isInUse(used, 0)).toBe(true)
    expect(swapPin(used, 0)).toBe(used)
  })

  test('of a loaded average is the same whatever it was pinned on, since it runs on the epoch', () => {
    const { workspace } = madeUpWorkspace()
    const filtered = { ...workspace, chain: start.chain, extent: 'epochs' as const }
    const pinned = { ...pinChain(filtered), extent: 'continuous' as const }
    expect(isInUse(pinned, 0)).toBe(true)
    expect(namesOfPins(pinned)).toEqual(['chain as pinned'])
  })
})

test('unpinning takes that one away and leaves the others where they were', () => {
  const two = pinChain(withCutoff(pinChain(start), 0.1))
  expect(unpin(two, 0).pins).toEqual([two.pins[1]])
  expect(unpin(two, 1).pins).toEqual([two.pins[0]])
})

test('a name of spaces is no name', () => {
  expect(namesOfPins(renamePin(withCutoff(pinChain(start), 0.1), 0, '  '))).toEqual(['high-pass 1 Hz'])
  expect(namesOfPins(renamePin(pinChain(start), 0, 'of the lab'))).toEqual(['of the lab'])
})
