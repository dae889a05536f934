/** Stretches of one verdict along a claim's curve, for the strip above it. */
import type { ClaimCurve, ClaimVerdict } from '../../../evidence/claims/claim.ts'

export interface VerdictStretch {
  /** Null where there is no answer. */
  readonly verdict: ClaimVerdict | null
  readonly from: number
  readonly to: number
}

/** From the first to the last point; a stretch begins at its flip, or half-way to a point without an answer. */
export function verdictStretches({ points, flips, unit }: ClaimCurve): VerdictStretch[] {
  const between = (a: number, b: number) => (unit === 'Hz' ? Math.sqrt(a * b) : (a + b) / 2)
  const stretches: { verdict: ClaimVerdict | null; from: number; to: number }[] = []
  points.forEach(({ at, verdict }, i) => {
    const last = stretches[stretches.length - 1]
    if (last?.verdict === verdict) {
      last.to = at
      return
    }
    const before = points[i - 1]?.at ?? at
    // of orders the critical value is the first on the other side: the stretch begins between the two
    const flip = unit === 'Hz' ? flips.find((entry) => entry.at >= before && entry.at <= at) : undefined
    const border = last ? (flip?.at ?? between(before, at)) : at
    if (last) last.to = border
    stretches.push({ verdict, from: border, to: at })
  })
  return stretches
}
