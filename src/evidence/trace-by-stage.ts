import { appliedStages, type Chain } from '../filter/chain.ts'
import type { Stage, StageSpec } from '../filter/stage.ts'
import { wholeValue } from './trace-by-component.ts'
import { checkTraceInput, type TraceInput } from './trace-input.ts'

/** What one applied stage makes of a value. */
export interface StageRow {
  /** Its place among the chain's designed stages, and what it is. */
  readonly index: number
  readonly spec: StageSpec
  /** The value when this stage is the only one. */
  readonly alone: number
  /** The value after all applied stages up to this one. */
  readonly upTo: number
  /** What this stage adds to the value of the stages before it. */
  readonly step: number
}

export interface StageTrace {
  /** The value before any stage. */
  readonly before: number
  readonly rows: readonly StageRow[]
  /** The value after all of them; `before` plus all steps. */
  readonly value: number
  readonly unit: 'µV' | 'µV·s'
}

/**
 * What each stage alone, and the chain up to each stage, makes of a value: the same score with the same baseline, held at the
 * same moment, of the waveform after those stages.
 *
 * @throws RangeError as `traceByMoment`.
 */
export function traceByStage(input: TraceInput): StageTrace {
  checkTraceInput(input)
  const { chain } = input
  const under = (stages: readonly Stage[]) => wholeValue(input, { ...chain, stages } satisfies Chain).value
  const applied = appliedStages(chain)
  const before = under([])
  let value = before
  const rows = applied.map((stage, i): StageRow => {
    const upTo = under(applied.slice(0, i + 1))
    const row = {
      index: chain.stages.indexOf(stage),
      spec: stage.spec,
      alone: i === 0 ? upTo : under([stage]),
      upTo,
      step: upTo - value,
    }
    value = upTo
    return row
  })
  return { before, rows, value, unit: input.traced.unit }
}
