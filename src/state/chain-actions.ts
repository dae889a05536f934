/** What the user can do to the chain. Each takes the workspace's chain and gives the next one; nothing is designed here. */
import type { StageSpec } from '../filter/stage.ts'

export type StageKind = 'butterworth' | 'windowed-sinc' | 'amplifier' | 'notch' | 'moving-average'

/** A stage as it starts when it is added: a usual one of its kind that can be realised at this sampling rate. */
export function newStage(kind: StageKind, pass: 'low' | 'high' | 'band' | 'stop', samplingRateHz: number): StageSpec {
  const lowHz = Math.min(30, samplingRateHz / 8)
  const cutoffsHz = { low: [lowHz], high: [0.1], band: [0.1, lowHz], stop: [lowHz / 3, lowHz / 2] }[pass]
  switch (kind) {
    case 'butterworth':
      return { design: 'butterworth', pass, order: 2, cutoffsHz, meaning: 'half-amplitude', direction: 'both' }
    case 'windowed-sinc': {
      const sincCutoffsHz = { low: [lowHz], high: [0.5], band: [0.5, lowHz], stop: [lowHz / 3, lowHz / 2] }[pass]
      const transitionHz = { low: lowHz / 4, high: 0.5, band: 0.5, stop: lowHz / 10 }[pass]
      return {
        design: 'windowed-sinc',
        pass,
        cutoffsHz: sincCutoffsHz,
        meaning: 'half-amplitude',
        transitionHz,
        window: { name: 'hamming' },
        delay: 'compensated',
      }
    }
    case 'amplifier':
      return pass === 'low'
        ? { design: 'amplifier', pass: 'low', order: 4, cutoffHz: samplingRateHz / 5 }
        : { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 1 / (2 * Math.PI * 10) }
    case 'notch': {
      const frequencyHz = samplingRateHz > 105 ? 50 : samplingRateHz / 4
      return { design: 'notch', frequencyHz, bandwidthHz: 2, harmonics: 0, direction: 'both' }
    }
    case 'moving-average':
      return { design: 'moving-average', durationMs: Math.max(20, 4000 / samplingRateHz), delay: 'compensated' }
  }
}

/** Adds a stage where it belongs: an amplifier stage behind the last amplifier stage, any other at the end. */
export function addStage(chain: readonly StageSpec[], stage: StageSpec): { chain: StageSpec[]; index: number } {
  const index = stage.design === 'amplifier' ? chain.filter((spec) => spec.design === 'amplifier').length : chain.length
  return { chain: [...chain.slice(0, index), stage, ...chain.slice(index)], index }
}

export function replaceStage(chain: readonly StageSpec[], index: number, stage: StageSpec): StageSpec[] {
  return chain.map((spec, place) => (place === index ? stage : spec))
}

export function removeStage(chain: readonly StageSpec[], index: number): StageSpec[] {
  return chain.filter((_, place) => place !== index)
}

export function duplicateStage(chain: readonly StageSpec[], index: number): StageSpec[] {
  return [...chain.slice(0, index + 1), structuredClone(chain[index]), ...chain.slice(index + 1)]
}

/** Whether the stage can move one place: amplifier stages stay before all others. */
export function canMove(chain: readonly StageSpec[], index: number, by: -1 | 1): boolean {
  const other = chain[index + by]
  return other !== undefined && (other.design === 'amplifier') === (chain[index].design === 'amplifier')
}

export function moveStage(chain: readonly StageSpec[], index: number, by: -1 | 1): StageSpec[] {
  if (!canMove(chain, index, by)) return [...chain]
  const next = [...chain]
  next[index] = chain[index + by]
  next[index + by] = chain[index]
  return next
}
