import { MAX_AMPLIFIER_ORDER } from '../../filter/amplifier.ts'
import { MAX_BUTTERWORTH_ORDER } from '../../filter/butterworth.ts'
import type { StageSpec } from '../../filter/stage.ts'
import type { Varied } from './claim.ts'

/** The values that a search takes: all of them for orders, the ends of a logarithmic axis for quantities in Hz. */
export type VariedRange =
  | { readonly kind: 'orders'; readonly orders: readonly number[]; readonly present: number }
  | { readonly kind: 'hz'; readonly fromHz: number; readonly toHz: number; readonly present: number }

const LOWEST_CUTOFF_HZ = 0.01
/** Of the sampling rate. */
const HIGHEST_CUTOFF = 0.45
/** A band keeps at least this much between its edges. */
const BAND_GAP = 1.001
/** Narrower transitions take more taps than any study has used: 5.5 times the sampling rate over this at most. */
const NARROWEST_TRANSITION_HZ = 0.05

/** The first applied offline stage with a cutoff; null where there is none. */
export function variedByDefault(chain: readonly StageSpec[]): Varied | null {
  const stage = chain.findIndex((spec) => acts(spec) && spec.inData !== true && 'cutoffsHz' in spec)
  return stage < 0 ? null : { stage, what: 'cutoff', cutoff: 0 }
}

const acts = (spec: StageSpec) => spec.enabled !== false

/**
 * What a quantity of a chain can be.
 *
 * @param inData whether a stage in the data counts: it does where the chain is what a waveform has passed.
 * @returns null where the chain has no such quantity, or its stage does not act.
 */
export function variedRange(
  chain: readonly StageSpec[],
  { stage, what, cutoff }: Varied,
  samplingRateHz: number,
  inData = false,
): VariedRange | null {
  const spec = chain[stage]
  if (!spec || !acts(spec) || (spec.inData === true && !inData)) return null
  const toHz = HIGHEST_CUTOFF * samplingRateHz
  const hz = (from: number, to: number, present: number): VariedRange => ({
    kind: 'hz',
    // the chain may stand outside what is sensible
    fromHz: Math.min(from, present),
    toHz: Math.max(to, present),
    present,
  })
  switch (what) {
    case 'cutoff': {
      if (spec.design === 'amplifier') return cutoff === 0 ? hz(LOWEST_CUTOFF_HZ, toHz, spec.cutoffHz) : null
      if (!('cutoffsHz' in spec)) return null
      const present = spec.cutoffsHz[cutoff]
      if (present === undefined) return null
      if (spec.cutoffsHz.length === 1) return hz(LOWEST_CUTOFF_HZ, toHz, present)
      return cutoff === 0
        ? hz(LOWEST_CUTOFF_HZ, spec.cutoffsHz[1] / BAND_GAP, present)
        : hz(Math.max(LOWEST_CUTOFF_HZ, spec.cutoffsHz[0] * BAND_GAP), toHz, present)
    }
    case 'order': {
      if (spec.design !== 'butterworth' && spec.design !== 'amplifier') return null
      const most = spec.design === 'amplifier' ? MAX_AMPLIFIER_ORDER : MAX_BUTTERWORTH_ORDER[spec.pass]
      return { kind: 'orders', orders: Array.from({ length: most }, (_, i) => i + 1), present: spec.order }
    }
    case 'transition':
      if (spec.design !== 'windowed-sinc') return null
      return hz(NARROWEST_TRANSITION_HZ, toHz, spec.transitionHz)
  }
}

/** The chain with the quantity at another value; every other stage is the same object. */
export function variedChain(chain: readonly StageSpec[], { stage, what, cutoff }: Varied, at: number): StageSpec[] {
  return chain.map((spec, i) => {
    if (i !== stage) return spec
    if (what === 'order') return { ...spec, order: at } as StageSpec
    if (what === 'transition') return { ...spec, transitionHz: at } as StageSpec
    if (spec.design === 'amplifier') return { ...spec, cutoffHz: at }
    if (!('cutoffsHz' in spec)) return spec
    return { ...spec, cutoffsHz: spec.cutoffsHz.map((hz, k) => (k === cutoff ? at : hz)) }
  })
}
