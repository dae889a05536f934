/** What a label of the frequency figure wishes for, and what it has to heed. */
import { textWidth } from '../plot/axis-layout.ts'
import type { LabelPlace, LabelWish } from '../plot/place-labels.ts'
import type { Tone } from '../plot/tone.ts'

/** A point of the whole chain at half-amplitude or half-power, or a handle without one. */
export interface HalfPoint {
  x: number
  y: number
  text: string
  strong: boolean
  /** A handle's own number, which the protocol line states anyway. */
  stated: boolean
}

export interface FrequencyCourses {
  left: number
  top: number
  right: number
  bottom: number
  /** Heights by pixel column from `left` on. */
  chain: Float64Array
  stages: { name: string; inData: boolean; heights: Float64Array }[]
  /** Whole gains of pinned chains. */
  pins?: { name: string; heights: Float64Array }[]
  before: Float64Array
  after: Float64Array
  noise: Float64Array
  points: HalfPoint[]
  /** Height of full gain. */
  full: number
  /** Heights of the lines at half-amplitude and half-power; null where they would lie on one another. */
  halves: { amplitude: number; power: number } | null
}

export interface Wish extends LabelWish {
  text: string
  tone: Tone
  strong: boolean
}

export const HEIGHT = 15

export function wish(text: string, tone: Tone, strong: boolean, places: LabelPlace[], maxCost?: number): Wish {
  return { text, tone, strong, width: widthOf(text, strong), height: HEIGHT, places, maxCost }
}

export function widthOf(text: string, strong = false): number {
  return textWidth(text) * (strong ? 1.05 : 1)
}
