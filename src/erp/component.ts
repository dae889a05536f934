/**
 * Components: the named pieces of a built waveform, as functions of time on the whole axis (they are never cut at an
 * epoch's limits). `amplitudeUv` is the value at the peak (negative for a negative component), `latencyMs` the peak's
 * moment, `widthMs` the full width at half maximum, all three exact by each shape's formula below.
 * With A = amplitudeUv, L = latencyMs, W = widthMs, s = riseShare, u = t − L:
 */

interface Named {
  /** Shown to the user and kept in every attribution. */
  name: string
  amplitudeUv: number
}
interface Transient extends Named {
  latencyMs: number
  widthMs: number
}

/** x = A·2^(−(2u/W)²). Standard deviation W/(2·√(2·ln 2)); area A·W·√(π/(4·ln 2)). */
export interface GaussianComponent extends Transient {
  shape: 'gaussian'
}

/** Two Gaussian halves: x = A·2^(−(u/r)²), r = s·W before the peak and (1 − s)·W after it. s in 0.02..0.98; 0.5 is the Gaussian. */
export interface AsymmetricComponent extends Transient {
  shape: 'asymmetric'
  riseShare: number
}

/**
 * A flat top between two raised-cosine edges of duration E = edgeMs each: x = A for |u| ≤ (W − E)/2, 0 for
 * |u| ≥ (W + E)/2, and (A/2)·(1 + cos(π·(|u| − (W − E)/2)/E)) between. L is the middle of the top. 0 < E ≤ W; area A·W.
 */
export interface SlowWaveComponent extends Transient {
  shape: 'slow-wave'
  edgeMs: number
}

/**
 * Rises linearly and resolves smoothly: x = A·(1 + u/R) for −R ≤ u ≤ 0 with R = 2sW, (A/2)·(1 + cos(πu/F)) for
 * 0 ≤ u ≤ F with F = 2(1 − s)W, 0 elsewhere. It starts exactly at L − R. s in 0.02..0.98; area A·W.
 */
export interface RampComponent extends Transient {
  shape: 'ramp'
  riseShare: number
}

/**
 * x = A·e(u)·cos(2πfu). The envelope e rises as (1 + cos(πu/R))/2 for −R ≤ u ≤ 0 with R = 2sW and decays as 2^(−u/D)
 * with D = (1 − s)W after it; it is 0 before −R. Both factors are 1 at u = 0, so L and A are those of the highest peak; W is
 * the full width at half maximum of the ENVELOPE. s in 0.02..0.98, f = frequencyHz > 0.
 */
export interface DampedOscillationComponent extends Transient {
  shape: 'damped-oscillation'
  frequencyHz: number
  riseShare: number
}

/** Steady interference locked to the event: x = A·cos(2πft + φ), t from the event in s. It never begins and never ends. */
export interface ToneComponent extends Named {
  shape: 'tone'
  frequencyHz: number
  phaseRad: number
}

export type Component =
  | GaussianComponent
  | AsymmetricComponent
  | SlowWaveComponent
  | RampComponent
  | DampedOscillationComponent
  | ToneComponent

export const COMPONENT_SHAPES = ['gaussian', 'asymmetric', 'slow-wave', 'ramp', 'damped-oscillation', 'tone'] as const

/** Outside its support a component is smaller than this part of its amplitude. */
const NEGLIGIBLE = 1e-12
/** How many half-value halvings that takes: 2^(−k) = 1e-12. */
const HALVINGS = -Math.log2(NEGLIGIBLE)

/** @throws RangeError that names the field, the rule and the value. */
export function checkComponent(component: Component): void {
  const who = `component "${component.name}"`
  if (typeof component.name !== 'string' || component.name.trim() === '') {
    throw new RangeError('a component must have a name')
  }
  const between = (field: string, value: number, low: number, high: number) => {
    if (!(value >= low && value <= high)) {
      throw new RangeError(`${who}: ${field} must lie between ${low} and ${high}, was ${value}`)
    }
  }
  between('amplitudeUv', component.amplitudeUv, -1e6, 1e6)
  if (component.shape === 'tone') {
    between('frequencyHz', component.frequencyHz, 0.001, 1e5)
    if (!Number.isFinite(component.phaseRad))
      throw new RangeError(`${who}: phaseRad must be finite, was ${component.phaseRad}`)
    return
  }
  between('latencyMs', component.latencyMs, -1e6, 1e6)
  between('widthMs', component.widthMs, 0.1, 1e6)
  switch (component.shape) {
    case 'gaussian':
      return
    case 'asymmetric':
    case 'ramp':
      return between('riseShare', component.riseShare, 0.02, 0.98)
    case 'slow-wave':
      if (!(component.edgeMs > 0 && component.edgeMs <= component.widthMs)) {
        throw new RangeError(
          `${who}: edgeMs must be positive and at most widthMs (${component.widthMs}), was ${component.edgeMs}`,
        )
      }
      return
    case 'damped-oscillation':
      between('frequencyHz', component.frequencyHz, 0.001, 1e5)
      return between('riseShare', component.riseShare, 0.02, 0.98)
    default:
      throw new RangeError(`shape must be one of ${COMPONENT_SHAPES.join(', ')}, was ${(component as Component).shape}`)
  }
}

