import { type Stage, type StageSpec, designStage } from '../../src/filter/stage.ts'
import { stageResponse } from '../../src/filter/stage-response.ts'

/** Gain of a stage as applied at one frequency. */
export function gainOf(stage: Stage, frequencyHz: number): number {
  const { re, im } = stageResponse(stage, Float64Array.of(frequencyHz))
  return Math.hypot(re[0], im[0])
}

/** Gain in dB of a stage as applied. */
export function decibels(spec: StageSpec, samplingRateHz: number, frequencyHz: number): number {
  return 20 * Math.log10(gainOf(designStage(spec, samplingRateHz), frequencyHz))
}

/** Rows of a flat array of six numbers a row. */
export function rowsOf(flat: Float64Array | null): number[][] {
  if (!flat) return []
  return Array.from({ length: flat.length / 6 }, (_, row) => [...flat.subarray(6 * row, 6 * row + 6)])
}

/** One forward pass by direct form II transposed: a plain second implementation for the tests. */
export function runSections(sections: Float64Array, x: Float64Array): Float64Array {
  const y = x.slice()
  for (const [b0, b1, b2, , a1, a2] of rowsOf(sections)) {
    let z1 = 0
    let z2 = 0
    for (let n = 0; n < y.length; n++) {
      const input = y[n]
      const output = b0 * input + z1
      z1 = b1 * input - a1 * output + z2
      z2 = b2 * input - a2 * output
      y[n] = output
    }
  }
  return y
}

/** The product of all rows as two polynomials in 1/z, lowest power first. */
export function expanded(sections: Float64Array): { b: number[]; a: number[] } {
  let b = [1]
  let a = [1]
  for (const [b0, b1, b2, a0, a1, a2] of rowsOf(sections)) {
    b = times(b, [b0, b1, b2])
    a = times(a, [a0, a1, a2])
  }
  return { b, a }
}

function times(p: number[], q: number[]): number[] {
  const product = new Array<number>(p.length + q.length - 1).fill(0)
  p.forEach((x, i) => q.forEach((y, j) => (product[i + j] += x * y)))
  return product
}
