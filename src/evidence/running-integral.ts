import { addComponent, type Component } from '../erp/component.ts'
import { gaussLegendre } from './gauss-legendre.ts'

const RULE = gaussLegendre(6)
/** Most pieces that one step is cut into for a component finer than the step. */
const MOST_PIECES = 64

/** Moments at which a component bends: its integral is taken piece by piece between them. */
function bendsMs(component: Component): number[] {
  if (component.shape === 'tone' || component.shape === 'gaussian') return []
  const { latencyMs: l, widthMs: w } = component
  switch (component.shape) {
    case 'asymmetric':
      return [l]
    case 'slow-wave': {
      const inner = (w - component.edgeMs) / 2
      const outer = (w + component.edgeMs) / 2
      return [l - outer, l - inner, l + inner, l + outer]
    }
    case 'ramp':
      return [l - 2 * component.riseShare * w, l, l + 2 * (1 - component.riseShare) * w]
    case 'damped-oscillation':
      return [l - 2 * component.riseShare * w, l]
  }
}

/** The time within which a component changes, in ms: what a step of integration or a grid has to resolve. */
export function finestMs(component: Component): number {
  if (component.shape === 'tone') return Infinity
  const { widthMs: w } = component
  switch (component.shape) {
    case 'gaussian':
      return w
    case 'asymmetric':
      return 2 * w * Math.min(component.riseShare, 1 - component.riseShare)
    case 'slow-wave':
      return component.edgeMs
    case 'ramp':
      return 2 * w * Math.min(component.riseShare, 1 - component.riseShare)
    case 'damped-oscillation':
      return Math.min(2 * w * Math.min(component.riseShare, 1 - component.riseShare), 400 / component.frequencyHz)
  }
}

/**
 * Running integral of components (those that end) in µV·ms from startMs, where it is 0, at startMs + k·stepMs: by Gauss–Legendre quadrature
 * between the bends of each component, to about 1e-13 of its area.
 *
 * @param sign  −1 integrates the waveform on reversed time, x(−t).
 * @returns  count values.
 */
export function runningIntegral(
  components: readonly Component[],
  startMs: number,
  stepMs: number,
  count: number,
  sign: 1 | -1,
): Float64Array {
  const integral = new Float64Array(count)
  for (const component of components) {
    if (component.shape === 'tone') continue
    const pieces = Math.min(MOST_PIECES, Math.ceil((4 * stepMs) / finestMs(component)))
    const bends = bendsMs(component).map((ms) => sign * ms)
    const from: number[] = []
    const to: number[] = []
    const step: number[] = []
    for (let k = 1; k < count; k++) {
      const begin = startMs + (k - 1) * stepMs
      const end = startMs + k * stepMs
      const limits = [begin]
      for (let piece = 1; piece < pieces; piece++) limits.push(begin + (piece * (end - begin)) / pieces)
      limits.push(end)
      for (const bend of bends) if (bend > begin && bend < end) limits.push(bend)
      limits.sort((a, b) => a - b)
      for (let i = 0; i + 1 < limits.length; i++) {
        from.push(limits[i])
        to.push(limits[i + 1])
        step.push(k)
      }
    }
    const nodes = RULE.nodes.length
    const times = new Float64Array(from.length * nodes)
    for (let i = 0; i < from.length; i++) {
      const half = (to[i] - from[i]) / 2
      for (let j = 0; j < nodes; j++) times[i * nodes + j] = sign * (from[i] + half * (1 + RULE.nodes[j]))
    }
    const values = new Float64Array(times.length)
    addComponent(component, times, values)
    const gains = new Float64Array(count)
    for (let i = 0; i < from.length; i++) {
      const half = (to[i] - from[i]) / 2
      let sum = 0
      for (let j = 0; j < nodes; j++) sum += RULE.weights[j] * values[i * nodes + j]
      gains[step[i]] += half * sum
    }
    let running = 0
    for (let k = 1; k < count; k++) {
      running += gains[k]
      integral[k] += running
    }
  }
  return integral
}
