import { epochTimesMs } from '../../src/erp/waveform.ts'
import type { Component } from '../../src/erp/component.ts'
import type { NoiseSpec } from '../../src/erp/noise.ts'
import { type AnsweredForm, answerClaim, claimBounds } from '../../src/evidence/claims/answer-claim.ts'
import type { ClaimFlip, ClaimSetting, ClaimVerdict, Varied } from '../../src/evidence/claims/claim.ts'
import { claimCurve } from '../../src/evidence/claims/claim-curve.ts'
import type { StageSpec } from '../../src/filter/index.ts'
import { test } from 'vitest'
import { againstReference, readReference, Worst } from './against-reference.ts'

interface ClaimCase {
  samplingRateHz: number
  epoch: { fromMs: number; toMs: number }
  stages: StageSpec[]
  baseline: ClaimSetting['baseline']
  conditions: { name: string; components: Component[] }[]
  chosen: ClaimSetting['chosen']
  score: ClaimSetting['score']
  measure: ClaimSetting['measure']
  noise: NoiseSpec
  trials: number
  answers: Answer[]
}

interface Answer {
  form: AnsweredForm
  measured: boolean
  number: number | null
  decides: number | null
  values: Record<string, number>
  interval: [number, number] | null
  varied?: Varied
  flips?: ClaimFlip[]
  fromHz?: number
  toHz?: number
}

const settingOf = (c: ClaimCase, { measured }: Answer): ClaimSetting => ({
  ...c,
  timesMs: epochTimesMs(c.samplingRateHz, c.epoch),
  chain: c.stages,
  extent: 'continuous',
  conditions: c.conditions.map(({ name, components }) => ({ name, source: { kind: 'built', components } })),
  noisePassed: 'nothing',
  taken: measured ? 'as measured' : 'as it stands',
  filteredBefore: 'as stated',
  unseenThreshold: 0.1,
})

const named = (c: ClaimCase, { form, measured }: Answer) =>
  `${JSON.stringify(form)}${measured ? ' measured' : ''} of ${JSON.stringify(c.stages)} at ${c.samplingRateHz} Hz`

/** Every answer of every case, from both sides. */
function* both(cases: ClaimCase[]) {
  for (const c of cases)
    for (const reference of c.answers) {
      const setting = settingOf(c, reference)
      yield { c, reference, setting, answer: answerClaim(reference.form, setting), name: () => named(c, reference) }
    }
}

/** SciPy's minimum-phase kernels and the core's differ by what either does about zeros on the unit circle. */
const hasMinimumPhase = ({ form }: Answer, stages: readonly StageSpec[]) =>
  form.form === 'twin' && form.twin === 'causal' && stages.some((spec) => spec.design === 'windowed-sinc')

const shownIn = (form: AnsweredForm) =>
  form.form === 'twin' ? form.shows : form.form === 'meaning' ? form.conclusion : form

/**
 * Of a number: 1e-9 of what it can be. Rounding in SciPy's sections goes with 1/(cutoff over rate)², and the Gaussians are cut at 1e-12 of their peaks by the core.
 * A moment is 1e-7 ms: what an error of 1e-12 of the waveform moves a flat top by; dB are 1e-7.
 */
function tolerance(c: ClaimCase, reference: Answer, unit: string): number {
  const loose = hasMinimumPhase(reference, c.stages) ? 1e4 : 1
  const largest = c.conditions[0].components.reduce((sum, { amplitudeUv }) => sum + Math.abs(amplitudeUv), 0)
  if (unit === 'ms') return loose * 1e-7
  if (unit === 'dB') return 1e-7
  if (unit !== '%') return loose * 1e-9 * largest
  const form = shownIn(reference.form)
  // per cent of a value that may be small
  const value = Math.abs(reference.values[form.form === 'from-outside' ? 'value' : 'before'] ?? largest)
  return (loose * 1e-7 * largest) / Math.min(largest, Math.max(value, form.form === 'from-outside' ? 0 : 0.1 * largest))
}

/** A peak, and what hangs on one, jumps to another peak. */
function jumps({ form }: Answer): boolean {
  const shown = shownIn(form)
  return shown.form === 'onset' || (shown.form === 'change' && /^(peak|onset)-/.test(shown.row))
}

const CLOSE = 1e-4
/** A change of the verdict and back that is nearer than this to itself leaves its place to rounding … */
const HAIRLINE = 1.002
/** … and where a number jumps away and back within a step of the core's grid, nothing beside it tells so. */
const GRID_STEP = 1.15

const isSame = (one: ClaimFlip, other: ClaimFlip | undefined, tolerance: number) =>
  other !== undefined &&
  one.below === other.below &&
  one.above === other.above &&
  Math.abs(one.at - other.at) <= tolerance * other.at

