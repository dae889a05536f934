/**
 * Reads a table of waveforms: CSV, TSV or semicolons, decimal points or commas, wide (a time column, then a column for each
 * channel or condition) or long (a line for each value, with columns that say what it belongs to), or wide with such columns.
 *
 * What the file does not say is inferred, never silently: each decision is one of the table's `guesses`, with its reason, and
 * an option of the same name overrides it. What could be read in two ways that give different numbers is refused.
 */

import { foreignFile } from './foreign-file.ts'
import {
  type AmplitudeUnit,
  type Guess,
  refuse,
  type SingleWaveform,
  type Table,
  type TableOptions,
  type TableRefusal,
  type TableWaveform,
  type TimeUnit,
  unnamedChannel,
  unnamedCondition,
  withoutTrailingDots,
} from './table.ts'
import { type LabelColumn, type NumberColumn, readColumns, type TableColumns } from './table-columns.ts'
import { recogniseDialect } from './table-dialect.ts'
import { sortIntoRuns, type TableRuns } from './table-groups.ts'
import { type LabelRole, labelRoles, recogniseRoles, type TableRoles } from './table-roles.ts'
import { msPer, uvPer } from './table-units.ts'
import { firstLabel, fitLabels, labelSpread, neatRateHz } from './time-axis.ts'

/** Characters of the longest text that is read. */
export const largestTable = 200_000_000
/** A waveform with fewer samples cannot be filtered in any useful way. */
export const fewestSamples = 16

/**
 * Reads a table.
 * @param text the file's text; a byte order mark and any line ends are accepted
 * @param options what is known better than the reader can recognise it
 * @returns the table, times in ms and values in µV, or the reason why not, with line and column of the file and what to do.
 *   Never throws.
 */
