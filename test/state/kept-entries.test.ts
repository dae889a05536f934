import { expect, test } from 'vitest'
import { questionKey, withEntry } from '../../src/state/kept-entries.ts'

const entry = (key: string, value = 0) => ({ key, value })

test('entries of one key take each other’s place, and the oldest go where there are too many', () => {
  let entries: Readonly<Record<string, ReturnType<typeof entry>>> = {}
  for (const key of ['a', 'b', 'a', 'c', 'd']) entries = withEntry(entries, entry(key), 3)
  expect(Object.keys(entries)).toEqual(['a', 'c', 'd'])
  expect(withEntry(entries, entry('c', 7), 3)).toEqual({ a: entry('a'), d: entry('d'), c: entry('c', 7) })
  expect(Object.keys(withEntry(entries, entry('e'), 1))).toEqual(['e'])
})

test('a question is told from another by a single sample, and equals its copy', () => {
  const question = { hz: 1, samples: Float64Array.of(1, 2, 3) }
  expect(questionKey(structuredClone(question))).toBe(questionKey(question))
  expect(questionKey({ ...question, samples: Float64Array.of(1, 2, 3.000001) })).not.toBe(questionKey(question))
})
