import type { StageSpec } from '../../filter/stage.ts'
import type { CutoffMeaning } from '../../filter/stage.ts'
import type { MeaningClaim } from './claim.ts'
import { untold, type Weighed } from './claim-parts.ts'
import { compared, type WeighShown } from './twin-claim.ts'

/**
 * Form 8: the cutoffs as reported are of one meaning; with the same numbers of the other the conclusion is the same. It concerns the stages applied
 * here whose cutoffs are of the stated meaning; where none are, all whose cutoffs have one, as if they had been stated so.
 *
 * The number is that of the stated meaning.
 *
 * @throws RangeError for cutoffs that cannot be realised with either meaning, and as the conclusion.
 */
export function meaningClaim(form: MeaningClaim, specs: readonly StageSpec[], weigh: WeighShown): Weighed {
  const { stated, other, conclusion } = form
  const has = (spec: StageSpec) => spec.enabled !== false && spec.inData !== true && 'meaning' in spec
  const concerned = specs.some((spec) => has(spec) && 'meaning' in spec && spec.meaning === stated)
    ? (spec: StageSpec) => has(spec) && 'meaning' in spec && spec.meaning === stated
    : has
  if (!specs.some(has)) return untold({ kind: 'no meaning' }, weigh(conclusion, specs).unit)
  const read = (meaning: CutoffMeaning) =>
    specs.map((spec) =>
      concerned(spec) && 'meaning' in spec && spec.meaning !== meaning ? ({ ...spec, meaning } as StageSpec) : spec,
    )
  return compared(weigh(conclusion, read(stated)), weigh(conclusion, read(other)), 'present', (one, two) =>
    one === two ? 'holds' : 'does not hold',
  )
}
