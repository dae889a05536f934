import { describe, expect, test } from 'vitest'
import { appliedStages, chainResponse, designChain } from '../../src/filter/chain.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import { stagesResponse } from '../../src/filter/stage-response.ts'

const amplifier: StageSpec = { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.1 }
const low: StageSpec = {
  design: 'butterworth',
  pass: 'low',
  order: 2,
  cutoffsHz: [30],
  meaning: 'half-amplitude',
  direction: 'both',
}
const average: StageSpec = { design: 'moving-average', durationMs: 20, delay: 'compensated' }

test('enabled stages are designed in order, others left out whatever they hold', () => {
  const broken = { ...low, cutoffsHz: [999], enabled: false } as StageSpec
  const late = { ...amplifier, enabled: false } as StageSpec
  const chain = designChain([amplifier, broken, low, late, average], 500)
  expect(chain.stages.map((stage) => stage.spec.design)).toEqual(['amplifier', 'butterworth', 'moving-average'])
  expect(chain.stages[1].spec).toBe(low)
  expect(chain.samplingRateHz).toBe(500)
})

test('stages in the data stay in the chain, but not in its response', () => {
  const hz = Float64Array.of(0.1, 10, 30)
  const chain = designChain([{ ...amplifier, inData: true }, low], 500)
  expect(chain.stages.length).toBe(2)
  expect(appliedStages(chain)).toEqual([chain.stages[1]])
  expect(chainResponse(chain, hz)).toEqual(stagesResponse([chain.stages[1]], hz))
  expect(chainResponse(designChain([], 500), hz).re).toEqual(new Float64Array(3).fill(1))
})

describe('a bad chain', () => {
  const errorOf = (specs: StageSpec[], fs = 500): unknown => {
    try {
      designChain(specs, fs)
      return 'no error'
    } catch (error) {
      return error
    }
  }

  test('names the stage and its property', () => {
    const error = errorOf([amplifier, { ...low, enabled: false }, { ...low, cutoffsHz: [300] }])
    expect(error).toBeInstanceOf(RangeError)
    expect(error).toMatchObject({
      message: 'stage 3: cutoffsHz[0] must lie between 0 and 250 (half the sampling rate), was 300',
      stageIndex: 2,
      field: 'cutoffsHz',
    })
  })

  test('may not have an amplifier after an offline stage', () => {
    const error = errorOf([amplifier, low, average, amplifier])
    expect(error).toBeInstanceOf(RangeError)
    expect(error).toMatchObject({
      message: 'stage 4: an amplifier stage must come before all offline stages, but follows stage 3',
      stageIndex: 3,
    })
  })

  test('of something that is no stage, or with a bad sampling rate, is refused', () => {
    expect(errorOf([null as never])).toMatchObject({
      message: 'stage 1: a stage must be an object, was null',
      stageIndex: 0,
    })
    expect(errorOf([low], 0)).toMatchObject({
      message: 'samplingRateHz must be a positive number, was 0',
      field: 'samplingRateHz',
    })
  })
})
