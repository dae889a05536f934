import type { CutoffMeaning, Delay, Direction, StageSpec, WindowSpec } from '../filter/stage.ts'

/** The kind of filter that a map varies; cutoff and roll-off are the map's axes. */
export type Candidate =
  | { design: 'butterworth'; pass: 'low' | 'high'; meaning: CutoffMeaning; direction: Direction }
  | { design: 'windowed-sinc'; pass: 'low' | 'high'; meaning: CutoffMeaning; window: WindowSpec; delay: Delay }

/** Where the candidate stands in the chain: instead of stage `at`, or before it. */
export interface CandidatePlace {
  readonly at: number
  readonly replaces: boolean
}

/** @param rollOff order of one pass of a Butterworth, transition width in Hz of a windowed sinc. */
export function candidateSpec(candidate: Candidate, cutoffHz: number, rollOff: number): StageSpec {
  return candidate.design === 'butterworth'
    ? { ...candidate, order: rollOff, cutoffsHz: [cutoffHz] }
    : { ...candidate, transitionHz: rollOff, cutoffsHz: [cutoffHz] }
}

/** A chain with the candidate in its place. Picking a filter from the map puts this into the chain. Throws RangeError for a place that the chain does not have. */
export function chainWithCandidate(
  specs: readonly StageSpec[],
  place: CandidatePlace,
  candidate: Candidate,
  cutoffHz: number,
  rollOff: number,
): StageSpec[] {
  const last = place.replaces ? specs.length - 1 : specs.length
  if (!Number.isInteger(place.at) || place.at < 0 || place.at > last) {
    throw new RangeError(`place.at must be a whole number from 0 to ${last}, was ${place.at}`)
  }
  const changed = specs.slice()
  changed.splice(place.at, place.replaces ? 1 : 0, candidateSpec(candidate, cutoffHz, rollOff))
  return changed
}

/**
 * Cutoffs evenly spaced in log frequency, each rounded to 3 significant digits, so that what words and chain say is exactly what was computed.
 *
 * @returns ascending; fewer than `count` where two round to the same.
 * @throws RangeError unless 0 < fromHz < toHz and 2 ≤ count ≤ 1000.
 */
export function logCutoffs(fromHz: number, toHz: number, count: number): number[] {
  if (!(fromHz > 0 && toHz > fromHz) || !Number.isFinite(toHz)) {
    throw new RangeError(`cutoffs must range upwards from above 0, was ${fromHz} to ${toHz} Hz`)
  }
  if (!Number.isInteger(count) || count < 2 || count > 1000) {
    throw new RangeError(`count must be a whole number from 2 to 1000, was ${count}`)
  }
  const cutoffs = Array.from({ length: count }, (_, i) =>
    Number((fromHz * (toHz / fromHz) ** (i / (count - 1))).toPrecision(3)),
  )
  return cutoffs.filter((hz, i) => i === 0 || hz > cutoffs[i - 1])
}
