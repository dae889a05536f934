/** What a chain that was kept for comparison is called: by what tells it from the present one. */
import { hzToTimeConstant } from '../filter/amplifier.ts'
import type { StageSpec } from '../filter/stage.ts'
import { brief, exact } from './number.ts'
import { stageName, stageShortName, WINDOW_WORD } from './stage-words.ts'

export interface NamedChain {
  /** The user's own name; empty for the one that suggests itself. */
  name: string
  chain: readonly StageSpec[]
  extent: 'continuous' | 'epochs'
}

const SAME = 'chain as pinned'

/**
 * Names of the pinned chains, in their order: the user's own, else what tells the chain from the present one ("high-pass 1 Hz"), and
 * where two pins would be called the same, what tells them from one another as well.
 */
export function pinNames(pins: readonly NamedChain[], present: Omit<NamedChain, 'name'>): string[] {
  const names = pins.map((pin) => pin.name.trim() || pinName(pin, present))
  return names.map((name, i) => {
    const rival = names.findIndex((other, j) => j !== i && other === name)
    if (rival < 0 || pins[i].name.trim()) return name
    const more = differences(pins[i], pins[rival])[0]
    return more === undefined ? name : `${name}, ${more}`
  })
}

/** What tells a pinned chain from the present one: its first stage that differs. */
export function pinName(pinned: Omit<NamedChain, 'name'>, present: Omit<NamedChain, 'name'>): string {
  return differences(pinned, present)[0] ?? SAME
}

/** Whether two chains do the same: what is switched off does not count. */
export function sameChain(a: Omit<NamedChain, 'name'>, b: Omit<NamedChain, 'name'>): boolean {
  const [first, second] = [enabled(a.chain), enabled(b.chain)]
  return a.extent === b.extent && first.length === second.length && first.every((spec, i) => same(spec, second[i]))
}

/** A name with an ellipsis where it is longer than a label or the head of a column may be. */
export function shortened(name: string, most: number): string {
  return name.length <= most ? name : `${name.slice(0, most - 1).trimEnd()}…`
}

const enabled = (chain: readonly StageSpec[]) => chain.filter((spec) => spec.enabled !== false)

/** A stage as text, whatever the order of its fields. */
function keyOf({ enabled: _, inData = false, ...spec }: StageSpec): string {
  return JSON.stringify(Object.entries({ ...spec, inData }).sort(([a], [b]) => (a < b ? -1 : 1)))
}

const same = (a: StageSpec, b: StageSpec) => keyOf(a) === keyOf(b)

/** What the first chain has otherwise than the second, stage by stage. */
function differences(pinned: Omit<NamedChain, 'name'>, present: Omit<NamedChain, 'name'>): string[] {
  const p = enabled(pinned.chain)
  const q = enabled(present.chain)
  const found = p.length === 0 && q.length > 0 ? ['no filter'] : stageDifferences(p, q)
  if (pinned.extent !== present.extent)
    found.push(pinned.extent === 'epochs' ? 'on the cut-out epochs' : 'on the continuous recording')
  return found
}

function stageDifferences(p: readonly StageSpec[], q: readonly StageSpec[]): string[] {
  if (p.length === q.length && !p.every((spec, i) => same(spec, q[i])) && sorted(p) === sorted(q))
    return ['stages in another order']
  let i = 0
  while (i < p.length && i < q.length && same(p[i], q[i])) i++
  let j = i
  // Stages at the end that both have are no difference.
  let [endP, endQ] = [p.length, q.length]
  while (endP > i && endQ > j && same(p[endP - 1], q[endQ - 1])) {
    endP--
    endQ--
  }
  const found: string[] = []
  while (i < endP || j < endQ) {
    const [left, right] = [endP - i, endQ - j]
    if (left > 0 && right > 0 && stageShortName(p[i]) === stageShortName(q[j])) {
      if (!same(p[i], q[j])) found.push(otherwise(p[i], q[j]))
      i++
      j++
    } else if (right > left) found.push(`without ${stageShortName(q[j++])}`)
    else if (left > right) found.push(`with ${inShort(p[i++])}`)
    else {
      found.push(inShort(p[i++]))
      j++
    }
  }
  return found
}

const sorted = (chain: readonly StageSpec[]) => chain.map(keyOf).sort().join()

const hz = (values: readonly number[]) => `${values.map((value) => brief(value, 4)).join(' to ')} Hz`

/** "low-pass 30 Hz", "moving average 20 ms". */
function inShort(spec: StageSpec): string {
  return `${stageShortName(spec)} ${placeOf(spec)}`
}

/** Where on the axis a stage works: its cutoff, its frequency, its duration. */
function placeOf(spec: StageSpec): string {
  switch (spec.design) {
    case 'butterworth':
    case 'windowed-sinc':
      return hz(spec.cutoffsHz)
    case 'amplifier':
      if (spec.pass === 'high' && spec.order === 1 && spec.cutoffHz > 0)
        return `${brief(hzToTimeConstant(spec.cutoffHz), 4)} s`
      return hz([spec.cutoffHz])
    case 'notch':
      return hz([spec.frequencyHz])
    case 'moving-average':
      return `${brief(spec.durationMs, 4)} ms`
  }
}

const MEANING_WORD = {
  'half-amplitude': 'half-amplitude',
  'half-power': 'half-power',
  design: 'design cutoff',
} as const
const DELAY_WORD = { compensated: 'zero-phase', causal: 'causal', 'minimum-phase': 'minimum-phase' } as const

/** Two stages of one short name: the first one's name with what it has otherwise, at most two things. */
function otherwise(spec: StageSpec, other: StageSpec): string {
  if (spec.design !== other.design) {
    const moved = placeOf(spec) !== placeOf(other)
    return moved ? `${stageName(spec)} ${placeOf(spec)}` : stageName(spec)
  }
  const parts: string[] = []
  const meant = 'meaning' in spec && 'meaning' in other && spec.meaning !== other.meaning
  if (meant) parts.push(`${MEANING_WORD[spec.meaning]} ${placeOf(spec)}`)
  else if (placeOf(spec) !== placeOf(other)) parts.push(placeOf(spec))
  if ('order' in spec && 'order' in other && spec.order !== other.order) parts.push(`order ${exact(spec.order)}`)
  if ('direction' in spec && 'direction' in other && spec.direction !== other.direction)
    parts.push(spec.direction === 'both' ? 'run both ways' : 'run forward')
  if ('delay' in spec && 'delay' in other && spec.delay !== other.delay) parts.push(DELAY_WORD[spec.delay])
  if (spec.design === 'windowed-sinc' && other.design === 'windowed-sinc') {
    if (spec.transitionHz !== other.transitionHz) parts.push(`transition ${brief(spec.transitionHz, 4)} Hz`)
    if (JSON.stringify(spec.window) !== JSON.stringify(other.window))
      parts.push(`${WINDOW_WORD[spec.window.name]} window`)
  }
  if (spec.design === 'notch' && other.design === 'notch') {
    if (spec.bandwidthHz !== other.bandwidthHz) parts.push(`${brief(spec.bandwidthHz, 4)} Hz wide`)
    if (spec.harmonics !== other.harmonics) parts.push(`${exact(spec.harmonics)} harmonics`)
  }
  if ((spec.inData === true) !== (other.inData === true)) parts.push(spec.inData ? 'in the data' : 'applied here')
  // What differs in a later digit than is printed.
  if (parts.length === 0) parts.push(placeOf(spec))
  return `${stageShortName(spec)} ${parts.slice(0, 2).join(', ')}`
}
