import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { applyChain } from '../../src/filter/apply-chain.ts'
import { directProgram, runDirect } from '../../src/filter/direct-form.ts'
import { designChain, designStage } from '../../src/filter/index.ts'
import type { ButterworthSpec } from '../../src/filter/index.ts'
import { runStateVariable, stateVariableProgram } from '../../src/filter/state-variable.ts'

const spec = (pass: ButterworthSpec['pass'], order: number, cutoffsHz: number[]): ButterworthSpec => {
  return { design: 'butterworth', pass, order, cutoffsHz, meaning: 'design', direction: 'forward' }
}
const wave = (count: number) => Float64Array.from({ length: count }, (_, i) => Math.sin(i * i * 0.01) + (i % 7) - 3)

describe('runDirect', () => {
  test('runs one section as its difference equation says', () => {
    const sections = Float64Array.of(0.5, 0.2, 0.1, 1, -0.4, 0.3)
    const x = wave(50)
    const y = x.slice()
    runDirect(directProgram(sections)!, y, 0, 50, false)
    const expected = new Float64Array(50)
    const at = (v: Float64Array, i: number) => (i < 0 ? 0 : v[i]!)
    for (let n = 0; n < 50; n++) {
      const fed = 0.5 * x[n]! + 0.2 * at(x, n - 1) + 0.1 * at(x, n - 2)
      expected[n] = fed + 0.4 * at(expected, n - 1) - 0.3 * at(expected, n - 2)
    }
    y.forEach((v, i) => expect(Math.abs(v - expected[i]!)).toBeLessThan(1e-14))
  })

  test('gives what the state-variable form gives, forward and backward, for any pass, order and offset', () => {
    const passes = fc.constantFrom('low' as const, 'high' as const)
    fc.assert(
      fc.property(
        passes,
        fc.integer({ min: 1, max: 6 }),
        fc.double({ min: 0.1, max: 0.35, noNaN: true }),
        fc.boolean(),
        (pass, order, ratio, backward) => {
          const stage = designStage(spec(pass, order, [1000 * ratio]), 1000)
          const direct = directProgram(stage.sections!)
          if (direct === null) return
          const [one, other] = [wave(400), wave(400)]
          runDirect(direct, one, 20, 390, backward, 0.7)
          const program = stateVariableProgram(stage.analogue!)
          runStateVariable(program, new Float64Array(program.length / 3), other, 20, 390, backward, 0.7)
          one.forEach((v, i) => expect(Math.abs(v - other[i]!)).toBeLessThan(1e-12))
        },
      ),
    )
  })

  test('starts from a level as if that level had lasted for ever', () => {
    for (const order of [1, 2, 3, 4]) {
      for (const pass of ['low', 'high'] as const) {
        const direct = directProgram(designStage(spec(pass, order, [60]), 500).sections!)!
        const long = new Float64Array(3000).fill(5.5)
        const short = wave(100)
        long.set(short, 2900)
        runDirect(direct, long, 0, 3000, false, 2)
        runDirect(direct, short, 0, 100, false, 2, 3.5)
        short.forEach((v, i) => expect(Math.abs(v - long[2900 + i]!)).toBeLessThan(1e-13))
      }
    }
  })

  test('goes on unchanged where a long run is cut into pieces', () => {
    const direct = directProgram(designStage(spec('low', 3, [80]), 500).sections!)!
    const [whole, parts] = [wave(20_000), wave(20_000)]
    runDirect(direct, whole, 0, 20_000, false)
    const program = stateVariableProgram(designStage(spec('low', 3, [80]), 500).analogue!)
    runStateVariable(program, new Float64Array(program.length / 3), parts, 0, 20_000, false)
    for (const i of [8191, 8192, 8193, 16384, 19_999]) expect(Math.abs(whole[i]! - parts[i]!)).toBeLessThan(1e-13)
  })

  test('ends in exact zeros, not in denormal numbers', () => {
    const y = new Float64Array(60_000)
    y[0] = 1
    runDirect(directProgram(designStage(spec('low', 4, [100]), 500).sections!)!, y, 0, y.length, false)
    expect(y[59_999]).toBe(0)
  })
})

describe('directProgram', () => {
  test('refuses poles near z = 1, near z = −1 and near the unit circle, where rounding would move them', () => {
    expect(directProgram(designStage(spec('high', 2, [0.1]), 500).sections!)).toBeNull()
    expect(directProgram(designStage(spec('low', 2, [0.449 * 500]), 500).sections!)).not.toBeNull()
    expect(directProgram(designStage(spec('low', 4, [0.495 * 500]), 500).sections!)).toBeNull()
    const notch = { design: 'notch', frequencyHz: 50, bandwidthHz: 0.5, harmonics: 0, direction: 'forward' } as const
    expect(directProgram(designStage(notch, 500).sections!)).toBeNull()
    expect(directProgram(designStage(spec('low', 4, [30]), 500).sections!)).not.toBeNull()
  })
})

describe('applyChain with an output array', () => {
  const specs = [
    spec('high', 2, [0.5]),
    { ...spec('low', 4, [30]), direction: 'both' as const },
    { design: 'moving-average' as const, durationMs: 20, delay: 'compensated' as const },
  ]
  const chain = designChain(specs, 500)

  test('writes there what it returns otherwise, also over its own input', () => {
    for (const extent of ['epochs', 'continuous'] as const) {
      const x = wave(700)
      const expected = applyChain(chain, x, extent)
      const out = new Float64Array(700).fill(9)
      expect(applyChain(chain, x, extent, out)).toBe(out)
      expect(out).toEqual(expected)
      expect(x).toEqual(wave(700))
      expect(applyChain(chain, x, extent, x)).toEqual(expected)
    }
  })

  test('copies the waveform where no stage is applied', () => {
    const out = new Float64Array(30)
    applyChain(designChain([], 500), wave(30), 'epochs', out)
    expect(out).toEqual(wave(30))
  })

  test('refuses an array of another length', () => {
    for (const extent of ['epochs', 'continuous'] as const) {
      const message = 'out must hold 100 samples as x does, had 99'
      expect(() => applyChain(chain, wave(100), extent, new Float64Array(99))).toThrow(message)
    }
  })
})
