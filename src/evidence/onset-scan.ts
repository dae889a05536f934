import { checkValues, stepMs } from '../erp/time-axis.ts'
import type { Chain } from '../filter/chain.ts'
import { lateOnlyFit } from './late-only-fit.ts'
import type { LateOnlyOptions } from './late-only-model.ts'
import type { LateOnlyVerdict } from './late-only-verdict.ts'

/** The late-only fit of one assumed onset. */
export interface OnsetRow {
  readonly t0Ms: number
  readonly beta: number
  readonly interval: readonly [number, number]
  readonly z: number
  readonly verdict: LateOnlyVerdict
}

export interface OnsetScan {
  readonly rows: readonly OnsetRow[]
  /**
   * The latest of the scanned onsets up to which late activity alone is not ruled out; null where already the earliest is, and then
   * `beyond` says so.
   */
  readonly latestMs: number | null
  /** Where the latest onset lies: found between two rows, before them all, or not before the last of them. */
  readonly beyond: 'inside' | 'before the scan' | 'after the scan'
}

export interface ScanProgress {
  readonly done: number
  readonly total: number
}

/** Onsets of a scan where no step is said. */
const DEFAULT_ONSETS = 13

/**
 * The fit for every assumed onset t0 from … to, one model each: what can be held against the onset that the user states.
 *
 * A generator, so that a worker can tell how far it is, stop, and go on from rows that it has (`known`, of the same question).
 *
 * @param range   moments in the epoch; the step is at least one sample, by default a twelfth of the range.
 * @throws RangeError for a range that is none, or as `lateOnlyFit`.
 */
export function* scanOnsets(
  y: Float64Array,
  chain: Chain,
  options: LateOnlyOptions,
  range: { readonly fromMs: number; readonly toMs: number; readonly stepMs?: number },
  known: readonly OnsetRow[] = [],
): Generator<ScanProgress & { readonly row: OnsetRow }, OnsetScan> {
  checkValues(y, options.timesMs)
  const onsets = onsetsOf(options.timesMs, range)
  const rows: OnsetRow[] = []
  for (const t0Ms of onsets) {
    let row = known.find((earlier) => earlier.t0Ms === t0Ms)
    if (!row) {
      const { beta, interval, z, verdict } = lateOnlyFit(y, chain, { ...options, t0Ms })
      row = { t0Ms, beta, interval, z, verdict }
    }
    rows.push(row)
    yield { done: rows.length, total: onsets.length, row }
  }
  return { rows, ...latestOnset(rows) }
}

/** The last onset before the first at which late activity alone is ruled out. */
export function latestOnset(rows: readonly OnsetRow[]): Pick<OnsetScan, 'latestMs' | 'beyond'> {
  const first = rows.findIndex(({ verdict }) => verdict === 'not by late activity alone')
  if (first === 0) return { latestMs: null, beyond: 'before the scan' }
  if (first < 0) return { latestMs: rows[rows.length - 1].t0Ms, beyond: 'after the scan' }
  return { latestMs: rows[first - 1].t0Ms, beyond: 'inside' }
}

function onsetsOf(
  timesMs: Float64Array,
  range: { readonly fromMs: number; readonly toMs: number; readonly stepMs?: number },
): number[] {
  const { fromMs, toMs } = range
  const sample = stepMs(timesMs)
  const end = timesMs[timesMs.length - 1]
  if (!(fromMs >= timesMs[0] && toMs <= end && fromMs < toMs)) {
    throw new RangeError(`the scan must lie in the epoch (${timesMs[0]} to ${end} ms), was ${fromMs} to ${toMs} ms`)
  }
  const wanted = range.stepMs ?? (toMs - fromMs) / (DEFAULT_ONSETS - 1)
  if (!(wanted > 0)) throw new RangeError(`the step of the scan must be positive, was ${wanted} ms`)
  const step = Math.max(1, Math.round(wanted / sample)) * sample
  return Array.from({ length: Math.floor((toMs - fromMs) / step + 1e-6) + 1 }, (_, k) => fromMs + k * step)
}
