import type { Stage } from '../filter/stage.ts'
import { bandErrors, sideLobeGain } from './band-errors.ts'
import { brief } from './number.ts'
import { stagePhrases } from './stage-report.ts'
import { stageName } from './stage-words.ts'
import type { DesignedProtocol, PlacedStage, WriteUpFacts } from './write-up-facts.ts'

/** What the items of the reporting checklist say about stages. */

/** "stage 1: …; stage 3: …", numbered as in the protocol line. */
export function each(placed: readonly PlacedStage[], words: (placed: PlacedStage) => string): string {
  return placed.map((entry) => `stage ${entry.index + 1}: ${words(entry)}`).join('; ')
}

/** The token that states a part of a stage; a part that the design lacks is stated with its design. */
export function tokenOf({ stage, index }: PlacedStage, part: string): string {
  const { design } = stage.spec
  const parts: Record<typeof design, readonly string[]> = {
    butterworth: ['design', 'order', 'direction', 'cutoff'],
    'windowed-sinc': ['design', 'delay', 'cutoff', 'transition'],
    amplifier: ['design', 'cutoff'],
    notch: ['design', 'cutoff', 'harmonics', 'direction', 'bandwidth'],
    'moving-average': ['design', 'duration', 'delay'],
  }
  const asked = part === 'direction' && parts[design].includes('delay') ? 'delay' : part
  return `stage:${index}:${parts[design].includes(asked) ? asked : 'design'}`
}

export function amplifierWords(known: readonly PlacedStage[]): string {
  return each(known, ({ stage }) => {
    const { name, order, run, beside, cutoffs, rollOff } = stagePhrases(stage)
    return [`${name} of ${order}`, run, ...beside, cutoffs, rollOff].join(', ')
  })
}

export function typeWords(stage: Stage): string {
  const { name } = stagePhrases(stage)
  if (stage.spec.design === 'windowed-sinc') return name
  return `${name} with ${stage.taps ? 'a finite' : 'an infinite'} impulse response`
}

export function cutoffsAndDesign(stage: Stage): string {
  const { cutoffs, design } = stagePhrases(stage)
  return design === null ? cutoffs : `${cutoffs}, ${design}`
}

export function orderWords({ inData, amplifiers, offline }: Omit<DesignedProtocol, 'chain'>): string {
  const named = (placed: readonly PlacedStage[]) =>
    placed.map(({ stage, index }) => `stage ${index + 1} (${stageName(stage.spec)})`).join(', then ')
  return [
    inData.length > 0 && `in the data already: ${named(inData)}`,
    amplifiers.length > 0 && `as the amplifier: ${named(amplifiers)}`,
    offline.length > 0 && `offline: ${named(offline)}`,
  ]
    .filter((words) => words !== false)
    .join('; ')
}

export function rippleWords(stage: Stage): string {
  switch (stage.spec.design) {
    case 'butterworth':
    case 'amplifier':
      return 'no ripple, attenuation growing with the roll-off'
    case 'notch':
      return 'no ripple, gain 0 at the notch'
    case 'moving-average':
      return sideLobeWords(stage)
    case 'windowed-sinc': {
      const errors = bandErrors(stage)
      const db = (gain: number) => brief(20 * Math.log10(gain), 3)
      const pass = errors?.passDeviation
      const stop = errors?.stopGain
      const passWords =
        pass === null || pass === undefined
          ? 'no pass band outside the transition'
          : `gain within 1 ± ${brief(pass, 3)} (ripple ${db(1 + pass)} dB) in the pass band`
      const stopWords =
        stop === null || stop === undefined
          ? 'no stop band outside the transition'
          : stop === 0
            ? 'gain 0 in the stop band'
            : `at most ${db(stop)} dB in the stop band`
      return `${passWords}, ${stopWords}`
    }
  }
}

function sideLobeWords(stage: Stage): string {
  const gain = sideLobeGain(stage)
  return gain === null
    ? 'no side lobe below half the sampling rate'
    : `side lobes between its nulls, at most ${brief(20 * Math.log10(gain), 3)} dB`
}

/** Which filters leave their delay in a latency; those that the data had passed leave it too. */
export function phaseWords(
  passed: readonly PlacedStage[],
  amplifierUnknown: boolean,
): { state: 'stated'; words: string; token?: string } {
  const causal = passed.filter(({ stage }) => stage.passes === 1 && !(stage.taps !== null && stage.leadSamples > 0))
  const unknown = amplifierUnknown ? '; the amplifier’s own filters, which are causal, are not among the stages' : ''
  if (causal.length === 0) return { state: 'stated', words: `every stage is zero-phase${unknown}` }
  const names = causal.map(
    ({ stage: { spec }, index }) =>
      `stage ${index + 1} (${stageName(spec)}${spec.inData === true ? ', in the data' : ''})`,
  )
  return {
    state: 'stated',
    words: `causal, so that latencies contain their delay: ${names.join(', ')}${unknown}`,
    token: tokenOf(causal[0], 'direction'),
  }
}

export function extentWords({ source, extent }: WriteUpFacts): string {
  if (extent === 'epochs') return 'the cut-out epochs'
  return source === 'built'
    ? 'the continuous waveform, before the epoch is cut'
    : 'the continuous recording, before epochs are cut'
}
