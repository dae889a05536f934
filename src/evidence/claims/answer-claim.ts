import type { StageSpec } from '../../filter/stage.ts'
import { attenuationClaim, toneClaim } from './attenuation-claim.ts'
import { changeClaim } from './change-claim.ts'
import type { ClaimAnswer, ClaimForm, ClaimSetting, LateOnlyClaim, ShownClaim, Unit } from './claim.ts'
import { untold, type Weighed } from './claim-parts.ts'
import { claimChain, type PreparedClaim, prepareClaim } from './claimed-waveform.ts'
import { deflectionClaim } from './deflection-claim.ts'
import { effectClaim } from './effect-claim.ts'
import { meaningClaim } from './meaning-claim.ts'
import { onsetClaim } from './onset-claim.ts'
import { outsideClaim } from './outside-claim.ts'
import { statementOf } from './statement-of.ts'
import { twinClaim } from './twin-claim.ts'

/** Every form but the late-only fit, which has a file of its own. */
export type AnsweredForm = Exclude<ClaimForm, LateOnlyClaim>

/**
 * Computes a claim and answers it.
 *
 * Numbers are the readout's: the same curves, windows and baseline. Taken 'as measured' (a recorded average always is) they carry the noise of the trials.
 *
 * @throws RangeError with what, rule and value for a form, a window or a chain that cannot be.
 */
export function answerClaim(form: AnsweredForm, setting: ClaimSetting): ClaimAnswer {
  const { decisions: _, drawn: _drawn, ...answer } = weighClaim(prepareClaim(setting), form, setting.chain)
  return answer
}

/** The answer with some chain in the place of the setting's own. Throws as `answerClaim`. */
export function weighClaim(prepared: PreparedClaim, form: AnsweredForm, specs: readonly StageSpec[]): Weighed {
  const { setting } = prepared
  const shown = statementOf(form)
  if (speaksOfUnfiltered(shown) && isFilteredBefore(setting)) return untold({ kind: 'filtered before' }, unitOf(shown))
  switch (form.form) {
    case 'attenuation':
      return attenuationClaim(prepared, form, claimChain(prepared, specs))
    case 'tone':
      return toneClaim(prepared, form, claimChain(prepared, specs))
    case 'twin':
      return twinClaim(prepared, form, specs, (of, chain) => weighShown(prepared, of, chain))
    case 'meaning':
      return meaningClaim(form, specs, (of, chain) => weighShown(prepared, of, chain))
    default:
      return weighShown(prepared, form, specs)
  }
}

function weighShown(prepared: PreparedClaim, form: ShownClaim, specs: readonly StageSpec[]): Weighed {
  const chain = claimChain(prepared, specs)
  switch (form.form) {
    case 'change':
      return changeClaim(prepared, form, chain)
    case 'deflection':
      return deflectionClaim(prepared, form, chain)
    case 'from-outside':
      return outsideClaim(prepared, form, chain)
    case 'effect':
      return effectClaim(prepared, form, chain)
    case 'onset':
      return onsetClaim(prepared, form, chain)
  }
}

/** Changes and onsets speak of this chain on these data; the others of a waveform that no filter has touched. */
const speaksOfUnfiltered = ({ form }: AnsweredForm) =>
  form === 'deflection' || form === 'from-outside' || form === 'effect'

const isFilteredBefore = ({ filteredBefore, conditions }: ClaimSetting) =>
  filteredBefore === 'not known' && conditions.some(({ source }) => source.kind === 'recorded')

const unitOf = (form: AnsweredForm): Unit =>
  form.form === 'deflection' ? form.unit : form.form === 'from-outside' ? '%' : 'µV'

/**
 * The numbers at which an answer can turn, in the number's unit: the lines to draw beside a curve of it.
 */
export function claimBounds(form: ClaimForm): number[] {
  switch (form.form) {
    case 'change':
    case 'deflection':
      return form.amount === 0 ? [0] : [-form.amount, form.amount]
    case 'from-outside':
      return [form.percent]
    case 'effect':
      return [-form.leastUv, form.leastUv]
    case 'onset':
      return [form.ms]
    case 'attenuation':
      return [form.db]
    case 'tone':
      return [form.belowUv]
    case 'twin':
      return claimBounds(form.shows)
    case 'meaning':
      return claimBounds(form.conclusion)
    case 'late-only':
      return [0]
  }
}
