/** How the workspace is looked at: no part of the work, so neither undone nor sent along. Kept in the browser's own storage. */
import { createStore } from 'zustand/vanilla'

export interface View {
  theme: 'light' | 'dark'
  polarity: 'up' | 'down'
  takenOut: boolean
  gainUnit: 'percent' | 'dB'
  frequencyShows: 'gain' | 'phase' | 'group delay'
  kernelShows: 'impulse response' | 'step response'
  kernelScale: 'compressed' | 'linear'
  windowScale: 'compressed' | 'linear'
  /** The token whose editor is open. */
  open: string | null
  /** The desk that is open under the readout. */
  desk: 'trace' | 'trade-off' | 'claims' | 'write-up' | null
  help: boolean
}

const KEPT = [
  'theme',
  'polarity',
  'takenOut',
  'gainUnit',
  'frequencyShows',
  'kernelShows',
  'kernelScale',
  'windowScale',
  'desk',
] as const
const STORAGE_KEY = 'sidelobe.view'

const initial: View = {
  theme: 'light',
  polarity: 'up',
  takenOut: true,
  gainUnit: 'percent',
  frequencyShows: 'gain',
  kernelShows: 'impulse response',
  kernelScale: 'compressed',
  windowScale: 'compressed',
  open: null,
  desk: null,
  help: false,
}

const CHOICES: { [K in (typeof KEPT)[number]]: readonly View[K][] } = {
  theme: ['light', 'dark'],
  polarity: ['up', 'down'],
  takenOut: [true, false],
  gainUnit: ['percent', 'dB'],
  frequencyShows: ['gain', 'phase', 'group delay'],
  kernelShows: ['impulse response', 'step response'],
  kernelScale: ['compressed', 'linear'],
  windowScale: ['compressed', 'linear'],
  desk: ['trace', 'trade-off', 'claims', 'write-up', null],
}

function kept(): Partial<View> {
  try {
    const stored: unknown = JSON.parse(localStorage.getItem(STORAGE_KEY) ?? '{}')
    if (typeof stored !== 'object' || stored === null) return {}
    const entries = Object.entries(stored).filter(([key, value]) =>
      ((CHOICES as Record<string, readonly unknown[]>)[key] ?? []).includes(value),
    )
    return Object.fromEntries(entries)
  } catch {
    return {}
  }
}

const prefersDark = () => globalThis.matchMedia?.('(prefers-color-scheme: dark)').matches ?? false

export const viewStore = createStore<View>(() => ({ ...initial, theme: prefersDark() ? 'dark' : 'light', ...kept() }))

viewStore.subscribe((view) => {
  try {
    localStorage.setItem(STORAGE_KEY, JSON.stringify(Object.fromEntries(KEPT.map((key) => [key, view[key]]))))
  } catch {
    // A browser without storage keeps no preferences; nothing else depends on them.
  }
})

export const look = (change: Partial<View>) => viewStore.setState(change)