/** Without pairs that lie too close together to be found for sure, and were found on one side only. */
function sure(
  flips: readonly ClaimFlip[],
  others: readonly ClaimFlip[],
  tolerance: number,
  within: number,
): ClaimFlip[] {
  const kept: ClaimFlip[] = []
  for (let i = 0; i < flips.length; i++) {
    const [one, two] = [flips[i]!, flips[i + 1]]
    const alone = (flip: ClaimFlip) => !others.some((other) => isSame(flip, other, tolerance))
    if (two && two.at < within * one.at && one.below === two.above && alone(one) && alone(two)) i++
    else kept.push(one)
  }
  return kept
}

/**
 * Every change of a verdict is on both sides, at the same value, but for pairs of changes nearer to one another than `apart` that only one side found; not
 * given, these are pairs that no search could be sure of.
 */
function expectSameFlips(cases: readonly ClaimCase[], apart?: number): void {
  const worst = new Worst()
  for (const c of cases)
    for (const reference of c.answers) {
      if (!reference.flips || !reference.varied) continue
      const steps = claimCurve(reference.form, settingOf(c, reference), reference.varied)
      let step = steps.next()
      while (!step.done) step = steps.next()
      const { fromHz = 0, toHz = Infinity } = reference
      const within = (flips: readonly ClaimFlip[]) => flips.filter(({ at }) => at > fromHz && at < toHz)
      const tolerance = hasMinimumPhase(reference, c.stages) ? 10 * CLOSE : CLOSE
      const near = apart ?? (jumps(reference) ? GRID_STEP : HAIRLINE)
      const mine = within(step.value?.flips ?? [])
      const found = sure(mine, reference.flips, tolerance, near)
      const expected = sure(reference.flips, mine, tolerance, near)
      const told = (flips: readonly ClaimFlip[]) =>
        flips.map(({ at, below, above }) => `${below} < ${at.toFixed(5)} < ${above}`).join('; ')
      const what = () => `[${told(found)}] for [${told(expected)}], ${named(c, reference)}`
      worst.see(found.length === expected.length ? 0 : Infinity, 1, what)
      expected.forEach((flip, i) => {
        const other = found[i]
        if (!other) return
        worst.see(flip.below === other.below && flip.above === other.above ? 0 : Infinity, 1, what)
        worst.see(Math.abs(flip.at - other.at), tolerance * flip.at, what)
      })
    }
  worst.expectWithinBounds()
}

test('every change of a verdict in claims.json is found, and no other', () => {
  expectSameFlips(readReference<ClaimCase>('claims.json').cases)
})

againstReference<ClaimCase>('claims.json', 'make_claims.py', 7, {
  'the number of every form, and the values beside it, are SciPy’s to 1e-9 (a minimum-phase twin’s to 1e-5)': (
    cases,
  ) => {
    const worst = new Worst()
    for (const { c, reference, answer, name } of both(cases)) {
      const missing = (reference.number === null) !== (answer.number === null)
      worst.see(missing ? Infinity : 0, 1, () => `the number ${answer.number} for ${reference.number}, ${name()}`)
      if (reference.number !== null && answer.number !== null) {
        const error = Math.abs(answer.number - reference.number)
        worst.see(error, tolerance(c, reference, answer.unit), name)
      }
      for (const [of, value] of Object.entries(reference.values)) {
        const found = answer.values.find((entry) => entry.name === of)
        const error = found ? Math.abs(found.value - value) : Infinity
        worst.see(error, tolerance(c, reference, found?.unit ?? ''), () => `${of}, ${name()}`)
      }
    }
    worst.expectWithinBounds()
  },

  'the verdict is what SciPy’s number says of the amount, the noise within its interval': (cases) => {
    const worst = new Worst()
    for (const { reference, answer, name } of both(cases)) {
      // what is measured and not told hangs on the interval, which the next claim holds
      if (reference.measured) continue
      const { decides } = reference
      const expected: ClaimVerdict = decides === null ? 'cannot be told' : decides >= 0 ? 'holds' : 'does not hold'
      worst.see(answer.verdict === expected ? 0 : Infinity, 1, () => `${answer.verdict} for ${expected}, ${name()}`)
    }
    worst.expectWithinBounds()
  },

  'the 95 % interval under noise is that of the integral of S·|G − W|² to 1e-8 of its width': (cases) => {
    const worst = new Worst()
    for (const { reference, answer, name } of both(cases)) {
      if (!reference.measured || reference.interval === null) continue
      const width = reference.interval[1] - reference.interval[0]
      reference.interval.forEach((end, i) => {
        worst.see(Math.abs((answer.interval?.[i] ?? NaN) - end), 1e-8 * width, () => `end ${i}, ${name()}`)
      })
      if (answer.number === null) continue
      const bounds = claimBounds(reference.form)
      const untold = bounds.some((bound) => bound > reference.interval![0] && bound < reference.interval![1])
      if (reference.form.form !== 'change') continue
      worst.see(untold === (answer.verdict === 'cannot be told') ? 0 : Infinity, 1, () => `verdict, ${name()}`)
    }
    worst.expectWithinBounds()
  },

  'changes of a verdict over a cutoff or an order, more than a step of the grid apart, are SciPy’s critical values to 1e-4':
    (cases) => expectSameFlips(cases, GRID_STEP),
})
