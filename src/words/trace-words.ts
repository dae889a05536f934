import type { FigureId } from '../erp/figure.ts'
import type { TraceTrust } from '../evidence/trace-back.ts'
import type { MomentRow, MomentTrace } from '../evidence/trace-by-moment.ts'
import type { StageTrace } from '../evidence/trace-by-stage.ts'
import type { NotTraced, Traced } from '../evidence/traced-weights.ts'
import { exact, fixed, signed } from './number.ts'
import { windowWords } from './protocol-line.ts'
import { stageName } from './stage-words.ts'

/** The words of the trace-back desk: its question, the names of its rows, its notes. The sentence that sums it up is in `trace-summary.ts`. */

/** What can be asked for: a row of the readout, or a moment of the time figure. */
export type TracedFigure = FigureId | 'moment'

/** A value or a share with its unit, in the digits of a sentence. */
export function traceValueWords(value: number, unit: 'µV' | 'µV·s'): string {
  return `${fixed(value, traceDecimals(unit))} ${unit}`
}

/** A share with its sign: "+0.04 µV". */
export function shareWords(share: number, unit: 'µV' | 'µV·s'): string {
  return `${signed(share, traceDecimals(unit))} ${unit}`
}

export function traceDecimals(unit: 'µV' | 'µV·s'): number {
  return unit === 'µV' ? 2 : 3
}

/** Moments between samples to a tenth of a millisecond. */
export function momentWords(ms: number): string {
  return `${fixed(ms, Math.abs(ms - Math.round(ms)) < 0.05 ? 0 : 1)} ms`
}

const FIGURE: Record<Exclude<TracedFigure, 'moment'>, string> = {
  score: 'the score',
  'mean-amplitude': 'the mean amplitude',
  'peak-amplitude': 'the peak amplitude',
  'signed-area': 'the signed area',
  'peak-latency': 'the amplitude at the peak latency',
  'area-latency': 'the amplitude at the fractional-area latency',
  'onset-latency': 'the amplitude at the onset latency',
  'false-deflection': 'the strongest false deflection',
}

/** The phrase of the question that can be changed: "the score after", "the change of the score", "the value at 180 ms after". */
export function tracedPhrase(figure: TracedFigure, traced: Pick<Traced, 'of' | 'atMs' | 'score'>): string {
  const { of, atMs, score } = traced
  // the change at its moment is what the deflection is
  if (figure === 'false-deflection' && of === 'change') return FIGURE['false-deflection']
  if (figure === 'false-deflection') return 'the value after, at the strongest false deflection'
  if (figure === 'moment' || (figure === 'score' && score.kind === 'moment'))
    return of === 'after'
      ? `the value at ${momentWords(atMs ?? score.fromMs)} after`
      : `the change at ${momentWords(atMs ?? score.fromMs)}`
  const latency = score.kind === 'peak-latency' || score.kind === 'area-latency' || score.kind === 'onset-latency'
  const name = figure === 'score' && latency ? FIGURE[score.kind as 'peak-latency'] : FIGURE[figure]
  return of === 'after' ? `${name} after` : `the change of ${name}`
}

/** The question as it stands over the desk, around its phrase: "Where do the −1.19 µV of *the score after* come from?" */
export function traceQuestion(
  value: number,
  unit: 'µV' | 'µV·s',
  phrase: string,
): { before: string; phrase: string; after: string } {
  return { before: `Where do the ${traceValueWords(value, unit)} of `, phrase, after: ' come from?' }
}

/** The same where there is no such value. */
export function notTracedWords({ missing, where }: NotTraced): string {
  const what = { 'no peak': 'no peak', 'no area': 'no area', 'no onset': 'no onset' }[missing]
  return `There is nothing to trace: the waveform has ${what} in this window ${where} the chain.`
}

