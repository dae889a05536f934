import { spawnSync } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { findPython, NO_SCIPY } from '../../.ci/find-python.mjs'
import { applyChain } from '../../src/filter/index.ts'
import { exportPlan, PYTHON_FILE, pythonSource } from '../../src/words/index.ts'
import { EXPORTED } from './chains.ts'
import { claims, INPUTS, type Outcome, runAll } from './exported-files.ts'

const python = findPython()
if (!python) console.log(`Python files are not run: ${NO_SCIPY}`)

const DRIVER = `
import contextlib, io, runpy
import numpy as np
inputs = [np.array(line.split(), dtype=float) for line in open("inputs.txt")]
for i in range(int(open("folders.txt").read())):
    made = runpy.run_path(f"{i}/${PYTHON_FILE}", run_name="exported")
    said = io.StringIO()
    with contextlib.redirect_stdout(said):
        made["self_check"]()
    open(f"{i}/check.txt", "w").write(said.getvalue())
    with open(f"{i}/outputs.txt", "w") as file:
        for x in inputs:
            print(*(repr(float(v)) for v in made["apply_chain"](x)), file=file)
`

describe.skipIf(!python)('Python', () => {
  let folder = ''
  let outcomes: Outcome[] = []
  const run = (...options: string[]) =>
    spawnSync(python?.path ?? '', ['-B', PYTHON_FILE, ...options], { cwd: folder, encoding: 'utf8', timeout: 120_000 })

  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'sidelobe-python-'))
    outcomes = runAll(
      {
        name: 'Python',
        fileName: PYTHON_FILE,
        source: pythonSource,
        driver: DRIVER,
        driverName: 'driver.py',
        command: [python?.path ?? '', '-B'],
      },
      folder,
    )
  }, 300_000)
  afterAll(() => rmSync(folder, { recursive: true, force: true }))

  claims(() => outcomes)

  const { chain, extent } = EXPORTED.find(({ title }) => title === 'everything, one after another, epochs')!

  test('run alone, a file checks itself and prints OK', () => {
    writeFileSync(join(folder, PYTHON_FILE), pythonSource(exportPlan(chain, extent)))
    const { stdout, status } = run()
    expect(stdout).toMatch(/^OK: largest difference /)
    expect(status).toBe(0)
  })

  test('a file whose coefficients were changed by a millionth fails loudly', () => {
    const source = pythonSource(exportPlan(chain, extent))
    const first = /\[([\d.]+), /.exec(source)![1]
    writeFileSync(join(folder, PYTHON_FILE), source.replace(first, String(Number(first) * (1 + 1e-6))))
    const { stderr, status } = run()
    expect(stderr).toMatch(/^FAILED: differs by /)
    expect(status).toBe(1)
  })

  test('a column of a table is filtered into a new table', () => {
    writeFileSync(join(folder, PYTHON_FILE), pythonSource(exportPlan(chain, extent)))
    const x = INPUTS[0]
    writeFileSync(join(folder, 'in.csv'), `time, Cz\n${Array.from(x, (v, i) => `${i},${v}`).join('\n')}\n`)
    expect(run('in.csv', 'Cz', 'out.csv').status).toBe(0)
    const [head, ...rows] = readFileSync(join(folder, 'out.csv'), 'utf8').trim().split(/\r?\n/)
    expect(head).toBe('Cz')
    const expected = applyChain(chain, x, extent)
    expect(rows.length).toBe(x.length)
    rows.forEach((row, i) => expect(Number(row)).toBeCloseTo(expected[i], 7))
  })

  test('what cannot be filtered is refused by name: a short epoch, a value that is not finite, a column that is absent', () => {
    writeFileSync(join(folder, PYTHON_FILE), pythonSource(exportPlan(chain, extent)))
    writeFileSync(join(folder, 'columns.csv'), 'time, Cz\n0,1\n')
    const program = `
from sidelobe_chain import apply_chain, filter_column
def said(f, *arguments):
    try:
        f(*arguments)
    except (ValueError, SystemExit) as error:
        print(error)
said(apply_chain, [1.0] * 20)
said(apply_chain, [1.0, float("nan")])
said(filter_column, "columns.csv", "Pz", "out.csv")
`
    const { stdout } = spawnSync(python?.path ?? '', ['-B', '-c', program], { cwd: folder, encoding: 'utf8' })
    expect(stdout.trim().split('\n')).toEqual([
      expect.stringMatching(/needs at least \d+ samples, the epoch has 20/),
      'x must be a vector of finite numbers',
      "columns.csv has no column 'Pz'; it has time, Cz",
    ])
  })
})
