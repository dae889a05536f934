import { type Extent, applyChain } from '../../filter/apply-chain.ts'
import { appliedStages, type Chain } from '../../filter/chain.ts'
import { epochPaddingSamples, recursiveProgram } from '../../filter/epoch-rules.ts'
import { logPoles } from '../../filter/state-variable.ts'
import type { Stage } from '../../filter/stage.ts'
import { exact } from '../number.ts'
import { stagePieces } from '../stage-words.ts'
import { directForm } from './direct-form-run.ts'

/** One stage as exported code runs it: either sections or taps. */
export interface ExportStage {
  /** What the stage is, in words of plain ASCII. */
  readonly words: string
  /** How it is run on an epoch. 'rest' is an amplifier, which runs as if the epoch stood alone. */
  readonly rule: 'rest' | 'forward' | 'both' | 'taps'
  /** Rows b0 b1 b2 a0 a1 a2 of one pass, SciPy's sos rows; null for taps. */
  readonly sections: Float64Array | null
  readonly taps: Float64Array | null
  /** Samples by which the output of taps is moved earlier. */
  readonly leadSamples: number
  readonly passes: 1 | 2
  /** Gain of one pass at 0 Hz. */
  readonly gainAtZero: number
  /** Samples of odd reflection at the start of an epoch (rule 'both': at both ends; taps: `leadSamples` at the end). */
  readonly paddingSamples: number
}

/** A short input and what comes out of it, so that code elsewhere can be checked where it runs. */
export interface SelfCheck {
  /** Samples of the input of `selfCheckInput`. */
  readonly samples: number
  /** Indices at which the output is given: all of them for a short input. */
  readonly at: readonly number[]
  readonly expected: readonly number[]
  /** Largest difference that counts as equal, in parts of the largest input. */
  readonly tolerance: number
  /** Largest difference found when direct form was tried with double precision, in parts of the largest input. */
  readonly found: number
}

/** All that the writers of code share. */
export interface ExportPlan {
  readonly samplingRateHz: number
  readonly extent: Extent
  readonly stages: readonly ExportStage[]
  /** Stages that the data had passed already, which no code runs. */
  readonly inData: readonly string[]
  /** Zeros before and after a waveform that stands alone; both 0 for epochs. */
  readonly zerosBefore: number
  readonly zerosAfter: number
  /** Fewest samples that an epoch must have; 1 for a waveform that stands alone. */
  readonly shortestSamples: number
  readonly check: SelfCheck
}

/** 1e-9 of the largest input, where double precision in direct form reaches it. */
export const TOLERANCE = 1e-9
/** A tail may be cut where it has decayed by this factor. */
const TAIL = 1e-14
/** More zeros than these on one side are not written: the check's tolerance then says what is lost. */
const MOST_ZEROS = 2_000_000
const CHECK_SAMPLES = 128
/** Up to so many values of the output are given. */
const MOST_EXPECTED = 256

/**
 * Makes a chain ready to be written as code: coefficients, padding, and a check that the core has computed.
 *
 * @param extent  as on the page: 'continuous' a waveform that stands alone, 'epochs' an epoch by itself.
 * @throws RangeError where the expected output cannot be computed.
 */
