import type { Chain } from '../filter/chain.ts'
import { type LateOnlyFit, lateOnlyFit } from './late-only-fit.ts'
import { DEFAULT_SIGMA_UV, type LateOnlyOptions, SHORTEST_LENGTH_MS } from './late-only-model.ts'
import type { LateOnlyVerdict } from './late-only-verdict.ts'

/** A verdict that does not hang on how large and how smooth late activity was taken to be. */
export interface RobustVerdict {
  /** The fit's verdict, or "cannot be told" where another assumption changes it. */
  readonly verdict: LateOnlyVerdict
  readonly changed: boolean
  readonly fit: LateOnlyFit
  readonly variants: readonly RobustVariant[]
}

export interface RobustVariant {
  readonly sigmaUv: number
  readonly lengthMs: number
  readonly beta: number
  readonly interval: readonly [number, number]
  readonly verdict: LateOnlyVerdict
}

const SIGMA_FACTOR = 5
const LENGTH_FACTOR = 2

/**
 * The verdict recomputed for late activity five times as large, and for activity twice as smooth; where either changes it, it is "cannot be
 * told". Both variants need a model of their own: three times the time of one fit.
 *
 * @param fit  where it is there already; computed where absent.
 * @throws RangeError as `lateOnlyFit`.
 */
export function robustVerdict(
  y: Float64Array,
  chain: Chain,
  options: LateOnlyOptions,
  fit: LateOnlyFit = lateOnlyFit(y, chain, options),
): RobustVerdict {
  const variants = robustOptions(options).map((variant): RobustVariant => {
    const { beta, interval, verdict } = lateOnlyFit(y, chain, variant)
    return { sigmaUv: variant.sigmaUv, lengthMs: variant.lengthMs, beta, interval, verdict }
  })
  return robustOf(fit, variants)
}

/** The fit and the robust verdict alone: no variant is fitted that cannot change it any more. Throws as `lateOnlyFit`. */
export function robustVerdictOnly(
  y: Float64Array,
  chain: Chain,
  options: LateOnlyOptions,
): { fit: LateOnlyFit; verdict: LateOnlyVerdict } {
  const fit = lateOnlyFit(y, chain, options)
  const stands =
    fit.verdict !== 'cannot be told' &&
    robustOptions(options).every((variant) => lateOnlyFit(y, chain, variant).verdict === fit.verdict)
  return { fit, verdict: stands ? fit.verdict : 'cannot be told' }
}

/** The other assumptions under which a verdict must stay what it is. */
export function robustOptions(options: LateOnlyOptions): (LateOnlyOptions & { sigmaUv: number; lengthMs: number })[] {
  const { sigmaUv = DEFAULT_SIGMA_UV, lengthMs = SHORTEST_LENGTH_MS } = options
  return [
    { ...options, sigmaUv: SIGMA_FACTOR * sigmaUv, lengthMs },
    { ...options, sigmaUv, lengthMs: LENGTH_FACTOR * lengthMs },
  ]
}

/** The same from fits that are there already. */
export function robustOf(fit: LateOnlyFit, variants: readonly RobustVariant[]): RobustVerdict {
  const changed = variants.some(({ verdict }) => verdict !== fit.verdict)
  return { verdict: changed ? 'cannot be told' : fit.verdict, changed, fit, variants }
}
