import { exact, list } from './number.ts'
import { PASS_WORD } from './stage-words.ts'

/** The core's error messages name fields as code does; the page says them as a person would. */

const FIELD_WORDS: readonly [RegExp, string][] = [
  [/cutoffsHz\[0\]/g, 'the cutoff'],
  [/cutoffsHz\[1\]/g, 'the upper cutoff'],
  [/cutoffsHz/g, 'the cutoffs'],
  [/cutoffHz/g, 'the cutoff'],
  [/transitionHz/g, 'the transition width'],
  [/frequencyHz/g, 'the frequency'],
  [/bandwidthHz/g, 'the bandwidth'],
  [/harmonics(?= must)/g, 'the number of harmonics'],
  [/durationMs/g, 'the duration'],
  [/attenuationDb/g, 'the attenuation'],
  [/samplingRateHz/g, 'the sampling rate'],
  [/noise\.exponent/g, 'the exponent of the noise'],
  [/noise\.levelAt1HzUv2PerHz/g, 'the level of the noise at 1 Hz'],
  [/noise\.flatBelowHz/g, 'the frequency below which the noise is flat'],
  [/noise\.whiteUv2PerHz/g, 'the level of the white noise'],
  [/noise\.driftAt1HzUv2PerHz/g, 'the level of the drift at 1 Hz'],
  [/noise\.alpha\.centreHz/g, 'the centre of the alpha peak'],
  [/noise\.alpha\.sdHz/g, 'the width of the alpha peak'],
  [/noise\.alpha\.peakUv2PerHz/g, 'the height of the alpha peak'],
  [/noise\.lines\[\d+\]\.hz/g, 'the frequency of a line of the noise'],
  [/noise\.lines\[\d+\]\.amplitudeUv/g, 'the amplitude of a line of the noise'],
  [/noise\.lines\[\d+\]\.phaseRad/g, 'the phase of a line of the noise'],
  [/amplitudeUv/g, 'the amplitude'],
  [/latencyMs/g, 'the latency'],
  [/widthMs/g, 'the width'],
  [/edgeMs/g, 'the on- and offset'],
  [/riseShare/g, 'the share before the peak'],
  [/phaseRad/g, 'the phase'],
  [/onsetMs/g, 'the onset'],
  [/score\.fraction/g, 'the fraction'],
  [/score\.toMs of a moment must equal its fromMs/g, 'the end of a moment’s window must equal its beginning'],
  [/\by must hold finite numbers, y\[\d+\]/g, 'the waveform must hold finite numbers, its value'],
  [/\bx\[\d+\](?= must)/g, 'each value of the waveform'],
  [/\border(?= must)/g, 'the order'],
  [/\bhz(?= must)/g, 'the frequency'],
  [/\bt0Ms(?= must)/g, 'the onset of the activity'],
  [/\bleastUv(?= must)/g, 'the smallest effect that counts'],
  [
    /\bunit must be ms for [\w-]+, was %/g,
    'a latency has no per cent of its value before; its change must be said in ms',
  ],
  [/\bepoch(?= must)/g, 'the epoch'],
  [/\bscore window(?= must)/g, 'the score window'],
  [/\bbaseline window(?= must)/g, 'the baseline window'],
]

const passWord = (pass: string) => PASS_WORD[pass as keyof typeof PASS_WORD] ?? pass

/** A value that no number field can hold, or only an empty one. */
const NO_NUMBER = /\b(?:NaN|null|undefined)\b/g

/** A number that stands alone, so that the ones inside names are left as they are. */
const NUMBER = /(?<=^|[\s(–])-?\d+(?:\.\d+)?(?:e[+-]?\d+)?(?=$|[\s):;,.–])/g

/** What stands outside quotation marks, as a person would say it: inside them are the user's own names. */
function unquotedInWords(message: string): string {
  let words = message
    .replace(
      /cutoffsHz must hold (one cutoff|two cutoffs) for pass (\w+)/g,
      (_, count: string, pass: string) => `${count} must be given for a ${passWord(pass)}`,
    )
    .replace(
      /^(butterworth|windowed-sinc) (low|high|band|stop)(?= )/,
      (_, design: string, pass: string) =>
        `the ${design === 'butterworth' ? 'Butterworth' : 'windowed-sinc'} ${passWord(pass)} of`,
    )
  for (const [pattern, replacement] of FIELD_WORDS) words = words.replace(pattern, replacement)
  return words
    .replace(/\[([^\]]*)\]/g, (_, items: string) => (items === '' ? 'none' : list(items.split(','))))
    .replace(NO_NUMBER, 'no number')
    .replace(/-?\bInfinity\b/g, 'infinite')
    .replace(NUMBER, (number) => exact(Number(number)))
}

/** "stage 2: cutoffsHz[0] must lie …" becomes "Stage 2: the cutoff must lie …". */
export function inWords(message: string): string {
  const words = message
    .split(/("[^"]*"|“[^”]*”)/)
    .map((part, place) => (place % 2 === 1 ? part : unquotedInWords(part)))
    .join('')
  const sentence = words.charAt(0).toUpperCase() + words.slice(1)
  return /[.!?]$/.test(sentence) ? sentence : `${sentence}.`
}

/** Which part of a stage's sentence a field of its specification stands in. */
export function partOfField(field: string | undefined): string {
  if (!field) return 'design'
  const name = field.replace(/\[\d+\]$/, '').split('.')[0]
  return (
    {
      cutoffsHz: 'cutoff',
      cutoffHz: 'cutoff',
      frequencyHz: 'cutoff',
      transitionHz: 'transition',
      bandwidthHz: 'bandwidth',
      harmonics: 'harmonics',
      durationMs: 'duration',
      order: 'order',
      direction: 'direction',
      delay: 'delay',
    }[name] ?? 'design'
  )
}
