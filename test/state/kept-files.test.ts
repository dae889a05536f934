import { beforeEach, describe, expect, test, vi } from 'vitest'
import { keepFile, keptFile, MOST_KEPT_FILES } from '../../src/state/kept-files.ts'

/** The browser's database, and whether it takes anything. */
const kept = new Map<string, unknown>()
let full = false
vi.mock('idb-keyval', () => ({
  get: async (key: string) => kept.get(key),
  set: async (key: string, value: unknown) => {
    if (full) throw new DOMException('full', 'QuotaExceededError')
    kept.set(key, value)
  },
  update: async (key: string, decide: (present: unknown) => unknown) => {
    kept.set(key, decide(kept.get(key)))
  },
  del: async (key: string) => {
    kept.delete(key)
  },
}))

beforeEach(() => {
  kept.clear()
  full = false
})

const texts = () => [...kept.keys()].filter((key) => key.startsWith('sidelobe.file.'))

describe('files in the browser’s storage', () => {
  test('are found again by their id, and others are not', async () => {
    expect(await keepFile('a', 'time,Cz')).toBe(true)
    expect(await keptFile('a')).toBe('time,Cz')
    expect(await keptFile('b')).toBeUndefined()
  })

  test('do not pile up: the ones opened last stay, and one that is opened again counts as opened last', async () => {
    for (let i = 0; i < MOST_KEPT_FILES; i++) await keepFile(`file ${i}`, `text ${i}`)
    await keepFile('file 0', 'text 0')
    await keepFile('one more', 'text')
    expect(texts()).toHaveLength(MOST_KEPT_FILES)
    expect(await keptFile('file 0')).toBe('text 0')
    expect(await keptFile('one more')).toBe('text')
    expect(await keptFile('file 1')).toBeUndefined()
    for (let i = 0; i < 50; i++) await keepFile(`later ${i}`, 'x')
    expect(texts()).toHaveLength(MOST_KEPT_FILES)
  })

  test('that do not fit are said not to be kept, and push nothing out', async () => {
    await keepFile('a', 'time,Cz')
    full = true
    expect(await keepFile('b', 'more')).toBe(false)
    expect(await keptFile('a')).toBe('time,Cz')
  })

  test('a list that is damaged is begun anew', async () => {
    kept.set('sidelobe.files', { not: 'a list' })
    expect(await keepFile('a', 'x')).toBe(true)
    expect(kept.get('sidelobe.files')).toEqual(['a'])
  })
})
