import type { Stage, StageSpec } from '../filter/stage.ts'
import { type Chain, designChain } from '../filter/chain.ts'
import { exact } from './number.ts'
import type { Protocol } from './protocol-line.ts'

/** What a write-up states: the protocol, and what the user has said in words beside it. */
export interface WriteUpFacts extends Protocol {
  /** The epoch's limits and its number of samples, where there is one. */
  epoch?: { fromMs: number; toMs: number; samples: number }
  /** What the workspace cannot hold, in the user's words, by the key of the checklist's field ('resampling'). */
  statements?: Readonly<Record<string, string>>
  /** The waveform is the difference of two conditions, each of so many trials. */
  ofTwoConditions?: boolean
  /** The user has said of a recording that the stages in the data are all that it had passed. */
  noOtherFilters?: boolean
  /** Version of this software, for the sentence that names it. */
  softwareVersion?: string
}

/** A stage as designed, with its place in the list that the user sees. */
export interface PlacedStage {
  readonly stage: Stage
  /** Place in the protocol's chain, counted from 0, stages that are switched off included. */
  readonly index: number
}

/** The enabled stages by where they acted, each in order. */
export interface DesignedProtocol {
  readonly chain: Chain
  readonly inData: readonly PlacedStage[]
  readonly amplifiers: readonly PlacedStage[]
  readonly offline: readonly PlacedStage[]
}

/**
 * Designs the chain of a protocol.
 *
 * @throws RangeError for a chain that cannot be designed, as `designChain`.
 */
export function designProtocol({ chain: specs, samplingRateHz }: Protocol): DesignedProtocol {
  const chain = designChain(specs, samplingRateHz)
  const places = specs.flatMap((spec, index) => (spec.enabled === false ? [] : [index]))
  const placed = chain.stages.map((stage, i) => ({ stage, index: places[i] }))
  return {
    chain,
    inData: placed.filter(({ stage }) => stage.spec.inData === true),
    amplifiers: placed.filter(({ stage }) => isApplied(stage.spec) && stage.spec.design === 'amplifier'),
    offline: placed.filter(({ stage }) => isApplied(stage.spec) && stage.spec.design !== 'amplifier'),
  }
}

function isApplied(spec: StageSpec): boolean {
  return spec.inData !== true
}

/** What the user said for a field, without spaces around it; '' where nothing was said. */
export function statementOf(facts: WriteUpFacts, field: string): string {
  return (facts.statements?.[field] ?? '').replace(/\s+/g, ' ').trim()
}

/** "1 sample", "12 samples" */
export function counted(count: number, noun: string): string {
  return `${exact(count)} ${noun}${count === 1 ? '' : 's'}`
}

/** A sentence ends once, whatever the user typed; an end inside a closing quotation mark is one. */
export function sentence(words: string): string {
  return /[.!?…]["'”’]?$/.test(words) ? words : `${words}.`
}

/** What a stage meets at the ends of its input: nothing, the ends of an epoch, or those of a recording's uninterrupted stretch. */
export type Ends = 'none' | 'epoch' | 'stretch'

/** What the offline stages of a protocol meet. */
export function endsOf({ source, extent }: Protocol): Ends {
  return extent === 'epochs' ? 'epoch' : source === 'recorded' ? 'stretch' : 'none'
}
