/**
 * The standard error of an average at each of its samples: SD of the trials (divisor N − 1) over √N.
 *
 * @param trials single trials of one length, µV.
 * @returns µV, one value per sample.
 * @throws RangeError for fewer than two trials, or trials of different lengths.
 */
export function standardErrorOfMean(trials: readonly Float64Array[]): Float64Array {
  const count = trials.length
  if (count < 2) throw new RangeError(`trials must be at least 2, were ${count}`)
  const samples = trials[0].length
  const odd = trials.find((trial) => trial.length !== samples)
  if (odd) throw new RangeError(`trials must have ${samples} samples each, one has ${odd.length}`)
  const errors = new Float64Array(samples)
  for (let i = 0; i < samples; i++) {
    let mean = 0
    for (const trial of trials) mean += trial[i] / count
    let squares = 0
    for (const trial of trials) squares += (trial[i] - mean) ** 2
    errors[i] = Math.sqrt(squares / (count - 1) / count)
  }
  return errors
}