/**
 * A component's values at any times, in µV.
 *
 * @param timesMs any finite times, evenly spaced or not.
 * @throws RangeError for a component that `checkComponent` refuses.
 */
export function componentAt(component: Component, timesMs: Float64Array): Float64Array {
  checkComponent(component)
  const values = new Float64Array(timesMs.length)
  addComponent(component, timesMs, values)
  return values
}

/** Adds a checked component into `values`; one loop per shape, so that a waveform costs one pass per component. */
export function addComponent(component: Component, timesMs: Float64Array, values: Float64Array): void {
  const n = timesMs.length
  const a = component.amplitudeUv
  if (component.shape === 'tone') {
    const { frequencyHz: f, phaseRad: phase } = component
    for (let i = 0; i < n; i++) {
      // whole turns are taken off first, so that far moments keep their phase
      const turns = (f * timesMs[i]) / 1000
      values[i] += a * Math.cos(2 * Math.PI * (turns - Math.round(turns)) + phase)
    }
    return
  }
  const { latencyMs, widthMs } = component
  switch (component.shape) {
    case 'gaussian':
      for (let i = 0; i < n; i++) {
        const v = (2 * (timesMs[i] - latencyMs)) / widthMs
        values[i] += a * Math.exp(-Math.LN2 * v * v)
      }
      return
    case 'asymmetric': {
      const rise = component.riseShare * widthMs
      const fall = widthMs - rise
      for (let i = 0; i < n; i++) {
        const u = timesMs[i] - latencyMs
        const v = u < 0 ? u / rise : u / fall
        values[i] += a * Math.exp(-Math.LN2 * v * v)
      }
      return
    }
    case 'slow-wave': {
      const edge = component.edgeMs
      const flat = (widthMs - edge) / 2
      for (let i = 0; i < n; i++) {
        const beyond = Math.abs(timesMs[i] - latencyMs) - flat
        if (beyond <= 0) values[i] += a
        else if (beyond < edge) values[i] += (a / 2) * (1 + Math.cos((Math.PI * beyond) / edge))
      }
      return
    }
    case 'ramp': {
      const rise = 2 * component.riseShare * widthMs
      const fall = 2 * widthMs - rise
      for (let i = 0; i < n; i++) {
        const u = timesMs[i] - latencyMs
        if (u <= 0 && u > -rise) values[i] += a * (1 + u / rise)
        else if (u > 0 && u < fall) values[i] += (a / 2) * (1 + Math.cos((Math.PI * u) / fall))
      }
      return
    }
    case 'damped-oscillation': {
      const rise = 2 * component.riseShare * widthMs
      const halving = (1 - component.riseShare) * widthMs
      const omega = (2 * Math.PI * component.frequencyHz) / 1000
      for (let i = 0; i < n; i++) {
        const u = timesMs[i] - latencyMs
        if (u <= -rise) continue
        const envelope = u < 0 ? (1 + Math.cos((Math.PI * u) / rise)) / 2 : 2 ** (-u / halving)
        values[i] += a * envelope * Math.cos(omega * u)
      }
      return
    }
  }
}

/**
 * The stretch outside which |x| < 1e-12·|amplitudeUv|; 'unbounded' for a tone.
 *
 * @throws RangeError for a component that `checkComponent` refuses.
 */
export function componentSupportMs(component: Component): { fromMs: number; toMs: number } | 'unbounded' {
  checkComponent(component)
  if (component.shape === 'tone') return 'unbounded'
  const { latencyMs: l, widthMs: w } = component
  // a Gaussian half of half-width r has fallen by k halvings at r·√k
  const gaussianReach = Math.sqrt(HALVINGS)
  switch (component.shape) {
    case 'gaussian':
      return { fromMs: l - (w / 2) * gaussianReach, toMs: l + (w / 2) * gaussianReach }
    case 'asymmetric':
      return {
        fromMs: l - component.riseShare * w * gaussianReach,
        toMs: l + (1 - component.riseShare) * w * gaussianReach,
      }
    case 'slow-wave':
      return { fromMs: l - (w + component.edgeMs) / 2, toMs: l + (w + component.edgeMs) / 2 }
    case 'ramp':
      return { fromMs: l - 2 * component.riseShare * w, toMs: l + 2 * (1 - component.riseShare) * w }
    case 'damped-oscillation':
      return { fromMs: l - 2 * component.riseShare * w, toMs: l + (1 - component.riseShare) * w * HALVINGS }
  }
}
