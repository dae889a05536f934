/** What a rejected stage carries beside its message, so that a page can put the message at the right place. */
export interface SpecFault {
  /** Name of the property of the stage that is at fault, for instance 'cutoffsHz'. */
  field?: string
  /** Index of the stage in the list it came from, counted from 0. */
  stageIndex?: number
}

/** A RangeError that names the faulty property of a stage in `field`. */
export function specError(field: string, message: string): RangeError & SpecFault {
  return Object.assign(new RangeError(message), { field })
}

/** Says a value so that strings, NaN, null and missing values can be told apart in a message. */
export function said(value: unknown): string {
  if (typeof value === 'number' || value === null || value === undefined) return String(value)
  try {
    return JSON.stringify(value) ?? typeof value
  } catch {
    return typeof value
  }
}

/** @throws RangeError unless the sampling rate is a positive, finite number. */
export function checkSamplingRate(samplingRateHz: number): void {
  if (typeof samplingRateHz !== 'number' || !(samplingRateHz > 0 && samplingRateHz < Infinity)) {
    throw specError('samplingRateHz', `samplingRateHz must be a positive number, was ${said(samplingRateHz)}`)
  }
}

/** @throws RangeError unless the value is a whole number between the limits, both included. */
export function checkWhole(field: string, value: unknown, from: number, to: number): void {
  if (!Number.isInteger(value) || (value as number) < from || (value as number) > to) {
    throw specError(field, `${field} must be a whole number from ${from} to ${to}, was ${said(value)}`)
  }
}

/** @throws RangeError unless the value is one of the choices. */
export function checkChoice(field: string, value: unknown, choices: readonly string[]): void {
  if (!choices.includes(value as string)) {
    throw specError(field, `${field} must be one of ${choices.join(', ')}, was ${said(value)}`)
  }
}

/** @throws RangeError unless the frequency lies strictly between 0 and half the sampling rate. */
export function checkFrequency(field: string, hz: unknown, samplingRateHz: number, label = field): void {
  const half = samplingRateHz / 2
  if (typeof hz !== 'number' || !(hz > 0 && hz < half)) {
    throw specError(field, `${label} must lie between 0 and ${half} (half the sampling rate), was ${said(hz)}`)
  }
}

/** @throws RangeError unless there is one cutoff (low, high) or two ascending ones (band, stop), all inside the band. */
export function checkCutoffs(pass: string, cutoffsHz: unknown, samplingRateHz: number): void {
  const count = pass === 'low' || pass === 'high' ? 1 : 2
  if (!Array.isArray(cutoffsHz) || cutoffsHz.length !== count) {
    const kind = count === 1 ? 'one cutoff' : 'two cutoffs'
    throw specError('cutoffsHz', `cutoffsHz must hold ${kind} for pass ${pass}, was ${said(cutoffsHz)}`)
  }
  for (let i = 0; i < count; i++) checkFrequency('cutoffsHz', cutoffsHz[i], samplingRateHz, `cutoffsHz[${i}]`)
  if (count === 2 && !(cutoffsHz[0] < cutoffsHz[1])) {
    throw specError('cutoffsHz', `cutoffsHz must ascend, was ${said(cutoffsHz)}`)
  }
}
