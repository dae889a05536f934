/** What is said about the effective window. */
import type { Score } from '../erp/score.ts'
import type { FidelityRow } from '../evidence/fidelity.ts'
import { DIFFERENCE, type Workspace } from '../state/workspace.ts'
import { fixed } from '../words/number.ts'
import { msText } from './time-axis.ts'

/** The stretch of time that a weight is given for: per sample it would change with the sampling rate. */
const PER_MS = 100

/** Weights per sample as weights per 100 ms. */
export function perHundredMs(weights: Float64Array, stepMs: number): Float64Array {
  return weights.map((weight) => (weight * PER_MS) / stepMs)
}

/** The weights of an area are times, since it is in µV·s. */
export const weightUnit = (score: Score) => (score.kind === 'area' ? ' s' : '')

/** A weight with its sign and as many decimals as tell it from zero. */
export function weightText(weight: number, score: Score): string {
  const size = Math.abs(weight)
  const decimals = size >= 9.95 ? 1 : size >= 0.0095 || size < 0.0005 ? 2 : 3
  return `${fixed(weight, decimals)}${weightUnit(score)}`
}

export function unfilteredWords(score: Score): string {
  return score.kind === 'moment' || score.kind === 'peak-amplitude'
    ? 'unfiltered: one moment'
    : 'unfiltered: a plain box'
}

/**
 * The component of the chosen condition whose peak stands at a moment: the largest one only, and no slow wave or tone, which have no
 * peak.
 *
 * @param withinMs  half a sample or so.
 */
export function peakHere({ source, shown }: Workspace, ms: number, withinMs: number): string | null {
  if (source.kind !== 'built' || shown.chosen === DIFFERENCE) return null
  const components = source.conditions.find(({ name }) => name === shown.chosen)?.components ?? []
  let largest: (typeof components)[number] | null = null
  for (const component of components)
    if (!largest || Math.abs(component.amplitudeUv) > Math.abs(largest.amplitudeUv)) largest = component
  if (!largest || largest.shape === 'tone' || largest.shape === 'slow-wave') return null
  return Math.abs(largest.latencyMs - ms) <= withinMs ? largest.name : null
}

/** The label at the cursor, the fullest wording first; the last is for a narrow figure. */
export function filteredWords(weight: string, ms: number, peakOf: string | null): string[] {
  const at = `after the chain: ${weight} at ${msText(ms)}`
  return [...(peakOf === null ? [] : [`after the chain: ${weight} under the peak of the ${peakOf}`]), at, weight]
}

/**
 * "hatched: outside the epoch, 4.7 % of the weight"; on cut-out epochs, where no weight can lie outside, the part that would have.
 *
 * @param share  0 to 1.
 * @param short  beside a long title line.
 */
export function outsideWords(share: number, extent: 'continuous' | 'epochs', short = false): string {
  const percent = share * 100
  const text = `${percent > 0 && percent < 0.05 ? 'under 0.1' : fixed(percent, 1)} %`
  if (extent === 'epochs') return short ? `unseen share: ${text}` : `unseen share of the score: ${text}`
  return short ? `outside the epoch: ${text}` : `hatched: outside the epoch, ${text} of the weight`
}

/** Why there is no effective window. */
export function noWindowWords(value: FidelityRow['after']): string {
  return value === 'no peak'
    ? 'The filtered waveform has no peak in the score window, so there is no effective window.'
    : 'A latency is not a weighted sum of samples, so it has no effective window.'
}

/** Neighbours of equal height as one box: the edges (in samples from the first, half a sample before its first value) and the heights. */
export function boxesOf(values: Float64Array): { edges: number[]; heights: number[] } {
  const edges: number[] = [-0.5]
  const heights: number[] = []
  for (let i = 0; i < values.length; i++) {
    if (i + 1 < values.length && values[i + 1] === values[i]) continue
    edges.push(i + 0.5)
    heights.push(values[i])
  }
  return { edges, heights }
}
