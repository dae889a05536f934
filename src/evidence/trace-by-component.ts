import type { Component } from '../erp/component.ts'
import { appliedAmplifierStages, appliedOfflineStages } from '../filter/apply-chain.ts'
import { appliedStages, type Chain } from '../filter/chain.ts'
import { adjointEpochs } from '../filter/epoch-adjoint.ts'
import { neighbourContribution } from './neighbours.ts'
import { toneContribution } from './tone-tails.ts'
import { checkTraceInput, isAboutZero, percentOf, type TraceInput } from './trace-input.ts'
import { componentsOnAxis, rangeOnAxis, sourceOnAxis, type TraceSource } from './traced-waveform.ts'
import { windowWithTails } from './window-with-tails.ts'

/** A part of a value, with its share in the value's unit and in per cent of it (null where the value is about zero). */
export interface PartRow {
  readonly kind: 'component' | 'condition' | 'neighbours'
  readonly name: string
  readonly share: number
  readonly percent: number | null
}

export interface PartTrace {
  readonly rows: readonly PartRow[]
  readonly value: number
  readonly aboutZero: boolean
  readonly unit: 'µV' | 'µV·s'
}

/**
 * What each component of a built waveform gives to a value, Σ g[m]·xc[m], the padding of epochs included; the neighbouring events
 * have a row of their own. The rows sum to the value.
 *
 * @param neighbours their share where it is known already, as `traceByMoment` finds it.
 * @throws RangeError for a recorded waveform, which has moments only, and as `traceByMoment`.
 */
export function traceByComponent(input: TraceInput, neighbours?: number | null): PartTrace {
  checkTraceInput(input)
  const { source } = input
  if (source.kind !== 'built') throw new RangeError(`source.kind must be built to have components, was ${source.kind}`)
  const shares = componentShares(input, source.components)
  const rows = source.components.map(({ name }, i) => ({ kind: 'component' as const, name, share: shares.shares[i] }))
  return finished(input, withNeighbours(input, rows, neighbours), shares.absoluteSum)
}

/** A condition of a difference wave: how it enters, and what it is. */
export interface SignedCondition {
  readonly name: string
  readonly sign: 1 | -1
  readonly source: TraceSource
}

/**
 * What each condition of a difference wave gives to a value of the difference; the weights are those of the difference. The
 * neighbours of a condition's events are counted with it.
 *
 * @param input its `source` is not looked at.
 * @throws RangeError as `traceByMoment`.
 */
export function traceByCondition(input: TraceInput, conditions: readonly SignedCondition[]): PartTrace {
  checkTraceInput(input)
  let absoluteSum = 0
  const rows = conditions.map(({ name, sign, source }) => {
    const whole = wholeValue({ ...input, source }, input.chain)
    absoluteSum += whole.absoluteSum
    return { kind: 'condition' as const, name, share: sign * whole.value }
  })
  return finished(input, rows, absoluteSum)
}

/** The value of the whole waveform under a chain that may be another than the input's. */
export function wholeValue(input: TraceInput, chain: Chain): { value: number; absoluteSum: number } {
  const { source, timesMs, traced, extent } = input
  if (source.kind === 'built') {
    const { shares, absoluteSum } = componentShares({ ...input, chain }, source.components)
    const rows = withNeighbours({ ...input, chain }, [])
    return { value: sum(shares) + sum(rows.map(({ share }) => share)), absoluteSum }
  }
  const x = sourceOnAxis(source, timesMs, chain.samplingRateHz, 0)
  const { stages, w } = toWholeAxis(chain, traced.onAfter, extent)
  const { values } = windowWithTails(stages, w, 0, timesMs.length)
  const { onBefore } = traced
  // an offset that the weights do not see would cost digits
  const zero = sumsOut(values, onBefore) ? x.values[0] : 0
  let value = 0
  let absoluteSum = 0
  for (let m = 0; m < values.length; m++) {
    const share = (values[m] - (onBefore === null ? 0 : onBefore[m])) * (x.values[m] - zero)
    value += share
    absoluteSum += Math.abs(share)
  }
  return { value, absoluteSum }
}

/** Whether all weights of an epoch sum to zero, to rounding. */
function sumsOut(g: Float64Array, onBefore: Float64Array | null): boolean {
  let total = 0
  let size = 0
  for (let m = 0; m < g.length; m++) {
    const weight = g[m] - (onBefore === null ? 0 : onBefore[m])
    total += weight
    size += Math.abs(weight)
  }
  return Math.abs(total) <= 1e-13 * size
}

function componentShares(
  { chain, extent, timesMs, traced }: TraceInput,
  components: readonly Component[],
): { shares: number[]; absoluteSum: number } {
  const n = timesMs.length
  const { stages, w } = toWholeAxis(chain, traced.onAfter, extent)
  const bounded = components.filter(({ shape }) => shape !== 'tone')
  const { from, to } = rangeOnAxis(bounded, timesMs, chain.samplingRateHz, 0)
  const { values: g } = windowWithTails(stages, w, from, to)
  const { onBefore } = traced
  if (onBefore !== null) for (let m = 0; m < n; m++) g[m - from] -= onBefore[m]
  let absoluteSum = 0
  const shares = components.map((component) => {
    if (component.shape === 'tone') {
      let share = toneContribution(stages, w, [component], timesMs)
      if (onBefore !== null) share -= toneContribution([], onBefore, [component], timesMs)
      absoluteSum += Math.abs(share)
      return share
    }
    const own = rangeOnAxis([component], timesMs, chain.samplingRateHz, 0)
    const x = componentsOnAxis([component], timesMs, chain.samplingRateHz, own.from, own.to)
    let share = 0
    for (let i = 0; i < x.length; i++) {
      const product = g[own.from - from + i] * x[i]
      share += product
      absoluteSum += Math.abs(product)
    }
    return share
  })
  return { shares, absoluteSum }
}

/** What is left to do as continuous once the epoch rules, if any, have been transposed. */
function toWholeAxis(chain: Chain, onAfter: Float64Array, extent: TraceInput['extent']) {
  if (extent === 'continuous') return { stages: appliedStages(chain), w: onAfter }
  return { stages: appliedAmplifierStages(chain), w: adjointEpochs(appliedOfflineStages(chain), onAfter) }
}

type Bare = Omit<PartRow, 'percent'>

function withNeighbours(
  { chain, extent, timesMs, source, traced }: TraceInput,
  rows: readonly Bare[],
  known?: number | null,
): Bare[] {
  if (source.kind !== 'built' || source.events === undefined || source.events === 'alone') return [...rows]
  const { components, events } = source
  const { onAfter, onBefore } = traced
  const share = known ?? neighbourContribution(chain, components, events, timesMs, extent, onAfter, onBefore)
  return [...rows, { kind: 'neighbours', name: 'neighbouring events', share }]
}

function finished(input: TraceInput, rows: readonly Bare[], absoluteSum: number): PartTrace {
  const value = sum(rows.map(({ share }) => share))
  const aboutZero = isAboutZero(value, absoluteSum, input.traced)
  return {
    rows: rows.map((row) => ({ ...row, percent: percentOf(row.share, value, aboutZero) })),
    value,
    aboutZero,
    unit: input.traced.unit,
  }
}

function sum(values: readonly number[]): number {
  return values.reduce((total, value) => total + value, 0)
}
