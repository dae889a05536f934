// Conventions of this room: data in their own units (ms, Hz, µV), pictures in pixels of the figure's svg, x to the right and
// y downwards. A value that is not a finite number, or has no place on a scale (zero or less on a logarithmic one), has no pixel:
// toPixel gives NaN or an infinity for it, and every path breaks there instead of drawing something in its stead.

export type ScaleKind = 'linear' | 'log' | 'compressed'

/** A monotone map from a data interval to a pixel interval. Plain frozen data with two pure functions. */
export type Scale = {
  readonly kind: ScaleKind
  /** The data values at the two ends of the range. Either order. */
  readonly domain: readonly [number, number]
  /** The pixels of the two ends. Either order: a y axis has [bottom, top], and [top, bottom] with negative up. */
  readonly range: readonly [number, number]
  /** Compressed scales only: the value (above 0) up to which the scale is about linear. */
  readonly linearWidth?: number
  /** Pixel of a value; continues beyond the domain. */
  readonly toPixel: (value: number) => number
  /** Value at a pixel; continues beyond the range. */
  readonly fromPixel: (pixel: number) => number
}

/**
 * Linear scale.
 *
 * @param domain  two different finite values.
 * @param range   two different finite pixels.
 * @throws RangeError for anything else.
 */
export function linearScale(domain: readonly [number, number], range: readonly [number, number]): Scale {
  return makeScale('linear', domain, range, identity, identity)
}

/**
 * Logarithmic scale, base 10.
 *
 * @param domain  two different values above 0.
 * @param range   two different finite pixels.
 * @throws RangeError for anything else.
 */
export function logScale(domain: readonly [number, number], range: readonly [number, number]): Scale {
  if (!(domain[0] > 0 && domain[1] > 0)) {
    throw new RangeError(`domain of a logarithmic scale must lie above 0, was ${domain[0]} to ${domain[1]}`)
  }
  return makeScale('log', domain, range, Math.log10, (t) => 10 ** t)
}

/**
 * Compressed scale: inverse hyperbolic sine, odd, linear near zero and logarithmic far from it.
 *
 * @param domain       two different finite values, of any sign.
 * @param range        two different finite pixels.
 * @param linearWidth  value above 0 (units of the domain) up to which the scale is about linear: pixel ∝ asinh(v / linearWidth).
 * @throws RangeError for anything else.
 */
export function compressedScale(
  domain: readonly [number, number],
  range: readonly [number, number],
  linearWidth: number,
): Scale {
  if (!(linearWidth > 0 && Number.isFinite(linearWidth))) {
    throw new RangeError(`linearWidth must be a finite number above 0, was ${linearWidth}`)
  }
  const forward = (v: number) => Math.asinh(v / linearWidth)
  const back = (t: number) => linearWidth * Math.sinh(t)
  return makeScale('compressed', domain, range, forward, back, linearWidth)
}

/** The value moved into the scale's domain. NaN stays NaN. */
export function clampToDomain(scale: Scale, value: number): number {
  const [a, b] = scale.domain
  return Math.min(Math.max(value, Math.min(a, b)), Math.max(a, b))
}

function identity(v: number): number {
  return v
}

function makeScale(
  kind: ScaleKind,
  domain: readonly [number, number],
  range: readonly [number, number],
  forward: (v: number) => number,
  back: (t: number) => number,
  linearWidth?: number,
): Scale {
  for (const [name, pair] of [
    ['domain', domain],
    ['range', range],
  ] as const) {
    if (!(Number.isFinite(pair[0]) && Number.isFinite(pair[1]) && pair[0] !== pair[1])) {
      throw new RangeError(`${name} must be two different finite numbers, was ${pair[0]} to ${pair[1]}`)
    }
  }
  const t0 = forward(domain[0])
  const [p0, p1] = range
  const pixelsPerT = (p1 - p0) / (forward(domain[1]) - t0)
  if (!(Number.isFinite(pixelsPerT) && pixelsPerT !== 0)) {
    throw new RangeError(`domain must be wide enough to be told apart in numbers, was ${domain[0]} to ${domain[1]}`)
  }
  return Object.freeze({
    kind,
    domain: Object.freeze([domain[0], domain[1]] as const),
    range: Object.freeze([p0, p1] as const),
    ...(linearWidth === undefined ? {} : { linearWidth }),
    toPixel: (v: number) => p0 + (forward(v) - t0) * pixelsPerT,
    fromPixel: (p: number) => back(t0 + (p - p0) / pixelsPerT),
  })
}