export function readTable(text: string, options: TableOptions = {}): Table | TableRefusal {
  const wrong = wrongOption(options)
  if (wrong) return wrong
  if (text.length > largestTable) {
    return refuse(
      `the table has ${(text.length / 1e6).toFixed(0)} million characters, more than ${largestTable / 1e6} million`,
      'Cut it into smaller tables, or write averages instead of single trials.',
    )
  }
  const foreign = foreignFile(text)
  if (foreign) return refuse(`this is no table: it looks like ${foreign.looksLike}`, foreign.todo)
  const dialect = recogniseDialect(text, options)
  if (!dialect.ok) return dialect
  const roles = recogniseRoles(dialect.header, dialect.sample, dialect.headerLine, dialect.units, options)
  if (!roles.ok) return roles
  const columns = readColumns(dialect, roles, options)
  if (!columns.ok) return columns

  const guesses: Guess[] = [dialect.guess, ...(columns.guess ? [columns.guess] : []), ...roles.guesses]
  const warnings: string[] = columns.warning ? [columns.warning] : []
  const unused = [...roles.unused]

  // Of several columns that could name the trial (say), the one that tells most rows apart.
  const labels: Partial<Record<LabelRole, LabelColumn>> = {}
  for (const role of labelRoles) {
    const candidates = roles.labels[role]
    if (candidates.length === 0) continue
    const size = (i: number): number => (columns.labels.get(i) as LabelColumn).labels.length
    const finest = candidates.reduce((best, i) => (size(i) > size(best) ? i : best))
    labels[role] = columns.labels.get(finest)
    unused.push(...candidates.filter((i) => i !== finest))
    const raw = roles.columns[finest].raw
    const stated = options[`${role}Column`] !== undefined
    const from = stated ? 'stated' : 'header'
    guesses.push({ what: `${role}Column`, value: raw, from, why: stated ? 'as you said' : `its name is "${raw}"` })
  }
  if (unused.length > 0) {
    const names = unused.sort((a, b) => a - b).map((i) => roles.columns[i].raw)
    warnings.push(
      `Not used: ${names.slice(0, 20).join(', ')}${names.length > 20 ? ` and ${names.length - 20} more` : ''}.`,
    )
  }

  // Values that are missing: a whole column may be (a broken channel), single values may not.
  const kept: number[] = []
  for (let j = 0; j < roles.values.length; j++) {
    const raw = roles.columns[roles.values[j]].raw
    const c = columns.values[j]
    if (c.missing === 0) kept.push(j)
    else if (c.missing === columns.rows) warnings.push(`The column ${raw} has no values and is left out.`)
    else {
      return refuse(
        c.missing === 1 ? 'a value is missing' : `${c.missing} values are missing, the first here`,
        'Fill in the missing value, or leave the channel, condition or trial out of the table.',
        { line: c.missingLine, column: raw },
      )
    }
  }
  if (kept.length === 0) {
    return refuse('no column has any value', 'Open a table with amplitudes in it.', { line: dialect.headerLine })
  }

  const timeName = roles.columns[roles.time].raw
  const runs = sortIntoRuns(columns.time, columns.lines, labels, timeName)
  if (!runs.ok) return runs
  const axis = timeAxis(runs, columns.time, roles, timeName, options, guesses, warnings)
  if ('ok' in axis) return axis

  const units = amplitudeUnits(kept, roles, columns, options, guesses, warnings)
  const stored = kept.map((j) => {
    const values = new Float64Array(runs.count * runs.length)
    const factor = uvPer[units[j]]
    const source = columns.values[j].values
    for (let r = 0; r < columns.rows; r++) values[runs.position[r]] = source[r] * factor
    columns.values[j].values = values
    return values
  })
  const roundingUv = Math.max(...kept.map((j) => decimalStep(columns.values[j].usualDecimals, uvPer[units[j]])))

  const channelNames = tidyChannels(
    roles.layout === 'wide' && roles.columnsAre === 'channels'
      ? kept.map((j) => roles.columns[roles.values[j]].name || unnamedChannel)
      : (labels.channel?.labels ?? [unnamedChannel]),
  )
  const conditionNames =
    roles.layout === 'wide' && roles.columnsAre === 'conditions'
      ? kept.map((j) => roles.columns[roles.values[j]].name || unnamedCondition)
      : (labels.condition?.labels ?? [unnamedCondition])

  const singles: (SingleWaveform & { p: number })[] = []
  for (let g = 0; g < runs.count; g++) {
    const p = runs.codes.participant?.[g] ?? 0
    const participant = labels.participant?.labels[p]
    const trial = labels.trial?.labels[runs.codes.trial?.[g] ?? 0]
    stored.forEach((values, k) => {
      const inColumn = roles.layout === 'wide'
      const c = inColumn && roles.columnsAre === 'conditions' ? k : (runs.codes.condition?.[g] ?? 0)
      const ch = inColumn && roles.columnsAre === 'channels' ? k : (runs.codes.channel?.[g] ?? 0)
      singles.push({
        condition: conditionNames[c],
        channel: channelNames[ch],
        ...(participant === undefined ? {} : { participant }),
        ...(trial === undefined ? {} : { trial }),
        values: values.subarray(g * runs.length, (g + 1) * runs.length),
        p,
      })
    })
  }
  const averages = average(singles, conditionNames, channelNames, labels, options, guesses, warnings)
  if ('ok' in averages) return averages
  const table: Table = {
    ok: true,
    layout: roles.layout,
    samplingRateHz: axis.samplingRateHz,
    timesMs: axis.timesMs,
    conditions: [...conditionNames],
    channels: channelNames,
    waveforms: averages.waveforms,
    roundingUv,
    guesses,
    warnings,
  }
  if (labels.participant) table.participants = [...labels.participant.labels]
  if (labels.trial) {
    table.trials = [...labels.trial.labels]
    table.trialsAveraged = Math.min(...averages.waveforms.map((w) => w.averaged))
  }
  if (labels.participant && options.participant !== undefined) table.participant = options.participant
  if (labels.participant || labels.trial) table.singles = singles.map(({ p: _, ...single }) => single)
  return table
}

