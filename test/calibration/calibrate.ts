import { drawNoise, noiseSource, seededRandom } from '../../src/erp/index.ts'
import { correctBaseline } from '../../src/erp/index.ts'
import { type CalibrationRow, fitLateOnly, type LateOnlyVerdict, lateOnlyModel } from '../../src/evidence/index.ts'
import { inCoordinates } from '../../src/evidence/late-only-model.ts'
import { fitAt } from '../../src/evidence/restricted-likelihood.ts'
import { applyEpochs, designChain, runContinuous } from '../../src/filter/index.ts'
import {
  BASELINE,
  type CalibrationSetting,
  EARLY,
  EFFECT,
  latePositivity,
  SAMPLES,
  SAMPLING_RATE_HZ,
  START_MS,
  T0_MS,
  TRIALS,
} from './settings.ts'

export const timesMs = Float64Array.from({ length: SAMPLES }, (_, i) => START_MS + (i * 1000) / SAMPLING_RATE_HZ)
/** Samples around the epoch that filters need to forget the ends of a drawn stretch. */
const AROUND = 1000

/** Filtered, baseline-corrected averages of a setting, without anything early; two by two from one transform. */
export function* drawsOf(setting: CalibrationSetting, seed: number): Generator<Float64Array> {
  const chain = designChain(setting.chain, SAMPLING_RATE_HZ)
  const total = SAMPLES + 2 * AROUND
  const source = noiseSource(setting.noise, SAMPLING_RATE_HZ, total)
  const random = seededRandom(seed)
  const late = Float64Array.from({ length: total }, (_, i) => {
    return latePositivity(START_MS + ((i - AROUND) * 1000) / SAMPLING_RATE_HZ - setting.shiftMs)
  })
  for (;;) {
    for (const noise of drawNoise(source, random, TRIALS)) {
      const x = noise.map((value, i) => value + late[i])
      const y =
        setting.extent === 'continuous'
          ? runContinuous(chain.stages, x, AROUND, AROUND + SAMPLES)
          : applyEpochs(chain.stages, x.slice(AROUND, AROUND + SAMPLES))
      const residualUv = setting.residualUv ?? 0
      if (residualUv > 0) for (let i = 0; i < SAMPLES; i++) y[i] += residualUv * random.normal()
      yield correctBaseline(y, timesMs, BASELINE)
    }
  }
}

export function modelOf(setting: CalibrationSetting) {
  const chain = designChain(setting.chain, SAMPLING_RATE_HZ)
  const options = { timesMs, t0Ms: T0_MS, early: EARLY, noise: setting.assumed, trials: TRIALS, extent: setting.extent }
  return { chain, options, model: lateOnlyModel(chain, options) }
}

/**
 * The early component moves β̂ by exactly its amplitude and nothing else (restricted likelihood does not see what lies along
 * Ke), so that one fit a draw tells both rates.
 */
export function calibrate(
  setting: CalibrationSetting,
  draws: number,
  seed: number,
  tell: (done: number) => void = () => {},
): CalibrationRow {
  const { model } = modelOf(setting)
  const nothing = inCoordinates(model, [new Float64Array(SAMPLES)])
  const effectUv = EFFECT * Math.sqrt(fitAt(model.components, nothing, 1, 0).covariance[0])
  const verdicts: Record<LateOnlyVerdict, number> = {
    'it can': 0,
    'not by late activity alone': 0,
    'cannot be told': 0,
  }
  const fits: ReturnType<typeof fitLateOnly>[] = []
  for (const y of drawsOf(setting, seed)) {
    const fit = fitLateOnly(model, y)
    fits.push(fit)
    verdicts[fit.verdict]++
    tell(fits.length)
    if (fits.length === draws) break
  }
  const rate = (holds: (fit: ReturnType<typeof fitLateOnly>) => boolean) => fits.filter(holds).length / draws
  const median = (of: (fit: ReturnType<typeof fitLateOnly>) => number) => {
    const sorted = fits.map(of).sort((a, b) => a - b)
    return round((sorted[(draws - 1) >> 1] + sorted[draws >> 1]) / 2)
  }
  return {
    id: setting.id,
    title: setting.title,
    kind: setting.kind,
    draws,
    falseAlarms: rate(({ interval: [low, high] }) => low > 0 || high < 0),
    found: rate(({ interval: [low, high] }) => low + effectUv > 0 || high + effectUv < 0),
    effectUv: round(effectUv),
    covered: rate(({ interval: [low, high] }) => low <= 0 && high >= 0),
    verdicts,
    standardErrorUv: median(({ standardError }) => standardError),
    noiseScale: median(({ noiseScale }) => noiseScale),
    alphaScale: median(({ alphaScale }) => alphaScale),
  }
}

/** Three decimals, so that the table does not change with the last bit of another machine's exponential function. */
function round(value: number): number {
  return Math.round(1000 * value) / 1000
}
