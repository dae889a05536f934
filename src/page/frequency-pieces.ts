/** Phase and group delay as curves in pieces, without false jumps. */
import type { FrequencyFigure } from '../state/evaluation.ts'
import { DRAWN_GAIN } from './gain-axis.ts'

/** A curve in pieces: NaN between two of them, where nothing is drawn. */
export interface Pieces {
  hz: number[]
  values: number[]
}

/** Phase in degrees between −180 and 180, broken where it wraps and where next to nothing gets through. */
export function phasePieces({ hz, phaseRad, gain }: Pick<FrequencyFigure, 'hz' | 'phaseRad' | 'gain'>): Pieces {
  const out: Pieces = { hz: [], values: [] }
  let before = Number.NaN
  for (let i = 0; i < hz.length; i++) {
    const degrees = gain[i] >= DRAWN_GAIN ? wrapped((phaseRad[i] * 180) / Math.PI) : Number.NaN
    if (Math.abs(degrees - before) > 180) {
      // the line runs out at one edge and comes in at the other
      const turn = degrees > before ? 360 : -360
      const edge = degrees > before ? -180 : 180
      const share = (edge - before) / (degrees - turn - before || 1)
      const at = hz[i - 1] * (hz[i] / hz[i - 1]) ** Math.max(0, Math.min(1, share))
      out.hz.push(at, at, at)
      out.values.push(edge, Number.NaN, -edge)
    }
    out.hz.push(hz[i])
    out.values.push(degrees)
    before = degrees
  }
  return out
}

/** An angle in (−180, 180]; a half turn with a rounding error is 180. */
function wrapped(degrees: number): number {
  const turned = degrees - 360 * Math.round(degrees / 360)
  return turned <= -180 + 1e-6 ? turned + 360 : turned
}

/** Group delay where the chain lets something through. */
export function delayPieces({ hz, groupDelayMs, gain }: Pick<FrequencyFigure, 'hz' | 'groupDelayMs' | 'gain'>): Pieces {
  const values = Array.from(groupDelayMs, (delay, i) => (gain[i] >= DRAWN_GAIN ? delay : Number.NaN))
  return { hz: Array.from(hz), values }
}

/** Domain for values of any sign, zero within and a tenth of room at both ends; ±10 where all are zero. */
export function delayDomain(values: readonly number[]): [number, number] {
  let low = 0
  let high = 0
  for (const value of values) {
    if (!Number.isFinite(value)) continue
    low = Math.min(low, value)
    high = Math.max(high, value)
  }
  if (high - low < 1e-6) return [-10, 10]
  const room = (high - low) * 0.12
  return [low - room, high + room]
}
