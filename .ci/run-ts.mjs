/**
 * Runs a TypeScript program in Node, which by itself reads no TypeScript before version 22.
 *
 *   node .ci/run-ts.mjs program.ts [arguments]
 *
 * The program and all it imports are bundled to plain JavaScript in a temporary folder, so that it runs at full speed:
 * what is timed is the same code that the page gets. `import.meta.url`, `.dirname` and `.filename` keep pointing at the
 * source file.
 */
import { spawn } from 'node:child_process'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { basename, dirname, join, resolve } from 'node:path'
import { fileURLToPath, pathToFileURL } from 'node:url'
import { build } from 'vite'
import { isMain } from './is-main.mjs'

const root = dirname(dirname(fileURLToPath(import.meta.url)))

/**
 * Bundles TypeScript entries for Node; several entries share their common code. A second entry can be the program of a
 * `worker_threads` worker.
 *
 * @param {readonly string[]} entries  source files, absolute or relative to the working directory
 * @returns {Promise<{ files: string[], remove: () => void }>}  one ES module per entry, in order; `remove` deletes them
 */
export async function bundle(entries) {
  const outDir = mkdtempSync(join(tmpdir(), 'sidelobe-run-'))
  const remove = () => rmSync(outDir, { recursive: true, force: true })
  const input = Object.fromEntries(
    entries.map((entry, i) => [`${i}-${basename(entry).replace(/\.\w+$/, '')}`, resolve(entry)]),
  )
  try {
    await build({
      root,
      configFile: false,
      logLevel: 'silent', // what goes wrong is thrown
      plugins: [keepSourceLocation()],
      ssr: { noExternal: true },
      build: {
        ssr: true,
        outDir,
        emptyOutDir: false,
        copyPublicDir: false,
        minify: false,
        target: 'es2022',
        rolldownOptions: {
          input,
          output: { format: 'es', entryFileNames: '[name].mjs', chunkFileNames: 'shared/[hash].mjs' },
        },
      },
    })
  } catch (error) {
    remove()
    throw error
  }
  return { files: Object.keys(input).map((name) => join(outDir, `${name}.mjs`)), remove }
}

/** A bundle moves; what a program says about its own place must not. */
function keepSourceLocation() {
  return {
    name: 'keep-source-location',
    transform(code, id) {
      const file = id.replace(/\?.*$/, '')
      if (!code.includes('import.meta.') || file.includes('node_modules') || file.startsWith('\0')) return null
      const moved = code
        .replace(/\bimport\.meta\.url\b/g, JSON.stringify(pathToFileURL(file).href))
        .replace(/\bimport\.meta\.dirname\b/g, JSON.stringify(dirname(file)))
        .replace(/\bimport\.meta\.filename\b/g, JSON.stringify(file))
      return { code: moved, map: null }
    },
  }
}

if (isMain(import.meta.url)) {
  const [entry, ...args] = process.argv.slice(2)
  if (!entry) {
    console.error('usage: node .ci/run-ts.mjs program.ts [arguments]')
    process.exit(2)
  }
  const { files, remove } = await bundle([entry])
  const child = spawn(process.execPath, [...process.execArgv, files[0], ...args], { stdio: 'inherit' })
  for (const signal of ['SIGINT', 'SIGTERM']) process.on(signal, () => child.kill(signal))
  child.on('exit', (code) => {
    remove()
    process.exitCode = code ?? 1
  })
}