function wrongOption(options: TableOptions): TableRefusal | undefined {
  const rules: [string, unknown, readonly unknown[]][] = [
    ['delimiter', options.delimiter, [',', ';', '\t']],
    ['decimal', options.decimal, ['.', ',']],
    ['layout', options.layout, ['wide', 'long']],
    ['columnsAre', options.columnsAre, ['channels', 'conditions']],
    ['timeUnit', options.timeUnit, Object.keys(msPer)],
    ['amplitudeUnit', options.amplitudeUnit, Object.keys(uvPer)],
  ]
  for (const [name, value, allowed] of rules) {
    if (value === undefined || allowed.includes(value)) continue
    return refuse(`${name} must be one of ${allowed.join(' ')}, was ${String(value)}`, 'Choose one of these.')
  }
  const rate = options.samplingRateHz
  if (rate !== undefined && !(Number.isFinite(rate) && rate > 0)) {
    return refuse(`samplingRateHz must be a positive number, was ${rate}`, 'Give the sampling rate in Hz.')
  }
  if (options.firstMs !== undefined && !Number.isFinite(options.firstMs)) {
    return refuse(`firstMs must be a finite number, was ${options.firstMs}`, 'Give the time of the first sample in ms.')
  }
  return undefined
}

/** Channel names without the dots that pad them, where they stay different names. */
function tidyChannels(names: readonly string[]): string[] {
  const tidy = names.map((name) => withoutTrailingDots(name) || name)
  return new Set(tidy).size === names.length ? tidy : [...names]
}

/** The step that so many decimals resolve, in another unit: a power of ten as exact as a double can be. */
function decimalStep(decimals: number, factor: number): number {
  return Number(`1e${Math.round(Math.log10(factor)) - decimals}`)
}

function printedMs(value: number, unit: TimeUnit): string {
  return `${Number((value * msPer[unit]).toPrecision(6))} ms`
}

/** A number for people: six significant digits. */
function brief(value: number): string {
  return String(Number(value.toPrecision(6)))
}

