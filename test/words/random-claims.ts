import fc from 'fast-check'
import type {
  ClaimAnswer,
  ClaimCurve,
  ClaimFlip,
  ClaimForm,
  ClaimGrounds,
  ClaimPoint,
  ClaimRow,
  ClaimVerdict,
  ShownAnswer,
  ShownClaim,
  Unit,
} from '../../src/evidence/claims/claim.ts'
import type { ClaimAnswerContext } from '../../src/words/index.ts'

/** Claims of every form with answers of every kind whose numbers bear their verdicts out, and curves whose flips follow from their points. */

const sizes = fc.oneof(
  fc.constantFrom(0, 0.5, 5, 50, 100),
  fc.integer({ min: 0, max: 100_000 }).map((n) => n / 1000),
  fc.constantFrom(1e-9, 1e-4, 12345.678, 1e15, 1e22),
)
const numbers = fc
  .oneof(sizes, fc.double({ min: 0, max: 1000, noNaN: true }))
  .chain((size) => fc.constantFrom(size, -size, size * (1 + 1e-9), size + 1e-4))
const windows = fc
  .tuple(fc.integer({ min: -500, max: 900 }), fc.constantFrom(0, 0.5, 20, 60, 333))
  .map(([fromMs, span]) => ({ fromMs, toMs: fromMs + span }))
/** Names that a user could type, some of which would act as markup. */
export const names = fc.constantFrom(
  'rare',
  'frequent',
  'a & b',
  '<script>alert(1)</script>',
  '*x*_y_|z',
  '"quoted"',
  "it's",
  '# <b>',
  '[l](http://x.y)',
  '',
)

const shownForms: fc.Arbitrary<ShownClaim> = fc.oneof(
  fc.record({
    form: fc.constant('change' as const),
    row: fc.constantFrom<ClaimRow>(
      'score',
      'mean-amplitude',
      'peak-amplitude',
      'signed-area',
      'peak-latency',
      'area-latency',
      'onset-latency',
    ),
    relation: fc.constantFrom('at least' as const, 'at most' as const),
    amount: sizes,
    unit: fc.constantFrom('own' as const, '%' as const),
  }),
  fc.record({
    form: fc.constant('deflection' as const),
    window: windows,
    amount: sizes,
    unit: fc.constantFrom('µV' as const, '%' as const),
  }),
  fc.record({ form: fc.constant('from-outside' as const), window: windows, percent: sizes }),
  fc.record({
    form: fc.constant('effect' as const),
    first: names,
    second: names,
    window: windows,
    says: fc.constantFrom(
      'exists without the filter' as const,
      'is absent without the filter' as const,
      'changes sign' as const,
    ),
    leastUv: sizes,
  }),
  fc.record({
    form: fc.constant('onset' as const),
    direction: fc.constantFrom('earlier' as const, 'later' as const),
    ms: sizes,
  }),
)
const meanings = fc.constantFrom('half-amplitude' as const, 'half-power' as const, 'design' as const)

export const forms: fc.Arbitrary<ClaimForm> = fc.oneof(
  { weight: 5, arbitrary: shownForms as fc.Arbitrary<ClaimForm> },
  fc.record({
    form: fc.constant('attenuation' as const),
    hz: fc.constantFrom(0.1, 10, 50, 59.94),
    db: fc.oneof(sizes, fc.constant(-3)),
  }),
  fc.record({
    form: fc.constant('tone' as const),
    hz: fc.constantFrom(10, 50, 60),
    amplitudeUv: sizes,
    belowUv: sizes,
    locked: fc.boolean(),
  }),
  fc.record({
    form: fc.constant('twin' as const),
    twin: fc.constantFrom('causal' as const, 'zero-phase' as const),
    shows: shownForms,
  }),
  fc.record({ form: fc.constant('meaning' as const), stated: meanings, other: meanings, conclusion: shownForms }),
  fc.record({
    form: fc.constant('late-only' as const),
    t0Ms: fc.integer({ min: -100, max: 400 }),
    early: windows,
    slackMs: fc.constantFrom(0, 30, 12.5),
  }),
)

export const contexts: fc.Arbitrary<ClaimAnswerContext> = fc.record({
  filter: fc.constantFrom('the filter', 'the chain “as published”'),
  trials: fc.constantFrom(1, 40, 1000, 12.5),
  taken: fc.constantFrom('as it stands' as const, 'as measured' as const),
})

const verdicts = fc.constantFrom<ClaimVerdict>('holds', 'does not hold', 'cannot be told')

function unitOf(form: ClaimForm): Unit {
  switch (form.form) {
    case 'change':
      if (form.unit === '%') return '%'
      return form.row === 'signed-area' ? 'µV·s' : form.row.endsWith('latency') ? 'ms' : 'µV'
    case 'deflection':
      return form.unit
    case 'from-outside':
      return '%'
    case 'onset':
      return 'ms'
    case 'attenuation':
      return 'dB'
    case 'twin':
      return unitOf(form.shows)
    case 'meaning':
      return unitOf(form.conclusion)
    default:
      return 'µV'
  }
}

