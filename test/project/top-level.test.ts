import { readdirSync, readFileSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import { expect, test } from 'vitest'

const root = new URL('../../', import.meta.url)

test('the top level holds exactly the agreed entries, besides dotfiles and what git ignores', () => {
  const ignored = readFileSync(new URL('.gitignore', root), 'utf8')
    .split('\n')
    .map((line) => line.replace(/\/$/, ''))
  const entries = readdirSync(fileURLToPath(root)).filter((name) => !name.startsWith('.') && !ignored.includes(name))
  expect(entries.sort()).toEqual(
    [
      'DEVELOPERS.md',
      'LICENSE',
      'README.md',
      'e2e',
      'index.html',
      'package-lock.json',
      'package.json',
      'public',
      'src',
      'test',
      'tsconfig.json',
      'vite.config.ts',
    ].sort(),
  )
})

test('package.json has every command that the documents promise', () => {
  const { scripts } = JSON.parse(readFileSync(new URL('package.json', root), 'utf8'))
  expect(Object.keys(scripts)).toEqual(
    expect.arrayContaining(['start', 'dev', 'build', 'test', 'e2e', 'bench', 'reference', 'format']),
  )
})
