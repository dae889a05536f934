import { spawnSync } from 'node:child_process'
import { mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath, pathToFileURL } from 'node:url'
import { afterEach, beforeEach, expect, test } from 'vitest'
import { bundle } from '../../.ci/run-ts.mjs'

const script = fileURLToPath(new URL('../../.ci/run-ts.mjs', import.meta.url))
let folder = ''
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'sidelobe-source-'))
})
afterEach(() => rmSync(folder, { recursive: true }))

const write = (name: string, source: string) => {
  const path = join(folder, name)
  writeFileSync(path, source)
  return path
}

test('a TypeScript program runs with its imports and arguments, and knows its own place', () => {
  write('twice.ts', 'export const twice = (x: number): number => 2 * x')
  const program = write(
    'program.ts',
    "import { twice } from './twice.ts'\nconst args: string[] = process.argv.slice(2)\nconsole.log(twice(21), args.join(' '), import.meta.url)",
  )
  const { status, stdout } = spawnSync(process.execPath, [script, program, 'a', 'b'], { encoding: 'utf8' })
  expect(stdout.trim()).toBe(`42 a b ${pathToFileURL(program).href}`)
  expect(status).toBe(0)
})

test('the program’s exit code is kept', () => {
  const program = write('program.ts', 'process.exitCode = 3 as number')
  expect(spawnSync(process.execPath, [script, program]).status).toBe(3)
})

test('a program that cannot be bundled is an error and leaves nothing behind', async () => {
  const left = () => readdirSync(tmpdir()).filter((name) => name.startsWith('sidelobe-run-'))
  const before = left()
  const program = write('program.ts', "import './absent.ts'")
  await expect(bundle([program])).rejects.toThrow(/absent/)
  expect(left().filter((name) => !before.includes(name))).toEqual([])
})

test('several entries give one module each, in order, with common code shared', async () => {
  write('common.ts', 'export const common = { value: 7 as number }')
  const first = write('first.ts', "export { common } from './common.ts'")
  const second = write('second.ts', "import { common } from './common.ts'\nexport const own: unknown = common")
  const { files, remove } = await bundle([first, second])
  const [one, two] = await Promise.all(files.map((file) => import(/* @vite-ignore */ pathToFileURL(file).href)))
  remove()
  expect(one.common).toEqual({ value: 7 })
  expect(two.own).toBe(one.common)
})
