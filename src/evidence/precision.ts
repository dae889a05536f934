/**
 * What a filter does for the precision of a score. A factor of 1 means no gain; a filter that shrinks the effect as much as the
 * noise has a precision factor above 1 and gains nothing.
 */

/** Below this part of the waveform's largest absolute value a score holds no effect to speak of. */
const EFFECT_SHARE = 0.2

/**
 * Variance of the score's noise unfiltered / filtered.
 *
 * @returns Infinity where the filter leaves no noise; NaN where there was none before and is none after.
 * @throws RangeError for a variance that is negative or not a number.
 */
export function precisionFactor(varianceBefore: number, varianceAfter: number): number {
  checkVariance('varianceBefore', varianceBefore)
  checkVariance('varianceAfter', varianceAfter)
  return varianceBefore / varianceAfter
}

/**
 * How many times as many trials the unfiltered score would need to tell the effect from noise equally well: the precision
 * factor × (E after / E before)².
 *
 * @param effect E, the noise-free score of the effect that the study tests, before and after.
 * @param largest the largest absolute value of the unfiltered waveform, in the score's unit (`scoreReference`).
 * @returns 'no effect in this window' where |E before| is under 20 % of `largest`.
 * @throws RangeError as `precisionFactor`, and for scores that are not finite.
 */
export function equalTrialsFactor(
  varianceBefore: number,
  varianceAfter: number,
  effect: { before: number; after: number },
  largest: number,
): number | 'no effect in this window' {
  const precision = precisionFactor(varianceBefore, varianceAfter)
  if (!Number.isFinite(effect.before) || !Number.isFinite(effect.after) || !(largest >= 0)) {
    throw new RangeError(
      `effect and largest must be finite numbers, were ${effect.before}, ${effect.after} and ${largest}`,
    )
  }
  if (effect.before === 0 || Math.abs(effect.before) < EFFECT_SHARE * largest) return 'no effect in this window'
  return precision * (effect.after / effect.before) ** 2
}

/** Variance of a difference of two conditions with independent trials: the sum of theirs (each already divided by its own N). */
export function varianceOfDifference(first: number, second: number): number {
  checkVariance('first', first)
  checkVariance('second', second)
  return first + second
}

/** The readout's noise row: standard deviations in the score's unit, with what they mean for trials. */
export interface NoiseRow {
  id: 'noise'
  group: 'precision'
  unit: 'µV' | 'µV·s'
  trials: number
  before: number
  after: number
  change: number
  precisionFactor: number
  equalTrialsFactor: number | 'no effect in this window'
}

/**
 * The noise row from the two variances of the mean over trials.
 *
 * @param effect  the noise-free score before and after; null where there is none (a peak not found), which is no effect.
 * @param largest as `equalTrialsFactor`.
 * @throws RangeError as `equalTrialsFactor`.
 */
export function noiseRow(
  unit: 'µV' | 'µV·s',
  trials: number,
  varianceBefore: number,
  varianceAfter: number,
  effect: { before: number; after: number } | null,
  largest: number,
): NoiseRow {
  const before = Math.sqrt(varianceBefore)
  const after = Math.sqrt(varianceAfter)
  return {
    id: 'noise',
    group: 'precision',
    unit,
    trials,
    before,
    after,
    change: after - before,
    precisionFactor: precisionFactor(varianceBefore, varianceAfter),
    equalTrialsFactor: effect
      ? equalTrialsFactor(varianceBefore, varianceAfter, effect, largest)
      : 'no effect in this window',
  }
}

function checkVariance(name: string, value: number): void {
  if (!(value >= 0)) throw new RangeError(`${name} must be a number of at least 0, was ${value}`)
}
