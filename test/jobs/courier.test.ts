import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest'
import { courier } from '../../src/jobs/index.ts'
import { FakeWorker } from './fake-worker.ts'

const log: string[] = []
let release: (() => void) | null = null
const api = {
  double: (x: number) => {
    log.push(`double ${x}`)
    return 2 * x
  },
  later: async (x: number, ms: number) => {
    log.push(`later ${x}`)
    await new Promise((resolve) => setTimeout(resolve, ms))
    log.push(`done ${x}`)
    return x
  },
  wait: () =>
    new Promise<string>((resolve) => {
      log.push('waiting')
      release = () => resolve('released')
    }),
  fail: (reason: string): number => {
    throw new RangeError(reason)
  },
  sum: (values: Float64Array) => values.reduce((total, value) => total + value, 0),
}

let workers: FakeWorker[] = []

function open() {
  return courier<typeof api>(() => {
    const worker = new FakeWorker(api)
    workers.push(worker)
    return worker as unknown as Worker
  })
}

const reached = async (entry: string) => {
  await vi.waitFor(() => expect(log).toContain(entry))
}

beforeEach(() => {
  log.length = 0
  workers = []
  release = null
})
afterEach(() => {
  vi.useRealTimers()
  for (const worker of workers) worker.terminate()
})

describe('a courier', () => {
  test('starts no worker before the first call, and one for all calls', async () => {
    const { call } = open()
    expect(workers).toHaveLength(0)
    expect(await call('double', [21])).toBe(42)
    expect(await call('sum', [Float64Array.of(1, 2, 3)])).toBe(6)
    expect(workers).toHaveLength(1)
  })

  test('runs one call at a time, in the order asked', async () => {
    const { call } = open()
    const results = Promise.all([call('later', [1, 20]), call('later', [2, 1]), call('double', [3])])
    expect(await results).toEqual([1, 2, 6])
    expect(log).toEqual(['later 1', 'done 1', 'later 2', 'done 2', 'double 3'])
  })

  test('hands on what the function throws, and goes on with the same worker', async () => {
    const { call } = open()
    await expect(call('fail', ['the cutoff must be positive'])).rejects.toThrow('the cutoff must be positive')
    expect(await call('double', [2])).toBe(4)
    expect(workers).toHaveLength(1)
    expect(workers[0].terminated).toBe(false)
  })

  test('rejects what cannot be sent, and goes on', async () => {
    const { call } = open()
    await expect(call('double', [(() => 1) as unknown as number])).rejects.toThrow()
    expect(await call('double', [2])).toBe(4)
  })

  test('ends the worker when a running call is aborted, and starts another for the next', async () => {
    const { call } = open()
    const control = new AbortController()
    const cancelled = call('wait', [], control.signal)
    const next = call('double', [5])
    await reached('waiting')
    control.abort()
    await expect(cancelled).rejects.toMatchObject({ name: 'AbortError' })
    expect(workers[0].terminated).toBe(true)
    expect(await next).toBe(10)
    expect(workers).toHaveLength(2)
    expect(workers[1].terminated).toBe(false)
  })

  test('does not run a call that was aborted before its turn, and ends no worker for it', async () => {
    const { call } = open()
    const control = new AbortController()
    const running = call('wait', [])
    const queued = call('double', [7], control.signal)
    await reached('waiting')
    control.abort()
    release?.()
    expect(await running).toBe('released')
    await expect(queued).rejects.toMatchObject({ name: 'AbortError' })
    expect(log).toEqual(['waiting'])
    expect(workers[0].terminated).toBe(false)
  })

  test('rejects a call whose signal was aborted already, without starting a worker', async () => {
    const { call } = open()
    await expect(call('double', [1], AbortSignal.abort())).rejects.toMatchObject({ name: 'AbortError' })
    expect(workers).toHaveLength(0)
  })

  test('an abort after the answer changes nothing', async () => {
    const { call } = open()
    const control = new AbortController()
    expect(await call('double', [1], control.signal)).toBe(2)
    control.abort()
    expect(await call('double', [2])).toBe(4)
    expect(workers).toHaveLength(1)
  })

  test('rejects when the worker breaks, and starts another for the next call', async () => {
    const { call } = open()
    const broken = call('wait', [])
    await reached('waiting')
    workers[0].dispatchEvent(Object.assign(new Event('error'), { message: 'out of memory' }))
    await expect(broken).rejects.toThrow('out of memory')
    expect(workers[0].terminated).toBe(true)
    expect(await call('double', [4])).toBe(8)
    expect(workers).toHaveLength(2)
  })

  test('rejects when no worker can be started', async () => {
    const { call } = courier<typeof api>(() => {
      throw new DOMException('not allowed', 'SecurityError')
    })
    await expect(call('double', [1])).rejects.toThrow('not allowed')
  })
})

describe('an idle worker', () => {
  test('is dropped after a quarter of a minute, and started again when it is asked for', async () => {
    vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout'] })
    const { call } = open()
    expect(await call('double', [1])).toBe(2)
    vi.advanceTimersByTime(14_999)
    expect(workers[0].terminated).toBe(false)
    vi.advanceTimersByTime(1)
    expect(workers[0].terminated).toBe(true)
    expect(await call('double', [2])).toBe(4)
    expect(workers).toHaveLength(2)
  })

  test('is not dropped while it works, however long that takes', async () => {
    vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout'] })
    const { call } = open()
    await call('double', [1])
    const running = call('wait', [])
    while (!release) await new Promise((resolve) => setImmediate(resolve))
    vi.advanceTimersByTime(60_000)
    expect(workers[0].terminated).toBe(false)
    release()
    expect(await running).toBe('released')
    expect(workers).toHaveLength(1)
  })

  test('that was aborted leaves no timer behind that would end its successor', async () => {
    vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout'] })
    const { call } = open()
    const control = new AbortController()
    const cancelled = call('wait', [], control.signal)
    while (!release) await new Promise((resolve) => setImmediate(resolve))
    control.abort()
    await expect(cancelled).rejects.toMatchObject({ name: 'AbortError' })
    release = null
    const running = call('wait', [])
    while (!release) await new Promise((resolve) => setImmediate(resolve))
    vi.advanceTimersByTime(60_000)
    expect(workers[1].terminated).toBe(false)
    ;(release as () => void)()
    expect(await running).toBe('released')
  })
})
