/**
 * `npm run reference`: recomputes the values from outside in `test/reference`, where a Python with SciPy exists.
 *
 *   npm run reference -- [part of a script's name]
 *
 * Every `make_*.py` there writes its own JSON beside itself; `git diff` then shows what changed.
 */
import { spawnSync } from 'node:child_process'
import { existsSync, readdirSync } from 'node:fs'
import { basename, dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { NO_SCIPY, findPython } from './find-python.mjs'

const root = dirname(dirname(fileURLToPath(import.meta.url)))
const folder = join(root, 'test', 'reference')
const wanted = process.argv[2] ?? ''

const scripts = (existsSync(folder) ? readdirSync(folder, { recursive: true }) : [])
  .map(String)
  .filter((path) => /^make_.*\.py$/.test(basename(path)) && basename(path) !== 'make_all.py' && path.includes(wanted))
  .sort()
const python = findPython()
if (!python) {
  console.log(`nothing recomputed: ${NO_SCIPY}`)
} else if (scripts.length === 0) {
  console.log(`nothing recomputed: no script make_*.py${wanted && ` with "${wanted}" in its name`} in test/reference`)
  process.exitCode = 1
} else {
  console.log(`${python.path} with SciPy ${python.version}`)
  let failed = 0
  for (const script of scripts) {
    const began = performance.now()
    const { status } = spawnSync(python.path, ['-B', join(folder, script)], { cwd: folder, stdio: 'inherit' })
    if (status !== 0) failed++
    console.log(
      `${status === 0 ? 'made' : 'FAILED'}  test/reference/${script} (${((performance.now() - began) / 1000).toFixed(1)} s)`,
    )
  }
  console.log(`${scripts.length - failed} scripts run, ${failed} failed`)
  process.exitCode = failed > 0 ? 1 : 0
}
