import type { ClaimForm, MeaningClaim, ShownClaim, TwinClaim } from './claim.ts'

/** The statement that a claim is about: the one within it where it holds another (a twin's, another meaning's), else the claim itself. */
export function statementOf<T extends ClaimForm>(form: T): Exclude<T, TwinClaim | MeaningClaim> | ShownClaim {
  switch (form.form) {
    case 'twin':
      return form.shows
    case 'meaning':
      return form.conclusion
    default:
      return form as Exclude<T, TwinClaim | MeaningClaim>
  }
}
