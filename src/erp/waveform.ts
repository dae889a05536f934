import { addComponent, checkComponent, componentSupportMs, type Component } from './component.ts'
import { LIMIT_TOLERANCE_SAMPLES, type TimeWindow } from './time-axis.ts'

export interface Condition {
  name: string
  components: Component[]
}

/** A waveform made from components: what the user says; values follow from `waveformAt` at `epochTimesMs`. */
export interface BuiltWaveform {
  /** 100 to 4096. */
  samplingRateHz: number
  epoch: TimeWindow
  /** One or more, with different names. */
  conditions: Condition[]
}

/** Above this an epoch is surely a slip of the hand (a million samples are over four minutes at 4096 Hz). */
const MAX_EPOCH_SAMPLES = 1_000_000
const MIN_EPOCH_SAMPLES = 16

/**
 * @throws RangeError for a sampling rate outside 100–4096 Hz, a bad epoch, no condition, two conditions of one name, a bad
 *   component, or a frequency that the sampling rate cannot carry.
 */
export function checkBuiltWaveform(waveform: BuiltWaveform): void {
  const { samplingRateHz, conditions } = waveform
  checkSamplingRate(samplingRateHz)
  epochLimits(samplingRateHz, waveform.epoch)
  if (conditions.length === 0) throw new RangeError('a built waveform must have at least one condition')
  const names = new Set<string>()
  for (const condition of conditions) {
    if (names.has(condition.name))
      throw new RangeError(`conditions must have different names, "${condition.name}" came twice`)
    names.add(condition.name)
    for (const component of condition.components) {
      checkComponent(component)
      if (
        (component.shape === 'tone' || component.shape === 'damped-oscillation') &&
        component.frequencyHz >= samplingRateHz / 2
      ) {
        throw new RangeError(
          `component "${component.name}": frequencyHz must lie below ${samplingRateHz / 2} (half the sampling rate), was ${component.frequencyHz}`,
        )
      }
    }
  }
}

/**
 * The sample times of an epoch, in ms: the multiples of 1000/samplingRateHz in the closed interval (to 1e-6 sample), so that time 0 lies
 * exactly on a sample (or on the grid's continuation where the epoch leaves it out).
 *
 * @throws RangeError for a sampling rate outside 100–4096 Hz or an epoch of fewer than 16 or more than a million samples.
 */
export function epochTimesMs(samplingRateHz: number, epoch: TimeWindow): Float64Array {
  checkSamplingRate(samplingRateHz)
  const { first, last } = epochLimits(samplingRateHz, epoch)
  const times = new Float64Array(last - first + 1)
  for (let i = 0; i < times.length; i++) times[i] = ((first + i) * 1000) / samplingRateHz
  return times
}

/**
 * The sum of components at any times, in µV.
 *
 * @throws RangeError for a component that `checkComponent` refuses.
 */
export function waveformAt(components: readonly Component[], timesMs: Float64Array): Float64Array {
  const values = new Float64Array(timesMs.length)
  for (const component of components) {
    checkComponent(component)
    addComponent(component, timesMs, values)
  }
  return values
}

/** The stretch that holds every bounded component (tones, which never end, are left out); null when there is none. */
export function supportMs(components: readonly Component[]): TimeWindow | null {
  let fromMs = Infinity
  let toMs = -Infinity
  for (const component of components) {
    const support = componentSupportMs(component)
    if (support === 'unbounded') continue
    fromMs = Math.min(fromMs, support.fromMs)
    toMs = Math.max(toMs, support.toMs)
  }
  return fromMs <= toMs ? { fromMs, toMs } : null
}

/**
 * The difference wave `condition − minus` as a list of components: those of the first, and those of the second with
 * negated amplitudes. Each keeps its name after its condition's ("rare: late positivity").
 */
export function differenceComponents(condition: Condition, minus: Condition): Component[] {
  return [
    ...condition.components.map((c) => ({ ...c, name: `${condition.name}: ${c.name}` })),
    ...minus.components.map((c) => ({ ...c, name: `${minus.name}: ${c.name}`, amplitudeUv: -c.amplitudeUv })),
  ]
}

function checkSamplingRate(samplingRateHz: number): void {
  if (!(samplingRateHz >= 100 && samplingRateHz <= 4096)) {
    throw new RangeError(`samplingRateHz must lie between 100 and 4096, was ${samplingRateHz}`)
  }
}

function epochLimits(samplingRateHz: number, epoch: TimeWindow): { first: number; last: number } {
  const { fromMs, toMs } = epoch
  if (!Number.isFinite(fromMs) || !Number.isFinite(toMs) || fromMs >= toMs) {
    throw new RangeError(`epoch must begin before it ends, was ${fromMs} to ${toMs} ms`)
  }
  const first = Math.ceil((fromMs * samplingRateHz) / 1000 - LIMIT_TOLERANCE_SAMPLES)
  const last = Math.floor((toMs * samplingRateHz) / 1000 + LIMIT_TOLERANCE_SAMPLES)
  const count = last - first + 1
  if (count < MIN_EPOCH_SAMPLES || count > MAX_EPOCH_SAMPLES) {
    throw new RangeError(
      `epoch must hold ${MIN_EPOCH_SAMPLES} to ${MAX_EPOCH_SAMPLES} samples, ${fromMs} to ${toMs} ms at ${samplingRateHz} Hz hold ${Math.max(0, count)}`,
    )
  }
  return { first, last }
}