/** What the numbers say of a form. */
export function verdictOf(form: ClaimForm, number: number, before = 0, after = 0): ClaimVerdict {
  const yes = (() => {
    switch (form.form) {
      case 'change':
        return form.relation === 'at least' ? Math.abs(number) >= form.amount : Math.abs(number) <= form.amount
      case 'deflection':
        return Math.abs(number) >= form.amount
      case 'from-outside':
        return number >= form.percent
      case 'effect':
        if (form.says === 'exists without the filter') return Math.abs(before) >= form.leastUv
        if (form.says === 'is absent without the filter')
          return Math.abs(before) < form.leastUv && Math.abs(after) >= form.leastUv
        return before * after < 0 && Math.min(Math.abs(before), Math.abs(after)) >= form.leastUv
      case 'onset':
        return number >= form.ms
      case 'attenuation':
        return number >= form.db
      case 'tone':
        return number < form.belowUv
      default:
        return true
    }
  })()
  return yes ? 'holds' : 'does not hold'
}

const noAnswer = (form: ClaimForm, verdict: ClaimVerdict, grounds: ClaimGrounds): ShownAnswer => ({
  verdict,
  number: null,
  unit: unitOf(form),
  interval: null,
  grounds,
  values: [],
})

/** Where the verdict may change as the number moves. */
export function boundsOf(form: ClaimForm): number[] {
  switch (form.form) {
    case 'change':
    case 'deflection':
      return [form.amount, -form.amount]
    case 'from-outside':
      return [form.percent]
    case 'effect':
      return [form.leastUv, -form.leastUv]
    case 'onset':
      return [form.ms]
    case 'attenuation':
      return [form.db]
    case 'tone':
      return [form.belowUv]
    default:
      return [0]
  }
}

const noisyForm = (form: ClaimForm) => form.form !== 'attenuation' && form.form !== 'tone'

/** Answers of one of the forms 1 to 6. */
function plainAnswers(form: ClaimForm): fc.Arbitrary<ShownAnswer> {
  const unit = unitOf(form)
  const measured: fc.Arbitrary<ShownAnswer> = fc
    .record({ drawn: numbers, start: numbers, named: fc.boolean(), noisy: fc.boolean() })
    .map(({ drawn, start, named, noisy }) => {
      // an attenuation is counted up to 300 dB, what is left of a tone has no sign
      const number =
        form.form === 'tone'
          ? Math.abs(drawn)
          : form.form === 'attenuation'
            ? Math.max(-300, Math.min(300, drawn))
            : drawn
      const before = start
      const shift = form.form === 'onset' && form.direction === 'earlier' ? -number : number
      const after = form.form === 'effect' ? number : start + shift
      const nearest = Math.min(...boundsOf(form).map((bound) => Math.abs(number - bound)))
      const interval = [number - 0.9 * nearest, number + 0.9 * nearest] as const
      const told = form.form === 'effect' || (named && unit !== '%' && noisyForm(form))
      return {
        verdict: verdictOf(form, number, before, after),
        number,
        unit,
        interval: noisy && noisyForm(form) ? interval : null,
        grounds: { kind: 'number' as const },
        values: told
          ? [
              { name: 'before', value: before, unit },
              { name: 'after', value: after, unit },
            ]
          : [],
      }
    })
  const without: fc.Arbitrary<ShownAnswer>[] = [
    fc.constant(noAnswer(form, 'cannot be told', { kind: 'filtered before' })),
    fc
      .record({
        share: fc.double({ min: 0.0501, max: 1, noNaN: true }),
        number: fc.option(numbers),
        furtherMs: fc.option(fc.record({ back: fc.constantFrom(0, 900, 12.3), on: fc.constantFrom(0, 300) })),
      })
      .map(({ share, number, furtherMs }) => ({
        ...noAnswer(form, 'cannot be told', { kind: 'unseen', share, threshold: 0.05, furtherMs }),
        number,
      })),
  ]
  if (form.form === 'change' || form.form === 'onset')
    without.push(
      fc
        .record({
          missing: fc.constantFrom('no peak' as const, 'no area' as const, 'no onset' as const),
          where: fc.constantFrom('before' as const, 'after' as const),
        })
        .map((grounds) => noAnswer(form, 'cannot be told', { kind: 'no value', ...grounds })),
    )
  if (form.form === 'from-outside' || (form.form === 'change' && form.unit === '%'))
    without.push(
      fc
        .constantFrom(0, 0.001, -0.004)
        .map((valueUv) => noAnswer(form, 'cannot be told', { kind: 'about zero', valueUv })),
    )
  if (form.form === 'deflection')
    without.push(
      fc
        .tuple(sizes, fc.constantFrom(1.01, -3, 40))
        .map(([limitUv, times]) =>
          noAnswer(form, 'does not hold', { kind: 'already there', largestUv: (limitUv + 0.01) * times, limitUv }),
        ),
    )
  const noisy: fc.Arbitrary<ShownAnswer> = fc
    .tuple(numbers, fc.option(fc.constantFrom(1001, 1570, 1e6, 1.5e22)))
    .map(([number, trialsNeeded]) => {
      const half = 1.1 * Math.min(...boundsOf(form).map((bound) => Math.abs(number - bound))) + 0.01
      return {
        verdict: 'cannot be told' as const,
        number,
        unit,
        interval: [number - half, number + half] as const,
        grounds: { kind: 'within noise' as const, trialsNeeded },
        values: [],
      }
    })
  // as much as is ever counted, and more than that
  const endless: fc.Arbitrary<ShownAnswer> = fc
    .constantFrom(300, Infinity)
    .map((number) => ({ ...noAnswer(form, verdictOf(form, number), { kind: 'number' }), number }))
  if (form.form === 'attenuation') return fc.oneof({ weight: 4, arbitrary: measured }, endless)
  if (form.form === 'tone') return measured
  return fc.oneof({ weight: 4, arbitrary: measured }, ...without, noisy)
}

