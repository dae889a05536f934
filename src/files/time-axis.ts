/**
 * The exactly regular time axis behind printed time labels.
 *
 * Labels are printed with a few decimals, so that they seem to be unevenly spaced: at 256 Hz, to 0.1 ms, 0, 3.9, 7.8, … 27.3,
 * 31.3. Labels rounded to a step q fit a step s exactly when all `label[i] − i·s` lie within q of each other. That spread is a
 * convex function of s, so the steps that fit form an interval, which a search finds; a neat sampling rate in it is taken.
 */

export type AxisProblem =
  | { kind: 'duplicate' | 'descending' | 'uneven'; index: number; smallest: number; largest: number }
  | { kind: 'gap'; index: number; usual: number; found: number }

export interface LabelFit {
  /** Steps between neighbours, in the labels' unit, that fit all labels. */
  lowest: number
  highest: number
  /** The middle of those steps. */
  best: number
  mean: number
  /** The labels are regular as they stand, to a millionth of a step. */
  exact: boolean
  /** The rounding step of the labels. */
  printed: number
  /** How far apart `label[i] − i·step` may lie. */
  tolerance: number
}

/** Sampling rates in Hz that recorders really have (common practice). */
const usualRates = [
  50, 64, 100, 120, 125, 128, 160, 200, 240, 250, 256, 300, 320, 400, 480, 500, 512, 600, 625, 640, 720, 750, 800, 960,
  1000, 1024, 1200, 1250, 1280, 1500, 1600, 1920, 2000, 2048, 2400, 2500, 3000, 3200, 4000, 4096, 4800, 5000, 6000,
  8000, 8192, 9600, 10000, 12000, 16000, 16384, 19200, 20000, 24000, 25000, 30000, 32000, 32768, 40000, 48000, 50000,
  96000, 100000,
]

/** Largest minus smallest of `labels[i] − i·step`. */
export function labelSpread(labels: Float64Array, step: number): number {
  const first = labels[0]
  let low = 0
  let high = 0
  for (let i = 1; i < labels.length; i++) {
    const d = labels[i] - first - i * step
    if (d < low) low = d
    else if (d > high) high = d
  }
  return high - low
}

function unevenness(labels: Float64Array): AxisProblem {
  const n = labels.length
  const steps = new Float64Array(n - 1)
  for (let i = 1; i < n; i++) steps[i - 1] = labels[i] - labels[i - 1]
  const sorted = Float64Array.from(steps).sort()
  const usual = sorted[(n - 1) >> 1]
  let index = 1
  for (let i = 1; i < n; i++) if (Math.abs(steps[i - 1] - usual) > Math.abs(steps[index - 1] - usual)) index = i
  // One or a few long steps among equal ones are gaps; many different steps are uneven sampling.
  const close = sorted.filter((s) => Math.abs(s - usual) < 0.25 * usual).length
  if (steps[index - 1] > 1.5 * usual && close > 0.8 * (n - 1)) {
    return { kind: 'gap', index, usual, found: steps[index - 1] }
  }
  return { kind: 'uneven', index, smallest: sorted[0], largest: sorted[n - 2] }
}

/**
 * The steps that fit ascending labels.
 * @param labels at least two, in any unit
 * @param printed the labels' rounding step in that unit, from their printed decimals
 */
