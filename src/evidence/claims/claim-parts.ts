import { NORMAL_95 } from '../late-only-verdict.ts'
import type { ClaimGrounds, ClaimVerdict, ShownAnswer } from './claim.ts'

/**
 * A claim is one inequality or several that must all hold. Each is a part: it holds or not, and under noise it is told or not; the
 * verdict follows from the parts.
 */
export interface Part {
  readonly holds: boolean
  /** Outside the reach of the noise. */
  readonly told: boolean
  /** Trials from which it would be told at the same number; null where no number of them would do. */
  readonly trialsNeeded: number | null
  /** Quantities that go through zero where the verdict may change, for the search over a cutoff. */
  readonly decisions: readonly number[]
}

/** 0.1 + 0.2 against 0.3 is a matter of rounding, not of the filter. */
const ROUNDING = 1e-9

export const isAtLeast = (value: number, amount: number) => value >= amount - ROUNDING * Math.abs(amount)
export const isAtMost = (value: number, amount: number) => value <= amount + ROUNDING * Math.abs(amount)

/** What noise does to a number: the standard deviation of the average of so many trials. */
export interface PartNoise {
  readonly sd: number
  readonly trials: number
}

/**
 * @param number     what is held against the bounds.
 * @param bounds     the values at which it stops or begins to hold.
 * @param noise      null where the waveform is taken as it stands.
 */
export function part(holds: boolean, number: number, bounds: readonly number[], noise: PartNoise | null): Part {
  const distances = bounds.map((bound) => number - bound)
  if (noise === null) return { holds, told: true, trialsNeeded: 1, decisions: distances }
  const reach = NORMAL_95 * noise.sd
  const nearest = Math.min(...distances.map(Math.abs))
  return {
    holds,
    told: nearest >= reach,
    trialsNeeded:
      nearest >= reach ? noise.trials : nearest === 0 ? null : Math.ceil(noise.trials * (reach / nearest) ** 2),
    decisions: [...distances, ...distances.map((distance) => Math.abs(distance) - reach)],
  }
}

/** All of them must hold. One that does not, and is told, settles it. */
export function verdictOf(parts: readonly Part[]): { verdict: ClaimVerdict; grounds: ClaimGrounds } {
  const failing = parts.filter(({ holds }) => !holds)
  const untold = parts.filter(({ told }) => !told)
  if (failing.some(({ told }) => told)) return { verdict: 'does not hold', grounds: { kind: 'number' } }
  if (untold.length === 0) return { verdict: 'holds', grounds: { kind: 'number' } }
  const needed = (failing.length > 0 ? failing : untold).map(({ trialsNeeded }) => trialsNeeded)
  const known = needed.filter((trials) => trials !== null)
  let trialsNeeded: number | null = null
  // one that fails is enough; all that hold must be told
  if (failing.length > 0) trialsNeeded = known.length > 0 ? Math.min(...known) : null
  else if (known.length === needed.length) trialsNeeded = Math.max(...known)
  return { verdict: 'cannot be told', grounds: { kind: 'within noise', trialsNeeded } }
}

/** An answer with what the search for changes needs. */
export interface Weighed extends ShownAnswer {
  readonly decisions: readonly number[]
  /** What a curve shows where it is not the answer's own number, so that a curve is one quantity throughout. */
  readonly drawn?: number | null
}

/** number ± 1.96·SD, or null where there is no noise. */
export function intervalOf(number: number, noise: PartNoise | null): readonly [number, number] | null {
  return noise === null ? null : [number - NORMAL_95 * noise.sd, number + NORMAL_95 * noise.sd]
}

/** An answer that nothing but its grounds decide. */
export function untold(
  grounds: ClaimGrounds,
  unit: ShownAnswer['unit'],
  number: number | null = null,
  values: ShownAnswer['values'] = [],
): Weighed {
  return { verdict: 'cannot be told', number, unit, interval: null, grounds, values, decisions: [] }
}

/** The unseen share of a value, and what would bring it down. */
export interface Unseen {
  readonly share: number
  readonly furtherMs: (threshold: number) => { back: number; on: number } | null
}

/**
 * Holds the unseen share against its threshold: above it nothing else is told.
 *
 * The share joins the decisions, so that a flip that it makes is found.
 */
export function withUnseen(answer: Weighed, unseen: Unseen | null, threshold: number): Weighed {
  if (unseen === null) return answer
  const { share } = unseen
  const decisions = [...answer.decisions, share - threshold]
  if (!(share > threshold)) return { ...answer, decisions }
  const grounds = { kind: 'unseen', share, threshold, furtherMs: unseen.furtherMs(threshold) } as const
  return { ...answer, decisions, verdict: 'cannot be told', grounds }
}
