import { spawnSync } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { describe, expect, test } from 'vitest'

/**
 * Holds the core to values from outside, twice: to the committed file, and, where a Python with SciPy is found, to the
 * same script run again with a fresh seed, so that every run of the tests sees specifications that no one has seen.
 * SIDELOBE_PYTHON names the Python to use; SIDELOBE_SEED repeats a run.
 */
export interface ReferenceFile<Case> {
  seed: number
  versions: { numpy: string; scipy: string; extendedPrecisionBits: number }
  cases: Case[]
}

const folder = fileURLToPath(new URL('.', import.meta.url))
const seed = Number(process.env.SIDELOBE_SEED ?? Math.floor(Date.now() / 1000) % 1_000_000)

export function readReference<Case>(name: string): ReferenceFile<Case> {
  return JSON.parse(readFileSync(join(folder, name), 'utf8'))
}

/** The first Python that has SciPy, or null. */
export function findPython(): string | null {
  const candidates = [process.env.SIDELOBE_PYTHON || 'python3', 'python3', '/usr/bin/python3']
  const probe = 'import importlib.util as u, sys; sys.exit(0 if u.find_spec("scipy") and u.find_spec("numpy") else 1)'
  return candidates.find((python) => spawnSync(python, ['-c', probe]).status === 0) ?? null
}

function recompute<Case>(script: string, every: number): ReferenceFile<Case> | string {
  const python = findPython()
  if (python === null) return 'no python3 with SciPy found: compared with the committed values only'
  const scratch = mkdtempSync(join(tmpdir(), 'sidelobe-reference-'))
  try {
    const out = join(scratch, 'values.json')
    const options = ['--seed', `${seed}`, '--every', `${every}`, '--full', '--out', out]
    const run = spawnSync(python, ['-B', join(folder, script), ...options], { encoding: 'utf8' })
    if (run.status !== 0) throw new Error(`${script} failed with seed ${seed}:\n${run.stderr}`)
    const file = JSON.parse(readFileSync(out, 'utf8')) as ReferenceFile<Case>
    const { extendedPrecisionBits: bits } = file.versions
    return bits >= 64 ? file : `long double has ${bits} bits here: compared with the committed values only`
  } finally {
    rmSync(scratch, { recursive: true, force: true })
  }
}

/** Registers each claim against the committed file and against a fresh recomputation of every n-th case. */
export function againstReference<Case>(
  name: string,
  script: string,
  every: number,
  claims: Record<string, (cases: Case[]) => void>,
): void {
  describe(`committed values (${name})`, () => {
    const { cases } = readReference<Case>(name)
    for (const [title, claim] of Object.entries(claims)) test(title, () => claim(cases))
  })
  describe(`values recomputed by ${script} with the fresh seed ${seed}`, () => {
    let file: ReferenceFile<Case> | string | undefined
    for (const [title, claim] of Object.entries(claims)) {
      test(title, { timeout: 120_000 }, (context) => {
        file ??= recompute<Case>(script, every)
        if (typeof file === 'string') {
          context.skip(file)
          return
        }
        claim(file.cases)
      })
    }
  })
}

/** Keeps the largest of many errors, each over its own bound, so that one line tells which case is worst. */
export class Worst {
  private ratio = 0
  private what = 'nothing was compared'
  private compared = 0

  /** `what` is written out only for the worst. */
  see(error: number, bound: number, what: () => string): void {
    this.compared++
    const ratio = Number.isNaN(error) ? Infinity : error / bound
    if (ratio > this.ratio || this.compared === 1) {
      this.ratio = ratio
      this.what = `error ${error} against a bound of ${bound} in ${what()}`
    }
  }

  expectWithinBounds(): void {
    if (process.env.SIDELOBE_SHOW_WORST) console.info(`${this.compared} compared; ${this.ratio}: ${this.what}`)
    expect(this.compared, this.what).toBeGreaterThan(0)
    expect(this.ratio, this.what).toBeLessThanOrEqual(1)
  }
}

/** Largest absolute value. */
export function largest(values: ArrayLike<number>): number {
  let most = 0
  for (let i = 0; i < values.length; i++) most = Math.max(most, Math.abs(values[i]!))
  return most
}
