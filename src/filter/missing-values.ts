/**
 * What NaN, gaps and infinities mean in this room: nothing. A recursive filter carries one such value into every later
 * sample, so a waveform that holds one is refused here, and whoever reads data decides beforehand what a gap is.
 *
 * @param name  what the array is, for the message: 'x', 'weights'.
 * @throws RangeError naming the first index whose value is NaN or infinite.
 */
export function requireFinite(name: string, values: Float64Array): void {
  for (let i = 0; i < values.length; i++) {
    // false for NaN and for both infinities
    if (!(values[i] - values[i] === 0)) throw new RangeError(`${name}[${i}] must be a finite number, was ${values[i]}`)
  }
}
