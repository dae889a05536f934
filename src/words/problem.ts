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
  [/amplitudeUv/g, 'the amplitude'],
  [/latencyMs/g, 'the latency'],
  [/widthMs/g, 'the width'],
  [/edgeMs/g, 'the on- and offset'],
  [/riseShare/g, 'the share before the peak'],
  [/phaseRad/g, 'the phase'],
  [/\border(?= must)/g, 'the order'],
  [/\bepoch(?= must)/g, 'the epoch'],
  [/\bscore window(?= must)/g, 'the score window'],
  [/\bbaseline window(?= must)/g, 'the baseline window'],
]

/** "stage 2: cutoffsHz[0] must lie …" becomes "Stage 2: the cutoff must lie …". */
export function inWords(message: string): string {
  let words = message
  for (const [pattern, replacement] of FIELD_WORDS) words = words.replace(pattern, replacement)
  words = words.replace(/(^|[^\d.])-(?=\d)/g, '$1\u2212')
  words = words.charAt(0).toUpperCase() + words.slice(1)
  return /[.!?]$/.test(words) ? words : `${words}.`
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
