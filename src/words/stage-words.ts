import { hzToTimeConstant } from '../filter/amplifier.ts'
import type { CutoffMeaning, StageSpec, WindowSpec } from '../filter/stage.ts'
import { exact, list } from './number.ts'

/** A phrase of the protocol line: plain text, or a token that the user can change. */
export type Piece =
  | { readonly kind: 'text'; readonly text: string }
  | {
      readonly kind: 'token'
      readonly id: string
      readonly text: string
      readonly label: string
      readonly off?: boolean
    }
  | { readonly kind: 'add'; readonly id: string; readonly text: string; readonly label: string }

export const text = (words: string): Piece => ({ kind: 'text', text: words })
export const token = (id: string, words: string, label: string): Piece => ({ kind: 'token', id, text: words, label })

export const PASS_WORD = { low: 'low-pass', high: 'high-pass', band: 'band-pass', stop: 'band-stop' } as const

export const WINDOW_WORD: Record<WindowSpec['name'], string> = {
  rectangular: 'rectangular',
  hann: 'Hann',
  hamming: 'Hamming',
  blackman: 'Blackman',
  kaiser: 'Kaiser',
}

/** What a stage is called where one word has to do: chain table, figure labels. */
export function stageShortName(spec: StageSpec): string {
  switch (spec.design) {
    case 'butterworth':
    case 'windowed-sinc':
      return PASS_WORD[spec.pass]
    case 'amplifier':
      return spec.pass === 'high' ? 'amplifier' : 'amplifier low-pass'
    case 'notch':
      return 'notch'
    case 'moving-average':
      return 'moving average'
  }
}

/** What a stage is called where it must be told from others: "Butterworth high-pass". */
export function stageName(spec: StageSpec): string {
  switch (spec.design) {
    case 'butterworth':
      return `Butterworth ${PASS_WORD[spec.pass]}`
    case 'windowed-sinc':
      return `${windowWord(spec.window)}-windowed sinc ${PASS_WORD[spec.pass]}`
    case 'amplifier':
      return spec.pass === 'high' ? 'amplifier high-pass' : 'amplifier low-pass'
    case 'notch':
      return 'notch'
    case 'moving-average':
      return 'moving average'
  }
}

function windowWord(window: WindowSpec): string {
  return window.name === 'kaiser' ? `Kaiser (${exact(window.attenuationDb)} dB)` : WINDOW_WORD[window.name]
}

function cutoffsText(cutoffsHz: readonly number[]): string {
  return `${list(cutoffsHz.map(exact))} Hz`
}

/** A dash for a cutoff that has no time constant: the sentence stands even where its stage cannot be designed. */
function timeConstantText(cutoffHz: number): string {
  if (!(cutoffHz > 0 && cutoffHz < Infinity)) return exact(Number.NaN)
  return exact(Number(hzToTimeConstant(cutoffHz).toPrecision(10)))
}

/** A cutoff has one reading only: which gain, and after which passes. */
export function meaningWords(meaning: CutoffMeaning, passes: 1 | 2, sinc: boolean): { before: string; after: string } {
  const after = passes === 2 ? ' after both passes' : ''
  if (meaning === 'half-amplitude') return { before: 'half-amplitude ', after }
  if (meaning === 'half-power') return { before: 'half-power ', after }
  return sinc
    ? { before: 'nominal cutoff (centre of the transition) ', after: '' }
    : { before: 'design cutoff (half-power of one pass) ', after: '' }
}

function delayWords(delay: 'compensated' | 'causal' | 'minimum-phase'): string {
  if (delay === 'compensated') return 'zero-phase'
  return delay === 'causal' ? 'causal, its delay left in' : 'minimum-phase, causal'
}

const article = (word: string) => (/^[aeiou]/i.test(word) ? 'an' : 'a')

/**
 * One stage in words, as pieces of the protocol line. Token ids are `stage:<index>:<part>`.
 * @param index  the stage's place in the chain, counted from 0.
 */
export function stagePieces(spec: StageSpec, index: number): Piece[] {
  const id = (part: string) => `stage:${index}:${part}`
  const n = `stage ${index + 1}`
  switch (spec.design) {
    case 'butterworth': {
      const name = stageName(spec)
      const { before, after } = meaningWords(spec.meaning, spec.direction === 'both' ? 2 : 1, false)
      const order = spec.direction === 'both' ? `order ${exact(spec.order)} per pass` : `order ${exact(spec.order)}`
      return [
        text('a '),
        token(id('design'), name, `${n}: ${name}`),
        text(' of '),
        token(id('order'), order, `${n}, order`),
        text(', '),
        token(id('direction'), spec.direction === 'both' ? 'run both ways' : 'run forward, causal', `${n}, direction`),
        text(`, ${before}`),
        token(id('cutoff'), cutoffsText(spec.cutoffsHz), `${n}, cutoff`),
        text(after),
      ]
    }
    case 'windowed-sinc': {
      const name = stageName(spec)
      const { before, after } = meaningWords(spec.meaning, 1, true)
      return [
        text(`${article(name)} `),
        token(id('design'), name, `${n}: ${name}`),
        text(', '),
        token(id('delay'), delayWords(spec.delay), `${n}, phase and delay`),
        text(`, ${before}`),
        token(id('cutoff'), cutoffsText(spec.cutoffsHz), `${n}, cutoff`),
        text(`${after}, transition width `),
        token(id('transition'), `${exact(spec.transitionHz)} Hz`, `${n}, transition width`),
      ]
    }
    case 'amplifier': {
      if (spec.pass === 'high' && spec.order === 1)
        return [
          text('an '),
          token(id('design'), 'amplifier', `${n}: amplifier high-pass`),
          text(' with a '),
          token(id('cutoff'), `${timeConstantText(spec.cutoffHz)} s`, `${n}, time constant`),
          text(' time constant'),
        ]
      return [
        text('an '),
        token(id('design'), `amplifier ${PASS_WORD[spec.pass]}`, `${n}: amplifier ${PASS_WORD[spec.pass]}`),
        text(' of '),
        token(id('order'), `order ${exact(spec.order)}`, `${n}, order`),
        text(', half-power '),
        token(id('cutoff'), `${exact(spec.cutoffHz)} Hz`, `${n}, cutoff`),
      ]
    }
    case 'notch': {
      const after = spec.direction === 'both' ? ' wide at half-power after both passes' : ' wide at half-power'
      const harmonics =
        spec.harmonics === 0
          ? 'no harmonics'
          : spec.harmonics === 1
            ? 'one harmonic'
            : `${exact(spec.harmonics)} harmonics`
      return [
        text('a '),
        token(id('design'), 'notch', `${n}: notch`),
        text(' at '),
        token(id('cutoff'), `${exact(spec.frequencyHz)} Hz`, `${n}, frequency`),
        text(' and '),
        token(id('harmonics'), harmonics, `${n}, harmonics`),
        text(', '),
        token(id('direction'), spec.direction === 'both' ? 'run both ways' : 'run forward, causal', `${n}, direction`),
        text(', each '),
        token(id('bandwidth'), `${exact(spec.bandwidthHz)} Hz`, `${n}, bandwidth`),
        text(after),
      ]
    }
    case 'moving-average':
      return [
        text('a '),
        token(id('design'), 'moving average', `${n}: moving average`),
        text(' of '),
        token(id('duration'), `${exact(spec.durationMs)} ms`, `${n}, duration`),
        text(', '),
        token(id('delay'), delayWords(spec.delay), `${n}, phase and delay`),
      ]
  }
}