export function exportPlan(chain: Chain, extent: Extent): ExportPlan {
  const designed = appliedStages(chain)
  const stages = designed.map(exportStage)
  const zeros = extent === 'continuous' ? zerosAround(designed) : { before: 0, after: 0 }
  const padding = extent === 'epochs' ? Math.max(0, ...stages.map((stage) => stage.paddingSamples)) : 0
  const plan = {
    samplingRateHz: chain.samplingRateHz,
    extent,
    stages,
    inData: chain.stages.filter(({ spec }) => spec.inData === true).map(wordsOf),
    zerosBefore: zeros.before,
    zerosAfter: zeros.after,
    shortestSamples: padding + 1,
  }
  const samples = Math.max(CHECK_SAMPLES, padding + 32)
  const input = selfCheckInput(samples)
  const output = applyChain(chain, input, extent)
  const largest = input.reduce((most, value) => Math.max(most, Math.abs(value)), 0)
  let found = 0
  for (const start of ['initial-state', 'offset-removed'] as const) {
    const direct = directForm(plan, input, start)
    for (let i = 0; i < samples; i++) {
      const difference = Math.abs(direct[i] - output[i]) / largest
      // written so that a NaN counts as the worst
      if (!(difference <= found)) found = difference
    }
  }
  if (!(found < 1)) {
    throw new RangeError(
      'the chain cannot be run in direct form with double precision: its lowest cutoff is too far below the sampling rate',
    )
  }
  const at = placesOf(samples)
  const check = { samples, at, expected: at.map((i) => output[i]), tolerance: toleranceFor(found), found }
  return { ...plan, check }
}

/**
 * The input of the self-check: pseudo-random numbers from −8 to 12 which any language makes alike, since every step is exact in
 * double precision: s becomes (4093·s + 12345) mod 65536, from s = 1, and the value is 20·s/65536 − 8.
 */
export function selfCheckInput(samples: number): Float64Array {
  const input = new Float64Array(samples)
  let state = 1
  for (let i = 0; i < samples; i++) {
    state = (state * 4093 + 12345) % 65536
    input[i] = (20 * state) / 65536 - 8
  }
  return input
}

/** Ten times what was found, up to the next power of ten, since another machine rounds in another order. */
function toleranceFor(found: number): number {
  if (10 * found <= TOLERANCE) return TOLERANCE
  return Number(`1e${Math.ceil(Math.log10(10 * found) - 1e-9)}`)
}

function placesOf(samples: number): number[] {
  if (samples <= MOST_EXPECTED) return Array.from({ length: samples }, (_, i) => i)
  const places = new Set<number>()
  for (let k = 0; k < MOST_EXPECTED / 2; k++) {
    places.add(Math.round((k * (samples - 1)) / (MOST_EXPECTED / 2 - 1)))
    // both ends one by one: there the edges are handled
    if (k < MOST_EXPECTED / 4) places.add(k).add(samples - 1 - k)
  }
  return [...places].sort((a, b) => a - b)
}

function exportStage(stage: Stage): ExportStage {
  const { sections, taps, leadSamples, passes, spec } = stage
  const rule = spec.design === 'amplifier' ? 'rest' : taps ? 'taps' : passes === 2 ? 'both' : 'forward'
  return {
    words: wordsOf(stage),
    rule,
    sections,
    taps,
    leadSamples,
    passes,
    gainAtZero: sections ? recursiveProgram(stage).gainAtZero : 1,
    paddingSamples: epochPaddingSamples(stage),
  }
}

function wordsOf({ spec }: Stage): string {
  const words = stagePieces(spec, 0)
    .map((piece) => piece.text)
    .join('')
    .replace(/^an? /, '')
  return words.replaceAll('\u2212', '-').replace(/[^\x20-\x7e]/g, '?')
}

/**
 * Zeros that a waveform needs around it so that running stage by stage from rest equals running on an endless axis. Between two runs
 * a signal reaches as far out as what ran before carries it, and must be right as far out as what runs after looks: the smaller of
 * the two, at the place where it is largest.
 */
function zerosAround(stages: readonly Stage[]): { before: number; after: number } {
  // one run after another: how far it carries a signal later, and earlier
  const runs = stages.flatMap((stage) => {
    if (stage.taps) return [{ later: stage.taps.length - 1 - stage.leadSamples, earlier: stage.leadSamples }]
    const tail = tailSamples(stage)
    const forward = { later: tail, earlier: 0 }
    return stage.passes === 2 ? [forward, { later: 0, earlier: tail }] : [forward]
  })
  let before = 0
  let after = 0
  for (let k = 1; k < runs.length; k++) {
    const past = runs.slice(0, k)
    const next = runs.slice(k)
    before = Math.max(before, Math.min(total(past, 'earlier'), total(next, 'later')))
    after = Math.max(after, Math.min(total(past, 'later'), total(next, 'earlier')))
  }
  // a kernel that looks ahead sees zeros after the end by itself
  return { before: Math.min(before, MOST_ZEROS), after: Math.min(after, MOST_ZEROS) }
}

