import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest'

const fresh = () => import('../../src/state/view.ts')

beforeEach(() => {
  vi.resetModules()
})
afterEach(() => {
  vi.unstubAllGlobals()
})

function storage(entries: Record<string, string> = {}) {
  const kept = new Map(Object.entries(entries))
  vi.stubGlobal('localStorage', {
    getItem: (key: string) => kept.get(key) ?? null,
    setItem: (key: string, value: string) => kept.set(key, value),
  })
  return kept
}

describe('the view', () => {
  test('begins with its own choices where there is no storage, and can be changed all the same', async () => {
    const { look, viewStore } = await fresh()
    expect(viewStore.getState()).toMatchObject({ theme: 'light', polarity: 'up', open: null })
    look({ polarity: 'down' })
    expect(viewStore.getState().polarity).toBe('down')
  })

  test('keeps the choices, but not what is open', async () => {
    const kept = storage()
    const { look } = await fresh()
    look({ polarity: 'down', open: 'score', help: true })
    const stored = JSON.parse([...kept.values()][0]) as object
    expect(stored).toMatchObject({ polarity: 'down' })
    expect(Object.keys(stored)).not.toContain('open')
    expect(Object.keys(stored)).not.toContain('help')
    vi.resetModules()
    expect((await fresh()).viewStore.getState()).toMatchObject({ polarity: 'down', open: null, help: false })
  })

  test.each(['not JSON', 'null', '5', '[]', '{"polarity":"sideways","open":"x","takenOut":"yes"}'])(
    'takes nothing that it does not know from storage: %s',
    async (text) => {
      storage({ 'sidelobe.view': text })
      expect((await fresh()).viewStore.getState()).toMatchObject({ polarity: 'up', open: null, takenOut: true })
    },
  )

  test('is dark where the browser asks for it, unless something else was chosen', async () => {
    vi.stubGlobal('matchMedia', () => ({ matches: true }))
    expect((await fresh()).viewStore.getState().theme).toBe('dark')
    vi.resetModules()
    storage({ 'sidelobe.view': '{"theme":"light"}' })
    expect((await fresh()).viewStore.getState().theme).toBe('light')
  })
})
