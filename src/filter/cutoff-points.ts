import { appliedStages, type Chain } from './chain.ts'
import { butterworthDesignEdges } from './cutoff-meaning.ts'
import { movingAverageSamples } from './moving-average.ts'
import { notchWarpedEdges } from './notch.ts'
import type { NotchSpec, Stage } from './stage.ts'
import { gainAt, stagesResponse } from './stage-response.ts'
import { edgesHz, scaleEdges, type WarpedEdges, warpedEdges, warpedRatio } from './warped-axis.ts'

/** How steeply a stage falls, in the measure that suits its design. */
export type RollOff =
  /** Asymptotic slope as applied, per edge: 6.02 dB/octave for each pole of an edge and each pass. */
  | { readonly kind: 'dB/octave'; readonly value: number }
  /** Width of a windowed sinc's transitions. */
  | { readonly kind: 'transition'; readonly hz: number }
  /** −3 dB width of a notch as applied. */
  | { readonly kind: 'notch'; readonly bandwidthHz: number }
  /** A moving average's nulls: multiples of this frequency. */
  | { readonly kind: 'nulls'; readonly everyHz: number }

/** Where the gain as applied crosses 1/2 and 1/√2, ascending; empty where it never does. */
export interface CrossingPoints {
  readonly halfAmplitudeHz: number[]
  readonly halfPowerHz: number[]
}

export interface CutoffPoints extends CrossingPoints {
  readonly rollOff: RollOff
}

const HALF_AMPLITUDE = 0.5
const HALF_POWER = Math.SQRT1_2

/** Slope of one pole, dB per octave: 20·log10(2). */
const DB_PER_OCTAVE = 20 * Math.log10(2)

/**
 * Half-amplitude and half-power points of one stage as applied (after all its passes), and its roll-off.
 *
 * In closed form for a Butterworth, an amplifier and a notch without harmonics, else found on the response to 1e-9.
 */
export function stageCutoffPoints(stage: Stage): CutoffPoints {
  const { spec, samplingRateHz, passes } = stage
  switch (spec.design) {
    case 'butterworth': {
      const edges = butterworthDesignEdges(spec, samplingRateHz)
      return {
        ...closedForm(spec.pass, edges, spec.order, passes, samplingRateHz),
        rollOff: { kind: 'dB/octave', value: DB_PER_OCTAVE * spec.order * passes },
      }
    }
    case 'amplifier': {
      const edges = warpedEdges(spec.pass, [spec.cutoffHz], samplingRateHz)
      return {
        ...closedForm(spec.pass, edges, spec.order, 1, samplingRateHz),
        rollOff: { kind: 'dB/octave', value: DB_PER_OCTAVE * spec.order },
      }
    }
    case 'notch': {
      const rollOff: RollOff = { kind: 'notch', bandwidthHz: spec.bandwidthHz }
      if (spec.harmonics > 0) return { ...crossings([stage]), rollOff }
      return { ...closedForm('stop', notchWarpedEdges(spec, 0, samplingRateHz), 1, passes, samplingRateHz), rollOff }
    }
    case 'windowed-sinc':
      return { ...crossings([stage]), rollOff: { kind: 'transition', hz: spec.transitionHz } }
    case 'moving-average': {
      const everyHz = samplingRateHz / movingAverageSamples(spec.durationMs, samplingRateHz)
      return { ...crossings([stage]), rollOff: { kind: 'nulls', everyHz } }
    }
  }
}

/** Half-amplitude and half-power points of a whole chain as applied, stages in the data left out. */
export function chainCutoffPoints(chain: Chain): CrossingPoints {
  const stages = appliedStages(chain)
  if (stages.length === 1) {
    const { halfAmplitudeHz, halfPowerHz } = stageCutoffPoints(stages[0])
    return { halfAmplitudeHz, halfPowerHz }
  }
  return crossings(stages)
}

function closedForm(
  pass: 'low' | 'high' | 'band' | 'stop',
  edges: WarpedEdges,
  order: number,
  passes: number,
  samplingRateHz: number,
): CrossingPoints {
  const at = (gain: number) => edgesHz(pass, scaleEdges(pass, edges, warpedRatio(gain, passes, order)), samplingRateHz)
  return { halfAmplitudeHz: at(HALF_AMPLITUDE), halfPowerHz: at(HALF_POWER) }
}

/** Points per octave and range of octaves below half the sampling rate between which a chain's gain is looked at. */
const PER_OCTAVE = 12
const OCTAVES = 24

