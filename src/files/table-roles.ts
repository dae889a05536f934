/**
 * What each column of a table is for: time, values, or a label (condition, channel, participant, trial).
 */

import { isElectrodeName } from './electrode-names.ts'
import { emptyNumber, scanNumber } from './printed-number.ts'
import { type Guess, refuse, type TableOptions, type TableRefusal } from './table.ts'
import { type HeaderName, headerName, unitOf } from './table-units.ts'

export type LabelRole = 'condition' | 'channel' | 'participant' | 'trial'
export const labelRoles: readonly LabelRole[] = ['participant', 'trial', 'condition', 'channel']

export interface TableRoles {
  ok: true
  columns: HeaderName[]
  layout: 'wide' | 'long'
  /** Index of the column with times, or with sample numbers when `timeIsSampleNumber`. */
  time: number
  timeIsSampleNumber: boolean
  values: number[]
  /** Columns that may have a role; the one that tells most rows apart is taken once all rows are read. */
  labels: Record<LabelRole, number[]>
  columnsAre: 'channels' | 'conditions'
  guesses: Guess[]
  /** Columns that are not used, for a warning. */
  unused: number[]
}

const asTime =
  /^(time|times|t|latency|latencies|zeit|temps|tiempo|tempo|(peri ?stimulus|epoch|relative|stimulus|post ?stimulus|peri ?event) times?|time (from|since|after|rel|relative|re|to|in|axis).*)$/
const asSample =
  /^(samples?|sample ?(num|nr|no|number|index|idx|id|point)|frames?|points?|time ?points?|time ?(index|idx)|data ?points?)$/
const asIndex = /^(|index|idx|rows?|row ?(names?|number|nr|no|id)|obs|unnamed: ?\d+)$/
const asValue =
  /^(values?|amplitudes?|amps?|voltages?|potentials?|signal|eeg|erp|means?|average|avg|(sensor|eeg|erp|mean|average|signal|channel|electrode) ?(values?|amplitudes?|voltages?|potentials?))$/
const asLabel: Record<LabelRole, RegExp> = {
  condition:
    /^(conditions?|cond|(matching|stimulus|stim|experimental|trial|event) ?(condition|type|class|category|name|code|label)|stimulus|stim|event|task|class|category|type|marker)$/,
  channel:
    /^(channels?|chan|chans|ch|electrodes?|elec|sensors?|sites?|leads?|(channel|chan|ch|electrode|sensor) ?(names?|labels?|positions?|location|id|nr|no|num|number|index))$/,
  participant:
    /^(participants?|subjects?|subj?|ppt?s?|pp|vp|persons?|id|name|identifier|(participant|subject|subj?|ppt) ?(id|identifier|nr|no|num|number|code|name|index))$/,
  trial:
    /^(trials?|epochs?|sweeps?|repetitions?|rep|(trial|epoch|sweep|repetition) ?(nr|no|num|number|id|index|idx|count))$/,
}

function plain(name: string): string {
  return name
    .toLowerCase()
    .replace(/[\s_.-]+/g, ' ')
    .trim()
}

/** Sample values of one column, NaN where a field is no number. */
function sampleNumbers(sample: readonly string[][], column: number): number[] {
  const out = emptyNumber()
  return sample.map((row) => (scanNumber(row[column] ?? '', out) === 'number' ? out.value : Number.NaN))
}

function isIncreasing(numbers: readonly number[]): boolean {
  return numbers.length >= 3 && numbers.every((x, i) => i === 0 || x > numbers[i - 1])
}

/**
 * @param header one field per column
 * @param sample the first data rows
 * @param headerLine for messages
 * @param units a unit for each column from a line under the header, or nothing
 */
