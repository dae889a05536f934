import { correctBaseline } from '../../erp/baseline.ts'
import { noiseDensityAt, type NoiseSpec, type NoiseTable } from '../../erp/noise.ts'
import { seededRandom } from '../../erp/seeded-random.ts'
import { appliedOfflineStages, type Extent } from '../../filter/apply-chain.ts'
import type { Chain } from '../../filter/chain.ts'
import type { StageSpec } from '../../filter/stage.ts'
import { stagesResponse } from '../../filter/stage-response.ts'
import { drawFilteredNoise, filteredNoise, noisePath } from '../filtered-noise.ts'
import type { LateOnlyOptions } from '../late-only-model.ts'
import type { LateOnlyVerdict } from '../late-only-verdict.ts'
import { type RobustVerdict, robustVerdict, robustVerdictOnly } from '../robust-verdict.ts'
import { type CurveProgress, located } from './claim-curve.ts'
import type { ClaimAnswer, ClaimCurve, ClaimPoint, ClaimSetting, ClaimVerdict, LateOnlyClaim, Varied } from './claim.ts'
import {
  claimChain,
  claimedWaveform,
  filteredValues,
  type PreparedClaim,
  prepareClaim,
  unfilteredWaveform,
} from './claimed-waveform.ts'
import { variedChain, variedRange } from './varied-chain.ts'

/** The answer with the fit behind it, for the figure of it. */
export interface LateOnlyAnswer extends ClaimAnswer {
  readonly robust: RobustVerdict
  /** The filtered waveform that was fitted, µV on the epoch's samples. */
  readonly fitted: Float64Array
}

/**
 * The deflection before t0 can come from the filter alone: the late-only fit of the filtered waveform by every enabled stage of the chain, in the data or
 * not. It can → holds; not by late activity alone → does not hold; else, and where another size or smoothness of late activity changes
 * the fit's verdict, it cannot be told.
 *
 * What is fitted is the waveform after the stages that are applied here: a recorded one whose stages are all in the data as it is loaded, a built one
 * baseline-corrected; taken as measured, with the noise of one simulated average on it, always the same. A recorded waveform that is filtered here was filtered on its epoch, whatever the setting's extent.
 *
 * An estimated noise that has passed the stages in the data is taken back to before them, as the fit runs it through them, by no more than 40 dB: weaker
 * than that nothing was measured. Two conditions of a difference count as half as many trials.
 *
 * Values: 'early activity' (β, µV; the number, with its 95 % interval), 'late share' (% of the early window's mean that late activity makes), 'noise scale' (% of the
 * stated covariance), 'alpha' (root mean square of the fitted alpha rhythm in single trials before the chain, µV).
 *
 * @throws RangeError as `lateOnlyFit`, and for a condition that the setting does not have.
 */
export function lateOnlyClaim(form: LateOnlyClaim, setting: ClaimSetting): LateOnlyAnswer {
  return lateOnlyOf(prepareClaim(setting), form, setting.chain)
}

function lateOnlyOf(prepared: PreparedClaim, form: LateOnlyClaim, specs: readonly StageSpec[]): LateOnlyAnswer {
  const chain = claimChain(prepared, specs)
  const fitted = fittedWaveform(prepared, chain)
  const robust = robustVerdict(fitted, chain, optionsOf(prepared, form, chain))
  const { fit, verdict, changed } = robust
  return {
    verdict: VERDICT[verdict],
    number: fit.beta,
    unit: 'µV',
    interval: fit.interval,
    grounds: { kind: 'late-only', verdict, changed },
    values: [
      { name: 'early activity', value: fit.beta, unit: 'µV' },
      { name: 'late share', value: 100 * fit.lateShare, unit: '%' },
      { name: 'noise scale', value: 100 * fit.noiseScale, unit: '%' },
      // a Gaussian peak of SD 2 Hz and 1 µV²/Hz holds 2·√(2π) µV²
      { name: 'alpha', value: Math.sqrt(fit.alphaScale * ALPHA_SD_HZ * Math.sqrt(2 * Math.PI)), unit: 'µV' },
    ],
    robust,
    fitted,
  }
}

