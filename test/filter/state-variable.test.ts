import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { designChain } from '../../src/filter/chain.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import {
  logPoles,
  programGainAtZero,
  runStateVariable,
  stateVariableProgram,
  sumOfFreeOutput,
} from '../../src/filter/state-variable.ts'
import { singleStage } from './arbitrary-chain.ts'
import { runDirectForm } from './brute-force.ts'
import { expectClose, largest } from './expect-close.ts'

const noise = (n: number) =>
  Float64Array.from({ length: n }, (_, i) => ((i * 7919 + ((i * i) % 1013)) % 2003) / 1001 - 1)

const recursive = singleStage.filter(({ stages }) => stages[0].analogue !== null).map(({ stages }) => stages[0])

function analogueOf(spec: StageSpec, samplingRateHz: number): Float64Array {
  return designChain([spec], samplingRateHz).stages[0].analogue as Float64Array
}

const highPass = (cutoffHz: number, order: number): StageSpec => ({
  design: 'butterworth',
  pass: 'high',
  order,
  cutoffsHz: [cutoffHz],
  meaning: 'design',
  direction: 'forward',
})

describe('runStateVariable', () => {
  test('is the direct form of the digital rows, from rest', () => {
    fc.assert(
      fc.property(recursive, (stage) => {
        const expected = noise(600)
        runDirectForm(stage.sections as Float64Array, expected)
        const program = stateVariableProgram(stage.analogue as Float64Array)
        const actual = noise(600)
        runStateVariable(program, new Float64Array(program.length / 3), actual, 0, 600, false)
        expectClose(actual, expected, 1e-10 * Math.max(1, largest(expected)))
      }),
    )
  })

  test('backward is forward on reversed time', () => {
    fc.assert(
      fc.property(recursive, (stage) => {
        const program = stateVariableProgram(stage.analogue as Float64Array)
        const forward = noise(300)
        const backward = noise(300).reverse()
        runStateVariable(program, new Float64Array(program.length / 3), forward, 0, 300, false)
        runStateVariable(program, new Float64Array(program.length / 3), backward, 0, 300, true)
        expect(backward.reverse()).toEqual(forward)
      }),
    )
  })

  test('may be interrupted anywhere without a trace', () => {
    const program = stateVariableProgram(analogueOf(highPass(1, 5), 500))
    const whole = noise(20_000)
    runStateVariable(program, new Float64Array(6), whole, 0, whole.length, false)
    const parts = noise(20_000)
    const states = new Float64Array(6)
    for (const [from, to] of [
      [0, 1],
      [1, 8192],
      [8192, 8193],
      [8193, 20_000],
    ]) {
      runStateVariable(program, states, parts, from, to, false)
    }
    expect(parts).toEqual(whole)
  })

  test('does not slow down when a response has died away (no denormal numbers)', () => {
    const program = stateVariableProgram(analogueOf(highPass(30, 4), 500))
    const values = new Float64Array(100_000)
    values[0] = 1
    runStateVariable(program, new Float64Array(program.length / 3), values, 0, values.length, false)
    expect(values.subarray(20_000).every((value) => value === 0)).toBe(true)
  })
})

describe('closed forms', () => {
  test('the gain at 0 Hz is that of the digital rows, and exactly 0 for a high-pass', () => {
    fc.assert(
      fc.property(recursive, (stage) => {
        const sections = stage.sections as Float64Array
        let expected = 1
        for (let at = 0; at < sections.length; at += 6) {
          const [b0, b1, b2, , a1, a2] = sections.subarray(at, at + 6)
          expected *= (b0 + b1 + b2) / (1 + a1 + a2)
        }
        const actual = programGainAtZero(stateVariableProgram(stage.analogue as Float64Array))
        expect(Math.abs(actual - expected)).toBeLessThan(1e-9)
      }),
    )
    for (let order = 1; order <= 12; order++) {
      expect(programGainAtZero(stateVariableProgram(analogueOf(highPass(0.1, order), 500)))).toBe(0)
    }
  })

  test('the sum of a free response is the sum of its samples', () => {
    fc.assert(
      fc.property(recursive, (stage) => {
        const program = stateVariableProgram(stage.analogue as Float64Array)
        const states = new Float64Array(program.length / 3)
        runStateVariable(program, states, noise(50), 0, 50, false)
        const free = new Float64Array(12_000)
        const expected = sumOfFreeOutput(program, states)
        runStateVariable(program, states, free, 0, free.length, false)
        const sum = free.reduce((total, value) => total + value, 0)
        const absolute = free.reduce((total, value) => total + Math.abs(value), 0)
        expect(Math.abs(sum - expected)).toBeLessThan(1e-10 * (1 + absolute))
      }),
    )
  })

  test('poles are the roots of the digital denominators', () => {
    fc.assert(
      fc.property(recursive, (stage) => {
        const sections = stage.sections as Float64Array
        for (const { decay, angle } of logPoles(stage.analogue as Float64Array)) {
          expect(decay).toBeGreaterThan(0)
          const re = Math.exp(-decay) * Math.cos(angle)
          const im = Math.exp(-decay) * Math.sin(angle)
          let least = Infinity
          for (let at = 0; at < sections.length; at += 6) {
            const [a1, a2] = sections.subarray(at + 4, at + 6)
            // |z² + a1·z + a2|
            least = Math.min(least, Math.hypot(re * re - im * im + a1 * re + a2, 2 * re * im + a1 * im))
          }
          expect(least).toBeLessThan(1e-12)
        }
      }),
    )
  })

  test('a first-order pole has its time constant: log z = −2·artanh(tan(πf/fs))', () => {
    const [{ decay, angle }] = logPoles(analogueOf(highPass(0.01, 1), 4096))
    expect(decay / (2 * Math.atanh(Math.tan((Math.PI * 0.01) / 4096)))).toBeCloseTo(1, 14)
    expect(angle).toBe(0)
  })
})
