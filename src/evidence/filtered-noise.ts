import { noiseSpectrum, type NoiseSpectrum } from '../erp/noise-autocovariance.ts'
import type { NoiseSpec } from '../erp/noise.ts'
import type { SeededRandom } from '../erp/seeded-random.ts'
import { drawNoise, type NoiseSource, noiseSource } from '../erp/simulate-noise.ts'
import { applyEpochs, type Extent } from '../filter/apply-chain.ts'
import { appliedStages, type Chain, stagesResponse } from '../filter/chain.ts'
import type { Stage } from '../filter/stage.ts'
import { responseBreaksHz } from './response-breaks.ts'

/** What the noise has passed already: a model's nothing, an estimate's the stages in the data that it was measured on. */
export type NoisePassed = 'nothing' | 'the stages in the data'

/** Stages of a chain as its noise sees them. */
export interface NoisePath {
  /** Those that act on the continuous recording, before any cutting. */
  readonly continuous: readonly Stage[]
  /** Those that are run on the cut-out epoch. */
  readonly onEpoch: readonly Stage[]
}

/** Which stages of a chain shape its noise, and where. */
export function noisePath(chain: Chain, extent: Extent, passed: NoisePassed): NoisePath {
  const past =
    passed === 'nothing' ? chain.stages.filter((s) => s.spec.inData === true && s.spec.enabled !== false) : []
  const applied = appliedStages(chain)
  if (extent === 'continuous') return { continuous: [...past, ...applied], onEpoch: [] }
  return {
    continuous: [...past, ...applied.filter((stage) => stage.spec.design === 'amplifier')],
    onEpoch: applied.filter((stage) => stage.spec.design !== 'amplifier'),
  }
}

/** The noise after stages that run as continuous: S·|H|², its lines A·|H|. Throws as `checkNoise`. */
export function spectrumAfter(stages: readonly Stage[], noise: NoiseSpec, samplingRateHz: number): NoiseSpectrum {
  const spectrum = noiseSpectrum(noise)
  if (stages.length === 0) return spectrum
  const { whiteUv2PerHz, density } = spectrum
  const atLines = stagesResponse(
    stages,
    Float64Array.from(spectrum.lines, ({ hz }) => hz),
  )
  return {
    whiteUv2PerHz: 0,
    density: (hz) => {
      const { re, im } = stagesResponse(stages, hz)
      return density(hz).map((value, i) => (value + whiteUv2PerHz) * (re[i] * re[i] + im[i] * im[i]))
    },
    breaksHz: [...spectrum.breaksHz, ...breaksOf(stages, samplingRateHz)],
    lines: spectrum.lines.map(({ hz, amplitudeUv }, i) => ({
      hz,
      amplitudeUv: amplitudeUv * Math.hypot(atLines.re[i], atLines.im[i]),
    })),
  }
}

/** Where the response of these stages needs a fine grid, stages in the data included. */
export function breaksOf(stages: readonly Stage[], samplingRateHz: number): number[] {
  const acting = stages.map((stage) => ({ ...stage, spec: { ...stage.spec, inData: false } }))
  return responseBreaksHz({ samplingRateHz, stages: acting })
}

/** Filtered noise on the samples of an epoch, ready to be drawn. */
export interface FilteredNoise {
  readonly source: NoiseSource
  readonly onEpoch: readonly Stage[]
}

/**
 * Covariances right to this part of their fall give an SD that is right to 0.1 %, a tenth of the chance error of 5000 draws, and keep the
 * circulant short for filtered noise, which is too smooth to be embedded exactly.
 */
const TOLERANCE = 2e-3

/** @throws RangeError as `noiseSource`. */
export function filteredNoise(
  path: NoisePath,
  noise: NoiseSpec,
  samplingRateHz: number,
  samples: number,
): FilteredNoise {
  return {
    source: noiseSource(spectrumAfter(path.continuous, noise, samplingRateHz), samplingRateHz, samples, TOLERANCE),
    onEpoch: path.onEpoch,
  }
}

/** Two independent averages over N trials after the chain. Throws as `drawNoise` and `applyEpochs`. */
export function drawFilteredNoise(
  { source, onEpoch }: FilteredNoise,
  random: SeededRandom,
  trials: number,
): readonly [Float64Array, Float64Array] {
  const drawn = drawNoise(source, random, trials)
  if (onEpoch.length > 0) for (const values of drawn) applyEpochs(onEpoch, values, values)
  return drawn
}
