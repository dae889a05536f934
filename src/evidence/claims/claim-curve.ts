import type { StageSpec } from '../../filter/stage.ts'
import { type AnsweredForm, weighClaim } from './answer-claim.ts'
import type { Weighed } from './claim-parts.ts'
import type { ClaimCurve, ClaimFlip, ClaimPoint, ClaimSetting, Varied } from './claim.ts'
import { prepareClaim } from './claimed-waveform.ts'
import { variedByDefault, variedChain, variedRange } from './varied-chain.ts'

/** How far a search has come, and over how much: the total grows where changes must be located. */
export interface CurveProgress {
  readonly done: number
  readonly total: number
}

/** Points of the grid over a whole axis. */
const GRID = 80
/** Critical values are found to this part of themselves. */
const CLOSE = 1e-4
/** Steps towards a least distance between two points of the grid. */
const STEPS = 8

/** A point with what the search sees. */
interface Seen extends ClaimPoint {
  /** Position on the axis: the logarithm of a quantity in Hz. */
  readonly x: number
  readonly decisions: readonly number[]
}

/**
 * The number and the verdict of a claim over the whole sensible range of one quantity of the chain, everything else as it is, with every change of the
 * verdict.
 *
 * Cutoffs run from 0.01 Hz to 0.45 of the sampling rate (to the other edge of a band), transition widths from 0.05 Hz, both in even steps of their logarithm;
 * orders over all there are. Each change of the verdict between neighbours is bisected to 1e-4 of its value. A number that
 * touches its bound between two grid points changes the verdict twice and leaves no trace on the grid: where any quantity that decides comes
 * nearest to 0 at a grid point, and its neighbours are not so far off that it could not reach it, its least distance is looked for as well. So does a
 * number that goes from beyond one bound to beyond the other: where several deciding quantities change sign and the verdict does not, it is looked at
 * on the way. A peak, and what hangs on one, may jump to another peak and back within a step of the grid (13 % of a cutoff at 500 Hz): that leaves no
 * trace at all, and such pairs of changes can be missed.
 *
 * @param varied what is varied, or null for the first applied offline stage's first cutoff.
 * @returns null where there is nothing to vary. A filter that cannot be realised has a point without number and verdict.
 * @throws RangeError as `answerClaim` for what is wrong with the form itself: the chain as it stands is answered first.
 */
export function* claimCurve(
  form: AnsweredForm,
  setting: ClaimSetting,
  varied: Varied | null,
): Generator<CurveProgress, ClaimCurve | null> {
  const of = varied ?? variedByDefault(setting.chain)
  const range = of && variedRange(setting.chain, of, setting.samplingRateHz)
  if (!of || !range) return null
  const prepared = prepareClaim(setting)
  const answer = (chain: readonly StageSpec[]) => weighClaim(prepared, form, chain)
  const onAxis = range.kind === 'hz' ? Math.log : (at: number) => at
  const seen = new Map<number, Seen>()
  const { present } = range
  const present0 = answer(setting.chain)
  seen.set(present, {
    at: present,
    x: onAxis(present),
    number: drawnNumber(present0),
    verdict: present0.verdict,
    decisions: present0.decisions,
  })
  const look = (at: number): Seen => {
    const known = seen.get(at)
    if (known) return known
    const x = onAxis(at)
    let point: Seen
    try {
      const weighed = answer(variedChain(setting.chain, of, at))
      point = { at, x, number: drawnNumber(weighed), verdict: weighed.verdict, decisions: weighed.decisions }
    } catch (error) {
      // what is wrong with the form has been thrown by the chain as it stands
      if (!(error instanceof RangeError)) throw error
      point = { at, x, number: null, verdict: null, decisions: [] }
    }
    seen.set(at, point)
    return point
  }
  const places = range.kind === 'orders' ? range.orders : logGrid(range.fromHz, range.toHz)
  let done = 0
  for (const at of places) {
    look(at)
    yield { done: ++done, total: places.length }
  }
  const ascending = () => [...seen.values()].sort((a, b) => a.at - b.at)
  const grid = ascending()
  if (range.kind === 'hz') {
    for (const [a, b, c] of nearMisses(grid)) {
      approach(a, b, c, look)
      yield { done: ++done, total: Math.max(done, places.length) }
    }
    for (let i = 0; i + 1 < grid.length; i++) {
      if (!passThrough(grid[i], grid[i + 1], look)) continue
      yield { done: ++done, total: Math.max(done, places.length) }
    }
  }
  const flips: ClaimFlip[] = []
  const known = ascending()
  for (let i = 0; i + 1 < known.length; i++) {
    const [below, above] = [known[i], known[i + 1]]
    flips.push(...(range.kind === 'orders' ? located(below, above, true) : bisect(below, above, look)))
    if (below.verdict !== above.verdict) yield { done: ++done, total: Math.max(done, places.length) }
  }
  const points = drawn(ascending(), grid).map(({ at, number, verdict }) => ({ at, number, verdict }))
  return { varied: of, unit: range.kind === 'hz' ? 'Hz' : null, present, points, flips }
}

