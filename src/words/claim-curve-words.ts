import type { ClaimCurve, ClaimForm, ClaimVerdict } from '../evidence/claims/claim.ts'
import type { StageSpec } from '../filter/stage.ts'
import { brief, exact, list } from './number.ts'
import { stageName } from './stage-words.ts'

/** A stretch of the varied quantity with one answer; null where there is none. */
interface Stretch {
  readonly from: number
  readonly to: number
  readonly verdict: ClaimVerdict | null
}

/**
 * What would change a claim's answer: every change of the verdict along the curve, within the range that was looked at.
 *
 * @param chain  the chain of the claim, so that the stage can be named; without it the sentence says "the cutoff" alone.
 */
export function curveSentence(form: ClaimForm, curve: ClaimCurve, chain: readonly StageSpec[] = []): string {
  const names = namesOf(curve, chain)
  const { points } = curve
  if (points.length === 0) return `Other values of the ${names.long} were not looked at.`
  const all = stretches(curve)
  const print = printer(curve, all)
  const told = all.filter((stretch): stretch is Told => stretch.verdict !== null)
  const missing = all.filter(({ verdict }) => verdict === null)
  // a gain exists wherever the filter does
  const because =
    form.form === 'attenuation' || form.form === 'tone'
      ? 'because the filter cannot be realised'
      : 'because the filter cannot be realised or the number does not exist'
  if (told.length === 0)
    return `Nothing can be said of the ${names.long} ${print.ends()}: there is no answer anywhere, ${because}.`
  const where = list(missing.map((stretch) => print.stretch(stretch)))
  const closing = missing.length === 0 ? '' : ` ${capital(where)} there is no answer, ${because}.`
  // a fit takes long: few values are tried, and changes are not narrowed down far
  const tried =
    form.form === 'late-only' && curve.flips.length > 0 && curve.unit !== null
      ? ` ${exact(points.length)} values were tried; a change lies somewhere between two of them.`
      : ''
  return `${changes(curve, told, missing.length > 0, names, print)}${closing}${tried}`
}

type Told = Stretch & { readonly verdict: ClaimVerdict }

interface Names {
  /** "cutoff"; "cutoff of the Butterworth high-pass" where the chain has several stages. */
  readonly long: string
  readonly ofStage: boolean
}

function namesOf({ varied }: Pick<ClaimCurve, 'varied'>, chain: readonly StageSpec[]): Names {
  const spec: StageSpec | undefined = chain[varied.stage]
  const short = quantityOf(varied, spec)
  const ofStage = spec !== undefined && chain.filter(({ enabled }) => enabled !== false).length > 1
  return { long: ofStage ? `${short} of the ${stageName(spec)}` : short, ofStage }
}

function quantityOf({ what, cutoff }: ClaimCurve['varied'], spec: StageSpec | undefined): string {
  if (what === 'transition') return 'transition width'
  if (what === 'order') return spec?.design === 'butterworth' && spec.direction === 'both' ? 'order per pass' : 'order'
  if (cutoff === 1) return 'upper cutoff'
  return spec !== undefined && 'cutoffsHz' in spec && spec.cutoffsHz.length === 2 ? 'lower cutoff' : 'cutoff'
}

interface Printer {
  readonly value: (value: number) => string
  readonly range: (from: number, to: number) => string
  readonly stretch: (stretch: Stretch) => string
  /** The range that was looked at: "from 0.01 to 225 Hz". */
  readonly ends: () => string
}

/** Digits enough that no two places that are named print the same. */
function printer({ points, flips, present, unit }: ClaimCurve, all: readonly Stretch[]): Printer {
  const places = [...new Set([present, ...flips.map(({ at }) => at), ...all.flatMap(({ from, to }) => [from, to])])]
  let digits = 3
  while (digits < 12 && new Set(places.map((value) => brief(value, digits))).size < places.length) digits++
  const end = unit === null ? '' : ` ${unit}`
  const ends = [points[0].at, points[points.length - 1].at]
  // 112.5 Hz is not to become 113 Hz, which was not looked at
  const bare = (value: number) => brief(value, ends.includes(value) ? Math.max(4, digits) : digits)
  const value = (at: number) => `${bare(at)}${end}`
  const range = (from: number, to: number) => `${bare(from)} to ${bare(to)}${end}`
  const stretch = ({ from, to }: Pick<Stretch, 'from' | 'to'>) =>
    from === to ? `at ${value(from)}` : `from ${range(from, to)}`
  return { value, range, stretch, ends: () => stretch({ from: points[0].at, to: points[points.length - 1].at }) }
}

