import { describe, expect, test } from 'vitest'
import { countPlaywright, countVitest, lastLine, sum } from '../../.ci/test-counts.mjs'

const vitest = (numbers: Record<string, number>, testResults: object[] = []) => ({
  numPassedTests: 0,
  numFailedTests: 0,
  numPendingTests: 0,
  numTodoTests: 0,
  testResults,
  ...numbers,
})

describe('vitest', () => {
  test('passed, failed, skipped and to-do tests are counted', () => {
    const report = vitest({ numPassedTests: 5, numFailedTests: 2, numPendingTests: 3, numTodoTests: 1 })
    expect(countVitest(report, false)).toEqual({ passed: 5, failed: 2, skipped: 4 })
  })

  test('a file that could not be loaded counts as one failure', () => {
    const files = [{ status: 'failed', assertionResults: [] }]
    expect(countVitest(vitest({ numPassedTests: 5 }, files), false)).toEqual({ passed: 5, failed: 1, skipped: 0 })
  })

  test('a bad end without a failed test counts as one failure', () => {
    expect(countVitest(vitest({ numPassedTests: 5 }), false).failed).toBe(1)
  })

  test('no report and no test at all are failures', () => {
    expect(countVitest(undefined, true)).toEqual({ passed: 0, failed: 1, skipped: 0 })
    expect(countVitest(vitest({}), true).failed).toBe(1)
  })
})

describe('Playwright', () => {
  test('a journey that passed on repetition is passed, a skipped one skipped', () => {
    const stats = { expected: 4, unexpected: 1, flaky: 1, skipped: 2 }
    expect(countPlaywright({ stats }, false)).toEqual({ passed: 5, failed: 1, skipped: 2 })
  })

  test('a server that did not start, and so a run without a journey, is a failure', () => {
    const stats = { expected: 0, unexpected: 0, flaky: 0, skipped: 0 }
    expect(countPlaywright({ stats }, false)).toEqual({ passed: 0, failed: 1, skipped: 0 })
    expect(countPlaywright(undefined, false).failed).toBe(1)
  })
})

test('the last line has the sums, and the skipped ones only where there are some', () => {
  const counts = sum([
    { passed: 1, failed: 0, skipped: 0 },
    { passed: 10, failed: 2, skipped: 3 },
  ])
  expect(lastLine(counts)).toBe('11 passed, 2 failed, 3 skipped')
  expect(lastLine({ passed: 1, failed: 0, skipped: 0 })).toBe('1 passed, 0 failed')
})
