import { correctBaseline } from '../../erp/baseline.ts'
import { seededRandom } from '../../erp/seeded-random.ts'
import { drawNoise, noiseSource } from '../../erp/simulate-noise.ts'
import { appliedAmplifierStages, appliedOfflineStages, applyEpochs } from '../../filter/apply-chain.ts'
import { type Chain, appliedStages } from '../../filter/chain.ts'
import { adjointEpochs } from '../../filter/epoch-adjoint.ts'
import { epochPaddingSamples } from '../../filter/epoch-rules.ts'
import { reach } from '../../filter/reach.ts'
import { runContinuous } from '../../filter/stand-alone.ts'
import type { Stage } from '../../filter/stage.ts'
import { stagesResponse } from '../../filter/stage-response.ts'
import { spectrumAfter } from '../filtered-noise.ts'
import { furtherData } from '../further-data.ts'
import { type NoiseProbe, type NoiseTerm, scoreCovariance } from '../score-covariance.ts'
import { unseenShare } from '../unseen-share.ts'
import type { PartNoise, Unseen } from './claim-parts.ts'
import { type ClaimedWaveform, once, type PreparedClaim, type UnfilteredWaveform } from './claimed-waveform.ts'

/** Whether numbers carry the noise of the trials: those of a recorded average always do. */
export function isMeasured({ setting }: PreparedClaim, { source }: UnfilteredWaveform): boolean {
  return setting.taken === 'as measured' || source.kind === 'recorded'
}

/** Enabled stages in the data that the noise has yet to pass: a model's is that of single trials before anything. */
function pastStages({ setting }: PreparedClaim, chain: Chain): Stage[] {
  if (setting.noisePassed !== 'nothing') return []
  return chain.stages.filter(({ spec }) => spec.inData === true && spec.enabled !== false)
}

/** The noise of Σ w·y, y the filtered epoch. */
export function termAfter(
  prepared: PreparedClaim,
  { chain, extent }: ClaimedWaveform,
  weights: Float64Array,
  factor = 1,
): NoiseTerm {
  const past = pastStages(prepared, chain)
  if (extent === 'continuous') return { weights, stages: [...past, ...appliedStages(chain)], factor }
  return {
    weights: adjointEpochs(appliedOfflineStages(chain), weights),
    stages: [...past, ...appliedAmplifierStages(chain)],
    factor,
  }
}

/** The noise of Σ w·x, x the unfiltered epoch. */
export function termBefore(
  prepared: PreparedClaim,
  { chain }: ClaimedWaveform,
  weights: Float64Array,
  factor = 1,
): NoiseTerm {
  return { weights, stages: pastStages(prepared, chain), factor }
}

/** Covariances of linear numbers over the setting's trials; of a difference both conditions' are added. Exact, as the noise of the readout. */
export function covarianceOf(
  prepared: PreparedClaim,
  { averages, extent }: UnfilteredWaveform,
  probes: readonly NoiseProbe[],
): number[][] {
  const { noise, samplingRateHz, trials } = prepared.setting
  checkTrials(trials)
  // on epochs the stages that the noise has passed stay the same, while the weights change with every chain
  const way = extent === 'epochs' ? 'by lags' : 'by frequencies'
  return scoreCovariance(probes, noise, samplingRateHz, way).map((row) =>
    row.map((value) => (averages * value) / trials),
  )
}

/** The noise of one linear number; null where the waveform is taken as it stands. */
export function linearNoise(
  prepared: PreparedClaim,
  claimed: ClaimedWaveform,
  probe: () => NoiseProbe,
): PartNoise | null {
  if (!isMeasured(prepared, claimed)) return null
  const [[variance]] = covarianceOf(prepared, claimed, [probe()])
  return { sd: Math.sqrt(Math.max(0, variance)), trials: prepared.setting.trials }
}

/** The unseen share of a value of the filtered waveform by its weights; null where the waveform is known on the whole axis. */
export function unseenOf({ chain, extent }: ClaimedWaveform, weights: Float64Array): Unseen | null {
  if (extent !== 'epochs') return null
  return {
    share: unseenShare(chain, weights, 0, weights.length),
    furtherMs: (threshold) => {
      const further = furtherData(chain, weights, threshold)
      const ms = 1000 / chain.samplingRateHz
      return further && { back: further.before * ms, on: further.after * ms }
    },
  }
}

const SEED = 1
/** The stretch of recording that is drawn around an epoch reaches at most this many epochs to either side … */
const EPOCHS_AROUND = 4
/** … and less where all draws together would hold more values than this: 32 MB. */
const MOST_VALUES = 2 ** 22
/** Draws without such a number, in a hundred, from which its interval says nothing. */
const MISSING_SHARE = 0.05

/**
 * The noise of a number that is no weighted sum (a peak, an area, a latency, their change), by drawing: the same noise of an average goes
 * on the waveform before and on the waveform after the chain, and the number is taken of the two.
 *
 * Noise is drawn on a stretch of recording: the epoch alone where the chain sees no more of it, else up to four epochs more to either side, as the
 * kernel reaches. The stages run on the stretch by the epoch rules at its ends, as on a recording's, and the epoch is cut from it. The same draws
 * serve every chain.
 *
 * @param number of the two waveforms, baseline-corrected; null where they have none.
 * @returns null where the waveform is taken as it stands; 'missing' where more than one draw in twenty has no such number.
 * @throws RangeError as `noiseSource`.
 */
