import type { StageSpec } from '../../filter/stage.ts'
import { causalTwin, zeroPhaseTwin } from '../../filter/twins.ts'
import type { ShownAnswer, ShownClaim, TwinClaim } from './claim.ts'
import { untold, type Weighed } from './claim-parts.ts'
import { once, type PreparedClaim } from './claimed-waveform.ts'

/** The answer to a shown claim with some chain. */
export type WeighShown = (form: ShownClaim, specs: readonly StageSpec[]) => Weighed

/**
 * Form 7: the filter shows it, and with every stage that is applied here in its causal (zero-phase) twin's place it does not. Amplifier stages have no twin
 * and stay.
 *
 * The number is the twin's; where the filter as it is does not show it, that of the filter. A curve draws the twin's throughout.
 *
 * @throws RangeError for a chain that cannot be designed, and as the claim that is shown.
 */
export function twinClaim(
  prepared: PreparedClaim,
  form: TwinClaim,
  specs: readonly StageSpec[],
  weigh: WeighShown,
): Weighed {
  const present = weigh(form.shows, specs)
  const acts = (spec: StageSpec) => spec.enabled !== false && spec.inData !== true && spec.design !== 'amplifier'
  const twins = specs.map((spec) => (acts(spec) ? twinOf(prepared, spec, form.twin) : [spec]))
  const changed = twins.some((twin, i) => twin.length > 1 || twin[0] !== specs[i])
  if (!changed) {
    const why = specs.some(acts)
      ? `every stage that is applied here is ${form.twin} already`
      : 'no stage that is applied here has such a twin'
    return untold({ kind: 'no twin', why }, present.unit)
  }
  if (present.verdict === 'does not hold') {
    const { decisions, ...shown } = present
    return { ...shown, grounds: { kind: 'not shown', shown }, decisions, drawn: weigh(form.shows, twins.flat()).number }
  }
  return compared(present, weigh(form.shows, twins.flat()), 'twin', (one, other) =>
    one === 'holds' && other === 'does not hold' ? 'holds' : 'does not hold',
  )
}

/** A stage that a search does not vary keeps its twin, and the twin its design. */
function twinOf(prepared: PreparedClaim, spec: StageSpec, twin: TwinClaim['twin']): readonly StageSpec[] {
  const kept = once(prepared, `twins ${twin}`, () => new WeakMap<StageSpec, readonly StageSpec[]>())
  let found = kept.get(spec)
  if (!found) {
    const { samplingRateHz } = prepared.setting
    found = twin === 'causal' ? causalTwin(spec, samplingRateHz) : zeroPhaseTwin(spec, samplingRateHz)
    kept.set(spec, found)
  }
  return found
}

/** Two answers to one statement; what cannot be told of either cannot be told of both. */
export function compared(
  present: Weighed,
  other: Weighed,
  numberOf: 'present' | 'twin',
  verdict: (present: ShownAnswer['verdict'], other: ShownAnswer['verdict']) => ShownAnswer['verdict'],
): Weighed {
  const { decisions: first, ...one } = present
  const { decisions: second, ...two } = other
  const unknown = one.verdict === 'cannot be told' || two.verdict === 'cannot be told'
  const told = numberOf === 'twin' ? two : one
  const named = (name: string, { number, unit }: ShownAnswer) =>
    number === null ? [] : [{ name, value: number, unit }]
  return {
    verdict: unknown ? 'cannot be told' : verdict(one.verdict, two.verdict),
    number: told.number,
    unit: told.unit,
    interval: told.interval,
    grounds: { kind: 'compared', present: one, compared: two },
    values:
      numberOf === 'twin'
        ? [...named('as it is', one), ...named('twin', two)]
        : [...named('as stated', one), ...named('other meaning', two)],
    decisions: [...first, ...second],
  }
}