function timeAxis(
  runs: TableRuns,
  time: NumberColumn,
  roles: TableRoles,
  timeName: string,
  options: TableOptions,
  guesses: Guess[],
  warnings: string[],
): { samplingRateHz: number; timesMs: Float64Array } | TableRefusal {
  const { times: labels, lines, length } = runs
  if (length < fewestSamples) {
    return refuse(
      `each waveform has ${length} ${length === 1 ? 'sample' : 'samples'}; at least ${fewestSamples} are needed`,
      'Open a table with a line for each time of a whole epoch.',
      { line: lines[length - 1], column: timeName },
    )
  }
  const fitted = fitLabels(labels, decimalStep(time.mostDecimals, 1))
  const column = roles.columns[roles.time]
  if (!fitted.ok) {
    const { problem } = fitted
    const where = { line: lines[problem.index], column: timeName }
    if (problem.kind === 'gap') {
      return refuse(
        `there is a gap: the time jumps from ${labels[problem.index - 1]} to ${labels[problem.index]}, where other steps are ${brief(problem.usual)}`,
        'Fill the gap, or open the stretches before and after it as tables of their own.',
        where,
      )
    }
    if (problem.kind === 'uneven') {
      return refuse(
        `the times are not evenly spaced: their steps go from ${brief(problem.smallest)} to ${brief(problem.largest)}, here from ${labels[problem.index - 1]} to ${labels[problem.index]}`,
        'Resample the waveforms to one sampling rate.',
        where,
      )
    }
    return refuse(`the times do not go up`, 'Sort the lines by time.', where)
  }
  const { fit } = fitted

  if (roles.timeIsSampleNumber) {
    if (options.samplingRateHz === undefined) {
      return refuse(
        `the column "${timeName}" numbers the samples, but no column holds times`,
        'Say the sampling rate, or add a column named "time_ms" or "time (s)".',
        { column: timeName },
      )
    }
    if (!fit.exact || Math.abs(fit.mean - 1) > 1e-9) {
      return refuse('the sample numbers do not go up by one', 'Number the samples one by one.', {
        line: lines[Math.min(1, length - 1)],
        column: timeName,
      })
    }
    const samplingRateHz = options.samplingRateHz
    const firstMs = options.firstMs ?? (labels[0] * 1000) / samplingRateHz
    guesses.push({ what: 'samplingRateHz', value: brief(samplingRateHz), from: 'stated', why: 'as you said' })
    guesses.push(
      options.firstMs !== undefined
        ? { what: 'firstMs', value: brief(firstMs), from: 'stated', why: 'as you said' }
        : { what: 'firstMs', value: brief(firstMs), from: 'inferred', why: 'sample 0 is taken as time zero' },
    )
    return { samplingRateHz, timesMs: regular(firstMs, samplingRateHz, length) }
  }

  let unit: TimeUnit
  if (options.timeUnit !== undefined) {
    unit = options.timeUnit
    guesses.push({ what: 'timeUnit', value: unit, from: 'stated', why: 'as you said' })
  } else if (column.time !== undefined) {
    unit = column.time
    guesses.push({ what: 'timeUnit', value: unit, from: 'header', why: `the header says "${column.raw}"` })
  } else {
    // Steps of 0.05 and more: as seconds at most 20 Hz, as milliseconds at most 20 kHz.
    unit = fit.mean < 0.05 ? 's' : 'ms'
    const other = unit === 's' ? 'ms' : 's'
    guesses.push({
      what: 'timeUnit',
      value: unit,
      from: 'inferred',
      why: `a step of ${brief(fit.mean)} is ${brief(1000 / msPer[unit] / fit.mean)} Hz in ${unit}, ${brief(1000 / msPer[other] / fit.mean)} Hz in ${other}`,
    })
  }
  const perSecond = 1000 / msPer[unit]
  const printed = printedMs(fit.printed, unit)
  const neat = neatRateHz(labels, fit, perSecond)
  if (!neat && options.samplingRateHz === undefined) {
    const problem = 'the times are printed too coarsely to tell whether they are evenly spaced'
    return refuse(
      `${problem}: they are rounded to ${printed} and their steps differ`,
      'Print the times with more decimals, or say the sampling rate.',
      { line: lines[firstUnusualStep(labels)], column: timeName },
    )
  }
  let samplingRateHz: number
  if (options.samplingRateHz !== undefined) {
    samplingRateHz = options.samplingRateHz
    const meanRate = perSecond / fit.mean
    if (Math.abs(samplingRateHz / meanRate - 1) > Math.max(0.015, fit.tolerance / fit.mean / (length - 1))) {
      return refuse(
        `the times give a sampling rate of ${brief(meanRate)} Hz, not ${brief(samplingRateHz)} Hz`,
        'Correct the sampling rate or the unit of the times.',
        { column: timeName },
      )
    }
    const spread = labelSpread(labels, perSecond / samplingRateHz)
    if (spread > 1.001 * fit.tolerance) {
      warnings.push(
        `At ${brief(samplingRateHz)} Hz the times lie up to ${printedMs(spread, unit)} from those that the file prints.`,
      )
    }
    guesses.push({ what: 'samplingRateHz', value: brief(samplingRateHz), from: 'stated', why: 'as you said' })
  } else {
    const { rateHz, rival } = neat as { rateHz: number; rival?: number }
    samplingRateHz = rateHz
    const step = perSecond / samplingRateHz
    const asPrinted = fit.exact && Math.abs(step - fit.mean) <= 1e-6 * fit.mean
    guesses.push({
      what: 'samplingRateHz',
      value: brief(samplingRateHz),
      from: 'inferred',
      why: asPrinted
        ? `the times go up by ${printedMs(fit.mean, unit)}`
        : `the times are rounded to ${printed}; steps of ${printedMs(step, unit)} fit all of them`,
    })
    if (rival !== undefined && !asPrinted) {
      warnings.push(`The printed times fit ${brief(rival)} Hz as well as ${brief(samplingRateHz)} Hz.`)
    }
  }
  const outside = samplingRateHz < 20 || samplingRateHz > 100_000
  if (outside)
    warnings.push(`A sampling rate of ${brief(samplingRateHz)} Hz is unusual: is ${unit} the unit of the times?`)
  const stepOfLabels = perSecond / samplingRateHz
  // A stated rate may leave the labels by more than their rounding; time zero stays a sample all the same.
  const tolerance = Math.max(fit.tolerance, 2 * labelSpread(labels, stepOfLabels))
  const first = firstLabel(labels, stepOfLabels, tolerance)
  return { samplingRateHz, timesMs: regular(first * msPer[unit], samplingRateHz, length) }
}

