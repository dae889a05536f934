import { absoluteSum, firstAfter, lastBefore } from './absolute-sum.ts'
import { appliedStages, type Chain } from './chain.ts'
import { finiteInput, requireRange, runContinuous, runPasses, standAlone } from './stand-alone.ts'
import type { Stage } from './stage.ts'
import { sumOfFreeOutput } from './state-variable.ts'

/** Samples of a response; values[0] lies `start` samples after the impulse, or after the first weight. */
export interface Located {
  readonly values: Float64Array
  readonly start: number
}

/** Half a gigabyte; longer responses can be had piece by piece. */
const MOST_SAMPLES = 2 ** 26

/** What each end of a response may leave out, of its absolute sum. */
const LEFT_OUT = 4e-10

/**
 * Impulse response of the applied stages of a chain, as applied.
 *
 * @returns  `start` is 0 for a causal chain and negative for a zero-phase one. At most 1e-9 of the absolute sum is left
 *           out.
 */
export function chainKernel(chain: Chain): Located {
  return wholeResponse(appliedStages(chain), Float64Array.of(1))
}

/** Output of the stages for x on the range that leaves out at most 1e-9 of its absolute sum; holds x's own samples. */
export function wholeResponse(stages: readonly Stage[], x: Float64Array): Located {
  const sum = absoluteSum(stages, x, true)
  const start = Math.min(0, lastBefore(sum, LEFT_OUT * sum.total))
  const end = Math.max(x.length, firstAfter(sum, LEFT_OUT * sum.total))
  if (end - start > MOST_SAMPLES) {
    throw new RangeError(`a response must last at most ${MOST_SAMPLES} samples to be held whole, was ${end - start}`)
  }
  return { values: runContinuous(stages, x, start, end), start }
}

/** Impulse response at lags from … to − 1 samples. */
export function kernelOn(stages: readonly Stage[], from: number, to: number): Float64Array {
  return runContinuous(stages, Float64Array.of(1), from, to)
}

/**
 * Step response at lags from … to − 1 samples: the running sum of the kernel, including all that lies before `from`. It ends
 * at the gain at 0 Hz.
 */
export function stepResponseOn(stages: readonly Stage[], from: number, to: number): Float64Array {
  requireRange(from, to)
  const system = standAlone(stages)
  const input = finiteInput(system, Float64Array.of(1))
  const first = Math.min(from, input.start)
  const kernel = runPasses(system, input, first, Math.max(to, input.start + input.values.length))
  const step = new Float64Array(to - from)
  let running = sumOfFreeOutput(system.backward, kernel.backwardState)
  for (let i = 0; i < to - first; i++) {
    running += kernel.values[i]
    if (i >= from - first) step[i - (from - first)] = running
  }
  return step
}