export function recogniseRoles(
  header: readonly string[],
  sample: readonly string[][],
  headerLine: number,
  units: readonly string[],
  options: TableOptions,
): TableRoles | TableRefusal {
  const columns = header.map((field, i) => {
    const column = headerName(field, i)
    const below = units[i] ? unitOf(units[i]) : undefined
    return below && column.time === undefined && column.amplitude === undefined ? { ...column, ...below } : column
  })
  // Delimiters at the end of every line make columns without name or content.
  while (columns.length > 0) {
    const last = columns.length - 1
    if (header[last].trim() !== '' || sample.some((row) => (row[last] ?? '').trim() !== '')) break
    columns.pop()
  }
  const at = { line: headerLine }
  const names = columns.map((c) => plain(c.name))
  const guesses: Guess[] = []

  const seen = new Map<string, number>()
  for (let i = 0; i < columns.length; i++) {
    const name = columns[i].raw
    const twin = seen.get(name)
    if (twin !== undefined) {
      return refuse(
        `columns ${twin + 1} and ${i + 1} have the same name "${name}"`,
        'Give each column a name of its own.',
        {
          ...at,
          column: name,
        },
      )
    }
    seen.set(name, i)
  }
  const find = (asked: string): number => {
    const exact = columns.findIndex((c) => c.raw === asked.trim())
    return exact >= 0 ? exact : columns.findIndex((c) => c.name !== '' && c.name === asked.trim())
  }
  const asked = new Map<string, number>()
  for (const [option, name] of Object.entries({
    timeColumn: options.timeColumn,
    valueColumn: options.valueColumn,
    conditionColumn: options.conditionColumn,
    channelColumn: options.channelColumn,
    participantColumn: options.participantColumn,
    trialColumn: options.trialColumn,
  })) {
    if (name === undefined || name === null) continue
    const index = find(String(name))
    if (index < 0) {
      return refuse(
        `there is no column "${name}"`,
        `The columns are: ${columns
          .slice(0, 80)
          .map((c) => c.raw)
          .join(', ')}.`,
        { ...at, column: String(name) },
      )
    }
    for (const [other, taken] of asked) {
      if (taken === index) {
        return refuse(
          `the column "${name}" cannot be ${option} and ${other} at once`,
          'Choose another column for one of them.',
          {
            ...at,
            column: columns[index].raw,
          },
        )
      }
    }
    asked.set(option, index)
  }
  const free = new Set(columns.keys())
  for (const index of asked.values()) free.delete(index)
  const unused: number[] = []
  for (const name of options.ignoreColumns ?? []) {
    const index = find(String(name))
    if (index >= 0) free.delete(index)
  }
  /** Free columns, in order, whose plain name matches. */
  const matching = (pattern: RegExp): number[] =>
    [...free].filter((i) => columns[i].name !== '' && pattern.test(names[i]))

  // Time.
  let time = asked.get('timeColumn') ?? -1
  let timeIsSampleNumber = false
  if (time >= 0) {
    guesses.push({ what: 'timeColumn', value: columns[time].raw, from: 'stated', why: 'as you said' })
  } else {
    const named = [...free].filter((i) => columns[i].amplitude === undefined && asTime.test(names[i]))
    const unitAlone = [...free].filter((i) => columns[i].name === '' && columns[i].time !== undefined)
    const candidates = [...named, ...unitAlone.filter((i) => named.length === 0 && (i === 0 || !columns[i].weak))]
    if (candidates.length > 0) {
      // Of two, the one that states its unit.
      time = candidates.find((i) => columns[i].time !== undefined) ?? candidates[0]
      for (const i of candidates) {
        if (i === time || !free.has(i) || !isIncreasing(sampleNumbers(sample, i))) continue
        free.delete(i)
        unused.push(i)
      }
      guesses.push({
        what: 'timeColumn',
        value: columns[time].raw,
        from: 'header',
        why: `its name is "${columns[time].raw}"`,
      })
    }
  }
  free.delete(time)
  const samples = matching(asSample)
  for (const i of samples) free.delete(i)
  if (time < 0 && samples.length > 0) {
    time = samples[0]
    timeIsSampleNumber = true
    guesses.push({ what: 'timeColumn', value: columns[time].raw, from: 'header', why: 'it numbers the samples' })
  }
  for (const i of samples) if (i !== time) unused.push(i)

  // Labels.
  const labels: Record<LabelRole, number[]> = { condition: [], channel: [], participant: [], trial: [] }
  for (const role of labelRoles) {
    const option = `${role}Column` as const
    const stated = options[option]
    if (stated === null) continue
    const index = asked.get(option)
    if (index !== undefined) {
      labels[role] = [index]
      continue
    }
    labels[role] = matching(asLabel[role])
    for (const i of labels[role]) free.delete(i)
    // A channel's or condition's number beside its name says nothing more.
    if (labels[role].length > 1 && (role === 'channel' || role === 'condition')) {
      const text = labels[role].filter((i) => sampleNumbers(sample, i).some((x) => Number.isNaN(x)))
      if (text.length > 0) {
        unused.push(...labels[role].filter((i) => !text.includes(i)))
        labels[role] = text
      }
    }
  }

  // A first column without a name numbers the rows, unless it holds the times.
  if (free.has(0) && asIndex.test(names[0]) && columns[0].time === undefined && columns[0].amplitude === undefined) {
    const numbers = sampleNumbers(sample, 0)
    const counts =
      numbers.length > 1 && numbers.every((x, i) => Number.isInteger(x) && (i === 0 || x - numbers[i - 1] === 1))
    if (time >= 0 || counts) {
      free.delete(0)
      if (time < 0) {
        time = 0
        timeIsSampleNumber = true
        guesses.push({ what: 'timeColumn', value: columns[0].raw, from: 'inferred', why: 'it counts the rows' })
      } else unused.push(0)
    }
  }
  if (time < 0) {
    const first = [...free].find((i) => !isElectrodeName(columns[i].name) && columns[i].amplitude === undefined)
    if (first !== undefined && first === Math.min(...free) && isIncreasing(sampleNumbers(sample, first))) {
      time = first
      free.delete(first)
      guesses.push({
        what: 'timeColumn',
        value: columns[first].raw,
        from: 'inferred',
        why: 'no column is named time; this one is the first and goes up from line to line',
      })
    }
  }
  if (time < 0) {
    const sideways = header.filter(
      (field) => Number.isFinite(Number(field.replace(',', '.'))) && field.trim() !== '',
    ).length
    return refuse(
      'no column holds times',
      sideways > 0.5 * header.length && header.length > 4
        ? 'The table seems to lie on its side, with times along the first line: transpose it.'
        : 'Name the column with the times "time_ms" or "time (s)", or say which column it is.',
      at,
    )
  }

  // Values.
  const rest = [...free].sort((a, b) => a - b)
  const isWaveform = (i: number): boolean => sampleNumbers(sample, i).some((x) => Number.isFinite(x))
  const recognised = rest.filter(
    (i) => (columns[i].name === '' && columns[i].amplitude !== undefined) || asValue.test(names[i]),
  )
  const others = rest.filter((i) => !recognised.includes(i))
  const electrodes = others.filter((i) => isElectrodeName(columns[i].name))
  const keyed = labels.condition.length + labels.channel.length + labels.participant.length + labels.trial.length > 0
  let layout: 'wide' | 'long' = 'wide'
  let why = 'each column of values is a waveform'
  let from: Guess['from'] = 'inferred'
  const valueColumn = asked.get('valueColumn')
  if (options.layout === 'wide' || options.layout === 'long') {
    layout = options.layout
    from = 'stated'
    why = 'as you said'
  } else if (valueColumn !== undefined) {
    layout = 'long'
    why = 'one column holds the values, as you said'
  } else if (keyed && recognised.length > 0 && electrodes.length === 0) {
    layout = 'long'
    from = 'header'
    why = `the values are in "${columns[recognised[0]].raw}" and other columns say what they belong to`
  } else if (labels.condition.length > 0 && labels.channel.length > 0) {
    layout = 'long'
    from = 'header'
    why = 'condition and channel have columns of their own'
  } else if (keyed && others.filter(isWaveform).length === 1 && labels.channel.length > 0) {
    layout = 'long'
    why = 'one column holds values and others say what they belong to'
  }
  guesses.push({ what: 'layout', value: layout, from, why })
  let values: number[]
  if (layout === 'long') {
    const possible = others.filter(isWaveform)
    if (valueColumn === undefined && recognised.length === 0 && possible.length > 1) {
      return refuse(
        `several columns may hold the values: ${possible
          .map((i) => columns[i].raw)
          .slice(0, 8)
          .join(', ')}`,
        'Say which column holds the values.',
        at,
      )
    }
    const chosen = valueColumn ?? recognised[0] ?? possible[0]
    if (chosen === undefined) {
      return refuse(
        'no column holds values',
        'Name the column with the amplitudes "value (µV)", or say which column it is.',
        at,
      )
    }
    values = [chosen]
    const bySight = recognised.includes(chosen)
    guesses.push({
      what: 'valueColumn',
      value: columns[chosen].raw,
      from: valueColumn !== undefined ? 'stated' : bySight ? 'header' : 'inferred',
      why:
        valueColumn !== undefined
          ? 'as you said'
          : bySight
            ? `its name is "${columns[chosen].raw}"`
            : 'the others have another use',
    })
    unused.push(...rest.filter((i) => i !== chosen))
  } else {
    values = valueColumn === undefined ? rest : [...rest, valueColumn].sort((a, b) => a - b)
  }
  if (values.length === 0) {
    return refuse(
      'the table has no column with values besides the times',
      'Add a column for each channel or condition.',
      at,
    )
  }
  // A single 'V' or 's' at the end of a name is a unit only if all columns have it.
  if (!values.every((i) => columns[i].weak && columns[i].amplitude === 'V')) {
    for (const i of values) if (columns[i].weak) columns[i] = plainName(columns[i])
  }
  for (const i of values) if (columns[i].time !== undefined) columns[i] = plainName(columns[i])
  for (const i of values) {
    if (columns[i].name !== '' || columns[i].amplitude !== undefined) continue
    return refuse(`column ${i + 1} has values but no name`, 'Give the column a name, or remove it.', {
      ...at,
      column: columns[i].raw,
    })
  }
  const called = new Map<string, number>()
  for (const i of values) {
    const twin = called.get(columns[i].name)
    if (twin !== undefined) {
      return refuse(
        `columns ${twin + 1} ("${columns[twin].raw}") and ${i + 1} ("${columns[i].raw}") differ in nothing but the unit`,
        'Give each column a name of its own, or leave one out.',
        { ...at, column: columns[i].raw },
      )
    }
    called.set(columns[i].name, i)
  }

  // Channels or conditions.
  let columnsAre: 'channels' | 'conditions' = 'channels'
  if (layout === 'wide') {
    const known = values.filter((i) => isElectrodeName(columns[i].name)).length
    let basis: Guess['from'] = 'inferred'
    let reason = `${known} of ${values.length} columns are named like electrodes`
    if (options.columnsAre === 'channels' || options.columnsAre === 'conditions') {
      columnsAre = options.columnsAre
      basis = 'stated'
      reason = 'as you said'
    } else if (labels.channel.length > 0) {
      columnsAre = 'conditions'
      basis = 'header'
      reason = 'the channel has a column of its own'
    } else if (labels.condition.length > 0) {
      basis = 'header'
      reason = 'the condition has a column of its own'
    } else if (2 * known < values.length && values.length <= 16) {
      columnsAre = 'conditions'
    } else if (2 * known < values.length) {
      reason = `there are ${values.length} columns, too many for conditions`
    }
    guesses.push({ what: 'columnsAre', value: columnsAre, from: basis, why: reason })
    const clash = columnsAre === 'channels' ? 'channel' : 'condition'
    if (labels[clash].length > 0) {
      return refuse(
        `the columns cannot be ${columnsAre}, since the column "${columns[labels[clash][0]].raw}" names the ${clash} of each line`,
        `Say that the columns are ${columnsAre === 'channels' ? 'conditions' : 'channels'}, or that this column does not name the ${clash}.`,
        { ...at, column: columns[labels[clash][0]].raw },
      )
    }
  }
  return { ok: true, columns, layout, time, timeIsSampleNumber, values, labels, columnsAre, guesses, unused }
}

function plainName(column: HeaderName): HeaderName {
  return { raw: column.raw, name: column.raw, weak: false, damaged: false }
}
