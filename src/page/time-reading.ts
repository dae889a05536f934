import type { Evaluation } from '../state/evaluation.ts'
import { uvText } from './time-axis.ts'

/** What is read at the cursor, for those who do not see the labels. */
export function readingWords(evaluation: Evaluation, cursor: number, takenOut: boolean): string {
  const chosen = evaluation.curves[evaluation.chosen]
  const errors = evaluation.standardErrors
  const within = (error: Float64Array | null | undefined) => (error ? ` (standard error ${uvText(error[cursor])})` : '')
  const words = [
    `before ${uvText(chosen.before[cursor])}${within(errors?.before)}`,
    `after ${uvText(chosen.after[cursor])}${within(errors?.after)}`,
  ]
  const name = evaluation.delayIncluded ? 'before − after, delay included,' : 'taken out'
  if (takenOut) words.push(`${name} ${uvText(chosen.takenOut[cursor])}`)
  for (const [i, { name, before, after }] of evaluation.curves.entries())
    if (i !== evaluation.chosen) words.push(`${name} before ${uvText(before[cursor])}, after ${uvText(after[cursor])}`)
  for (const pin of evaluation.pins)
    if (!('reason' in pin)) words.push(`pinned ${pin.name} ${uvText(pin.after[cursor])}`)
  return words.join(', ')
}
