/** A label that wants to stand at a height; with left and right it only makes room for labels that share some of its width. */
export type WantedLabel = {
  /** Wanted centre, px. */
  readonly wanted: number
  /** Height of the text with its own leading, px. */
  readonly height: number
  /** Left and right end, px; without them the label spans the whole figure. */
  readonly left?: number
  readonly right?: number
}

export type LabelLimits = {
  /** No label begins above this. */
  readonly top: number
  /** No label ends below this. */
  readonly bottom: number
  /** Least room between two labels, px; default 0. */
  readonly gap?: number
}

/**
 * Centres for labels so that none covers another: the smallest movement in the sense of least squares that keeps their order,
 * within the limits. None is dropped. Labels too many for the limits are spread evenly over them and then do overlap.
 *
 * Method: with the distances between neighbours taken off, "in order and apart" becomes "not falling", which pooling adjacent
 * violators solves exactly; the limits are a clamp of that solution (Barlow et al. 1972, Statistical Inference under Order
 * Restrictions; from memory).
 *
 * @returns  centres in the order of the labels given.
 * @throws RangeError for a wanted centre or height that is not finite, a height below 0, or limits out of order.
 */
export function layoutLabels(labels: readonly WantedLabel[], limits: LabelLimits): number[] {
  if (!(limits.bottom >= limits.top)) {
    throw new RangeError(`limits.bottom must be at least limits.top (${limits.top}), was ${limits.bottom}`)
  }
  labels.forEach((label, i) => {
    if (!Number.isFinite(label.wanted)) throw new RangeError(`labels[${i}].wanted must be finite, was ${label.wanted}`)
    if (!(label.height >= 0 && Number.isFinite(label.height))) {
      throw new RangeError(`labels[${i}].height must be finite and not below 0, was ${label.height}`)
    }
  })
  const centres = new Array<number>(labels.length)
  for (const group of sharingWidth(labels)) {
    const order = [...group].sort((a, b) => labels[a].wanted - labels[b].wanted || a - b)
    const placed = stack(
      order.map((i) => labels[i]),
      limits,
    )
    order.forEach((i, k) => {
      centres[i] = placed[k]
    })
  }
  return centres
}

/** Groups of indices whose widths touch, directly or through others. */
function sharingWidth(labels: readonly WantedLabel[]): number[][] {
  const left = (i: number) => labels[i].left ?? Number.NEGATIVE_INFINITY
  const right = (i: number) => labels[i].right ?? Number.POSITIVE_INFINITY
  const groups: number[][] = []
  let reach = Number.NEGATIVE_INFINITY
  for (const i of labels.map((_, k) => k).sort((a, b) => left(a) - left(b) || a - b)) {
    if (groups.length === 0 || left(i) >= reach) groups.push([])
    groups[groups.length - 1].push(i)
    reach = groups[groups.length - 1].length === 1 ? right(i) : Math.max(reach, right(i))
  }
  return groups
}

/** Centres for labels already in order of their wanted height. */
function stack(labels: readonly WantedLabel[], limits: LabelLimits): number[] {
  const last = labels.length - 1
  const lowest = limits.top + labels[0].height / 2
  const offsetsWith = (gap: number) => {
    const offsets = [0]
    for (let i = 1; i <= last; i++) offsets.push(offsets[i - 1] + (labels[i - 1].height + labels[i].height) / 2 + gap)
    return offsets
  }
  const room = limits.bottom - labels[last].height / 2 - lowest
  let offsets = offsetsWith(limits.gap ?? 0)
  if (offsets[last] > room) offsets = offsetsWith(0)
  if (offsets[last] > room) {
    // they cannot all fit: share the room there is, and keep the order
    const share = Math.max(0, room) / (offsets[last] || 1)
    return offsets.map((offset) => (room < 0 ? (limits.top + limits.bottom) / 2 : lowest + offset * share))
  }
  const highest = limits.bottom - labels[last].height / 2 - offsets[last]
  const pools: { mean: number; size: number }[] = []
  labels.forEach((label, i) => {
    pools.push({ mean: label.wanted - offsets[i], size: 1 })
    while (pools.length > 1 && pools[pools.length - 2].mean > pools[pools.length - 1].mean) {
      const b = pools.pop()!
      const a = pools.pop()!
      const size = a.size + b.size
      pools.push({ mean: (a.mean * a.size + b.mean * b.size) / size, size })
    }
  })
  const level = pools.flatMap((pool) => new Array<number>(pool.size).fill(pool.mean))
  return level.map((u, i) => Math.min(Math.max(u, lowest), highest) + offsets[i])
}
