import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { designChain, type StageSpec } from '../../src/filter/index.ts'
import { gainAt } from '../../src/filter/stage-response.ts'
import { type PublishedSetting, publishedSettings, type WriteUpFacts } from '../../src/words/index.ts'
import { writeUps } from './random-write-ups.ts'

/** A built waveform has passed no amplifier but the stated one, so that everything can be told. */
const BUILT: WriteUpFacts = {
  source: 'built',
  waveform: 'a visual response',
  samplingRateHz: 2000,
  events: 'alone',
  chain: [],
  extent: 'continuous',
  baseline: 'none',
  trials: 100,
  score: { kind: 'peak-latency', fromMs: 80, toMs: 140, polarity: 'positive' },
}
const RECORDED: WriteUpFacts = {
  ...BUILT,
  source: 'recorded',
  events: null,
  waveform: 'Oz of average.csv',
  extent: 'epochs',
}

const amplifier = (pass: 'low' | 'high', order: number, cutoffHz: number): StageSpec => ({
  ...{ design: 'amplifier', pass, order, cutoffHz },
})
const butterworth = (
  pass: 'low' | 'high' | 'band' | 'stop',
  order: number,
  cutoffsHz: number[],
  direction: 'forward' | 'both' = 'forward',
  meaning: 'half-power' | 'half-amplitude' = 'half-power',
): StageSpec => ({ design: 'butterworth', pass, order, cutoffsHz, meaning, direction })
const notch: StageSpec = { design: 'notch', frequencyHz: 50, bandwidthHz: 2, harmonics: 0, direction: 'both' }
const sinc: StageSpec = {
  design: 'windowed-sinc',
  pass: 'high',
  cutoffsHz: [0.5],
  meaning: 'half-power',
  transitionHz: 0.5,
  window: { name: 'hamming' },
  delay: 'compensated',
}

function settingOf(facts: WriteUpFacts, id: string): PublishedSetting {
  const found = publishedSettings(facts).settings.find((setting) => setting.id === id)
  if (!found) throw new Error(`no setting ${id}`)
  return found
}
const built = (id: string, ...chain: StageSpec[]) => settingOf({ ...BUILT, chain }, id)
const recorded = (id: string, ...chain: StageSpec[]) => settingOf({ ...RECORDED, chain }, id)

/** Limits in Hz as the sources print them (checks S1, S4, S5, S13). */
const LOW: Readonly<Record<string, readonly [number, number]>> = {
  'S1-low': [0, 1],
  'S4-low': [0, 1],
  'S5-vep-low': [0.2, 1],
  'S5-baep-low': [10, 30],
}
const HIGH: Readonly<Record<string, readonly [number, number]>> = {
  'S1-high': [100, Number.POSITIVE_INFINITY],
  'S4-high': [70, Number.POSITIVE_INFINITY],
  'S5-vep-high': [200, 300],
  'S5-baep-high': [2500, 3000],
}

