import { checkComponent, type Component } from '../erp/component.ts'
import { seededRandom } from '../erp/seeded-random.ts'

/** A range that the user is not sure about, both limits included. */
export interface Range {
  readonly from: number
  readonly to: number
}

/** What is not known of one component; what is absent is taken as it stands. */
export interface ComponentRanges {
  /** Index into the components. */
  readonly component: number
  readonly latencyMs?: Range
  readonly widthMs?: Range
  readonly amplitudeUv?: Range
}

const FIELDS = ['latencyMs', 'widthMs', 'amplitudeUv'] as const
/** Latin hypercubes of which the one whose points lie furthest apart is taken. */
const TRIALS = 16

/**
 * A space-filling sample of waveforms over ranges of their components: a Latin hypercube (McKay, Beckman & Conover,
 * Technometrics 21, 239–245, 1979), the best of 16 by the maximin rule (Johnson, Moore & Ylvisaker, J. Stat. Plan. Inference 26,
 * 131–148, 1990), so that every range is covered evenly and no two waveforms are nearly the same.
 *
 * Slow-wave edges keep their share of the width.
 *
 * @param count how many, at least 1; 64 or more for a worst case.
 * @returns lists of components: the given one first, then `count` drawn ones.
 * @throws RangeError for ranges that are no ranges or belong to no component, a tone's latency or width, or a component that
 *   a range makes impossible.
 */
export function waveformSample(
  components: readonly Component[],
  ranges: readonly ComponentRanges[],
  count: number,
  seed = 1,
): Component[][] {
  if (!Number.isInteger(count) || count < 1 || count > 4096) {
    throw new RangeError(`count must be a whole number from 1 to 4096, was ${count}`)
  }
  const dimensions = ranges.flatMap((of) => FIELDS.filter((field) => of[field]).map((field) => ({ of, field })))
  for (const { of, field } of dimensions) {
    const component = components[of.component]
    if (!component) {
      throw new RangeError(`component must be one of ${components.length}, counted from 0, was ${of.component}`)
    }
    const range = of[field] as Range
    if (!Number.isFinite(range.from) || !Number.isFinite(range.to) || range.from > range.to) {
      throw new RangeError(`${component.name}: ${field} must range upwards, was ${range.from} to ${range.to}`)
    }
    if (component.shape === 'tone' && field !== 'amplitudeUv') {
      throw new RangeError(`${component.name}: a tone has no ${field}`)
    }
  }
  const given = components.map((component) => ({ ...component }))
  const points = bestHypercube(count, dimensions.length, seed)
  const drawn = points.map((point) => {
    const changed = components.map((component) => ({ ...component }))
    dimensions.forEach(({ of, field }, d) => {
      const range = of[field] as Range
      set(changed[of.component], field, range.from + point[d] * (range.to - range.from))
    })
    changed.forEach(checkComponent)
    return changed
  })
  return [given, ...drawn]
}

function set(component: Component, field: (typeof FIELDS)[number], value: number): void {
  if (field === 'amplitudeUv') {
    component.amplitudeUv = value
    return
  }
  if (component.shape === 'tone') return
  if (field === 'widthMs' && component.shape === 'slow-wave') component.edgeMs *= value / component.widthMs
  component[field] = value
}

function bestHypercube(count: number, dimensions: number, seed: number): number[][] {
  let best: number[][] = []
  let widest = -1
  for (let trial = 0; trial < (dimensions === 0 ? 1 : TRIALS); trial++) {
    const points = hypercube(count, dimensions, seed, trial)
    let nearest = Infinity
    for (let i = 0; i < count; i++) {
      for (let j = 0; j < i; j++) {
        let square = 0
        for (let d = 0; d < dimensions; d++) square += (points[i][d] - points[j][d]) ** 2
        nearest = Math.min(nearest, square)
      }
    }
    if (nearest > widest) {
      widest = nearest
      best = points
    }
  }
  return best
}

/** One point in each of `count` equal strata of every dimension, the outermost at the limits, so that the ranges' ends are seen. */
function hypercube(count: number, dimensions: number, seed: number, stream: number): number[][] {
  const random = seededRandom(seed, stream)
  const points = Array.from({ length: count }, () => new Array<number>(dimensions).fill(0.5))
  if (count === 1) return points
  for (let d = 0; d < dimensions; d++) {
    const order = Array.from({ length: count }, (_, i) => i)
    for (let i = count - 1; i > 0; i--) {
      const j = Math.floor(random.uniform() * (i + 1))
      ;[order[i], order[j]] = [order[j], order[i]]
    }
    order.forEach((stratum, i) => {
      points[i][d] = stratum / (count - 1)
    })
  }
  return points
}