export function simulatedNoise(
  prepared: PreparedClaim,
  claimed: ClaimedWaveform,
  number: (before: Float64Array, after: Float64Array) => number | null,
): PartNoise | null | 'missing' {
  if (!isMeasured(prepared, claimed)) return null
  const { timesMs, baseline, trials } = prepared.setting
  const { before, averages } = claimed
  const n = timesMs.length
  const { margin, stretches } = drawnStretches(prepared, claimed)
  const size = Math.sqrt(averages)
  const noisyBefore = new Float64Array(n)
  const noisyAfter = new Float64Array(n)
  let found = 0
  let mean = 0
  let squares = 0
  const after = filteredOnEpoch(prepared, claimed, stretches, margin)
  for (const [draw, stretch] of stretches.entries()) {
    const filtered = after[draw]
    for (let i = 0; i < n; i++) {
      noisyBefore[i] = before[i] + size * stretch[margin + i]
      noisyAfter[i] = claimed.after[i] + size * filtered[i]
    }
    correctBaseline(noisyBefore, timesMs, baseline, noisyBefore)
    correctBaseline(noisyAfter, timesMs, baseline, noisyAfter)
    const value = number(noisyBefore, noisyAfter)
    if (value === null) continue
    found++
    const step = value - mean
    mean += step / found
    squares += step * (value - mean)
  }
  if (found < 2 || stretches.length - found > MISSING_SHARE * stretches.length) return 'missing'
  return { sd: Math.sqrt(squares / (found - 1)), trials }
}

/** Averages of noise before the applied stages, with `margin` samples on either side of the epoch. */
function drawnStretches(prepared: PreparedClaim, { chain, extent }: ClaimedWaveform) {
  const { noise, samplingRateHz, timesMs, trials } = prepared.setting
  checkTrials(trials)
  const n = timesMs.length
  const seen = extent === 'continuous' ? appliedStages(chain) : appliedAmplifierStages(chain)
  const margin = marginOf(seen, n, prepared.draws)
  const past = pastStages(prepared, chain)
  const key = `noise ${margin} ${JSON.stringify(past.map(({ spec }) => spec))}`
  const stretches = once(prepared, key, () => {
    const samples = n + 2 * margin
    const source = noiseSource(spectrumAfter(past, noise, samplingRateHz), samplingRateHz, samples, 2e-3)
    const random = seededRandom(SEED)
    const drawn: Float64Array[] = []
    while (drawn.length < prepared.draws) drawn.push(...drawNoise(source, random, trials))
    return drawn
  })
  return { margin, stretches }
}

function marginOf(stages: readonly Stage[], samples: number, draws: number): number {
  if (stages.length === 0) return 0
  const { beforeSamples, afterSamples } = reach(stages)
  const room = (MOST_VALUES / draws - samples) / 2
  const most = Math.min(EPOCHS_AROUND * samples, Math.max(samples / 4, room))
  const wanted = Math.min(most, Math.max(samples, beforeSamples, afterSamples))
  // few different lengths, so that a search over cutoffs draws seldom; what a stage pads with there must be, whatever the room
  const steps = (least: number) => Math.ceil(samples * 2 ** Math.ceil(Math.log2(least / samples)))
  const padding = Math.max(...stages.map(epochPaddingSamples))
  return padding > wanted ? steps(padding) : Math.min(steps(wanted), Math.ceil(most))
}

interface Begun {
  readonly stretches: readonly Float64Array[]
  readonly stages: readonly Stage[]
  readonly values: readonly Float64Array[]
}

/** Chains that a search goes back and forth between: a filter and its twin. */
const KEPT = 3

/**
 * Stretches of noise after the chain, on the epoch.
 *
 * On a recording the stages may change places but for what its ends see: amplifiers and kernels run first, and what they made is kept, because most searches vary a
 * recursive stage.
 */
function filteredOnEpoch(
  prepared: PreparedClaim,
  { chain, extent }: ClaimedWaveform,
  stretches: readonly Float64Array[],
  margin: number,
): Float64Array[] {
  const n = prepared.setting.timesMs.length
  const amplifiers = appliedAmplifierStages(chain)
  const offline = appliedOfflineStages(chain)
  const finite = extent === 'continuous' ? offline.filter(({ taps }) => taps !== null) : []
  const rest = extent === 'continuous' ? offline.filter(({ taps }) => taps === null) : offline
  const first = [...amplifiers, ...finite]
  const kept = once(prepared, 'noise after the first stages', (): Begun[] => [])
  let begun = kept.find(
    (entry) =>
      entry.stretches === stretches &&
      entry.stages.length === first.length &&
      first.every((s, i) => s === entry.stages[i]),
  )
  if (!begun) {
    const values = stretches.map((stretch) => {
      const recorded = amplifiers.length > 0 ? settled(amplifiers, stretch) : stretch
      return finite.length > 0 ? applyEpochs(finite, recorded) : recorded
    })
    begun = { stretches, stages: first, values }
    kept.unshift(begun)
    if (kept.length > KEPT) kept.pop()
  }
  return begun.values.map((values) => {
    if (extent === 'continuous') return applyEpochs(rest, values).subarray(margin, margin + n)
    return applyEpochs(rest, values.subarray(margin, margin + n))
  })
}

/** An amplifier has been on for long when a stretch begins: it starts in the steady state times the first sample. */
function settled(amplifiers: readonly Stage[], x: Float64Array): Float64Array {
  const first = x[0]
  const y = runContinuous(
    amplifiers,
    x.map((value) => value - first),
    0,
    x.length,
  )
  const constant = first * stagesResponse(amplifiers, Float64Array.of(0)).re[0]
  return constant === 0 ? y : y.map((value) => value + constant)
}

function checkTrials(trials: number): void {
  if (!(trials >= 1) || !Number.isFinite(trials)) throw new RangeError(`trials must be at least 1, was ${trials}`)
}