/** Index of the label that the step leads to which differs most from the one before it. */
function firstUnusualStep(labels: Float64Array): number {
  for (let i = 2; i < labels.length; i++) {
    const change = labels[i] - labels[i - 1] - (labels[i - 1] - labels[i - 2])
    if (Math.abs(change) > 0.25 * (labels[1] - labels[0])) return i
  }
  return labels.length - 1
}

function regular(firstMs: number, samplingRateHz: number, length: number): Float64Array {
  const stepMs = 1000 / samplingRateHz
  const timesMs = new Float64Array(length)
  // When time zero is a sample, it is so exactly.
  const before = Math.round(-firstMs / stepMs)
  const throughZero = Math.abs(firstMs + before * stepMs) < 1e-9 * stepMs
  for (let i = 0; i < length; i++) timesMs[i] = throughZero ? (i - before) * stepMs : firstMs + i * stepMs
  return timesMs
}

/** The unit of each kept value column, by the index of the value column. */
function amplitudeUnits(
  kept: readonly number[],
  roles: TableRoles,
  columns: TableColumns,
  options: TableOptions,
  guesses: Guess[],
  warnings: string[],
): AmplitudeUnit[] {
  const units: AmplitudeUnit[] = []
  const header = (j: number): AmplitudeUnit | undefined => roles.columns[roles.values[j]].amplitude
  if (options.amplitudeUnit !== undefined) {
    for (const j of kept) units[j] = options.amplitudeUnit
    guesses.push({ what: 'amplitudeUnit', value: options.amplitudeUnit, from: 'stated', why: 'as you said' })
    return units
  }
  const stated = [...new Set(kept.map(header).filter((unit) => unit !== undefined))]
  for (const unit of stated) {
    const of = kept.filter((j) => header(j) === unit)
    for (const j of of) units[j] = unit
    const first = roles.columns[roles.values[of[0]]]
    guesses.push({
      what: 'amplitudeUnit',
      value: unit,
      from: first.damaged ? 'inferred' : 'header',
      why: first.damaged
        ? `the header says "${first.raw}", of which one character could not be read`
        : `the header says "${first.raw}"${of.length < kept.length ? ` (${of.length} of ${kept.length} columns)` : ''}`,
    })
  }
  const open = kept.filter((j) => units[j] === undefined)
  if (open.length > 0) {
    let largest = 0
    for (const j of open) for (const x of columns.values[j].values) if (Math.abs(x) > largest) largest = Math.abs(x)
    let unit: AmplitudeUnit
    let why: string
    if (stated.length === 1) {
      unit = stated[0]
      why = `other columns are in ${unit}`
    } else {
      // Averaged and single-trial EEG lies between 0.1 µV and some mV: below 0.001 only volts make sense of the numbers.
      unit = largest > 0 && largest < 1e-3 ? 'V' : 'µV'
      why = `the largest value is ${brief(largest)}`
      if (unit === 'µV' && largest > 0 && largest < 0.1) {
        warnings.push(`The largest value is ${brief(largest)}: if the amplitudes are in mV or V, say so.`)
      }
    }
    for (const j of open) units[j] = unit
    guesses.push({ what: 'amplitudeUnit', value: unit, from: 'inferred', why })
  }
  return units
}

