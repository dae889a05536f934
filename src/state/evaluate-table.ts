/** The part of evaluate() that makes the chain table. */
import { appliedStages, type Chain } from '../filter/chain.ts'
import { chainCutoffPoints, type RollOff, stageCutoffPoints } from '../filter/cutoff-points.ts'
import { stageGroupDelaySeconds } from '../filter/group-delay.ts'
import type { AmplifierSpec, Stage, StageSpec } from '../filter/stage.ts'
import { brief, fixed, stageShortName } from '../words/index.ts'
import { hzText } from './evaluate-figures.ts'
import type { ChainRow } from './evaluation.ts'
import { memoised } from './memo.ts'

export const chainPoints = memoised((chain: Chain) => {
  if (appliedStages(chain).length === 0) return { halfAmplitudeHz: [], halfPowerHz: [] }
  return chainCutoffPoints(chain)
})

function rollOffText(rollOff: RollOff): string {
  switch (rollOff.kind) {
    case 'dB/octave':
      return `${fixed(rollOff.value, 0)} dB/octave`
    case 'transition':
      return `${brief(rollOff.hz)} Hz wide`
    case 'notch':
      return `${brief(rollOff.bandwidthHz)} Hz wide`
    case 'nulls':
      return `nulls every ${brief(rollOff.everyHz)} Hz`
  }
}

/** A bilinear model keeps an amplifier's gain, but above a tenth of the sampling rate not its delay. */
const FAITHFUL_SHARE = 0.1

function amplifierRemark(stage: Stage, spec: AmplifierSpec): string | null {
  if (spec.pass !== 'low' || spec.cutoffHz <= FAITHFUL_SHARE * stage.samplingRateHz) return null
  const lowHz = Float64Array.of(spec.cutoffHz / 1000)
  const modelMs = stageGroupDelaySeconds(stage, lowHz)[0] * 1000
  // Group delay at 0 Hz of an analogue Butterworth: the s¹ coefficient of its polynomial, 1/sin(π/2n), over ωc.
  const analogueMs = 1000 / (Math.sin(Math.PI / (2 * spec.order)) * 2 * Math.PI * spec.cutoffHz)
  return `Its delay is ${fixed(analogueMs, 2)} ms, in this model ${fixed(modelMs, 2)} ms: above a tenth of the sampling rate the model is not faithful; sample higher.`
}

export const chainTable = memoised((specs: readonly StageSpec[], chain: Chain): ChainRow[] => {
  const on = specs.flatMap((spec, index) => (spec.enabled === false ? [] : [{ spec, index }]))
  return on.map(({ spec, index }, i) => {
    const points = stageCutoffPoints(chain.stages[i])
    return {
      index,
      name: stageShortName(spec),
      inData: spec.inData === true,
      halfAmplitude: hzText(points.halfAmplitudeHz),
      halfPower: hzText(points.halfPowerHz),
      rollOff: rollOffText(points.rollOff),
      remark: spec.design === 'amplifier' ? amplifierRemark(chain.stages[i], spec) : null,
    }
  })
})
