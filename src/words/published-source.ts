/** A publication that an item or a setting is quoted from, and how surely. */
export interface PublishedSource {
  readonly words: string
  /** 'seen': read in the source or in a page that restates it. 'from memory': known, not read. 'derived': follows from others. */
  readonly mark: string
}

export const CAUTION =
  'For research planning. Not for diagnosis. Published settings are quoted with source and year, and can be superseded; clinical ' +
  'recordings follow the local laboratory’s standards and the responsible clinician.'

export const SOURCES = {
  pernet: {
    words: 'Pernet et al. 2020, Nat Neurosci 23:1473–1483, checklist of the COBIDAS-MEEG recommendations',
    mark: 'seen',
  },
  widmann: {
    words: 'Widmann, Schröger & Maess 2015, J Neurosci Methods 250:34–46, reporting recommendations',
    mark: 'from memory (high)',
  },
  decheveigne: { words: 'de Cheveigné & Nelken 2019, Neuron 102:280–293', mark: 'seen' },
  picton: { words: 'Picton et al. 2000, Psychophysiology 37:127–152', mark: 'from memory (medium)' },
  practice: { words: 'common practice', mark: 'common practice' },
} as const satisfies Record<string, PublishedSource>