function total(runs: readonly { later: number; earlier: number }[], side: 'later' | 'earlier'): number {
  return runs.reduce((sum, run) => sum + run[side], 0)
}

function tailSamples(stage: Stage): number {
  const slowest = logPoles(stage.analogue as Float64Array).reduce(
    (least, { decay }) => Math.min(least, decay),
    Infinity,
  )
  return Math.ceil(Math.log(1 / TAIL) / slowest) + 8
}

/** What every file says at its top, line by line, without comment signs; plain ASCII. */
export function headerLines(plan: ExportPlan): string[] {
  const { stages, inData, check, samplingRateHz } = plan
  const applied =
    stages.length === 0
      ? ['No filter is applied: the output is the input.']
      : ['Filters, one after another in this order:', ...stages.map((stage, i) => `  ${i + 1}. ${stage.words}`)]
  const had =
    inData.length === 0
      ? []
      : ['The data had already passed these, which are not run here:', ...inData.map((words) => `  - ${words}`)]
  return [
    ...applied,
    ...had,
    `Sampling rate: ${exact(samplingRateHz)} Hz.`,
    '',
    ...extentLines(plan),
    '',
    ...checkLines(check),
  ]
}

function extentLines({ extent, stages, zerosBefore, zerosAfter, shortestSamples }: ExportPlan): string[] {
  if (extent === 'continuous') {
    const cut = Math.max(zerosBefore, zerosAfter) < MOST_ZEROS ? 'has decayed by a factor of 1e14' : 'is small'
    return [
      'Applied to a waveform that stands alone: zeros before and after it, every run from rest.',
      ...(zerosBefore + zerosAfter > 0
        ? [
            `${exact(zerosBefore)} zeros are put before it and ${exact(zerosAfter)} after it, so many that what is cut ${cut};`,
            'they are taken off again.',
          ]
        : []),
    ]
  }
  const rules = [
    stages.some(({ rule }) => rule === 'rest') && 'an amplifier stage runs from rest, as if the epoch stood alone',
    stages.some(({ rule }) => rule === 'both') &&
      'a stage run both ways pads both ends by odd reflection and starts each pass in its steady state',
    stages.some(({ rule }) => rule === 'forward') &&
      'a recursive stage run forward starts in the steady state of the first sample, without padding',
    stages.some(({ rule }) => rule === 'taps') &&
      'a kernel pads by odd reflection as many samples as it looks back and ahead',
  ].filter((rule) => rule !== false)
  return [
    `Applied to one cut-out epoch, which knows nothing outside itself.${rules.length > 0 ? ' Each stage pads, runs and trims:' : ''}`,
    ...rules.map((rule, i) => `  - ${rule}${i < rules.length - 1 ? ';' : '.'}`),
    `An epoch must have at least ${exact(shortestSamples)} ${shortestSamples === 1 ? 'sample' : 'samples'}.`,
  ]
}

function checkLines({ samples, at, tolerance, found }: SelfCheck): string[] {
  const where = at.length === samples ? 'all' : `${at.length}`
  const lines = [
    `The self-check runs ${samples} samples and compares ${where} values with the output expected, to ${exponent(tolerance)} of the largest input.`,
  ]
  if (tolerance > TOLERANCE)
    lines.push(
      `Direct form in double precision does not reach 1e-9 here, since poles lie very near the unit circle: tried when this file`,
      `was written, it differed from the exact output by ${exponent(found)} of the largest input.`,
    )
  return lines
}

/** 1e-9, 3e-8: one digit and an exponent, in any language's spelling. */
export function exponent(value: number): string {
  return value === 0 ? '0' : value.toExponential(0)
}
