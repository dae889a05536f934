/** The late-only fit of a claim in steps: the fit with its verdict, the scan over the onset, early components anywhere, and the curve. */
import type { BumpScan } from '../evidence/bump-scan.ts'
import { scanBumps } from '../evidence/bump-scan.ts'
import type { ClaimAnswer, ClaimCurve, ClaimSetting, LateOnlyClaim, Varied } from '../evidence/claims/claim.ts'
import { lateOnlyClaim, lateOnlyCurve, lateOnlyQuestion } from '../evidence/claims/late-only-claim.ts'
import { DEFAULT_SIGMA_UV, SHORTEST_LENGTH_MS } from '../evidence/late-only-model.ts'
import { latestOnset, type OnsetRow, type OnsetScan, scanOnsets } from '../evidence/onset-scan.ts'
import type { RobustVerdict } from '../evidence/robust-verdict.ts'

export interface LateOnlyResult {
  readonly robust: RobustVerdict
  /** What was fitted, µV on the epoch's samples. */
  readonly fitted: Float64Array
  readonly timesMs: Float64Array
  /** A built waveform, taken as it stands. */
  readonly noiseless: boolean
  /** What was assumed of late activity. */
  readonly sigmaUv: number
  readonly lengthMs: number
  /** As far as it has come; null before its first onset. */
  readonly scan: OnsetScan | null
  /** Null before it is there, and where no component fits before the late activity. */
  readonly bumps: BumpScan | null
}

/** What is known after a step. */
export interface LateOnlyStep {
  readonly answer: ClaimAnswer
  /** Absent where nothing can be fitted, since nobody knows what the waveform had passed. */
  readonly lateOnly?: LateOnlyResult
  readonly curve?: ClaimCurve | null
}

const SCAN_ONSETS = 13
/** Steps of the whole: the fit counts three, a scan row one, the bumps some, a point of the curve three. */
const TOTAL = 3 + SCAN_ONSETS + 22 + 15

/**
 * @returns all of it at the end.
 * @throws RangeError as `lateOnlyClaim`.
 */
export function* lateOnlySteps(
  form: LateOnlyClaim,
  setting: ClaimSetting,
  varied: Varied | null,
): Generator<{ result: LateOnlyStep; done: number; total: number }, LateOnlyStep> {
  if (setting.filteredBefore === 'not known') {
    const grounds = { kind: 'filtered before' } as const
    return { answer: { verdict: 'cannot be told', number: null, unit: 'µV', interval: null, grounds, values: [] } }
  }
  const { robust, fitted, ...answer } = lateOnlyClaim(form, setting)
  let lateOnly: LateOnlyResult = {
    ...{ robust, fitted },
    timesMs: setting.timesMs,
    noiseless: setting.taken === 'as it stands',
    sigmaUv: DEFAULT_SIGMA_UV,
    lengthMs: SHORTEST_LENGTH_MS,
    scan: null,
    bumps: null,
  }
  let done = 3
  const step = () => ({ result: { answer, lateOnly }, done, total: Math.max(TOTAL, done) })
  yield step()

  const { y, chain, options } = lateOnlyQuestion(form, setting)
  const rows: OnsetRow[] = []
  for (const { row } of stepsOf(scanOnsets(y, chain, options, scanRange(form, y, setting.timesMs)))) {
    rows.push(row)
    lateOnly = { ...lateOnly, scan: { rows: rows.slice(), ...latestOnset(rows) } }
    done++
    yield step()
  }
  const search = scanBumps(y, chain, options)
  try {
    for (;;) {
      const next = search.next()
      if (next.done) {
        lateOnly = { ...lateOnly, bumps: next.value }
        break
      }
      done++
      yield step()
    }
  } catch (error) {
    // late activity from the epoch's start on leaves no room for anything before it
    if (!(error instanceof RangeError)) throw error
  }
  const curve = lateOnlyCurve(form, setting, varied, answer)
  for (;;) {
    const next = curve.next()
    if (next.done) return { answer, lateOnly, curve: next.value }
    done++
    yield step()
  }
}

function* stepsOf<T>(steps: Generator<T, unknown>): Generator<T> {
  for (let next = steps.next(); !next.done; next = steps.next()) yield next.value
}

/** From the start of the early window to the largest value behind it: between the two lies every onset that could be meant. */
function scanRange(
  { early, t0Ms }: LateOnlyClaim,
  y: Float64Array,
  timesMs: Float64Array,
): { fromMs: number; toMs: number; stepMs: number } {
  const last = timesMs.length - 1
  let largest = last
  for (let i = last; i >= 0 && timesMs[i] > early.toMs; i--) if (Math.abs(y[i]) >= Math.abs(y[largest])) largest = i
  const fromMs = Math.min(Math.max(early.fromMs, timesMs[0]), timesMs[last - 1])
  const toMs = Math.min(timesMs[last], Math.max(timesMs[largest], t0Ms, fromMs + timesMs[1] - timesMs[0]))
  return { fromMs, toMs, stepMs: (toMs - fromMs) / (SCAN_ONSETS - 1) }
}
