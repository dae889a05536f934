export type LateOnlyVerdict = 'it can' | 'not by late activity alone' | 'cannot be told'

/** 97.5 % point of the standard normal distribution. */
export const NORMAL_95 = 1.959963984540054

/** The numbers that a verdict rests on, all in µV but the share. */
export interface VerdictGrounds {
  /** 95 % interval of β. */
  readonly interval: readonly [number, number]
  /** Largest |y| in the early window. */
  readonly largestUv: number
  /** Mean of y there. */
  readonly meanUv: number
  /** √(wᵀCw), the noise of that mean. */
  readonly noiseOfMeanUv: number
  /** w·Kx̂ / w·y. */
  readonly lateShare: number
}

/** Which conditions hold. */
export interface VerdictConditions {
  readonly intervalExcludesZero: boolean
  /** The interval's full width is smaller than the largest |y| in the window. */
  readonly intervalIsNarrow: boolean
  /** |mean of y| there exceeds 1.96·√(wᵀCw). */
  readonly deflectionExceedsNoise: boolean
  /** The late-only fit's own filtered waveform makes at least half of that mean. */
  readonly lateMakesHalf: boolean
}

export function verdictConditions(grounds: VerdictGrounds): VerdictConditions {
  const [low, high] = grounds.interval
  return {
    intervalExcludesZero: low > 0 || high < 0,
    intervalIsNarrow: high - low < grounds.largestUv,
    deflectionExceedsNoise: Math.abs(grounds.meanUv) > NORMAL_95 * grounds.noiseOfMeanUv,
    lateMakesHalf: grounds.lateShare >= 0.5,
  }
}

/**
 * "Not by late activity alone" where the interval of β excludes zero; "it can", which does not prove that it did, where it includes zero and
 * all three other conditions hold; else "cannot be told".
 */
export function lateOnlyVerdict(conditions: VerdictConditions): LateOnlyVerdict {
  if (conditions.intervalExcludesZero) return 'not by late activity alone'
  const { intervalIsNarrow, deflectionExceedsNoise, lateMakesHalf } = conditions
  return intervalIsNarrow && deflectionExceedsNoise && lateMakesHalf ? 'it can' : 'cannot be told'
}
