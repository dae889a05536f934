/**
 * `npm run bench`: times the core's work, beside SciPy where there is one, and prints how both compare.
 *
 *   npm run bench -- [ids, for instance W1 W4]
 */
import { spawn } from 'node:child_process'
import { dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { findPython, NO_SCIPY } from '../../.ci/find-python.mjs'
import { bundle } from '../../.ci/run-ts.mjs'

const folder = dirname(fileURLToPath(import.meta.url))
const { files, remove } = await bundle([join(folder, 'run.ts'), join(folder, 'bench-worker.ts')])
const python = findPython()
if (!python) console.log(NO_SCIPY)
const env = {
  ...process.env,
  BENCH_WORKER: files[1],
  BENCH_PYTHON: python?.path ?? '',
  BENCH_SCIPY: python?.version ?? '',
}
const child = spawn(process.execPath, [files[0], ...process.argv.slice(2)], { stdio: 'inherit', env })
for (const signal of ['SIGINT', 'SIGTERM']) process.on(signal, () => child.kill(signal))
child.on('exit', (code) => {
  remove()
  process.exitCode = code ?? 1
})
