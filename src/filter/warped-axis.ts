import type { Direction, Pass } from './stage.ts'

/**
 * Ratio of the warped frequency at which a Butterworth low-pass has the gain `gain` after all passes to its warped
 * design cutoff: k = (gain^(-2/passes) − 1)^(1/(2·order)).
 *
 * @param gain    gain as applied, 0 < gain < 1 (1/2 half-amplitude, 1/√2 half-power).
 * @param passes  1 forward, 2 forward and backward.
 * @param order   order of one pass.
 * @see Winter, Biomechanics and Motor Control of Human Movement, 4th ed., p. 69 (order 2, two passes: 0.802).
 */
export function warpedRatio(gain: number, passes: number, order: number): number {
  return (gain ** (-2 / passes) - 1) ** (1 / (2 * order))
}

/** tan(πf/fs): frequency on the bilinear transform's warped axis. */
export function warp(frequencyHz: number, samplingRateHz: number): number {
  return Math.tan((Math.PI * frequencyHz) / samplingRateHz)
}

/** Inverse of `warp`, in Hz. */
export function unwarp(warped: number, samplingRateHz: number): number {
  return (samplingRateHz / Math.PI) * Math.atan(warped)
}

/**
 * The edges of a recursive design on the warped axis: `centre` is the cutoff of a low- or high-pass, else the geometric
 * centre Ω0 of a band; `width` the band's width B (0 for low and high).
 */
export interface WarpedEdges {
  readonly centre: number
  readonly width: number
}

/** Warped edges at the given frequencies; the width is formed without cancellation. */
export function warpedEdges(pass: Pass, cutoffsHz: readonly number[], samplingRateHz: number): WarpedEdges {
  if (pass === 'low' || pass === 'high') return { centre: warp(cutoffsHz[0], samplingRateHz), width: 0 }
  const scale = Math.PI / samplingRateHz
  const [low, high] = cutoffsHz
  const width = Math.sin((high - low) * scale) / (Math.cos(low * scale) * Math.cos(high * scale))
  return { centre: Math.sqrt(warp(low, samplingRateHz) * warp(high, samplingRateHz)), width }
}

/** Moves design edges to the edges where the gain is that of `ratio` (see `warpedRatio`), or back with 1/ratio. */
export function scaleEdges(pass: Pass, edges: WarpedEdges, ratio: number): WarpedEdges {
  switch (pass) {
    case 'low':
      return { centre: edges.centre * ratio, width: 0 }
    case 'high':
      return { centre: edges.centre / ratio, width: 0 }
    case 'band':
      return { centre: edges.centre, width: edges.width * ratio }
    case 'stop':
      return { centre: edges.centre, width: edges.width / ratio }
  }
}

/** The frequencies in Hz of warped edges: one for low and high, two ascending ones for a band. */
export function edgesHz(pass: Pass, edges: WarpedEdges, samplingRateHz: number): number[] {
  if (pass === 'low' || pass === 'high') return [unwarp(edges.centre, samplingRateHz)]
  // √(Ω0² + B²/4) ∓ B/2; the lower as Ω0²/upper, since the difference cancels for wide bands
  const upper = Math.hypot(edges.centre, edges.width / 2) + edges.width / 2
  return [unwarp((edges.centre * edges.centre) / upper, samplingRateHz), unwarp(upper, samplingRateHz)]
}

/** Number of passes that a direction means. */
export function passesOf(direction: Direction): 1 | 2 {
  return direction === 'both' ? 2 : 1
}