const drawnNumber = ({ number, drawn }: Weighed) => (drawn === undefined ? number : drawn)

function logGrid(fromHz: number, toHz: number): number[] {
  return Array.from({ length: GRID }, (_, i) => fromHz * (toHz / fromHz) ** (i / (GRID - 1)))
}

/** Neighbours of one verdict, of which the middle one has some deciding quantity nearest to 0. */
function nearMisses(grid: readonly Seen[]): [Seen, Seen, Seen][] {
  const found: [Seen, Seen, Seen][] = []
  for (let i = 0; i + 2 < grid.length; i++) {
    const triple: [Seen, Seen, Seen] = [grid[i], grid[i + 1], grid[i + 2]]
    if (triple.some(({ verdict }) => verdict === null || verdict !== triple[1].verdict)) continue
    if (nearest(triple).length > 0) found.push(triple)
  }
  return found
}

/** Indices of the deciding quantities of one sign that are least at the middle and may go through 0 near it. */
function nearest([a, b, c]: readonly [Seen, Seen, Seen]): number[] {
  if (a.decisions.length !== b.decisions.length || c.decisions.length !== b.decisions.length) return []
  return b.decisions.flatMap((_, k) => {
    const sign = Math.sign(b.decisions[k])
    const [p, q, r] = [a, b, c].map(({ decisions }) => sign * decisions[k])
    if (!(q > 0 && p >= q && r >= q)) return []
    // between neighbours it falls no further than it has risen beside the least of them, with room to spare
    return q <= 2 * (Math.max(p, r) - q) ? [k] : []
  })
}

/** Looks along the least distance of each such quantity until the verdict changes. */
function approach(a: Seen, b: Seen, c: Seen, look: (at: number) => Seen): void {
  for (const k of nearest([a, b, c])) {
    const sign = Math.sign(b.decisions[k])
    let [low, middle, high] = [a, b, c]
    for (let step = 0; step < STEPS; step++) {
      const left = middle.x - low.x > high.x - middle.x
      const point = look(
        Math.exp(left ? middle.x - 0.382 * (middle.x - low.x) : middle.x + 0.382 * (high.x - middle.x)),
      )
      if (point.verdict !== b.verdict || point.decisions.length !== b.decisions.length) break
      if (sign * point.decisions[k] < sign * middle.decisions[k]) {
        if (left) high = middle
        else low = middle
        middle = point
      } else if (left) low = point
      else high = point
    }
  }
}

/**
 * Follows each of several deciding quantities that change sign between two neighbours of one verdict to where it does, until the verdict changes.
 *
 * @returns whether there was anything to follow.
 */
function passThrough(a: Seen, b: Seen, look: (at: number) => Seen): boolean {
  if (a.verdict === null || a.verdict !== b.verdict || a.decisions.length !== b.decisions.length) return false
  const changing = a.decisions.flatMap((value, k) => (value * b.decisions[k] < 0 ? [k] : []))
  // the verdict is the same again only where it has changed twice
  if (changing.length < 2) return false
  for (const k of changing) {
    let [low, high] = [a, b]
    while (high.at - low.at > CLOSE * high.at) {
      const middle = look(Math.exp((low.x + high.x) / 2))
      if (middle.verdict !== a.verdict || middle.decisions.length !== a.decisions.length) return true
      if (middle.decisions[k] * low.decisions[k] > 0) low = middle
      else high = middle
    }
  }
  return true
}

/** Every change of the verdict between two points, each to `CLOSE`. */
function bisect(below: Seen, above: Seen, look: (at: number) => Seen): ClaimFlip[] {
  if (below.verdict === null || above.verdict === null || below.verdict === above.verdict) return []
  if (above.at - below.at <= CLOSE * above.at) return located(below, above, false)
  const middle = look(Math.exp((below.x + above.x) / 2))
  return [...bisect(below, middle, look), ...bisect(middle, above, look)]
}

/**
 * The change of the verdict between two neighbouring points, if any.
 *
 * @param onUpper  it stands at the upper point (orders) rather than in the middle of the two on the axis of Hz.
 */
export function located(below: ClaimPoint, above: ClaimPoint, onUpper: boolean): ClaimFlip[] {
  if (below.verdict === null || above.verdict === null || below.verdict === above.verdict) return []
  const at = onUpper ? above.at : Math.sqrt(below.at * above.at)
  return [{ at, below: below.verdict, above: above.verdict }]
}

/** The grid, and beside each change of the verdict its two nearest points: what a bisection passed on its way would only crowd the curve. */
function drawn(all: readonly Seen[], grid: readonly Seen[]): Seen[] {
  const kept = new Set(grid)
  for (let i = 0; i + 1 < all.length; i++) {
    if (all[i].verdict === all[i + 1].verdict) continue
    kept.add(all[i])
    kept.add(all[i + 1])
  }
  return all.filter((point) => kept.has(point))
}