/** The curve as stretches of one answer each, ascending. Between two points the answer changes where a flip says so, else at the points. */
function stretches({ points, flips, unit }: ClaimCurve): Stretch[] {
  const found: Stretch[] = []
  let open: { from: number; to: number; verdict: ClaimVerdict | null } | null = null
  const close = () => {
    if (open) found.push(open)
  }
  points.forEach((point, i) => {
    if (open && i > 0) {
      for (const flip of flips.filter(({ at }) => at > points[i - 1].at && at <= point.at)) {
        if (open.verdict === null || flip.above === open.verdict) continue
        // an order is one side or the other; a cutoff in between is the border of both
        open.to = unit === null ? points[i - 1].at : flip.at
        close()
        open = { from: flip.at, to: flip.at, verdict: flip.above }
      }
    }
    if (open && open.verdict === point.verdict) open.to = point.at
    else {
      close()
      open = { from: point.at, to: point.at, verdict: point.verdict }
    }
  })
  close()
  return found
}

function changes(curve: ClaimCurve, told: readonly Told[], gaps: boolean, names: Names, print: Printer): string {
  const { points, present, unit } = curve
  const inRange = present >= points[0].at && present <= points[points.length - 1].at
  const only = told.every(({ verdict }) => verdict === told[0].verdict)
  if (only) {
    const [{ verdict }] = told
    if (points.length === 1)
      return `Only one ${names.long} was looked at, ${print.value(points[0].at)}: it ${IS[verdict]} there.`
    const where = list(told.map(print.stretch))
    if (!inRange) return `With the ${names.long} varied ${print.ends()}: it ${IS[verdict]} ${where}.`
    return gaps
      ? `No ${names.long} ${print.ends()} changes the answer where there is one: it ${IS[verdict]} ${where}.`
      : `No ${names.long} ${print.ends()} changes the answer: it ${ALL[verdict]}.`
  }
  if (!gaps && told.length === 2 && inRange) {
    const [low, high] = told
    // on the border itself either side may be the present one: both are told then
    if (present < high.from) return beyond(names, high, 'above', print, unit)
    if (present > low.to) return beyond(names, low, 'below', print, unit)
  }
  const looked = ` (looked at ${print.ends()})`
  if (!gaps && told.length === 3 && told[0].verdict === told[2].verdict) {
    const [{ verdict: outer }, middle] = told
    const span =
      middle.from === middle.to
        ? `with the ${names.long} at ${print.value(middle.from)}`
        : unit === null
          ? `with the ${names.long} from ${print.range(middle.from, middle.to)}`
          : `with the ${names.long} between ${print.range(middle.from, middle.to).replace(' to ', ' and ')}`
    if (middle.verdict === 'holds' && outer === 'does not hold') return `It holds ${span} and not outside${looked}.`
    return `It ${IS[middle.verdict]} ${span}, and ${IS[outer]} outside${looked}.`
  }
  const items = told.map((stretch) => `it ${IS[stretch.verdict]} ${print.stretch(stretch)}`)
  return `With the ${names.long} varied ${print.ends()}: ${list(items)}.`
}

const IS: Record<ClaimVerdict, string> = {
  holds: 'holds',
  'does not hold': 'does not hold',
  'cannot be told': 'cannot be told',
}
const ALL: Record<ClaimVerdict, string> = {
  holds: 'holds throughout',
  'does not hold': 'does not hold anywhere',
  'cannot be told': 'cannot be told anywhere',
}
const WOULD: Record<ClaimVerdict, string> = {
  holds: 'it would hold',
  'does not hold': 'it would not hold',
  'cannot be told': 'it could not be told',
}

/** What is on the other side of the one change that there is; nothing was looked at beyond the ends of the curve. */
function beyond(
  names: Names,
  { from, to, verdict }: Told,
  side: 'above' | 'below',
  print: Printer,
  unit: ClaimCurve['unit'],
): string {
  const border = side === 'above' ? from : to
  const end = side === 'above' ? to : from
  const looked = border === end ? '' : ` (looked at ${side === 'above' ? 'up' : 'down'} to ${print.value(end)})`
  if (unit === null)
    return `With the ${names.long} at ${print.value(border)}${border === end ? '' : ` or ${side}`} ${WOULD[verdict]}${looked}.`
  if (names.ofStage) return `With the ${names.long} ${side} ${print.value(border)} ${WOULD[verdict]}${looked}.`
  const article = /^[aeiou]/i.test(names.long) ? 'an' : 'a'
  return `${capital(side)} ${article} ${names.long} of ${print.value(border)} ${WOULD[verdict]}${looked}.`
}

const capital = (words: string) => words.charAt(0).toUpperCase() + words.slice(1)

/** What is varied, as a phrase: "cutoff", or "cutoff of the Butterworth high-pass" in a chain of several stages. */
export function variedWords(varied: ClaimCurve['varied'], chain: readonly StageSpec[]): string {
  return namesOf({ varied }, chain).long
}
