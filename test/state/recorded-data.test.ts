import { afterEach, describe, expect, test, vi } from 'vitest'
import { readTable } from '../../src/files/index.ts'
import { bench, dataStore, openTable, recordedData, rereadTable } from '../../src/state/recorded-data.ts'
import { startWorkspace } from '../../src/state/workspace.ts'
import { madeUpText } from './made-up-table.ts'

/** Reads in this thread, as the worker would in its own; a real worker needs a browser. */
function readHere() {
  return vi
    .spyOn(bench, 'call')
    .mockImplementation((async (_name: string, args: Parameters<typeof readTable>) =>
      readTable(...args)) as unknown as typeof bench.call)
}

const file = (text: string, name = 'average.csv') => new File([text], name, { type: 'text/csv' })

afterEach(() => {
  vi.restoreAllMocks()
  dataStore.setState({ files: {}, reading: null })
})

describe('a file that is opened', () => {
  test('is named by the SHA-256 of its text and found again by it, without any storage', async () => {
    readHere()
    const opened = await openTable(file(madeUpText()))
    if (!opened.ok) throw new Error(opened.reason)
    expect(opened.source.fileId).toMatch(/^[0-9a-f]{64}$/)
    expect(opened.source).toMatchObject({ kind: 'recorded', fileName: 'average.csv', reading: {} })
    expect(recordedData(opened.source, dataStore.getState().files)).toBe(opened.table)
    const again = await openTable(file(madeUpText(), 'copy.csv'))
    expect(again.ok && again.source.fileId).toBe(opened.source.fileId)
  })

  test('that is refused leaves nothing behind', async () => {
    readHere()
    const refused = await openTable(file('time,Cz\n0,x\n'))
    expect(refused.ok).toBe(false)
    expect(dataStore.getState()).toEqual({ files: {}, reading: null })
  })

  test('that is cancelled says so, and is being read no more', async () => {
    vi.spyOn(bench, 'call').mockImplementation(
      ((_name: string, _args: unknown, signal: AbortSignal) =>
        new Promise((_, reject) => {
          signal.addEventListener('abort', () => reject(new DOMException('cancelled', 'AbortError')))
        })) as unknown as typeof bench.call,
    )
    const opening = openTable(file(madeUpText()))
    await vi.waitFor(() => expect(dataStore.getState().reading?.fileName).toBe('average.csv'))
    dataStore.getState().reading?.cancel()
    await expect(opening).rejects.toMatchObject({ name: 'AbortError' })
    expect(dataStore.getState().reading).toBeNull()
  })
})

describe('a file that is read in another way', () => {
  test('is kept beside the first reading, whatever the order of the choices', async () => {
    const call = readHere()
    const opened = await openTable(file(madeUpText()))
    if (!opened.ok) throw new Error(opened.reason)
    const other = await rereadTable(opened.source, { timeUnit: 'ms', amplitudeUnit: 'mV' })
    if (!other?.ok) throw new Error('the table was refused')
    expect(other.waveforms[0].values[100]).toBeCloseTo(1000 * opened.table.waveforms[0].values[100], 6)
    const calls = call.mock.calls.length
    expect(await rereadTable(opened.source, { amplitudeUnit: 'mV', timeUnit: 'ms' })).toBe(other)
    expect(call.mock.calls.length).toBe(calls)
    const { files } = dataStore.getState()
    expect(recordedData({ ...opened.source, reading: { amplitudeUnit: 'mV', timeUnit: 'ms' } }, files)).toBe(other)
    expect(recordedData(opened.source, files)).toBe(opened.table)
  })

  test('is null where its text is nowhere', async () => {
    expect(
      await rereadTable({ kind: 'recorded', fileName: 'x.csv', fileId: 'b'.repeat(64), reading: {} }, {}),
    ).toBeNull()
  })
})

test('a built source has no recorded data', () => {
  expect(recordedData(startWorkspace().source, {})).toBeNull()
})
