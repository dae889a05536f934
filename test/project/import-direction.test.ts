import { spawnSync } from 'node:child_process'
import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { afterEach, describe, expect, test } from 'vitest'
import { checkFile, ROOMS } from '../../.ci/import-direction.mjs'

const messages = (file: string, source: string) => checkFile(file, source).problems.map(({ message }) => message)

describe('imports that are right', () => {
  test.each([
    ['filter/fourier.ts', "import FFT from 'fft.js'"],
    ['filter/chain.ts', "import { designStage } from './stage.ts'"],
    ['erp/score.ts', "import { designChain } from '../filter/index.ts'"],
    ['evidence/claims/claim.ts', "import type { Score } from '../../erp/score.ts'\nimport '../window.ts'"],
    ['state/store.ts', "import { create } from 'zustand/vanilla'\nimport { pool } from '../jobs/pool.ts'"],
    ['plot/drag.ts', "import { drag, select } from 'd3'"],
    ['plot/line.tsx', "import { line } from 'd3'\nimport { useMemo } from 'react'"],
    ['page/token.tsx', "import type { StageSpec } from '../filter/stage.ts'\nimport './token.css'"],
    ['main.tsx', "import { createRoot } from 'react-dom/client'\nimport { Page } from './page/page.tsx'"],
  ])('%s: %s', (file, source) => {
    const { imports, problems } = checkFile(file, source)
    expect(imports).toBe(source.split('\n').length)
    expect(problems).toEqual([])
  })

  test('comments, strings and other files’ addresses are no imports', () => {
    const source = "// import '../state/store.ts'\nexport const s = \"import '../page/page.tsx'\"\n"
    expect(checkFile('filter/chain.ts', source)).toEqual({ imports: 0, problems: [] })
  })
})

describe('imports that are wrong', () => {
  test.each([
    ['filter/chain.ts', "import { scoreOf } from '../erp/score.ts'", 'filter may not import from erp'],
    ['filter/chain.ts', "import type { Score } from '../erp/score.ts'", 'filter may not import from erp'],
    ['filter/chain.ts', "export * from '../state/store.ts'", 'filter may not import from state'],
    ['filter/chain.ts', "export type { Score } from '../erp/score.ts'", 'filter may not import from erp'],
    ['filter/chain.ts', "export const f = () => import('../jobs/pool.ts')", 'filter may not import from jobs'],
    ['filter/chain.ts', "export type T = import('../erp/score.ts').Score", 'filter may not import from erp'],
    ['filter/chain.ts', "new Worker(new URL('../jobs/a.worker.ts', import.meta.url))", 'may not import from jobs'],
    ['filter/chain.ts', "import FFT from 'fft.js'", 'only src/filter/fourier.ts may import fft.js'],
    ['filter/chain.ts', "import { readFile } from 'node:fs'", 'may not import the package node:fs'],
    ['filter/chain.ts', "import { x } from './index.ts'", 'imports its own index'],
    ['filter/chain.ts', "import { x } from '../../test/x.ts'", 'lies outside src'],
    ['erp/noise.ts', "import { create } from 'zustand'", 'erp may not import the package zustand'],
    ['words/prose.ts', "import { useState } from 'react'", 'words may not import the package react'],
    ['evidence/fit.ts', "import { line } from 'd3'", 'evidence may not import the package d3'],
    ['files/read-table.ts', "import { a } from '../evidence/claims.ts'", 'files may not import from evidence'],
    ['plot/scale.ts', "import { designChain } from '../filter/chain.ts'", 'plot imports no other room'],
    ['plot/line.tsx', "import { select } from 'd3'", 'a component may not import select'],
    ['plot/line.tsx', "import * as d3 from 'd3'", 'a component may not import *'],
    ['page/page.tsx', "import { scaleLog } from 'd3'", 'page may not import the package d3'],
    ['page/page.tsx', "import { designChain } from '../filter/chain.ts'", 'page may import only types from filter'],
    ['page/page.tsx', "import { type Chain, designChain } from '../filter/chain.ts'", 'only types from filter'],
    ['page/page.tsx', "import '../utils/x.ts'", 'is in no room'],
    ['utils/x.ts', 'export const x = 1', '"utils" is not a room'],
  ])('%s: %s', (file, source, message) => {
    const found = messages(file, source)
    expect(found).toHaveLength(1)
    expect(found[0]).toContain(message)
  })

  test('the line of the import is given', () => {
    expect(checkFile('erp/a.ts', "import '../filter/stage.ts'\n\n\nimport '../page/b.tsx'").problems[0].line).toBe(4)
  })

  test('a file that cannot be parsed is a problem, not a pass', () => {
    expect(messages('erp/a.ts', 'import {')[0]).toContain('cannot be parsed')
  })
})

describe('purity', () => {
  test.each(['Math.random()', 'Date.now()', 'performance.now()', 'new Date()'])('%s is refused in filter', (use) => {
    expect(messages('filter/a.ts', `export const x = () => ${use}`)[0]).toContain('filter is pure')
    expect(messages('page/a.ts', `export const x = () => ${use}`)).toEqual([])
  })

  test('a fixed date is allowed', () => {
    expect(messages('words/a.ts', 'export const x = new Date(0)')).toEqual([])
  })
})

test('no room stands upstream of itself', () => {
  const above = (room: string): string[] => {
    const rooms = [...ROOMS[room].rooms, ...(ROOMS[room].types ?? [])]
    return [...rooms, ...rooms.flatMap(above)]
  }
  for (const room of Object.keys(ROOMS)) expect(above(room)).not.toContain(room)
})

describe('the program', () => {
  const folders: string[] = []
  afterEach(() => {
    for (const folder of folders.splice(0)) rmSync(folder, { recursive: true })
  })
  const script = fileURLToPath(new URL('../../.ci/import-direction.mjs', import.meta.url))
  const runOn = (files: Record<string, string>) => {
    const root = mkdtempSync(join(tmpdir(), 'sidelobe-direction-'))
    folders.push(root)
    mkdirSync(join(root, 'src'))
    for (const [file, source] of Object.entries(files)) {
      mkdirSync(dirname(join(root, file)), { recursive: true })
      writeFileSync(join(root, file), source)
    }
    const { status, stdout } = spawnSync(process.execPath, [script, root], { encoding: 'utf8' })
    return { status, stdout }
  }

  test('ends with code 0 where all imports point upstream', () => {
    const { status, stdout } = runOn({
      'src/filter/a.ts': 'export const a = 1',
      'src/erp/b.ts': "export { a } from '../filter/a.ts'",
    })
    expect(stdout).toContain('2 files, 1 imports, 0 against the direction')
    expect(status).toBe(0)
  })

  test('ends with code 1 and names file and line of a planted wrong import', () => {
    const { status, stdout } = runOn({
      'src/filter/a.ts': "export const a = 1\nexport { b } from '../erp/b.ts'",
      'src/erp/b.ts': 'export const b = 1',
    })
    expect(stdout).toMatch(/src[\\/]filter[\\/]a\.ts:2 {2}filter may not import from erp/)
    expect(status).toBe(1)
  })

  test('ends with code 1 where there is nothing to check', () => {
    expect(runOn({}).status).toBe(1)
  })
})
