/** What the user can do with chains kept for comparison. Each takes the workspace and gives the next one. */
import { type NamedChain, pinNames, sameChain } from '../words/index.ts'
import { MAX_PINS, type Pin, type Workspace } from './workspace.ts'

/** A loaded average can only be filtered as epochs, whatever was said of another waveform. */
function asRun<T extends { extent: Pin['extent'] }>(workspace: Workspace, chain: T): T {
  return workspace.source.kind === 'recorded' ? { ...chain, extent: 'epochs' } : chain
}

const presentOf = (workspace: Workspace) => asRun(workspace, { chain: workspace.chain, extent: workspace.extent })

const isPresent = (workspace: Workspace, pin: Pin) => sameChain(asRun(workspace, pin), presentOf(workspace))

/** Whether the pinned chain is the present one. */
export const isInUse = (workspace: Workspace, index: number) => isPresent(workspace, workspace.pins[index])

/** The names under which the pins are shown, in their order. */
export function namesOfPins(workspace: Workspace): string[] {
  return pinNames(
    workspace.pins.map((pin): NamedChain => asRun(workspace, pin)),
    presentOf(workspace),
  )
}

/** Why the present chain cannot be pinned, or null. */
export function whyNotPinned(workspace: Workspace): string | null {
  if (workspace.pins.length >= MAX_PINS) return 'three chains are pinned: unpin one first'
  if (workspace.pins.some((pin) => isPresent(workspace, pin))) return 'this chain is pinned: change it to compare'
  return null
}

/** Keeps the present chain for comparison; its name follows from what it is compared with. */
export function pinChain(workspace: Workspace): Workspace {
  if (whyNotPinned(workspace) !== null) return workspace
  const { chain, extent } = workspace
  return { ...workspace, pins: [...workspace.pins, { name: '', chain, extent }] }
}

/** Takes the pinned chain into the protocol line; what stood there takes its place, unless another pin keeps it. */
export function swapPin(workspace: Workspace, index: number): Workspace {
  const pin = workspace.pins[index]
  if (!pin || isPresent(workspace, pin)) return workspace
  const kept = workspace.pins.some((entry) => isPresent(workspace, entry))
  const replaced: Pin = { name: '', chain: workspace.chain, extent: workspace.extent }
  const pins = kept ? workspace.pins : workspace.pins.map((entry, i) => (i === index ? replaced : entry))
  return { ...workspace, chain: pin.chain, extent: pin.extent, pins }
}

/** @param name  empty for the name that suggests itself. */
export function renamePin(workspace: Workspace, index: number, name: string): Workspace {
  const pins = workspace.pins.map((pin, i) => (i === index ? { ...pin, name } : pin))
  return { ...workspace, pins }
}

export function unpin(workspace: Workspace, index: number): Workspace {
  return { ...workspace, pins: workspace.pins.filter((_, i) => i !== index) }
}