export function fitLabels(
  labels: Float64Array,
  printed: number,
): { ok: true; fit: LabelFit } | { ok: false; problem: AxisProblem } {
  const n = labels.length
  for (let i = 1; i < n; i++) {
    if (labels[i] > labels[i - 1]) continue
    const kind = labels[i] === labels[i - 1] ? 'duplicate' : 'descending'
    return { ok: false, problem: { kind, index: i, smallest: labels[i], largest: labels[i - 1] } }
  }
  const mean = (labels[n - 1] - labels[0]) / (n - 1)
  const floating = 16 * 2.220446049250313e-16 * Math.max(Math.abs(labels[0]), Math.abs(labels[n - 1]))
  const spreadAtMean = labelSpread(labels, mean)
  const exact = spreadAtMean <= 1e-6 * mean + floating
  // Printing with a fixed number of significant digits rounds late labels more coarsely than early ones; half a per cent of a
  // sample either way changes nothing that could be measured.
  for (const tolerance of [Math.max(printed, 1e-6 * mean) + floating, Math.max(printed, 0.01 * mean) + floating]) {
    // The best step's spread is at least half the mean step's.
    if (spreadAtMean > 2 * tolerance) continue
    let low = mean - spreadAtMean / (n - 1)
    let high = mean + spreadAtMean / (n - 1)
    for (let k = 0; k < 80 && high - low > 1e-15 * mean; k++) {
      const a = low + (high - low) / 3
      const b = high - (high - low) / 3
      if (labelSpread(labels, a) <= labelSpread(labels, b)) high = b
      else low = a
    }
    const narrowest = (low + high) / 2
    const slack = 1e-12 * tolerance
    if (labelSpread(labels, narrowest) > tolerance + slack) continue
    const edge = (outside: number): number => {
      let fits = narrowest
      let fails = outside
      for (let k = 0; k < 60; k++) {
        const middle = (fits + fails) / 2
        if (labelSpread(labels, middle) <= tolerance + slack) fits = middle
        else fails = middle
      }
      return fits
    }
    // At these the first and last label alone are further apart than the tolerance.
    const lowest = edge(mean - (1.01 * tolerance) / (n - 1))
    const highest = edge(mean + (1.01 * tolerance) / (n - 1))
    return { ok: true, fit: { lowest, highest, best: (lowest + highest) / 2, mean, exact, printed, tolerance } }
  }
  return { ok: false, problem: unevenness(labels) }
}

/**
 * The sampling rate that labels stand for, in Hz; undefined when they fit only rates that nobody uses although they are
 * printed so coarsely that a missing sample could hide in the rounding (0, 1, 2, 3, 5, 6 ms fits an odd rate below 1000 Hz).
 * @param perSecond the labels' units in a second: 1000 for ms
 */
export function neatRateHz(
  labels: Float64Array,
  fit: LabelFit,
  perSecond: number,
): { rateHz: number; rival?: number } | undefined {
  const exactRate = perSecond / fit.mean
  const nearWhole = Math.abs(exactRate - Math.round(exactRate)) < 1e-6 * exactRate
  if (fit.exact && nearWhole) return { rateHz: Math.round(exactRate) }
  const coarse = fit.printed > 0.1 * fit.mean
  const slack = 1e-9 * fit.mean
  const bestRate = perSecond / fit.best
  const fitting = usualRates
    .filter((rate) => {
      const step = perSecond / rate
      if (step < fit.lowest - slack || step > fit.highest + slack) return false
      // A step that is a multiple of the rounding step leaves nothing to round: its labels are regular as they stand.
      const multiple = step / fit.printed
      if (coarse && Math.abs(multiple - Math.round(multiple)) < 1e-9) return labelSpread(labels, step) < 1e-6 * step
      return true
    })
    .sort((a, b) => Math.abs(a - bestRate) - Math.abs(b - bestRate))
  if (fitting.length > 0) return { rateHz: fitting[0], rival: fitting[1] }
  if (fit.exact) return { rateHz: exactRate }
  if (coarse) return undefined
  for (let decimals = 0; decimals <= 6; decimals++) {
    const rate = Number(bestRate.toFixed(decimals))
    if (rate > 0 && perSecond / rate >= fit.lowest && perSecond / rate <= fit.highest) return { rateHz: rate }
  }
  return { rateHz: bestRate }
}

/** The first time of the regular axis with that step: time zero stays a sample where a label says so. */
export function firstLabel(labels: Float64Array, step: number, tolerance: number): number {
  let low = Number.POSITIVE_INFINITY
  let high = Number.NEGATIVE_INFINITY
  let zero = -1
  for (let i = 0; i < labels.length; i++) {
    const d = labels[i] - i * step
    if (d < low) low = d
    if (d > high) high = d
    if (labels[i] === 0) zero = i
  }
  const from = high - 0.5 * tolerance - 1e-9 * step
  const to = low + 0.5 * tolerance + 1e-9 * step
  const fits = (value: number): boolean => value >= from && value <= to
  if (zero >= 0 && fits(-zero * step)) return zero === 0 ? 0 : -zero * step
  // A time that was kept in single precision: -0.2, not -0.20000000298.
  const single = Number(labels[0].toPrecision(7))
  if (Math.abs(single - labels[0]) <= 6e-8 * Math.abs(labels[0]) && fits(single)) return single
  if (fits(labels[0])) return labels[0]
  return (low + high) / 2
}
