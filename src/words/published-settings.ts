import { chainBand, polesAtEnd } from './chain-band.ts'
import { CAUTION, type PublishedSource } from './published-source.ts'
import {
  type Finding,
  highCorner,
  type Looked,
  lowCorner,
  lowCornerOfUnsaidGain,
  noNotch,
  orderAtMost,
  slopeAtMost,
} from './setting-check.ts'
import { designProtocol, type WriteUpFacts } from './write-up-facts.ts'

/** One requirement of a published setting, held against the chain. */
export interface PublishedSetting extends Finding {
  readonly id: string
  /** What the setting is about: 'visual evoked potentials'. */
  readonly about: string
  readonly requirement: string
  readonly source: PublishedSource
  /** Which stages were looked at. */
  readonly stages: 'all filters' | 'amplifier filters'
}

/** A published setting that is quoted and not checked. */
export interface PublishedExample {
  readonly id: string
  readonly about: string
  readonly words: string
  readonly source: PublishedSource
}

const ISCEV: PublishedSource = {
  words:
    'ISCEV standard for clinical visual evoked potentials: Odom et al. 2010, Doc Ophthalmol 120:111–119; Odom et al. 2016, Doc Ophthalmol 133:1–9',
  mark: 'from memory (medium to high)',
}
const ISCEV_ORDERS: PublishedSource = {
  words:
    'derived from the slopes of the ISCEV standard (Odom et al. 2010, 2016): 6 dB per octave for each order of one pass',
  mark: 'derived',
}
const ACNS_1: PublishedSource = {
  words: 'ACNS Guideline 1: Sinha et al. 2016, J Clin Neurophysiol 33:303–307',
  mark: 'from memory (high)',
}
const ACNS_9: PublishedSource = {
  words: 'ACNS Guidelines 9A to 9C on evoked potentials (2006)',
  mark: 'from memory (medium)',
}
const ACUNZO: PublishedSource = {
  words:
    'Acunzo, MacKenzie & van Rossum 2012, J Neurosci Methods 209:212–218, abstract; it gives no definition of the cutoff',
  mark: 'seen',
}

export const PUBLISHED_EXAMPLES: readonly PublishedExample[] = [
  {
    id: 'S3',
    about: 'visual evoked potentials',
    words:
      'One published study in the style of the ISCEV standard: band 1 to 100 Hz, 200 sweeps, 250 ms analysed, peaks at 75, 100 and 145 ms, residual noise below 0.1 µV.',
    source: {
      words: 'Invest Ophthalmol Vis Sci, iovs.arvojournals.org, article 2199757 (year not noted)',
      mark: 'seen',
    },
  },
]

interface Rule extends Omit<PublishedSetting, keyof Finding> {
  readonly check: (looked: Looked) => Finding
}

const VEP = 'visual evoked potentials'
const BAEP = 'brainstem auditory evoked potentials'

const RULES: readonly Rule[] = [
  rule('S1-low', VEP, 'high-pass corner of at most 1 Hz', ISCEV, 'all filters', (l) => lowCorner(l, 0, 1)),
  rule('S1-high', VEP, 'low-pass corner of at least 100 Hz', ISCEV, 'all filters', (l) => highCorner(l, 100, Infinity)),
  rule('S1-low-slope', VEP, 'analogue high-pass no steeper than 12 dB per octave', ISCEV, 'amplifier filters', (l) =>
    slopeAtMost(l, 'low', 12),
  ),
  rule('S1-high-slope', VEP, 'analogue low-pass no steeper than 24 dB per octave', ISCEV, 'amplifier filters', (l) =>
    slopeAtMost(l, 'high', 24),
  ),
  rule('S1-notch', VEP, 'no notch or comb filter', ISCEV, 'all filters', noNotch),
  rule(
    'S2-low',
    VEP,
    'high-pass of at most order 2 in one pass, all stages together',
    ISCEV_ORDERS,
    'all filters',
    (l) => orderAtMost(l, 'low', 2),
  ),
  rule(
    'S2-high',
    VEP,
    'low-pass of at most order 4 in one pass, all stages together',
    ISCEV_ORDERS,
    'all filters',
    (l) => orderAtMost(l, 'high', 4),
  ),
  rule('S4-low', 'clinical EEG', 'low-frequency filter not above 1 Hz (−3 dB)', ACNS_1, 'all filters', (l) =>
    lowCorner(l, 0, 1),
  ),
  rule('S4-high', 'clinical EEG', 'high-frequency filter not below 70 Hz (−3 dB)', ACNS_1, 'all filters', (l) =>
    highCorner(l, 70, Infinity),
  ),
  rule(
    'S5-low-slope',
    'evoked potentials',
    'analogue high-pass of at most 12 dB per octave',
    ACNS_9,
    'amplifier filters',
    (l) => slopeAtMost(l, 'low', 12),
  ),
  rule(
    'S5-high-slope',
    'evoked potentials',
    'analogue low-pass of at most 24 dB per octave',
    ACNS_9,
    'amplifier filters',
    (l) => slopeAtMost(l, 'high', 24),
  ),
  rule('S5-vep-low', VEP, 'band from 0.2–1.0 Hz (−3 dB)', ACNS_9, 'all filters', (l) => lowCorner(l, 0.2, 1)),
  rule('S5-vep-high', VEP, 'band to 200–300 Hz (−3 dB)', ACNS_9, 'all filters', (l) => highCorner(l, 200, 300)),
  rule('S5-baep-low', BAEP, 'band from 10–30 Hz (−3 dB)', ACNS_9, 'all filters', (l) => lowCorner(l, 10, 30)),
  rule('S5-baep-high', BAEP, 'band to 2500–3000 Hz (−3 dB)', ACNS_9, 'all filters', (l) => highCorner(l, 2500, 3000)),
  rule('S13', 'event-related potentials', 'high-pass of at most 0.1 Hz', ACUNZO, 'all filters', (l) =>
    lowCornerOfUnsaidGain(l, 0.1),
  ),
]

/**
 * Published settings held against the chain: half-power points of all filters that the waveform has passed (amplifier and offline, in
 * the data and applied here), slopes of the stages that a setting means.
 *
 * @throws RangeError for a chain that cannot be designed.
 */
export function publishedSettings(facts: WriteUpFacts): {
  readonly caution: string
  readonly settings: readonly PublishedSetting[]
  readonly examples: readonly PublishedExample[]
} {
  const { chain } = designProtocol(facts)
  const amplifiers = chain.stages.filter(({ spec }) => spec.design === 'amplifier')
  const isUnknown = (end: 'low' | 'high') => facts.source === 'recorded' && polesAtEnd(amplifiers, end) === 0
  const looked: Looked = {
    all: chain.stages,
    amplifiers,
    band: chainBand(chain.stages, chain.samplingRateHz),
    halfRateHz: chain.samplingRateHz / 2,
    // words that state the amplifier cannot be computed with
    unknown: { low: isUnknown('low'), high: isUnknown('high') },
  }
  const settings = RULES.map(({ check, ...setting }) => ({ ...setting, ...check(looked) }))
  return { caution: CAUTION, settings, examples: PUBLISHED_EXAMPLES }
}

function rule(
  id: string,
  about: string,
  requirement: string,
  source: PublishedSource,
  stages: Rule['stages'],
  check: Rule['check'],
): Rule {
  return { id, about, requirement, source, stages, check }
}
