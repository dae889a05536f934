import { spawnSync } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { applyChain } from '../../src/filter/index.ts'
import { exportPlan, R_FILE, rSource } from '../../src/words/index.ts'
import { EXPORTED } from './chains.ts'
import { claims, INPUTS, type Outcome, runAll } from './exported-files.ts'

const R = spawnSync('Rscript', ['--version']).status === 0
if (!R) console.log('R files are not run: no Rscript was found (apt-get install r-base-core)')

const DRIVER = `
inputs <- lapply(readLines("inputs.txt"), function(line) scan(text = line, quiet = TRUE))
for (i in seq_len(as.integer(readLines("folders.txt"))) - 1L) {
  made <- new.env()
  source(file.path(i, "${R_FILE}"), local = made)
  writeLines(capture.output(made$self_check()), file.path(i, "check.txt"))
  writeLines(
    vapply(inputs, function(x) paste(sprintf("%.17g", made$apply_chain(x)), collapse = " "), ""),
    file.path(i, "outputs.txt")
  )
}
`

describe.skipIf(!R)('R', () => {
  let folder = ''
  let outcomes: Outcome[] = []
  const run = (...options: string[]) =>
    spawnSync('Rscript', ['--vanilla', R_FILE, ...options], { cwd: folder, encoding: 'utf8', timeout: 120_000 })

  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'sidelobe-r-'))
    outcomes = runAll(
      {
        name: 'R',
        fileName: R_FILE,
        source: rSource,
        driver: DRIVER,
        driverName: 'driver.R',
        command: ['Rscript', '--vanilla'],
      },
      folder,
    )
  }, 300_000)
  afterAll(() => rmSync(folder, { recursive: true, force: true }))

  claims(() => outcomes)

  const { chain, extent } = EXPORTED.find(({ title }) => title === 'everything, one after another, epochs')!

  test('run alone, a file checks itself, and fails loudly when a coefficient was changed by a millionth', () => {
    const source = rSource(exportPlan(chain, extent))
    writeFileSync(join(folder, R_FILE), source)
    expect(run().stdout).toMatch(/^OK: largest difference /)
    const first = /sos = matrix\(c\(\s+([\d.]+),/.exec(source)![1]
    writeFileSync(join(folder, R_FILE), source.replace(first, String(Number(first) * (1 + 1e-6))))
    const { stderr, status } = run()
    expect(stderr).toContain('FAILED: differs by')
    expect(status).toBe(1)
  })

  test('a column of a table is filtered into a new table; faults are refused by name', () => {
    writeFileSync(join(folder, R_FILE), rSource(exportPlan(chain, extent)))
    const x = INPUTS[0]
    writeFileSync(join(folder, 'in.csv'), `time,Cz\n${Array.from(x, (v, i) => `${i},${v}`).join('\n')}\n`)
    expect(run('in.csv', 'Cz', 'out.csv').status).toBe(0)
    const [head, ...rows] = readFileSync(join(folder, 'out.csv'), 'utf8').trim().split('\n')
    expect(head).toBe('Cz')
    const expected = applyChain(chain, x, extent)
    expect(rows.length).toBe(x.length)
    rows.forEach((row, i) => expect(Number(row)).toBeCloseTo(expected[i], 7))
    expect(run('in.csv', 'Pz', 'out.csv').stderr).toContain('in.csv has no column Pz; it has time, Cz')
    writeFileSync(join(folder, 'short.csv'), `Cz\n${'1\n'.repeat(20)}`)
    expect(run('short.csv', 'Cz', 'out.csv').stderr).toMatch(/needs at least \d+ samples, the epoch has 20/)
  })
})
