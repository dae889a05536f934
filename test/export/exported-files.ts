import { spawnSync } from 'node:child_process'
import { mkdirSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, test } from 'vitest'
import { applyChain } from '../../src/filter/index.ts'
import { type ExportPlan, exportPlan } from '../../src/words/index.ts'
import { randomSignal } from '../reference/random-signal.ts'
import { EXPORTED, type Exported, realWaveform } from './chains.ts'

/** Runs exported files of one language on real and random waveforms and holds what they give to the core. */

export interface Language {
  readonly name: string
  readonly fileName: string
  readonly source: (plan: ExportPlan) => string
  /** Text of a program that runs every folder's file on the inputs; see `runAll`. */
  readonly driver: string
  readonly driverName: string
  readonly command: readonly string[]
}

export interface Outcome {
  readonly exported: Exported
  readonly plan: ExportPlan
  readonly checkSays: string
  readonly outputs: readonly Float64Array[]
}

const SAMPLES = 256

export const INPUTS: readonly Float64Array[] = [
  // an electrode offset, on which a wrong start or a wrong reflection shows
  randomSignal({ seed: 7, count: SAMPLES, amplitude: 40, offset: 100, drift: 0.1 }),
  randomSignal({ seed: 8, count: SAMPLES, amplitude: 20, offset: 0, drift: 0 }),
  ...[realWaveform()].filter((wave) => wave !== null),
]

/**
 * Each chain gets a folder `0`, `1`, … with its exported file; the driver reads `inputs.txt` (one waveform a line) in the working folder
 * and `folders.txt` (their number), and writes in each folder `check.txt` (what the self-check says) and `outputs.txt`.
 */
export function runAll(language: Language, folder: string): Outcome[] {
  const plans = EXPORTED.map(({ chain, extent }) => exportPlan(chain, extent))
  plans.forEach((plan, i) => {
    mkdirSync(join(folder, `${i}`))
    writeFileSync(join(folder, `${i}`, language.fileName), language.source(plan))
  })
  writeFileSync(join(folder, 'inputs.txt'), `${INPUTS.map((x) => Array.from(x).join(' ')).join('\n')}\n`)
  writeFileSync(join(folder, 'folders.txt'), `${EXPORTED.length}\n`)
  writeFileSync(join(folder, language.driverName), language.driver)
  const [program, ...options] = language.command
  const run = spawnSync(program, [...options, language.driverName], { cwd: folder, encoding: 'utf8', timeout: 300_000 })
  if (run.status !== 0)
    throw new Error(`${language.name} ended with ${run.status ?? run.signal}:\n${run.stdout}${run.stderr}`)
  return EXPORTED.map((exported, i) => ({
    exported,
    plan: plans[i],
    checkSays: readFileSync(join(folder, `${i}`, 'check.txt'), 'utf8'),
    outputs: readFileSync(join(folder, `${i}`, 'outputs.txt'), 'utf8')
      .trim()
      .split('\n')
      .map((line) => Float64Array.from(line.trim().split(/\s+/), Number)),
  }))
}

/** The claims that hold for every language. */
export function claims(outcomes: () => readonly Outcome[]): void {
  describe('exported files', () => {
    test('their self-checks print OK', () => {
      for (const { exported, checkSays } of outcomes()) expect(checkSays, exported.title).toMatch(/^OK: /)
    })

    test('they give what the core gives to 1e-9 of the largest input, on random waveforms and a real one', () => {
      for (const { exported, plan, outputs } of outcomes()) {
        expect(outputs.length, exported.title).toBe(INPUTS.length)
        INPUTS.forEach((x, k) => {
          const expected = applyChain(exported.chain, x, exported.extent)
          const largest = x.reduce((most, value) => Math.max(most, Math.abs(value)), 0)
          expect(outputs[k].length, exported.title).toBe(x.length)
          const worst = expected.reduce((most, value, i) => Math.max(most, Math.abs(value - outputs[k][i])), 0)
          expect(worst / largest, `${exported.title}, waveform ${k}`).toBeLessThan(
            exported.strict ? 1e-9 : plan.check.tolerance,
          )
        })
      }
    })

    test('their self-checks allow 1e-9, and more only where direct form was found not to reach it', () => {
      for (const { exported, plan } of outcomes()) {
        const { tolerance, found } = plan.check
        if (exported.strict) expect(tolerance, exported.title).toBe(1e-9)
        else expect(tolerance, exported.title).toBeLessThanOrEqual(Math.max(1e-9, 100 * found))
      }
    })
  })
}
