import { noiseDensity, type NoiseTable } from './noise.ts'

/** Points that are put between two that are further apart. A power law needs none, the sum of two with different exponents does. */
const POINTS_PER_OCTAVE = 8

/**
 * The mean of two noises: twice its variance is the sum of theirs, as the noise of a difference of two conditions is, each with as many trials. Of
 * a score with the weights g: (S₁|G|² + S₂|G|²)/N = 2·S̄|G|²/N.
 *
 * @param first  S₁, of one trial of one condition; a noise that checkNoise accepts. Likewise second.
 * @returns S̄ at every frequency of either, and between frequencies further apart than 1/8 octave at some more, so that it stays
 *   within 0.3 % of the mean in between, for exponents up to 3 apart.
 * @throws RangeError as `checkNoise`.
 */
export function meanNoise(first: NoiseTable, second: NoiseTable): NoiseTable {
  const given = [...new Set([...first.hz, ...second.hz])].sort((a, b) => a - b)
  const hz = Float64Array.from(
    given.flatMap((at, i) => {
      const next = given[i + 1]
      if (next === undefined) return [at]
      const steps = Math.max(1, Math.ceil(Math.log2(next / at) * POINTS_PER_OCTAVE))
      return Array.from({ length: steps }, (_, k) => at * (next / at) ** (k / steps))
    }),
  )
  const [a, b] = [noiseDensity(first, hz), noiseDensity(second, hz)]
  return { kind: 'table', hz, uv2PerHz: a.map((value, i) => (value + b[i]) / 2) }
}
