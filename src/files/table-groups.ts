/**
 * Sorts the rows of a table into runs: one run for each participant, trial, condition and channel that the rows name. Every
 * run must have the same times.
 */

import { refuse, type TableRefusal } from './table.ts'
import type { LabelColumn, NumberColumn } from './table-columns.ts'
import { type LabelRole, labelRoles } from './table-roles.ts'

export interface TableRuns {
  ok: true
  /** Number of runs; each has `length` samples. */
  count: number
  length: number
  /** The label's code for each run. */
  codes: Partial<Record<LabelRole, Int32Array>>
  /** Position of each row among the sorted rows: run · length + sample. */
  position: Int32Array
  /** Times of the first run as printed in the file, ascending. */
  times: Float64Array
  /** Lines of the first run's rows. */
  lines: Int32Array
}

export function sortIntoRuns(
  time: NumberColumn,
  lines: Int32Array,
  labels: Partial<Record<LabelRole, LabelColumn>>,
  timeName: string,
): TableRuns | TableRefusal {
  const rows = lines.length
  const keys = labelRoles.filter((role) => labels[role] !== undefined)
  const codes = keys.map((role) => (labels[role] as LabelColumn).codes)
  const sizes = keys.map((role) => (labels[role] as LabelColumn).labels.length)

  if (sizes.reduce((product, size) => product * size, 1) > Number.MAX_SAFE_INTEGER) {
    return refuse(
      `the columns for ${keys.join(', ')} have too many different labels`,
      'Say which columns name the condition, the channel, the participant and the trial.',
    )
  }
  const run = new Int32Array(rows)
  const known = new Map<number, number>()
  const firstRow: number[] = []
  let lastKey = -1
  let lastRun = -1
  for (let r = 0; r < rows; r++) {
    let key = 0
    for (let k = 0; k < codes.length; k++) key = key * sizes[k] + codes[k][r]
    if (key !== lastKey) {
      lastKey = key
      const found = known.get(key)
      if (found === undefined) {
        lastRun = known.size
        known.set(key, lastRun)
        firstRow.push(r)
      } else lastRun = found
    }
    run[r] = lastRun
  }
  const count = firstRow.length
  const lengths = new Int32Array(count)
  for (let r = 0; r < rows; r++) lengths[run[r]]++

  const nameOf = (g: number): string =>
    keys
      .filter((_, k) => sizes[k] > 1 || keys.length === 1)
      .map(
        (role) => `${role} ${(labels[role] as LabelColumn).labels[(labels[role] as LabelColumn).codes[firstRow[g]]]}`,
      )
      .reverse()
      .join(', ')
  const ofRun = (g: number): string => (count > 1 ? ` for ${nameOf(g)}` : '')
  const labelHint =
    'If the lines belong to several conditions, channels, participants or trials, name the columns that tell them apart.'

  // Within a run times go up; what breaks that is told before lengths are compared, since it is the cause.
  const previous = new Int32Array(count).fill(-1)
  for (let r = 0; r < rows; r++) {
    const before = previous[run[r]]
    previous[run[r]] = r
    if (before < 0) continue
    const step = time.values[r] - time.values[before]
    if (step > 0) continue
    const where = { line: lines[r], column: timeName }
    const printed = String(time.values[r])
    let twin = -1
    for (let q = 0; q < r && twin < 0; q++) if (run[q] === run[r] && time.values[q] === time.values[r]) twin = q
    if (twin >= 0) {
      return refuse(
        `the time ${printed} occurs twice${ofRun(run[r])} (lines ${lines[twin]} and ${lines[r]})`,
        keys.length > 0 ? labelHint : `Remove one of the lines, or print the times with more decimals. ${labelHint}`,
        where,
      )
    }
    return refuse(
      `the time goes back from ${time.values[before]} to ${printed}${ofRun(run[r])} (lines ${lines[before]} and ${lines[r]})`,
      `Sort the lines by time. ${labelHint}`,
      where,
    )
  }

  let reference = 0
  for (let g = 1; g < count; g++) if (lengths[g] > lengths[reference]) reference = g
  const length = lengths[reference]
  const times = new Float64Array(length)
  const runLines = new Int32Array(length)
  const filled = new Int32Array(count)
  for (let r = 0; r < rows; r++) {
    if (run[r] !== reference) continue
    runLines[filled[reference]] = lines[r]
    times[filled[reference]++] = time.values[r]
  }
  filled[reference] = 0
  const usual = length > 1 ? (times[length - 1] - times[0]) / (length - 1) : 1
  const position = new Int32Array(rows)
  for (let r = 0; r < rows; r++) {
    const g = run[r]
    const i = filled[g]++
    position[r] = g * length + i
    const off = time.values[r] - times[i]
    if (Math.abs(off) > 1e-3 * usual) {
      return refuse(
        off > 0
          ? `the time ${times[i]} is missing${ofRun(g)}; ${nameOf(reference)} has it (line ${runLines[i]})`
          : `the time ${time.values[r]} occurs only${ofRun(g)}; ${nameOf(reference)} goes on with ${times[i]}`,
        'Give every condition, channel and trial the same times, or leave the incomplete one out.',
        { line: lines[r], column: timeName },
      )
    }
  }
  for (let g = 0; g < count; g++) {
    if (lengths[g] === length) continue
    return refuse(
      `the table ends too early${ofRun(g)}: ${lengths[g]} times, where ${nameOf(reference)} has ${length}; ${times[lengths[g]]} is missing`,
      'Give every condition, channel and trial the same times, or leave the incomplete one out.',
      { line: lines[previous[g]], column: timeName },
    )
  }
  const byRole: Partial<Record<LabelRole, Int32Array>> = {}
  keys.forEach((role, k) => {
    byRole[role] = Int32Array.from(firstRow, (r) => codes[k][r])
  })
  return { ok: true, count, length, codes: byRole, position, times, lines: runLines }
}
