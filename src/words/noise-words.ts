import type { NoiseSpec } from '../erp/noise.ts'
import { brief, exact, list } from './number.ts'

/** The noise of single trials as stated, in one noun phrase with all its numbers. */
export function noiseWords(noise: NoiseSpec): string {
  if (noise.kind === 'table') {
    const { hz } = noise
    if (hz.length === 0) return 'a density at no frequency'
    return hz.length === 1
      ? `a density of ${brief(noise.uv2PerHz[0], 4)} µV²/Hz at every frequency`
      : `a measured density at ${exact(hz.length)} frequencies from ${brief(hz[0], 4)} to ${brief(hz[hz.length - 1], 4)} Hz, kept constant outside them`
  }
  const drift = noise.driftAt1HzUv2PerHz ?? 0
  const { alpha } = noise
  const parts = [
    `a power law of ${exact(noise.levelAt1HzUv2PerHz)} µV²/Hz at 1 Hz with the exponent ${exact(noise.exponent)}`,
    ...(drift > 0 ? [`a slow drift of ${exact(drift)} µV²/Hz at 1 Hz with the exponent 2`] : []),
    `a white floor of ${exact(noise.whiteUv2PerHz)} µV²/Hz`,
    ...(alpha
      ? [
          `an alpha peak of ${exact(alpha.peakUv2PerHz)} µV²/Hz at ${exact(alpha.centreHz)} Hz (standard deviation ${exact(alpha.sdHz)} Hz)`,
        ]
      : []),
    ...noise.lines.map(
      ({ hz, amplitudeUv, locked }) =>
        `a line of ${exact(amplitudeUv)} µV at ${exact(hz)} Hz, ${locked ? 'locked to the event' : 'of random phase'}`,
    ),
  ]
  const flat = drift > 0 ? 'power law and drift are constant' : 'the power law is constant'
  return `${list(parts)}; below ${exact(noise.flatBelowHz)} Hz ${flat}`
}
