/**
 * Finds a Python that can import a module.
 *
 *   node .ci/find-python.mjs        prints the program's path and SciPy's version
 *
 * SIDELOBE_PYTHON is asked first, then the usual names.
 */
import { spawnSync } from 'node:child_process'
import { isMain } from './is-main.mjs'

export const NO_SCIPY =
  'no Python with SciPy was found: install it (python3 -m pip install scipy) or set SIDELOBE_PYTHON'

/**
 * @param {string} [module]  what it must be able to import
 * @returns {{ path: string, version: string } | undefined}  the program and the module's version
 */
export function findPython(module = 'scipy') {
  const names = [process.env.SIDELOBE_PYTHON, 'python3', '/usr/bin/python3', 'python']
  for (const path of names.filter((name) => name)) {
    const found = spawnSync(path, ['-c', `import ${module}; print(${module}.__version__)`], {
      encoding: 'utf8',
      timeout: 60_000,
    })
    if (found.status === 0) return { path, version: found.stdout.trim() }
  }
  return undefined
}

if (isMain(import.meta.url)) {
  const found = findPython()
  console.log(found ? `${found.path} with SciPy ${found.version}` : NO_SCIPY)
  process.exitCode = found ? 0 : 1
}
