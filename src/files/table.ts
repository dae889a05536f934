/**
 * What a table of waveforms is once it has been read, and how it is asked for one waveform. Times in ms, values in µV.
 */

export type TimeUnit = 's' | 'ms' | 'µs'
export type AmplitudeUnit = 'V' | 'mV' | 'µV' | 'nV'
export type Delimiter = ',' | ';' | '\t'
export type DecimalSeparator = '.' | ','

/**
 * What the reader would otherwise recognise by itself. Columns are named as in the file's header ('Cz (µV)'), a column
 * without a name as 'column 3'; `null` says that the table has no such column.
 */
export interface TableOptions {
  delimiter?: Delimiter
  decimal?: DecimalSeparator
  layout?: 'wide' | 'long'
  /** What the value columns of a wide table stand for. */
  columnsAre?: 'channels' | 'conditions'
  timeColumn?: string
  /** The value column of a long table. */
  valueColumn?: string
  conditionColumn?: string | null
  channelColumn?: string | null
  participantColumn?: string | null
  trialColumn?: string | null
  /** Columns that are neither waveforms nor labels, such as a reaction time. */
  ignoreColumns?: readonly string[]
  timeUnit?: TimeUnit
  /** For every value column, whatever the header says. */
  amplitudeUnit?: AmplitudeUnit
  /** Takes the place of the rate that follows from the times; required when the table numbers its samples instead. */
  samplingRateHz?: number
  /** The time of the first sample; only for a table that numbers its samples. */
  firstMs?: number
  /** One participant; otherwise the mean over participants, each with the same weight. */
  participant?: string
  /** One trial; otherwise the mean over trials. */
  trial?: string
}

/** Something that the reader decided. The option called `what` overrides it. */
export interface Guess {
  what: keyof TableOptions
  value: string
  from: 'header' | 'inferred' | 'stated'
  why: string
}

export interface TableWaveform {
  condition: string
  channel: string
  /** µV, one value per time. */
  values: Float64Array
  /** How many single trials, or without a trial column how many participants' waveforms, its values are the mean of. */
  averaged: number
}

/** One run of samples as it stands in the file, before any mean. */
export interface SingleWaveform {
  condition: string
  channel: string
  participant?: string
  trial?: string
  /** µV; a view into the table's own storage, so not to be written to. */
  values: Float64Array
}

export interface Table {
  ok: true
  layout: 'wide' | 'long'
  samplingRateHz: number
  /** Exactly regular: timesMs[i] = timesMs[0] + i · 1000 / samplingRateHz. */
  timesMs: Float64Array
  conditions: string[]
  channels: string[]
  waveforms: TableWaveform[]
  /** The step that the printed values are rounded to, in µV: the coarsest of the columns'. */
  roundingUv: number
  participants?: string[]
  /** Labels of the trials, in the order of the file; two participants may use the same label. */
  trials?: string[]
  /** The number of single trials in each mean; where it differs between waveforms, the smallest, and a warning says so. */
  trialsAveraged?: number
  /** The participant that was asked for. */
  participant?: string
  /** The runs behind the means, when the table has participants or trials. */
  singles?: SingleWaveform[]
  guesses: Guess[]
  warnings: string[]
}

export interface TableRefusal {
  ok: false
  reason: string
  /** Line of the file, counted from 1. */
  line?: number
  /** Name of the column as the header has it. */
  column?: string
  /** What the user can do about it. */
  todo?: string
}

/** Name of the only condition of a table that names none. */
export const unnamedCondition = 'condition'
/** Name of the only channel of a table that names none. */
export const unnamedChannel = 'channel'

export function refuse(reason: string, todo: string, where: { line?: number; column?: string } = {}): TableRefusal {
  return { ok: false, reason, ...where, todo }
}

/** Channel labels of fixed width come padded with dots ('Cz..'). */
export function withoutTrailingDots(label: string): string {
  return label.replace(/\.+$/, '')
}

function listed(names: readonly string[]): string {
  return names.length <= 12 ? names.join(', ') : `${names.slice(0, 12).join(', ')} … (${names.length})`
}

function knownLabel(asked: string, known: readonly string[], what: string): string {
  if (known.includes(asked)) return asked
  const bare = withoutTrailingDots(asked)
  if (known.includes(bare)) return bare
  throw new RangeError(`${what} must be one of ${listed(known)}, was "${asked}"`)
}

/**
 * The waveform of one condition at one channel.
 * @throws RangeError for a condition or channel that the table does not have; it lists those that it has.
 */
export function waveformOf(table: Table, condition: string, channel: string): TableWaveform {
  const c = knownLabel(condition, table.conditions, 'condition')
  const ch = knownLabel(channel, table.channels, 'channel')
  const found = table.waveforms.find((w) => w.condition === c && w.channel === ch)
  if (!found) throw new RangeError(`the table has no waveform of condition "${c}" at channel "${ch}"`)
  return found
}

/**
 * The single trials behind a waveform, in the order of the file: of the participant that was asked for, or of all of them.
 * Each is a view of one value per time in µV into the table's storage, not a copy. None for a table without trials.
 * @throws RangeError for a condition or channel that the table does not have.
 */
export function trialsOf(table: Table, condition: string, channel: string): Float64Array[] {
  const c = knownLabel(condition, table.conditions, 'condition')
  const ch = knownLabel(channel, table.channels, 'channel')
  if (!table.trials || !table.singles) return []
  return table.singles
    .filter((s) => s.condition === c && s.channel === ch)
    .filter((s) => table.participant === undefined || s.participant === table.participant)
    .map((s) => s.values)
}
