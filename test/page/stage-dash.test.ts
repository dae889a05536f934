import { expect, test } from 'vitest'
import { stageDash } from '../../src/page/stage-dash.ts'

test('six stages have six different lines, and the seventh begins again', () => {
  expect(new Set([0, 1, 2, 3, 4, 5].map(stageDash)).size).toBe(6)
  expect(stageDash(6)).toBe(stageDash(0))
})
