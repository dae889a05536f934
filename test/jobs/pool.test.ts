import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest'
import { pool, poolSize } from '../../src/jobs/index.ts'
import { FakeWorker } from './fake-worker.ts'

const log: string[] = []
const releases = new Map<string, () => void>()
const api = {
  double: (x: number) => 2 * x,
  wait: (name: string) =>
    new Promise<string>((resolve) => {
      log.push(name)
      releases.set(name, () => resolve(name))
    }),
  fail: (reason: string): number => {
    throw new RangeError(reason)
  },
}

let workers: FakeWorker[] = []

function open(size: number) {
  return pool<typeof api>(() => {
    const worker = new FakeWorker(api)
    workers.push(worker)
    return worker as unknown as Worker
  }, size)
}

const begun = (...names: string[]) => vi.waitFor(() => expect(log).toEqual(names))
const settle = () => new Promise((resolve) => setTimeout(resolve, 20))

beforeEach(() => {
  log.length = 0
  releases.clear()
  workers = []
})
afterEach(() => {
  for (const worker of workers) worker.terminate()
})

describe('a pool', () => {
  test('runs as many calls at once as it has workers, the others in the order asked as one gets free', async () => {
    const { call } = open(2)
    const calls = ['a', 'b', 'c', 'd'].map((name) => call('wait', [name]))
    await begun('a', 'b')
    await settle()
    expect(log).toEqual(['a', 'b'])
    releases.get('b')?.()
    await begun('a', 'b', 'c')
    releases.get('a')?.()
    await begun('a', 'b', 'c', 'd')
    releases.get('c')?.()
    releases.get('d')?.()
    expect(await Promise.all(calls)).toEqual(['a', 'b', 'c', 'd'])
    expect(workers).toHaveLength(2)
  })

  test('keeps to one worker for calls that come one after the other', async () => {
    const { call } = open(4)
    for (let x = 0; x < 5; x++) expect(await call('double', [x])).toBe(2 * x)
    expect(workers).toHaveLength(1)
  })

  test('hands on what a function throws, and uses its worker again', async () => {
    const { call } = open(1)
    await expect(call('fail', ['no'])).rejects.toThrow('no')
    expect(await call('double', [4])).toBe(8)
    expect(workers).toHaveLength(1)
  })

  test('an abort ends the calls that run and those that wait with that signal, and no others', async () => {
    const { call } = open(2)
    const control = new AbortController()
    const mine = ['a', 'c'].map((name) => call('wait', [name], control.signal))
    await begun('a', 'c')
    const waiting = call('wait', ['e'], control.signal)
    const other = call('wait', ['b'])
    control.abort()
    for (const cancelled of [...mine, waiting]) await expect(cancelled).rejects.toMatchObject({ name: 'AbortError' })
    await begun('a', 'c', 'b')
    releases.get('b')?.()
    expect(await other).toBe('b')
    expect(workers.map(({ terminated }) => terminated)).toEqual([true, true, false])
    await expect(call('double', [1], control.signal)).rejects.toMatchObject({ name: 'AbortError' })
    // both places are free again
    const both = ['f', 'g'].map((name) => call('wait', [name]))
    await begun('a', 'c', 'b', 'f', 'g')
    releases.get('f')?.()
    releases.get('g')?.()
    expect(await Promise.all(both)).toEqual(['f', 'g'])
  })

  test('goes on when a worker breaks', async () => {
    const { call } = open(1)
    const broken = call('wait', ['a'])
    await begun('a')
    const next = call('double', [3])
    workers[0].dispatchEvent(Object.assign(new Event('error'), { message: 'out of memory' }))
    await expect(broken).rejects.toThrow('out of memory')
    expect(await next).toBe(6)
  })

  test('is refused without a worker', () => {
    expect(() => open(0)).toThrow('size must be a positive whole number, was 0')
  })
})

test('a pool leaves one core to the page, and has from two to four workers', () => {
  expect([1, 2, 3, 4, 5, 16, Number.NaN].map(poolSize)).toEqual([2, 2, 2, 3, 4, 4, 2])
})