type Labels = Partial<Record<LabelRole, LabelColumn>>

/** One waveform for each condition and channel: the one that was asked for, or means of what there is. */
function average(
  singles: readonly (SingleWaveform & { p: number })[],
  conditions: readonly string[],
  channels: readonly string[],
  labels: Labels,
  options: TableOptions,
  guesses: Guess[],
  warnings: string[],
): { waveforms: TableWaveform[] } | TableRefusal {
  for (const role of ['participant', 'trial'] as const) {
    const asked = options[role]
    const known = labels[role]?.labels
    if (asked === undefined) {
      if (known === undefined) continue
      guesses.push({
        what: role,
        value: known.length > 1 ? 'mean' : known[0],
        from: 'inferred',
        why: known.length > 1 ? `the mean over ${known.length} ${role}s is taken` : `there is only this ${role}`,
      })
    } else if (known === undefined) {
      return refuse(
        `the table has no column for a ${role}, so "${asked}" cannot be chosen`,
        `Say which column holds the ${role}.`,
      )
    } else if (!known.includes(asked)) {
      const some = known.slice(0, 20).join(', ')
      return refuse(
        `there is no ${role} "${asked}"`,
        `Choose one of ${known.length > 20 ? `${some} … (${known.length})` : some}.`,
      )
    } else guesses.push({ what: role, value: asked, from: 'stated', why: 'as you said' })
  }
  const cells = new Map<string, (SingleWaveform & { p: number })[]>()
  const cell = (condition: string, channel: string): string => JSON.stringify([condition, channel])
  for (const single of singles) {
    if (options.participant !== undefined && single.participant !== options.participant) continue
    if (options.trial !== undefined && single.trial !== options.trial) continue
    const key = cell(single.condition, single.channel)
    const list = cells.get(key)
    if (list) list.push(single)
    else cells.set(key, [single])
  }
  const waveforms: TableWaveform[] = []
  const participantsSeen = new Set<number>()
  for (const condition of conditions) {
    for (const channel of channels) {
      const members = cells.get(cell(condition, channel))
      if (!members) {
        const chosen = options.participant ?? options.trial
        return refuse(
          `channel "${channel}" has no values in condition "${condition}"${chosen === undefined ? '' : ` for "${chosen}"`}`,
          'Give every condition the same channels, or leave the incomplete one out of the table.',
          { column: channel },
        )
      }
      const byParticipant = new Map<number, Float64Array[]>()
      for (const m of members) {
        const list = byParticipant.get(m.p)
        if (list) list.push(m.values)
        else byParticipant.set(m.p, [m.values])
      }
      participantsSeen.add(byParticipant.size)
      // Each participant weighs the same, however many trials were kept (common practice for grand averages).
      const values = meanOf([...byParticipant.values()].map(meanOf))
      waveforms.push({ condition, channel, values, averaged: members.length })
    }
  }
  if (participantsSeen.size > 1) {
    warnings.push(
      'Not every participant has every condition and channel, so the means are over different participants.',
    )
  }
  const counts = waveforms.map((w) => w.averaged)
  const fewest = Math.min(...counts)
  const most = Math.max(...counts)
  if (labels.trial && fewest !== most) warnings.push(`The waveforms are means of ${fewest} to ${most} trials.`)
  return { waveforms }
}

/** The mean of arrays of one length; of a single one the array itself. */
function meanOf(arrays: readonly Float64Array[]): Float64Array {
  if (arrays.length === 1) return arrays[0]
  const mean = new Float64Array(arrays[0].length)
  for (const a of arrays) for (let i = 0; i < mean.length; i++) mean[i] += a[i]
  for (let i = 0; i < mean.length; i++) mean[i] /= arrays.length
  return mean
}
