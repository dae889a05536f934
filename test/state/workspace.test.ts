import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import type { Component } from '../../src/erp/component.ts'
import type { FigureId, Limits } from '../../src/erp/figure.ts'
import type { NoiseModel, NoiseSpec } from '../../src/erp/noise.ts'
import { SCENARIOS } from '../../src/erp/scenarios.ts'
import type { Score } from '../../src/erp/score.ts'
import type { BuiltWaveform } from '../../src/erp/waveform.ts'
import type { TableOptions } from '../../src/files/index.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import {
  type BuiltSource,
  type Reading,
  readWorkspace,
  startWorkspace,
  type Workspace,
  workspaceOf,
} from '../../src/state/workspace.ts'
import { stages } from '../filter/random-specs.ts'

/** True where either type can stand for the other; the assignments below fail to compile where it is not. */
type Same<A, B> = [A] extends [B] ? ([B] extends [A] ? true : false) : false

const agreement: [
  Same<Workspace['chain'][number], StageSpec>,
  Same<Workspace['score'], Score>,
  Same<BuiltSource['conditions'][number]['components'][number], Component>,
  Same<Omit<BuiltSource, 'kind' | 'events'>, BuiltWaveform>,
  Same<Workspace['limits'], Limits>,
  Same<keyof Workspace['limits'], FigureId>,
  Same<Workspace['noise'], NoiseModel>,
] = [true, true, true, true, true, true, true]
/** The core takes more kinds of noise, and table options as read-only lists: one way is enough there. */
const oneWay: [Workspace['noise'] extends NoiseSpec ? true : false, Reading extends TableOptions ? true : false] = [
  true,
  true,
]

function reason(value: unknown): string {
  const result = readWorkspace(value)
  if (result.ok) throw new Error('the workspace was accepted')
  return result.reason
}

/** A copy with one place changed, whatever its type; undefined takes the place out. */
function withPlace(path: string, value: unknown): unknown {
  const copy = structuredClone(startWorkspace()) as unknown as Record<string, unknown>
  const keys = path.split('.')
  const last = keys.pop() as string
  const parent = keys.reduce((place, key) => place[key] as Record<string, unknown>, copy)
  if (value === undefined) delete parent[last]
  else parent[last] = value
  return copy
}

describe('the workspace’s types', () => {
  test('agree with those of the core, both ways', () => {
    expect([...agreement, ...oneWay]).not.toContain(false)
  })
})

describe('readWorkspace', () => {
  test.each(SCENARIOS.map((scenario) => [scenario.id, scenario] as const))(
    'takes the scenario %s, and takes it again from its JSON',
    (_, scenario) => {
      const workspace = workspaceOf(scenario)
      expect(readWorkspace(workspace)).toEqual({ ok: true, workspace })
      expect(readWorkspace(JSON.parse(JSON.stringify(workspace)))).toEqual({ ok: true, workspace })
    },
  )

  test('takes every stage that the core knows', () => {
    fc.assert(
      fc.property(fc.array(stages, { maxLength: 5 }), (chosen) => {
        const workspace: Workspace = { ...startWorkspace(), chain: chosen.map(({ spec }) => spec) }
        expect(readWorkspace(JSON.parse(JSON.stringify(workspace)))).toEqual({ ok: true, workspace })
      }),
    )
  })

  test('gives a scenario as a copy of its own', () => {
    const workspace = workspaceOf(SCENARIOS[0])
    workspace.chain.length = 0
    expect(workspaceOf(SCENARIOS[0]).chain.length).toBeGreaterThan(0)
  })

  test.each<[string, unknown]>([
    ['version', undefined],
    ['version', '1'],
    ['title', 5],
    ['title', 'x'.repeat(401)],
    ['remark', 'x'.repeat(1001)],
    ['source', null],
    ['source.kind', 'invented'],
    ['source.samplingRateHz', '500'],
    ['source.samplingRateHz', null],
    ['source.epoch.fromMs', undefined],
    ['source.conditions', []],
    ['source.conditions.0.components.0.shape', 'square'],
    ['source.conditions.0.components.0.widthMs', Number.NaN],
    ['shown.chosen', undefined],
    ['shown.difference', { first: 'a' }],
    ['chain', {}],
    ['chain', Array.from({ length: 61 }, () => startWorkspace().chain[0])],
    ['chain.1.design', 'elliptic'],
    ['chain.1.order', Number.POSITIVE_INFINITY],
    ['chain.1.cutoffsHz', [1, 2, 3]],
    ['chain.1.direction', 'backward'],
    ['chain.2.window', { name: 'kaiser' }],
    ['extent', 'both'],
    ['baseline', 'some'],
    ['trials', '40'],
    ['score.kind', 'median'],
    ['measure.peak', undefined],
    ['limits.score', { value: 0, unit: 'µV' }],
    ['limits.score', { value: 1, unit: 'mV' }],
    ['noise.kind', 'table'],
    ['noise.lines', 'none'],
    ['onsetMs', Number.NaN],
    ['onsetMs', undefined],
  ])('refuses %s = %j and names the field', (path, value) => {
    const named = reason(withPlace(path, value))
    expect(named).toMatch(/^this is no workspace that the page can read: /)
    expect(named).toContain(path.split('.')[0])
    const told = named.split(': ')[1]
    expect(`${told}.`.startsWith(`${path}.`) || `${path}.`.startsWith(`${told}.`), named).toBe(true)
  })

  test.each([
    ['exponent', 9, 'The exponent of the noise must lie between 0 and 4, was 9.'],
    ['flatBelowHz', 0, 'The frequency below which the noise is flat must lie between 0.0001 and 1000, was 0.'],
    ['whiteUv2PerHz', -1, 'The level of the white noise must lie between 0 and 1000000000, was −1.'],
  ])('refuses noise that cannot be, since no token could show it: %s = %d', (field, value, words) => {
    expect(reason(withPlace(`noise.${field}`, value))).toContain(`noise: ${words}`)
  })

  test.each([null, undefined, 5, 'x', [], {}, [startWorkspace()], { version: 1 }])(
    'refuses %j without throwing',
    (value) => {
      expect(reason(value).length).toBeGreaterThan(10)
    },
  )

  test('refuses a newer version, and says so', () => {
    expect(reason({ ...startWorkspace(), version: 3 })).toBe(
      'this workspace has version 3, newer than this page can read (2)',
    )
  })

  test('keeps nothing that it does not know', () => {
    const hostile = JSON.parse(
      JSON.stringify(startWorkspace()).replace('{', '{"__proto__":{"polluted":true},"script":"x",'),
    ) as unknown
    const result = readWorkspace(hostile)
    expect(result.ok && 'script' in result.workspace).toBe(false)
    expect(result.ok && (result.workspace as unknown as { polluted?: boolean }).polluted).toBeUndefined()
    expect(({} as { polluted?: boolean }).polluted).toBeUndefined()
  })

  test('never throws, whatever JSON it is given', () => {
    fc.assert(
      fc.property(fc.jsonValue(), fc.constantFrom(...Object.keys(startWorkspace())), (value, field) => {
        readWorkspace(value)
        readWorkspace({ ...startWorkspace(), [field]: value })
      }),
    )
  })
})