describe('the published settings', () => {
  const { settings, examples, caution } = publishedSettings(BUILT)

  test('are those of S1, S2, S4, S5 without its somatosensory band, and S13, each with its year and mark', () => {
    expect(settings.map(({ id }) => id)).toEqual([
      ...['S1-low', 'S1-high', 'S1-low-slope', 'S1-high-slope', 'S1-notch', 'S2-low', 'S2-high', 'S4-low', 'S4-high'],
      ...['S5-low-slope', 'S5-high-slope', 'S5-vep-low', 'S5-vep-high', 'S5-baep-low', 'S5-baep-high', 'S13'],
    ])
    const marks: Readonly<Record<string, [string, string]>> = {
      S1: ['Odom et al. 2016', 'from memory (medium to high)'],
      S2: ['2016', 'derived'],
      S4: ['Sinha et al. 2016', 'from memory (high)'],
      S5: ['2006', 'from memory (medium)'],
      S13: ['Acunzo, MacKenzie & van Rossum 2012', 'seen'],
    }
    for (const { id, source } of settings) {
      const [words, mark] = marks[id.split('-')[0]]
      expect(source.words, id).toContain(words)
      expect(source.mark, id).toBe(mark)
      expect(source.words, id).toMatch(/\b(19|20)\d\d\b/)
    }
    expect(JSON.stringify(settings)).not.toMatch(/somatosensory|SEP\b|\(low\)/)
  })

  test('quote S3 as an example, which is not checked', () => {
    expect(examples.map(({ id }) => id)).toEqual(['S3'])
    expect(examples[0].words).toContain('1 to 100 Hz, 200 sweeps, 250 ms analysed, peaks at 75, 100 and 145 ms')
    expect(examples[0].source).toEqual({
      words: 'Invest Ophthalmol Vis Sci, iovs.arvojournals.org, article 2199757 (year not noted)',
      mark: 'seen',
    })
  })

  test('come with the caution that local standards and the responsible clinician decide', () => {
    expect(caution).toBe(
      'For research planning. Not for diagnosis. Published settings are quoted with source and year, and can be superseded; ' +
        'clinical recordings follow the local laboratory’s standards and the responsible clinician.',
    )
  })

  test('hold a chain’s corners against each band where its measured gain crosses half power', () => {
    const corners = fc.record({
      low: fc.double({ min: -1.5, max: 1.5, noNaN: true }).map((power) => 10 ** power),
      high: fc.double({ min: 2.2, max: 3.6, noNaN: true }).map((power) => 10 ** power),
      order: fc.integer({ min: 1, max: 4 }),
      direction: fc.constantFrom('forward' as const, 'both' as const),
      meaning: fc.constantFrom('half-power' as const, 'half-amplitude' as const),
    })
    fc.assert(
      fc.property(corners, ({ low, high, order, direction, meaning }) => {
        const chain = [
          butterworth('high', order, [low], direction, meaning),
          butterworth('low', order, [high], direction, meaning),
        ]
        const facts = { ...BUILT, samplingRateHz: 10_000, chain }
        const { stages } = designChain(chain, 10_000)
        const passesAt = (hz: number) => gainAt(stages, hz) >= Math.SQRT1_2
        // far enough apart that each corner is one filter's, and none so near a limit that the tolerance of cutoffs decides
        fc.pre(high > 20 * low)
        const limits = [...Object.values(LOW), ...Object.values(HIGH)].flat().filter(Number.isFinite)
        fc.pre(limits.every((hz) => Math.abs(gainAt(stages, hz) - Math.SQRT1_2) > 1e-4))
        // above the lower corner and below the upper one the gain is at half power or more
        for (const [id, [from, to]] of Object.entries(LOW)) {
          const { verdict, byHowMuch } = settingOf(facts, id)
          const isKept = passesAt(to) && (from === 0 || !passesAt(from))
          expect(verdict, `${id}, ${low} Hz`).toBe(isKept ? 'kept' : 'not kept')
          if (byHowMuch) expectCrossing(stages, passesAt(to) ? from - byHowMuch.value : to + byHowMuch.value)
        }
        for (const [id, [from, to]] of Object.entries(HIGH)) {
          const { verdict, byHowMuch } = settingOf(facts, id)
          const isKept = passesAt(from) && (to === Number.POSITIVE_INFINITY || !passesAt(to))
          expect(verdict, `${id}, ${high} Hz`).toBe(isKept ? 'kept' : 'not kept')
          if (byHowMuch) expectCrossing(stages, passesAt(from) ? to + byHowMuch.value : from - byHowMuch.value)
        }
      }),
      { numRuns: 150 },
    )
  })

  function expectCrossing(stages: ReturnType<typeof designChain>['stages'], hz: number): void {
    expect(gainAt(stages, hz), `${hz} Hz`).toBeCloseTo(Math.SQRT1_2, 5)
  }

  test('change their verdict at each limit that the source prints, and nowhere beside it', () => {
    const at = (id: string, spec: StageSpec) =>
      settingOf({ ...BUILT, samplingRateHz: 20_000, chain: [spec] }, id).verdict
    const low = (hz: number) => butterworth('high', 2, [hz])
    const high = (hz: number) => butterworth('low', 2, [hz])
    for (const [limits, filter] of [
      [LOW, low],
      [HIGH, high],
    ] as const)
      for (const [id, [from, to]] of Object.entries(limits)) {
        if (from > 0)
          expect(
            [from * 0.99, from * 1.01].map((hz) => at(id, filter(hz))),
            id,
          ).toEqual(['not kept', 'kept'])
        if (to < Number.POSITIVE_INFINITY)
          expect(
            [to * 0.99, to * 1.01].map((hz) => at(id, filter(hz))),
            id,
          ).toEqual(['kept', 'not kept'])
      }
  })

  test('keep a corner at the limit itself, and say by how much another misses it', () => {
    expect(built('S1-low', butterworth('high', 2, [1]))).toMatchObject({
      verdict: 'kept',
      found: 'half-power point at 1 Hz',
    })
    expect(built('S1-low', butterworth('high', 2, [1.5]))).toMatchObject({
      verdict: 'not kept',
      found: 'half-power point at 1.5 Hz',
      byHowMuch: { words: '0.5 Hz above 1 Hz', unit: 'Hz' },
    })
    expect(built('S1-high', butterworth('low', 2, [100])).verdict).toBe('kept')
    expect(built('S1-high', butterworth('low', 2, [40])).byHowMuch?.words).toBe('60 Hz below 100 Hz')
    expect(built('S5-vep-low', butterworth('high', 2, [0.1])).byHowMuch?.words).toBe('0.1 Hz below 0.2 Hz')
    expect(built('S5-vep-high', butterworth('low', 2, [350])).byHowMuch?.words).toBe('50 Hz above 300 Hz')
  })

  // 0.5 Hz half-amplitude both ways of order 2 is half power at 0.5/0.8022 (B22)
  test('take a cutoff stated as half-amplitude at its own half-power point', () => {
    expect(built('S1-low', butterworth('high', 2, [0.9], 'both', 'half-amplitude'))).toMatchObject({
      verdict: 'not kept',
      found: 'half-power point at 1.1219 Hz',
    })
    expect(built('S1-low', butterworth('high', 2, [0.8], 'both', 'half-amplitude')).verdict).toBe('kept')
  })

  test('count what several filters do together: two that keep the limit alone can miss it', () => {
    const at = (hz: number) => butterworth('high', 1, [hz])
    expect(built('S1-low', at(0.9)).verdict).toBe('kept')
    // k first-order stages shift the point by 1/√(2^(1/k) − 1) (B30)
    expect(built('S1-low', at(0.9), at(0.9))).toMatchObject({
      verdict: 'not kept',
      found: 'half-power point at 1.3984 Hz',
    })
    expect(built('S1-low', amplifier('high', 1, 0.9), at(0.9)).verdict).toBe('not kept')
  })

  test('judge a band-pass at both its corners', () => {
    const band = butterworth('band', 2, [0.5, 250])
    for (const id of ['S1-low', 'S1-high', 'S4-low', 'S4-high', 'S5-vep-low', 'S5-vep-high'])
      expect(built(id, band).verdict, id).toBe('kept')
    expect(built('S5-baep-low', band).byHowMuch?.words).toBe('9.5 Hz below 10 Hz')
    expect(built('S5-baep-high', band).byHowMuch?.words).toBe('2250 Hz below 2500 Hz')
  })

  test('of no high-pass at all keep an upper limit and miss a lower one', () => {
    expect(built('S1-low')).toMatchObject({ verdict: 'kept', found: 'no high-pass', byHowMuch: null })
    expect(built('S13').verdict).toBe('kept')
    expect(built('S5-vep-low')).toMatchObject({ verdict: 'not kept', byHowMuch: { words: '0.2 Hz below 0.2 Hz' } })
  })

  test('take half the sampling rate as the end of the band where there is no low-pass', () => {
    const at = (samplingRateHz: number, id: string) => settingOf({ ...BUILT, samplingRateHz }, id)
    expect(at(2000, 'S1-high').verdict).toBe('kept')
    expect(at(150, 'S1-high')).toMatchObject({
      verdict: 'not kept',
      found: 'no low-pass below half the sampling rate (75 Hz)',
      byHowMuch: { words: '25 Hz below 100 Hz' },
    })
    expect(at(150, 'S4-high').verdict).toBe('kept')
    expect(at(500, 'S5-vep-high').verdict).toBe('cannot be told')
    expect(at(2000, 'S5-vep-high').byHowMuch?.words).toBe('700 Hz above 300 Hz')
  })

  test('look at analogue slopes of the amplifier only: 12 dB per octave is order 2, 24 is order 4', () => {
    for (const standard of ['S1', 'S5']) {
      const low = (...chain: StageSpec[]) => built(`${standard}-low-slope`, ...chain)
      const high = (...chain: StageSpec[]) => built(`${standard}-high-slope`, ...chain)
      expect(low(amplifier('high', 2, 0.5))).toMatchObject({ verdict: 'kept', found: '12.04 dB per octave (order 2)' })
      expect(low(amplifier('high', 3, 0.5))).toMatchObject({
        verdict: 'not kept',
        found: '18.06 dB per octave (order 3)',
        byHowMuch: { words: '6.021 dB per octave steeper', unit: 'dB/octave' },
      })
      expect(high(amplifier('low', 4, 200)).verdict).toBe('kept')
      expect(high(amplifier('low', 5, 200)).verdict).toBe('not kept')
      expect(high(amplifier('low', 3, 200), amplifier('low', 3, 300)).byHowMuch?.words).toBe(
        '12.04 dB per octave steeper',
      )
      expect(low(butterworth('high', 8, [0.5], 'both'))).toMatchObject({
        verdict: 'kept',
        found: 'no amplifier high-pass',
      })
    }
  })

  test('measure that slope an octave apart, far below the corner', () => {
    const { stages } = designChain([amplifier('high', 3, 10)], 2000)
    const db = (hz: number) => 20 * Math.log10(gainAt(stages, hz))
    expect(built('S1-low-slope', amplifier('high', 3, 10)).found).toContain(
      `${(db(0.02) - db(0.01)).toFixed(2)} dB per octave`,
    )
  })

  test('count orders of all filters in all passes for S2', () => {
    // the steepest conforming pair: causal order 2 at 1 Hz and order 4 at 100 Hz (S2)
    const pair = [butterworth('high', 2, [1]), butterworth('low', 4, [100])]
    expect(built('S2-low', ...pair)).toMatchObject({ verdict: 'kept', found: 'order 2 in all passes together' })
    expect(built('S2-high', ...pair)).toMatchObject({ verdict: 'kept', found: 'order 4 in all passes together' })
    expect(built('S2-low', butterworth('high', 2, [1], 'both'))).toMatchObject({
      verdict: 'not kept',
      found: 'order 4 in all passes together',
      byHowMuch: { words: '12.04 dB per octave steeper' },
    })
    expect(built('S2-low', amplifier('high', 1, 0.1), ...pair).verdict).toBe('not kept')
    expect(built('S2-low')).toMatchObject({ verdict: 'kept', found: 'no recursive high-pass' })
    expect(built('S2-low', sinc)).toMatchObject({
      verdict: 'cannot be told',
      found: 'no recursive high-pass; a finite impulse response has no order in this sense',
    })
    expect(built('S2-high', sinc).verdict).toBe('kept')
  })

  test('refuse a notch and a band-stop by S1, and do not judge a moving average', () => {
    expect(built('S1-notch')).toMatchObject({ verdict: 'kept', found: 'no notch and no band-stop among the stages' })
    expect(built('S1-notch', notch)).toMatchObject({
      verdict: 'not kept',
      found: '1 notch or band-stop stage',
      byHowMuch: { words: '1 stage too many', value: 1, unit: 'stages' },
    })
    expect(built('S1-notch', notch, butterworth('stop', 2, [98, 102])).byHowMuch?.words).toBe('2 stages too many')
    expect(built('S1-notch', { ...sinc, pass: 'stop', cutoffsHz: [48, 52] }).verdict).toBe('not kept')
    expect(built('S1-notch', { design: 'moving-average', durationMs: 20, delay: 'causal' }).verdict).toBe(
      'cannot be told',
    )
    expect(built('S1-notch', { ...notch, inData: true }).verdict).toBe('not kept')
    // a notch does not end the band
    expect(built('S1-high', notch).verdict).toBe('kept')
  })

  test('hold S13 against both readings of a cutoff, since its source gives none', () => {
    expect(built('S13', butterworth('high', 2, [0.1]))).toMatchObject({ verdict: 'kept' })
    expect(built('S13', butterworth('high', 2, [0.1], 'both', 'half-amplitude'))).toMatchObject({
      verdict: 'cannot be told',
      found:
        'half-power point at 0.12465 Hz, half-amplitude point at 0.1 Hz; the source does not say which of them it limits',
      byHowMuch: null,
    })
    expect(built('S13', butterworth('high', 2, [0.3]))).toMatchObject({
      verdict: 'not kept',
      byHowMuch: { words: '0.2 Hz above 0.1 Hz' },
    })
  })

  test('say of recorded data what cannot be told while the amplifier is no stage', () => {
    expect(recorded('S1-low')).toMatchObject({
      verdict: 'cannot be told',
      found: 'no high-pass; the amplifier’s own high-pass is not among the stages',
    })
    expect(recorded('S1-low-slope').verdict).toBe('cannot be told')
    expect(recorded('S1-notch').verdict).toBe('cannot be told')
    expect(recorded('S2-low', butterworth('high', 2, [1])).verdict).toBe('cannot be told')
    // another filter can only narrow the band, so that what is too narrow already stays so
    expect(recorded('S1-low', butterworth('high', 2, [2])).verdict).toBe('not kept')
    expect(recorded('S1-high', butterworth('low', 2, [30])).verdict).toBe('not kept')
    expect(recorded('S2-low', butterworth('high', 2, [1], 'both')).verdict).toBe('not kept')
    // words state it for the paper, and cannot be computed with
    expect(settingOf({ ...RECORDED, statements: { amplifier: '0.1 to 100 Hz' } }, 'S1-low').verdict).toBe(
      'cannot be told',
    )
    const stated = [amplifier('high', 1, 0.1), amplifier('low', 4, 250)].map((spec) => ({ ...spec, inData: true }))
    for (const id of ['S1-low', 'S1-high', 'S1-low-slope', 'S1-high-slope', 'S1-notch', 'S2-low', 'S2-high', 'S13'])
      expect(recorded(id, ...stated).verdict, id).toBe('kept')
  })

  test('do not see a stage that is switched off, and see one in the data as one applied here', () => {
    const steep = butterworth('high', 4, [2], 'both')
    expect(publishedSettings({ ...BUILT, chain: [{ ...steep, enabled: false }] }).settings).toEqual(settings)
    expect(publishedSettings({ ...BUILT, chain: [{ ...steep, inData: true }] }).settings).toEqual(
      publishedSettings({ ...BUILT, chain: [steep] }).settings,
    )
  })

  test('of filters that leave nothing keep no band', () => {
    const nothing = [butterworth('high', 4, [100]), butterworth('low', 4, [10])]
    for (const id of [...Object.keys(LOW), ...Object.keys(HIGH), 'S13'])
      expect(built(id, ...nothing), id).toMatchObject({
        verdict: 'not kept',
        found: 'the gain of all filters together never reaches half power',
        byHowMuch: null,
      })
  })

  test('say of any chain what was found, and by how much only where a setting is not kept', () => {
    fc.assert(
      fc.property(writeUps, (facts) => {
        for (const { id, verdict, found, byHowMuch } of publishedSettings(facts).settings) {
          expect(found, id).toMatch(/^\S(.*\S)?$/)
          expect(`${found} ${byHowMuch?.words ?? ''}`, id).not.toMatch(/\b(undefined|NaN|null|Infinity)\b|–| {2}\S|-\d/)
          if (verdict !== 'not kept') expect(byHowMuch, id).toBeNull()
          if (byHowMuch) expect(byHowMuch.value, id).toBeGreaterThan(0)
          if (verdict === 'cannot be told' && facts.source === 'built') expect(found, id).toMatch(/;|itself|comb/)
        }
      }),
      { numRuns: 150 },
    )
  })

  test('name the stage of a chain that cannot be designed', () => {
    expect(() => publishedSettings({ ...BUILT, chain: [butterworth('high', 2, [1500])] })).toThrow(
      /^stage 1: cutoffsHz/,
    )
  })
})
