import { noiseDensityAt, noiseKinksHz, type NoiseSpec } from '../erp/noise.ts'
import { gaussLegendre } from './gauss-legendre.ts'
import { scoreVariance } from './score-noise.ts'
import { directTransform } from './window-power.ts'

const RULE = gaussLegendre(8)
const LOWEST_HZ = 1e-4

/**
 * The part of a score's variance that comes from noise below a frequency: ∫₀^b S·|G|² df / ∫₀^{fs/2} S·|G|² df. With b the limit below which an
 * estimated noise is extrapolated, a result rests on extrapolated noise where this is over 20 %.
 *
 * @param window  g, the weights of unfiltered samples.
 * @param belowHz b, clipped to 0…fs/2.
 * @returns from 0 to 1; 0 where there is no variance at all.
 * @throws RangeError as `scoreVariance`, and for a frequency that is not a number.
 */
export function extrapolatedShare(
  window: Float64Array,
  noise: NoiseSpec,
  samplingRateHz: number,
  belowHz: number,
): number {
  const whole = scoreVariance(window, noise, samplingRateHz, 1)
  if (!(belowHz >= 0)) throw new RangeError(`belowHz must be at least 0, was ${belowHz}`)
  if (whole === 0) return 0
  const end = Math.min(belowHz, samplingRateHz / 2)
  const density = noiseDensityAt(noise)
  const limits = [0, end, ...noiseKinksHz(noise).filter((hz) => hz < end)]
  for (let hz = LOWEST_HZ; hz < end; hz *= 2) limits.push(hz)
  limits.sort((a, b) => a - b)
  const widestHz = samplingRateHz / Math.max(1, window.length)
  let below = 0
  for (let p = 0; p + 1 < limits.length; p++) {
    const pieces = Math.max(1, Math.ceil((limits[p + 1] - limits[p]) / widestHz))
    const half = (limits[p + 1] - limits[p]) / (2 * pieces)
    for (let piece = 0; piece < pieces; piece++) {
      for (let i = 0; i < RULE.nodes.length; i++) {
        const hz = limits[p] + half * (2 * piece + 1 + RULE.nodes[i])
        const { re, im } = directTransform(window, hz / samplingRateHz)
        below += half * RULE.weights[i] * density(hz) * (re * re + im * im)
      }
    }
  }
  return Math.min(1, below / whole)
}
