import { specError } from './spec-error.ts'

/** The longest kernel that is designed, in taps. */
export const MAX_TAPS = 2 ** 20

/** @throws RangeError when a kernel would have more than `MAX_TAPS` taps. */
export function checkTaps(field: string, taps: number): void {
  if (!(taps <= MAX_TAPS)) {
    throw specError(field, `${field} asks for ${taps} taps; a kernel must not have more than ${MAX_TAPS}`)
  }
}