/** Both kinds of crossing, each bracketed on a grid and then narrowed down. */
function crossings(stages: readonly Stage[]): CrossingPoints {
  if (stages.length === 0) return { halfAmplitudeHz: [], halfPowerHz: [] }
  const grid = searchGrid(stages)
  const { re, im } = stagesResponse(stages, grid)
  const gains = re.map((value, i) => Math.sqrt(value * value + im[i] * im[i]))
  return {
    halfAmplitudeHz: crossingsOf(stages, grid, gains, HALF_AMPLITUDE),
    halfPowerHz: crossingsOf(stages, grid, gains, HALF_POWER),
  }
}

function crossingsOf(stages: readonly Stage[], grid: Float64Array, gains: Float64Array, level: number): number[] {
  const found: number[] = []
  for (let i = 1; i < grid.length; i++) {
    if (gains[i - 1] < level === gains[i] < level) continue
    found.push(narrow(stages, level, grid[i - 1], gains[i - 1], grid[i], gains[i]))
  }
  return found
}

/** Frequencies dense enough that the gain is monotone, or nearly so, between neighbours. */
function searchGrid(stages: readonly Stage[]): Float64Array {
  const half = stages[0].samplingRateHz / 2
  const hz: number[] = [0, half]
  // between several stages the gain may do anything; a stage alone moves at its landmarks
  if (stages.length > 1) for (let i = 1; i <= OCTAVES * PER_OCTAVE; i++) hz.push(half * 2 ** (-i / PER_OCTAVE))
  for (const stage of stages) hz.push(...landmarks(stage))
  return Float64Array.from(new Set(hz.filter((f) => f >= 0 && f <= half))).sort()
}

/** Frequencies around the edges of one stage, where the gain changes most. */
function landmarks(stage: Stage): number[] {
  const { spec, samplingRateHz, passes } = stage
  switch (spec.design) {
    case 'butterworth':
      return aroundEdges(spec.pass, butterworthDesignEdges(spec, samplingRateHz), spec.order, passes, samplingRateHz)
    case 'amplifier': {
      const edges = warpedEdges(spec.pass, [spec.cutoffHz], samplingRateHz)
      return aroundEdges(spec.pass, edges, spec.order, 1, samplingRateHz)
    }
    case 'notch':
      return aroundNotches(spec, samplingRateHz, passes)
    case 'windowed-sinc':
      return spec.cutoffsHz.flatMap((f) => TRANSITION_STEPS.map((step) => f + step * spec.transitionHz))
    case 'moving-average': {
      // the main lobe; the others stay below 0.22
      const nullHz = samplingRateHz / movingAverageSamples(spec.durationMs, samplingRateHz)
      return LEVELS.map((part) => part * nullHz)
    }
  }
}

/** Where a transition is looked at, in transition widths from its cutoff. */
const TRANSITION_STEPS = Array.from({ length: 31 }, (_, i) => (i - 15) / 10)

/** Gains at which a stage is looked at on either side of its edge. */
const LEVELS = [0.02, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 0.95, 0.98, 0.995]

function aroundEdges(
  pass: 'low' | 'high' | 'band' | 'stop',
  edges: WarpedEdges,
  order: number,
  passes: number,
  samplingRateHz: number,
): number[] {
  const hz = LEVELS.flatMap((gain) =>
    edgesHz(pass, scaleEdges(pass, edges, warpedRatio(gain, passes, order)), samplingRateHz),
  )
  if (pass === 'band' || pass === 'stop') hz.push(...edgesHz('low', { centre: edges.centre, width: 0 }, samplingRateHz))
  return hz
}

function aroundNotches(spec: NotchSpec, samplingRateHz: number, passes: number): number[] {
  const hz: number[] = []
  for (let harmonic = 0; harmonic <= spec.harmonics; harmonic++) {
    hz.push(...aroundEdges('stop', notchWarpedEdges(spec, harmonic, samplingRateHz), 1, passes, samplingRateHz))
  }
  return hz
}

/**
 * Frequency between two others at which the gain is `level`, to 1e-12 relative: regula falsi in the Illinois form, which
 * keeps the bracket, with a bisection where it is slow.
 */
function narrow(
  stages: readonly Stage[],
  level: number,
  fromHz: number,
  fromGain: number,
  toHz: number,
  toGain: number,
): number {
  let a = fromHz
  let b = toHz
  let missA = fromGain - level
  let missB = toGain - level
  for (let round = 0; round < 100 && b - a > 1e-12 * b; round++) {
    if (missB === 0) return b
    const slow = round % 4 === 3
    const middle = slow ? (a + b) / 2 : (a * missB - b * missA) / (missB - missA)
    const inside = middle > a && middle < b ? middle : (a + b) / 2
    const miss = gainAt(stages, inside) - level
    if (Math.abs(miss) < 1e-14) return inside
    if (miss < 0 === missA < 0) {
      a = inside
      missA = miss
      if (!slow) missB /= 2
    } else {
      b = inside
      missB = miss
      if (!slow) missA /= 2
    }
  }
  return (a + b) / 2
}
