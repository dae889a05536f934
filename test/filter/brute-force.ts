import type { Stage } from '../../src/filter/stage.ts'

/**
 * A second, slow and plain implementation to compare with: long zero padding, transposed direct form II from the digital
 * rows, FIR sums written out.
 */
export function padAndRun(stages: readonly Stage[], x: Float64Array, padding: number): Float64Array {
  let y = new Float64Array(x.length + 2 * padding)
  y.set(x, padding)
  for (const stage of stages) {
    if (stage.taps) {
      y = sumOfTaps(stage.taps, stage.leadSamples, y)
      continue
    }
    runDirectForm(stage.sections as Float64Array, y)
    if (stage.passes === 2) runDirectForm(stage.sections as Float64Array, y.reverse())
    if (stage.passes === 2) y.reverse()
  }
  return y
}

export function runDirectForm(sections: Float64Array, values: Float64Array): void {
  for (let at = 0; at < sections.length; at += 6) {
    const [b0, b1, b2, , a1, a2] = sections.subarray(at, at + 6)
    let z0 = 0
    let z1 = 0
    for (let i = 0; i < values.length; i++) {
      const input = values[i]
      const output = b0 * input + z0
      z0 = b1 * input - a1 * output + z1
      z1 = b2 * input - a2 * output
      values[i] = output
    }
  }
}

function sumOfTaps(taps: Float64Array, leadSamples: number, x: Float64Array): Float64Array<ArrayBuffer> {
  const y = new Float64Array(x.length)
  for (let n = 0; n < y.length; n++) {
    let sum = 0
    for (let k = 0; k < taps.length; k++) {
      const at = n + leadSamples - k
      if (at >= 0 && at < x.length) sum += taps[k] * x[at]
    }
    y[n] = sum
  }
  return y
}