/** Answers that the form can have. */
export function answers(form: ClaimForm): fc.Arbitrary<ClaimAnswer> {
  if (form.form === 'twin') {
    const inner = plainAnswers(form.shows)
    return fc.oneof(
      fc.tuple(inner, inner).map(([present, compared]) => {
        const told = present.verdict !== 'cannot be told' && compared.verdict !== 'cannot be told'
        const verdict = !told
          ? 'cannot be told'
          : present.verdict === 'holds' && compared.verdict === 'does not hold'
            ? 'holds'
            : 'does not hold'
        return noAnswer(form, verdict, { kind: 'compared', present, compared })
      }),
      inner
        .filter(({ verdict }) => verdict !== 'holds')
        .map((shown) => noAnswer(form, shown.verdict, { kind: 'not shown', shown })),
      fc.constant(noAnswer(form, 'cannot be told', { kind: 'no twin', why: 'every stage is causal already' })),
    )
  }
  if (form.form === 'meaning') {
    const inner = plainAnswers(form.conclusion)
    return fc.oneof(
      fc.tuple(inner, inner).map(([present, compared]) => {
        const told = present.verdict !== 'cannot be told' && compared.verdict !== 'cannot be told'
        const verdict = !told ? 'cannot be told' : present.verdict === compared.verdict ? 'holds' : 'does not hold'
        return noAnswer(form, verdict, { kind: 'compared', present, compared })
      }),
      fc.constant(noAnswer(form, 'cannot be told', { kind: 'no meaning' })),
    )
  }
  if (form.form === 'late-only')
    return fc.tuple(numbers, sizes, fc.boolean(), fc.boolean()).map(([number, half, changed, wide]) => {
      const interval = [number - half, number + half] as const
      const excludes = interval[0] > 0 || interval[1] < 0
      const fit = excludes ? 'not by late activity alone' : wide ? 'cannot be told' : 'it can'
      const verdict = changed ? 'cannot be told' : excludes ? 'does not hold' : wide ? 'cannot be told' : 'holds'
      return {
        verdict,
        number,
        unit: 'µV' as const,
        interval,
        grounds: { kind: 'late-only' as const, verdict: changed ? 'cannot be told' : fit, changed },
        values: [],
      }
    })
  return plainAnswers(form)
}

export const answered = forms.chain((form) => answers(form).map((answer) => ({ form, answer })))

/** Curves of points in runs of one verdict, a flip between every two runs that meet. */
export const curves: fc.Arbitrary<ClaimCurve> = fc
  .record({
    runs: fc.array(
      fc.tuple(fc.oneof({ weight: 5, arbitrary: verdicts }, fc.constant(null)), fc.integer({ min: 1, max: 4 })),
      {
        minLength: 1,
        maxLength: 5,
      },
    ),
    what: fc.constantFrom('cutoff' as const, 'order' as const, 'transition' as const),
    cutoff: fc.constantFrom(0 as const, 1 as const),
    start: fc.constantFrom(0.01, 0.1, 1),
    step: fc.constantFrom(1.0004, 1.2, 2),
    split: fc.double({ min: 0.01, max: 0.99, noNaN: true }),
    place: fc.nat(),
  })
  .map(({ runs, what, cutoff, start, step, split, place }) => {
    const whole = what === 'order'
    const points: ClaimPoint[] = runs
      .flatMap(([verdict, count]) => Array.from({ length: count }, () => verdict))
      .map((verdict, i) => ({
        at: whole ? i + 1 : start * step ** i,
        number: verdict === null ? null : i - 2,
        verdict,
      }))
    const flips: ClaimFlip[] = points.slice(1).flatMap((point, i) => {
      const before = points[i]
      if (before.verdict === null || point.verdict === null || before.verdict === point.verdict) return []
      const at = whole ? point.at : before.at + split * (point.at - before.at)
      return [{ at, below: before.verdict, above: point.verdict }]
    })
    return {
      varied: { stage: 0, what, cutoff },
      unit: whole ? null : 'Hz',
      present: points[place % points.length].at,
      points,
      flips,
    }
  })
