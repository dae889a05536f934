import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { chainResponse, designChain, type StageSpec } from '../../src/filter/index.ts'
import {
  type ChecklistItem,
  methodsParagraph,
  parseNumber,
  reportingChecklist,
  STATEMENT_FIELDS,
  type WriteUpFacts,
} from '../../src/words/index.ts'
import { writeUps } from './random-write-ups.ts'

const FACTS: WriteUpFacts = {
  source: 'recorded',
  waveform: 'PO7 of average.csv',
  samplingRateHz: 250,
  chain: [],
  extent: 'epochs',
  baseline: { fromMs: -200, toMs: 0 },
  trials: 40,
  score: { kind: 'mean', fromMs: 300, toMs: 600, polarity: 'positive' },
}
const highPass: StageSpec = {
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [0.5],
  meaning: 'half-amplitude',
  direction: 'both',
}
const amplifier: StageSpec = { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.1 }
const sinc: StageSpec = {
  design: 'windowed-sinc',
  pass: 'low',
  cutoffsHz: [30],
  meaning: 'half-amplitude',
  transitionHz: 10,
  window: { name: 'hamming' },
  delay: 'compensated',
}
const average: StageSpec = { design: 'moving-average', durationMs: 40, delay: 'compensated' }
const LATENCY = { ...FACTS.score, kind: 'peak-latency' as const }

const itemOf = (facts: WriteUpFacts, id: string): ChecklistItem => {
  const found = reportingChecklist(facts).items.find((item) => item.id === id)
  if (!found) throw new Error(`no item ${id}`)
  return found
}
const said = (facts: WriteUpFacts, id: string) => {
  const { state, words } = itemOf(facts, id)
  return `${state}: ${words}`
}

/** What each source asks for, in its words or ours (checks S9 to S12), by the item that answers it. */
const ASKED: Readonly<Record<string, { mark: string; items: readonly string[] }>> = {
  // S9, checklist of Pernet et al. 2020: type, cutoff, roll-off, other parameters; around them the order of all steps, software and
  // version, downsampling, detrending and baseline with polynomial order, epochs per condition, spectral steps and segmentation
  'Pernet et al. 2020': {
    mark: 'seen',
    items: [
      ...[
        'type',
        'cutoffs',
        'roll-off',
        'order',
        'order-of-steps',
        'processing-order',
        'software',
        'acquisition-software',
      ],
      ...['resampling', 'detrending', 'baseline', 'trials', 'spectral'],
    ],
  },
  // S10, recommendations of Widmann, Schröger & Maess 2015
  'Widmann, Schröger & Maess 2015': {
    mark: 'from memory (high)',
    items: [
      ...['cutoffs', 'order', 'window', 'ripple', 'roll-off', 'direction', 'extent', 'edges', 'amplifier', 'type'],
      ...['earlier-filters', 'earlier-edges', 'coefficients'],
    ],
  },
  // S11
  'de Cheveigné & Nelken 2019': { mark: 'seen', items: ['response-figure'] },
  // S12, criteria of Picton et al. 2000
  'Picton et al. 2000': {
    mark: 'from memory (medium)',
    items: ['amplifier', 'type', 'sampling-rate', 'latency-phase'],
  },
  'common practice': { mark: 'common practice', items: ['reference', 'artifacts'] },
}