/** Of the one simulated average that a built waveform is measured in. */
const SEED = 1

function fittedWaveform(prepared: PreparedClaim, chain: Chain): Float64Array {
  const { setting } = prepared
  const { chosen, timesMs, taken, baseline } = setting
  const unfiltered = unfilteredWaveform(prepared, chosen)
  if (unfiltered.source.kind === 'recorded') return filteredValues(prepared, unfiltered, chain)
  const { after } = claimedWaveform(prepared, chosen, chain)
  if (taken === 'as it stands') return after
  const path = noisePath(chain, setting.extent, setting.noisePassed)
  const source = filteredNoise(path, setting.noise, setting.samplingRateHz, timesMs.length)
  const [noise] = drawFilteredNoise(source, seededRandom(SEED, 0), Math.max(1, setting.trials / unfiltered.averages))
  return correctBaseline(
    after.map((value, i) => value + noise[i]),
    timesMs,
    baseline,
  )
}

const VERDICT: Record<LateOnlyVerdict, ClaimVerdict> = {
  'it can': 'holds',
  'not by late activity alone': 'does not hold',
  'cannot be told': 'cannot be told',
}

const ALPHA_SD_HZ = 2

function optionsOf(prepared: PreparedClaim, form: LateOnlyClaim, chain: Chain): LateOnlyOptions {
  const { setting } = prepared
  const { averages, source } = unfilteredWaveform(prepared, setting.chosen)
  const here = source.kind === 'recorded' && appliedOfflineStages(chain).length > 0
  const extent: Extent = here ? 'epochs' : setting.extent
  return {
    timesMs: setting.timesMs,
    t0Ms: form.t0Ms,
    early: form.early,
    noise: setting.noisePassed === 'nothing' ? setting.noise : noiseBefore(chain, setting.noise),
    trials: Math.max(1, setting.trials / averages),
    extent,
    onsetSlackMs: form.slackMs,
  }
}

/** Power below which a stage in the data has left nothing that was measured. */
const LEAST_POWER = 1e-4
/** Frequencies an octave at which a density is tabulated. */
const PER_OCTAVE = 24

/** The noise of single trials before the stages in the data, from what was measured behind them. */
export function noiseBefore(chain: Chain, noise: NoiseSpec): NoiseSpec {
  const past = chain.stages.filter(({ spec }) => spec.inData === true && spec.enabled !== false)
  if (past.length === 0) return noise
  const own = noise.kind === 'table' ? Array.from(noise.hz) : []
  const nyquist = chain.samplingRateHz / 2
  const count = Math.ceil(Math.log2(nyquist / 1e-3) * PER_OCTAVE)
  const all = [...own, ...Array.from({ length: count + 1 }, (_, i) => nyquist * 2 ** ((i - count) / PER_OCTAVE))]
  const hz = Float64Array.from(all.sort((a, b) => a - b).filter((value, i) => i === 0 || value > all[i - 1]))
  const density = noiseDensityAt(noise)
  const { re, im } = stagesResponse(past, hz)
  const table: NoiseTable = {
    kind: 'table',
    hz,
    uv2PerHz: hz.map((value, i) => density(value) / Math.max(LEAST_POWER, re[i] * re[i] + im[i] * im[i])),
  }
  return table
}

/** Most points of a curve; each is one to three fits. */
const MOST_POINTS = 15
const GRID = 9
/** A cutoff is varied to this many times itself, up and down. */
const SPAN = 8

/** The first enabled offline stage with a cutoff, in the data or not; null where there is none. */
export function variedByDefaultOfFit(chain: readonly StageSpec[]): Varied | null {
  const stage = chain.findIndex((spec) => spec.enabled !== false && 'cutoffsHz' in spec)
  return stage < 0 ? null : { stage, what: 'cutoff', cutoff: 0 }
}

