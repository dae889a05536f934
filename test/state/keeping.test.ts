import { strToU8, zlibSync } from 'fflate'
import fc from 'fast-check'
import { afterEach, describe, expect, test, vi } from 'vitest'
import { SCENARIOS } from '../../src/erp/scenarios.ts'
import {
  takeUpWork,
  workspaceFromFragment,
  workspaceFromText,
  workspaceToFragment,
  workspaceToText,
} from '../../src/state/keeping.ts'
import { workspaceStore } from '../../src/state/store.ts'
import { startWorkspace, workspaceOf } from '../../src/state/workspace.ts'

const scenarios = SCENARIOS.map((scenario) => [scenario.id, workspaceOf(scenario)] as const)

const fragmentOf = (bytes: Uint8Array) => `#w=${Buffer.from(zlibSync(bytes, { level: 9 })).toString('base64url')}`

afterEach(() => {
  vi.unstubAllGlobals()
})

describe('a link', () => {
  test.each(scenarios)('brings back the scenario %s', (_, workspace) => {
    const fragment = workspaceToFragment(workspace)
    expect(workspaceFromFragment(fragment)).toEqual({ ok: true, workspace })
    expect(fragment).toMatch(/^#w=[\w-]+$/)
    expect(fragment.length).toBeLessThan(8000)
  })

  test('keeps names in any script', () => {
    const workspace = { ...startWorkspace(), title: 'späte Positivierung 遅い陽性 🧠 “x”' }
    expect(workspaceFromFragment(workspaceToFragment(workspace))).toEqual({ ok: true, workspace })
  })

  test('is none where the address has no such fragment', () => {
    expect(workspaceFromFragment('')).toBeNull()
    expect(workspaceFromFragment('#help')).toBeNull()
  })

  test('that was cut off anywhere, or has a letter changed, is refused without throwing', () => {
    const fragment = workspaceToFragment(startWorkspace())
    fc.assert(
      fc.property(fc.integer({ min: 3, max: fragment.length - 4 }), (length) => {
        expect(workspaceFromFragment(fragment.slice(0, length))?.ok).toBe(false)
      }),
    )
    fc.assert(
      fc.property(
        fc.integer({ min: 3, max: fragment.length - 1 }),
        fc.constantFrom('!', 'é', 'A', '-'),
        (at, letter) => {
          const result = workspaceFromFragment(fragment.slice(0, at) + letter + fragment.slice(at + 1))
          if (result && !result.ok) expect(result.reason).toMatch(/^(the link is damaged|this is no workspace)/)
        },
      ),
    )
  })

  test.each([
    ['no base 64', '#w=%%%'],
    ['nothing', '#w='],
    ['no compression', '#w=AAAA'],
    ['no JSON', fragmentOf(strToU8('{"version":'))],
    ['another object', fragmentOf(strToU8('{"version":1}'))],
    ['a newer version', fragmentOf(strToU8('{"version":7}'))],
    ['no UTF-8', fragmentOf(Uint8Array.of(0xff, 0xfe, 0x7b))],
  ])('with %s is refused with a reason', (_, fragment) => {
    const result = workspaceFromFragment(fragment)
    expect(result?.ok).toBe(false)
    expect(result && !result.ok && result.reason.length).toBeGreaterThan(10)
  })

  test('that unpacks to 100 MB is refused without room for it', () => {
    const fragment = fragmentOf(new Uint8Array(100_000_000))
    const allocated: number[] = []
    const plain = Uint8Array
    vi.stubGlobal(
      'Uint8Array',
      new Proxy(plain, {
        construct: (target, args, made) => {
          if (typeof args[0] === 'number') allocated.push(args[0])
          return Reflect.construct(target, args, made) as object
        },
      }),
    )
    const before = process.memoryUsage()
    const started = performance.now()
    const result = workspaceFromFragment(fragment)
    const took = performance.now() - started
    const after = process.memoryUsage()
    expect(result).toEqual({ ok: false, reason: expect.stringContaining('damaged') })
    expect(Math.max(...allocated)).toBeLessThanOrEqual(4_000_000)
    expect(took).toBeLessThan(2000)
    expect(after.arrayBuffers - before.arrayBuffers).toBeLessThan(20_000_000)
  })

  test('that is itself far too long is refused unread', () => {
    const started = performance.now()
    expect(workspaceFromFragment(`#w=${'A'.repeat(50_000_000)}`)?.ok).toBe(false)
    expect(performance.now() - started).toBeLessThan(1000)
  })
})

describe('a workspace file', () => {
  test.each(scenarios)('brings back the scenario %s', (_, workspace) => {
    expect(workspaceFromText(workspaceToText(workspace))).toEqual({ ok: true, workspace, enclosed: null })
  })

  test('that is no JSON is refused with what is wrong', () => {
    for (const text of ['', 'time,Cz\n0,1', '{"version": 1,'])
      expect(workspaceFromText(text)).toEqual({
        ok: false,
        reason: expect.stringMatching(/^this is no workspace file: ./),
      })
  })
})

describe('a workspace file with a table inside', () => {
  const table = { fileName: 'average.csv', text: 'time_ms,Cz\n0,1\n' }

  test('gives back both, and the workspace does not keep the table as a part of itself', () => {
    const workspace = startWorkspace()
    expect(workspaceFromText(workspaceToText(workspace, table))).toEqual({ ok: true, workspace, enclosed: table })
    expect(workspaceFromText(workspaceToText(workspace))).toEqual({ ok: true, workspace, enclosed: null })
  })

  test.each([[null], [3], [{ fileName: 'a.csv' }], [{ fileName: 1, text: '' }]])(
    'is refused when it is %j',
    (enclosed) => {
      const text = JSON.stringify({ ...startWorkspace(), enclosed })
      expect(workspaceFromText(text)).toEqual({ ok: false, reason: expect.stringContaining('enclosed') })
    },
  )
})

describe('taking up work', () => {
  test('goes on without a word where the browser has no storage, and keeps the work on screen', async () => {
    const { workspace } = workspaceStore.getState()
    expect((await takeUpWork('')).said).toBeNull()
    expect(workspaceStore.getState().workspace).toBe(workspace)
  })

  test('takes the link’s workspace even where storage throws at the first touch', async () => {
    vi.stubGlobal('indexedDB', {
      open: () => {
        throw new DOMException('not allowed here', 'SecurityError')
      },
    })
    const workspace = { ...workspaceOf(SCENARIOS[1]), title: 'from a link' }
    expect((await takeUpWork(workspaceToFragment(workspace))).said).toBeNull()
    expect(workspaceStore.getState().workspace).toEqual(workspace)
  })

  test('says what is wrong with a damaged link and leaves the work as it was', async () => {
    const { workspace } = workspaceStore.getState()
    expect((await takeUpWork('#w=AAAA')).said).toContain('damaged')
    expect(workspaceStore.getState().workspace).toBe(workspace)
  })
})