/** What was held fixed to make a sum of the value; null where it is one. */
export function heldFixedWords(traced: Traced): string | null {
  const { heldFixed, of, score } = traced
  if (heldFixed === null) return null
  if (heldFixed.what === 'area') {
    const samples = `the ${score.polarity} samples of ${windowWords(score.fromMs, score.toMs)}`
    return of === 'change'
      ? `Each waveform’s area is that of ${samples}, which are held fixed.`
      : `The area is that of ${samples}, which are held fixed.`
  }
  const at = momentWords(heldFixed.atMs as number)
  if (heldFixed.what === 'latency')
    return `A latency is no sum over the waveform: what is traced is the amplitude at its moment, ${at}, which is held fixed.`
  return of === 'change'
    ? `The moments of the two peaks are held fixed, that of the peak after at ${at}.`
    : `The moment of the peak, ${at}, is held fixed.`
}

/** The note under the shares: which zero was used, and that it makes no difference. */
export function zeroWords(trace: Pick<MomentTrace, 'zero'>): string {
  const exactly = 'The shares are exact: the chain, the baseline and the score are linear.'
  return trace.zero === 'baseline mean'
    ? `${exactly} The waveform is taken against its baseline mean; the weights sum to zero, so the sum does not depend on that choice.`
    : `${exactly} The waveform is taken as it is, against no baseline.`
}

/** The name of a row of the account by moment. */
export function momentRowWords(row: MomentRow, traced: Pick<Traced, 'atMs'>): string {
  switch (row.kind) {
    case 'before':
      return `before ${momentWords(row.toMs)}`
    case 'after':
      return `after ${momentWords(row.fromMs)}`
    case 'invented':
      return 'invented by the padding'
    case 'neighbours':
      return 'neighbouring events'
    case 'score': {
      const where = traced.atMs === null ? 'the score window' : `around ${momentWords(traced.atMs)}`
      if (traced.atMs !== null) return `${spanWords(row.fromMs, row.toMs)}, ${where}`
      return `${spanWords(row.fromMs, row.toMs)}, ${row.whole ? where : `in ${where}`}`
    }
    case 'baseline':
      return `${spanWords(row.fromMs, row.toMs)}, ${row.whole ? 'the baseline' : 'in the baseline'}`
    default:
      return spanWords(row.fromMs, row.toMs)
  }
}

/** "80 to 140 ms", limits to a tenth of a millisecond. */
export function spanWords(fromMs: number, toMs: number): string {
  return `${momentWords(fromMs).replace(' ms', '')} to ${momentWords(toMs)}`
}

/** How much of the value's weight lies outside the data, and whether the value can be trusted. */
export function trustWords(trust: TraceTrust): string {
  const percent = (share: number) => `${share > 0 && share < 0.0995 ? fixed(share * 100, 1) : fixed(share * 100, 0)} %`
  const { unseenShare, threshold, exceeded } = trust
  if (unseenShare === 0) return 'None of its weight falls on samples outside the data.'
  const share = unseenShare < 0.0005 ? 'less than 0.1 %' : percent(unseenShare)
  if (exceeded)
    return `The value cannot be trusted: ${share} of its weight falls on samples outside the data, more than the ${exact(Number((threshold * 100).toPrecision(6)))} % that are allowed.`
  return `${share.charAt(0).toUpperCase()}${share.slice(1)} of its weight falls on samples outside the data.`
}

/** Which stage is to blame: the one that moves the value most. */
export function stageSummary(trace: StageTrace): string {
  const { rows, before, value, unit } = trace
  const said = (some: number) => traceValueWords(some, unit)
  if (rows.length === 0) return 'No stage is applied here.'
  const most = rows.reduce((a, b) => (Math.abs(b.step) > Math.abs(a.step) ? b : a))
  const least = 0.5 * 10 ** -traceDecimals(unit)
  if (Math.abs(most.step) < least)
    return `No stage moves the value by ${exact(least)} ${unit} or more: ${said(before)} before the chain, ${said(value)} after.`
  const name = stageName(most.spec)
  if (rows.length === 1) return `The ${name} moves the value from ${said(before)} to ${said(value)}.`
  return `The ${name} moves the value most, by ${shareWords(most.step, unit)}; alone it makes ${said(most.alone)} of ${said(before)}.`
}
