/**
 * What NaN, gaps and infinities mean in this room: nothing. A recursive filter carries one such value into every later
 * sample, so a waveform that holds one is refused here, and whoever reads data decides beforehand what a gap is.
 *
 * @param name  what the array is, for the message: 'x', 'weights'.
 * @throws RangeError naming the first index whose value is NaN or infinite.
 */
export function requireFinite(name: string, values: Float64Array): void {
  if (allFinite(values)) return
  const index = values.findIndex((value) => !Number.isFinite(value))
  throw new RangeError(`${name}[${index}] must be a finite number, was ${values[index]}`)
}

/** Whether every value is a finite number. */
export function allFinite(values: Float64Array): boolean {
  // 0 times a number is 0, 0 times anything else is NaN; four sums at once, since one would wait for itself
  const whole = values.length - (values.length % 4)
  let a = 0
  let b = 0
  let c = 0
  let d = 0
  for (let i = 0; i < whole; i += 4) {
    a += 0 * values[i]
    b += 0 * values[i + 1]
    c += 0 * values[i + 2]
    d += 0 * values[i + 3]
  }
  for (let i = whole; i < values.length; i++) a += 0 * values[i]
  return a + b + c + d === 0
}