describe('the reporting checklist', () => {
  const { items, caution } = reportingChecklist({ ...FACTS, chain: [highPass] })

  test('asks for everything that its sources ask for, each with its year and how surely it is quoted', () => {
    for (const [source, { mark, items: wanted }] of Object.entries(ASKED)) {
      const here = items.filter(({ sources }) => sources.some(({ words }) => words.startsWith(source)))
      expect(here.map(({ id }) => id).sort(), source).toEqual([...wanted].sort())
      for (const { sources } of here)
        expect(sources.find(({ words }) => words.startsWith(source))?.mark, source).toBe(mark)
    }
    expect(new Set(items.map(({ id }) => id)).size).toBe(items.length)
    for (const { id, sources } of items) expect(sources.length, id).toBeGreaterThan(0)
  })

  test('says that local standards and the responsible clinician decide', () => {
    expect(caution).toContain('Not for diagnosis')
    expect(caution).toContain('the local laboratory’s standards and the responsible clinician')
  })

  test('leaves nothing empty: what is not stated has a token or a field to state it', () => {
    fc.assert(
      fc.property(writeUps, (facts) => {
        for (const { id, state, words, token, field } of reportingChecklist(facts).items) {
          expect(words, id).toMatch(/\S/)
          expect(words, id).not.toMatch(/\b(undefined|NaN|null|Infinity)\b| {2}|^\s|\s$/)
          expect(words === 'not stated', id).toBe(state === 'not stated' && id !== 'software')
          if (state === 'not stated' && id !== 'software') {
            expect(field, id).toBe(id)
            expect(
              STATEMENT_FIELDS.some((entry) => entry.field === field),
              id,
            ).toBe(true)
          }
          const stage = /^stage:(\d+):/.exec(token ?? '')
          if (stage) expect(facts.chain[Number(stage[1])].enabled, id).not.toBe(false)
        }
      }),
      { numRuns: 200 },
    )
  })

  test('every field states its own item, in the user’s words, and the paragraph carries them', () => {
    // one offline stage in the data, one applied here: every field is asked for
    const facts: WriteUpFacts = { ...FACTS, chain: [{ ...highPass, inData: true }, sinc] }
    for (const { field, name } of STATEMENT_FIELDS) {
      const before = itemOf(facts, field)
      const stated: WriteUpFacts = { ...facts, statements: { [field]: 'as we\n always do' } }
      const after = itemOf(stated, field)
      expect(after.state, field).toBe('stated')
      expect(after.words, field).toContain('as we always do')
      if (field !== 'earlier-filters') expect(before, field).toMatchObject({ state: 'not stated', field })
      expect(methodsParagraph(stated), field).toContain(`${name}: as we always do.`)
      expect(itemOf({ ...facts, statements: { [field]: ' \n ' } }, field), field).toEqual(before)
    }
  })

  test('says the same numbers as the paragraph', () => {
    fc.assert(
      fc.property(writeUps, (facts) => {
        const paragraph = methodsParagraph(facts)
        for (const id of ['cutoffs', 'order', 'roll-off', 'window', 'direction', 'edges', 'amplifier']) {
          const { state, words, field } = itemOf(facts, id)
          if (state !== 'stated' || field) continue
          const own = facts.statements?.[id]
          const numbers =
            (own ? words.replace(`; ${own}`, '') : words).replace(/stage \d+/g, '').match(/[\d.]*\d/g) ?? []
          for (const number of numbers) expect(paragraph, `${id}: ${words}`).toContain(number)
        }
      }),
      { numRuns: 100 },
    )
  })

  test('does not know the amplifier of recorded data unless a stage or the user states it', () => {
    expect(itemOf(FACTS, 'amplifier')).toMatchObject({ state: 'not stated', field: 'amplifier', token: 'add' })
    expect(said({ ...FACTS, statements: { amplifier: 'DC to 131 Hz' } }, 'amplifier')).toBe('stated: DC to 131 Hz')
    const known = { ...FACTS, chain: [{ ...amplifier, inData: true }] }
    // 0.1 Hz is τ = 1.6 s (table A2), half amplitude at 0.1/√3
    expect(said(known, 'amplifier')).toBe(
      'stated: stage 1: an amplifier high-pass filter of order 1 (one pass), causal, a time constant of 1.5915 s, a half-amplitude ' +
        'cutoff of 0.057735 Hz (gain 1/2) and a half-power cutoff of 0.1 Hz (gain 1/√2) as applied, a roll-off approaching 6.021 dB ' +
        'per octave as applied',
    )
    expect(itemOf({ ...known, chain: [{ ...amplifier, enabled: false }] }, 'amplifier').state).toBe('not stated')
  })

  test('takes it for stated that a recording had passed no other filter', () => {
    const none: WriteUpFacts = { ...FACTS, noOtherFilters: true }
    expect(said(none, 'earlier-filters')).toBe('stated: none')
    expect(said(none, 'amplifier')).toBe('stated: none')
    expect(said({ ...none, chain: [{ ...amplifier, inData: true }] }, 'earlier-filters')).toBe(
      'stated: none besides the amplifier’s',
    )
    expect(said({ ...none, chain: [{ ...highPass, inData: true }] }, 'earlier-filters')).toBe(
      'stated: stage 1: Butterworth high-pass; no other',
    )
    expect(said({ ...none, statements: { amplifier: 'DC to 131 Hz' } }, 'amplifier')).toBe('stated: DC to 131 Hz')
  })

  test('asks of a simulated waveform nothing that only a recording has', () => {
    const built: WriteUpFacts = { ...FACTS, source: 'built', waveform: 'a late positivity', chain: [highPass] }
    const only = ['amplifier', 'acquisition-software', 'reference', 'earlier-filters', 'earlier-edges']
    for (const id of [...only, 'resampling', 'detrending', 'artifacts', 'processing-order'])
      expect(itemOf(built, id).state, id).toBe('does not apply')
    expect(said(built, 'reference')).toBe('does not apply: the waveform is simulated')
    expect(said({ ...built, events: 'alone' }, 'trials')).toBe('stated: 40 trials, the event alone')
    expect(said({ ...built, events: { fromMs: 900, toMs: 1200 } }, 'trials')).toBe(
      'stated: 40 trials, one event every 900 to 1200 ms',
    )
    expect(said({ ...built, extent: 'continuous' }, 'edges')).toBe(
      'stated: stage 1: nothing to pad: the waveform is defined on the whole time axis',
    )
  })

  test('of an empty chain says that no filter is applied, and of the amplifier alone that there is no other', () => {
    for (const id of ['order-of-steps', 'type', 'cutoffs', 'order', 'roll-off', 'ripple', 'direction'])
      expect(said(FACTS, id), id).toBe('does not apply: no filter is applied')
    const chain = [{ ...amplifier, inData: true }]
    for (const id of ['type', 'cutoffs', 'order'])
      expect(said({ ...FACTS, chain }, id), id).toBe('does not apply: no filter but the amplifier’s')
    for (const id of ['extent', 'edges'])
      expect(said({ ...FACTS, chain }, id), id).toBe('does not apply: no filter is applied offline')
    expect(said({ ...FACTS, chain }, 'coefficients')).toBe('does not apply: no filter is applied here')
    expect(said(FACTS, 'baseline')).toBe('stated: the mean from −200 to 0 ms is subtracted')
    expect(said({ ...FACTS, chain: [highPass] }, 'baseline')).toBe(
      'stated: the mean from −200 to 0 ms is subtracted after the filters',
    )
  })

  test('holds every filter that the data have passed against a latency', () => {
    const about = (chain: StageSpec[], score = LATENCY, source: WriteUpFacts['source'] = 'recorded') =>
      said({ ...FACTS, chain, score, source }, 'latency-phase')
    expect(about([highPass], { ...LATENCY, kind: 'mean' as never })).toBe('does not apply: the score is not a latency')
    expect(about([])).toBe('does not apply: no filter is applied')
    expect(about([highPass, sinc, average], LATENCY, 'built')).toBe('stated: every stage is zero-phase')
    expect(about([highPass])).toBe(
      'stated: every stage is zero-phase; the amplifier’s own filters, which are causal, are not among the stages',
    )
    expect(about([{ ...amplifier, inData: true }, highPass])).toBe(
      'stated: causal, so that latencies contain their delay: stage 1 (amplifier high-pass, in the data)',
    )
    expect(about([amplifier, { ...highPass, direction: 'forward' }, { ...average, delay: 'causal' }, sinc])).toBe(
      'stated: causal, so that latencies contain their delay: stage 1 (amplifier high-pass), stage 2 (Butterworth high-pass), stage 3 (moving average)',
    )
  })

  test('asks how earlier filters met the ends wherever earlier filters are stated', () => {
    expect(itemOf(FACTS, 'earlier-edges').state).toBe('does not apply')
    const chain = [{ ...highPass, inData: true }]
    expect(itemOf({ ...FACTS, chain }, 'earlier-edges').state).toBe('not stated')
    const words = (filters: string) => itemOf({ ...FACTS, statements: { 'earlier-filters': filters } }, 'earlier-edges')
    expect(words('0.1 Hz high-pass').state).toBe('not stated')
    expect(words('none').state).toBe('does not apply')
    expect(words('No filter.').state).toBe('does not apply')
    expect(words('Notch at 50 Hz').state).toBe('not stated')
  })

  test('says ripple and attenuation as measured on the kernel', () => {
    // side lobes of N = 10 equal taps with halved ends: sin(10x)·cos(x)/(10·sin(x)), largest −13.9 dB at the first lobe, found on a grid
    const chain = designChain([average], 250)
    const grid = Float64Array.from({ length: 20_000 }, (_, i) => 25.01 + (i / 20_000) * 99.9)
    const { re, im } = chainResponse(chain, grid)
    const largest = re.reduce((most, value, i) => Math.max(most, Math.hypot(value, im[i])), 0)
    expect(20 * Math.log10(largest)).toBeCloseTo(-13.9, 1)
    expect(said({ ...FACTS, chain: [average] }, 'ripple')).toBe(
      'stated: stage 1: side lobes between its nulls, at most −13.9 dB',
    )
    expect(said({ ...FACTS, chain: [{ ...average, durationMs: 8 }] }, 'ripple')).toBe(
      'stated: stage 1: no side lobe below half the sampling rate',
    )
    // and of a low-pass with a transition from 25 to 35 Hz, on a grid up to its ends
    const ripple = said({ ...FACTS, chain: [sinc] }, 'ripple')
    const numbers = /1 ± ([\d.]+) \(ripple ([\d.]+) dB\) in the pass band, at most (−[\d.]+) dB in the stop band/.exec(
      ripple,
    )
    const read = (numbers ?? []).slice(1).map(parseNumber)
    const gains = (fromHz: number, toHz: number) => {
      const hz = Float64Array.from({ length: 5001 }, (_, i) => fromHz + (i / 5000) * (toHz - fromHz))
      const { re, im } = chainResponse(designChain([sinc], 250), hz)
      return Array.from(re, (value, i) => Math.hypot(value, im[i]))
    }
    const pass = Math.max(...gains(0, 25).map((gain) => Math.abs(gain - 1)))
    const stop = 20 * Math.log10(Math.max(...gains(35, 125)))
    expect(Math.abs(read[0] / pass - 1)).toBeLessThan(0.02)
    expect(Math.abs(read[1] - 20 * Math.log10(1 + pass))).toBeLessThan(0.001)
    expect(Math.abs(read[2] - stop)).toBeLessThan(0.2)
  })

  test('says where each filter stands among the steps', () => {
    const chain = [{ ...amplifier, inData: true }, { ...highPass, inData: true }, sinc, average]
    expect(said({ ...FACTS, chain }, 'order-of-steps')).toBe(
      'stated: in the data already: stage 1 (amplifier high-pass), then stage 2 (Butterworth high-pass); offline: stage 3 ' +
        '(Hamming-windowed sinc low-pass), then stage 4 (moving average)',
    )
  })

  test('numbers the stages as the protocol line does, those that are switched off counted', () => {
    const chain = [{ ...highPass, enabled: false }, sinc]
    const { words, token } = itemOf({ ...FACTS, chain }, 'order')
    expect(words).toBe('stage 2: 83 taps (order 82, one pass)')
    expect(token).toBe('stage:1:design')
  })

  test('asks for a version that is not known', () => {
    expect(said(FACTS, 'software')).toBe('not stated: Sidelobe, version not stated')
    expect(said({ ...FACTS, softwareVersion: '0.3.0' }, 'software')).toBe('stated: Sidelobe 0.3.0')
  })

  test('names the stage of a chain that cannot be designed', () => {
    expect(() => reportingChecklist({ ...FACTS, chain: [{ ...highPass, order: 0 }] })).toThrow(/^stage 1: order/)
  })
})
