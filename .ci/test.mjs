/**
 * `npm test`: every check of the project, one after another.
 *
 *   npm test               types, lint, import direction, unit + property + reference tests, build, journeys in a browser
 *   npm test -- --fast     all but the journeys
 *
 * A step that fails does not stop the others, so that one run shows everything; only the journeys need the build. The
 * last line has the counts: each of types, lint, import direction and build counts as one check, each test as one.
 */
import { spawnSync } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { parseArgs } from 'node:util'
import { NO_BROWSER, findBrowser } from './find-browser.mjs'
import { countPlaywright, countVitest, lastLine, sum } from './test-counts.mjs'

const root = dirname(dirname(fileURLToPath(import.meta.url)))
const { values } = parseArgs({ options: { fast: { type: 'boolean', default: false } } })
const scratch = mkdtempSync(join(tmpdir(), 'sidelobe-test-'))
process.on('exit', () => rmSync(scratch, { recursive: true, force: true }))

const program = {
  tsc: 'node_modules/typescript/bin/tsc',
  biome: 'node_modules/@biomejs/biome/bin/biome',
  vitest: 'node_modules/vitest/vitest.mjs',
  vite: 'node_modules/vite/bin/vite.js',
  playwright: 'node_modules/@playwright/test/cli.js',
}

/** Runs a program of the project with this Node, its output shown as it comes. */
function run(file, args, env = {}) {
  const { status, error } = spawnSync(process.execPath, [file, ...args], {
    cwd: root,
    stdio: 'inherit',
    // One seed for all random input: a run can be repeated. Another seed draws other cases.
    env: { SIDELOBE_SEED: '20261201', ...process.env, ...env },
  })
  if (error) console.log(String(error))
  return status === 0
}

const check = (ok) => ({ passed: ok ? 1 : 0, failed: ok ? 0 : 1, skipped: 0 })

/** The report that a test runner has written; nothing where it ended before that. */
function report(name) {
  try {
    return JSON.parse(readFileSync(join(scratch, name), 'utf8'))
  } catch {
    return undefined
  }
}

function unitTests() {
  const ok = run(program.vitest, [
    'run',
    '--reporter=default',
    '--reporter=json',
    `--outputFile.json=${join(scratch, 'unit.json')}`,
  ])
  return countVitest(report('unit.json'), ok)
}

function journeys() {
  if (!built) {
    console.log('not run: there is no build to open')
    return { passed: 0, failed: 0, skipped: 1 }
  }
  let browser
  try {
    browser = findBrowser({ install: true })
  } catch (error) {
    console.log(error.message)
    return check(false)
  }
  if (!browser) {
    console.log(NO_BROWSER)
    return check(false)
  }
  console.log(`browser: ${browser}`)
  const ok = run(program.playwright, ['test', '-c', 'e2e', '--reporter=list,json'], {
    SIDELOBE_BROWSER: browser,
    PLAYWRIGHT_JSON_OUTPUT_FILE: join(scratch, 'journeys.json'),
  })
  const written = report('journeys.json')
  if (written?.stats.flaky > 0) console.log(`passed only when repeated: ${written.stats.flaky}`)
  return countPlaywright(written, ok)
}

let built = false
/** @type {[string, () => import('./test-counts.mjs').Counts][]} */
const steps = [
  ['types', () => check(run(program.tsc, ['-p', '.']))],
  ['types of the pure rooms', () => check(run(program.tsc, ['-p', '.ci/tsconfig.core.json']))],
  ['lint', () => check(run(program.biome, ['check', '--max-diagnostics=50']))],
  ['import direction', () => check(run('.ci/import-direction.mjs', []))],
  ['unit, property and reference tests', unitTests],
  [
    'build',
    () => {
      built = run(program.vite, ['build', '--logLevel', 'warn'])
      return check(built)
    },
  ],
]
if (!values.fast) steps.push(['journeys in a browser', journeys])

const results = []
for (const [name, step] of steps) {
  console.log(`\n== ${name} ==`)
  const began = performance.now()
  const counts = step()
  results.push({ name, counts, seconds: (performance.now() - began) / 1000 })
}

console.log('\n== summary ==')
for (const { name, counts, seconds } of results) {
  console.log(`${counts.failed > 0 ? 'FAILED' : 'ok    '}  ${name}: ${lastLine(counts)} (${seconds.toFixed(1)} s)`)
}
const total = sum(results.map(({ counts }) => counts))
process.exitCode = total.failed > 0 ? 1 : 0
console.log(lastLine(total))