/**
 * The estimated early activity and the verdict of the fit over one quantity of the chain: of a recorded waveform, what would follow if its filter had been another
 * than is stated; of a built one, what another filter would have made.
 *
 * At most 15 points, since each is one to three fits: a cutoff or transition width from an eighth to eight times itself, or the orders about the present one, and steps towards
 * each change of the verdict as long as points are left. A flip stands in the middle (of the logarithm) of the two points that it lies between.
 *
 * @param varied   what is varied, or null for the first enabled offline stage's first cutoff.
 * @param answered the claim's answer as the chain stands, where it is there already: those fits are not made again.
 * @returns null where there is nothing to vary.
 * @throws RangeError as `lateOnlyClaim` for what is wrong with the claim as it stands.
 */
export function* lateOnlyCurve(
  form: LateOnlyClaim,
  setting: ClaimSetting,
  varied: Varied | null,
  answered?: Pick<ClaimAnswer, 'number' | 'verdict'>,
): Generator<CurveProgress, ClaimCurve | null> {
  const of = varied ?? variedByDefaultOfFit(setting.chain)
  const range = of && variedRange(setting.chain, of, setting.samplingRateHz, true)
  if (!of || !range) return null
  const prepared = prepareClaim(setting)
  const { present } = range
  const points: ClaimPoint[] = []
  const look = (at: number) => {
    if (points.some((point) => point.at === at)) return
    try {
      const chain = claimChain(prepared, at === present ? setting.chain : variedChain(setting.chain, of, at))
      const y = fittedWaveform(prepared, chain)
      const { fit, verdict } = robustVerdictOnly(y, chain, optionsOf(prepared, form, chain))
      points.push({ at, number: fit.beta, verdict: VERDICT[verdict] })
    } catch (error) {
      if (!(error instanceof RangeError) || at === present) throw error
      points.push({ at, number: null, verdict: null })
    }
    points.sort((a, b) => a.at - b.at)
  }
  if (answered) points.push({ at: present, number: answered.number, verdict: answered.verdict })
  else look(present)
  yield { done: points.length, total: MOST_POINTS }
  for (const at of range.kind === 'orders' ? range.orders : around(range.fromHz, range.toHz, present)) {
    look(at)
    yield { done: points.length, total: MOST_POINTS }
  }
  while (range.kind === 'hz' && points.length < MOST_POINTS) {
    const widest = widestFlip(points)
    if (widest === null) break
    look(Math.sqrt(widest[0].at * widest[1].at))
    yield { done: points.length, total: MOST_POINTS }
  }
  const flips = points.slice(1).flatMap((above, i) => located(points[i], above, range.kind === 'orders'))
  return { varied: of, unit: range.kind === 'hz' ? 'Hz' : null, present, points, flips }
}

function around(fromHz: number, toHz: number, present: number): number[] {
  const from = Math.max(fromHz, present / SPAN)
  const to = Math.min(toHz, present * SPAN)
  return Array.from({ length: GRID }, (_, i) => from * (to / from) ** (i / (GRID - 1)))
}

function widestFlip(points: readonly ClaimPoint[]): readonly [ClaimPoint, ClaimPoint] | null {
  let widest: readonly [ClaimPoint, ClaimPoint] | null = null
  for (let i = 0; i + 1 < points.length; i++) {
    const [below, above] = [points[i], points[i + 1]]
    if (located(below, above, false).length === 0) continue
    if (widest === null || above.at / below.at > widest[1].at / widest[0].at) widest = [below, above]
  }
  return widest !== null && widest[1].at / widest[0].at > 1.001 ? widest : null
}

/** What the fit of a claim is given, for the scans beside it. Throws as `lateOnlyClaim`. */
export function lateOnlyQuestion(
  form: LateOnlyClaim,
  setting: ClaimSetting,
): { y: Float64Array; chain: Chain; options: LateOnlyOptions } {
  const prepared = prepareClaim(setting)
  const chain = claimChain(prepared, setting.chain)
  return { y: fittedWaveform(prepared, chain), chain, options: optionsOf(prepared, form, chain) }
}
