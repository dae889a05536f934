import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { parseNumber } from '../../src/words/number.ts'
import { isFalseDeflection, type RemarkFacts, remarkWords } from '../../src/words/remark.ts'

const facts: RemarkFacts = {
  score: { kind: 'mean', fromMs: 80, toMs: 140, polarity: 'negative' },
  unit: 'µV',
  before: 0.06,
  after: -1.18,
  largestUv: 7.9,
  unseenShare: 0,
  extent: 'continuous',
  noFilter: false,
}

describe('remarkWords', () => {
  test.each<[Partial<RemarkFacts>, string]>([
    [{ noFilter: true }, 'No filter is applied here: before and after are the same.'],
    [{}, 'The deflection of −1.18 µV at 80–140 ms was not in the input.'],
    [{ before: 6.5, after: 6.4 }, 'The chain leaves the score nearly as it was: 6.50 µV before, 6.40 µV after.'],
    [{ before: -4.5, after: -1.1 }, 'The chain takes 76 % of the score: −4.50 µV before, −1.10 µV after.'],
    [{ before: 4, after: -2 }, 'The chain turns the sign of the score: 4.00 µV before, −2.00 µV after.'],
    [{ before: 5, after: -0.001 }, 'The chain takes 100 % of the score: 5.00 µV before, 0.00 µV after.'],
    [{ before: 2, after: 3 }, 'The chain changes the score by +1.00 µV: 2.00 µV before, 3.00 µV after.'],
    // A third of it was in the input, on the same side: it must not be called new.
    [{ before: 0.3, after: 0.9 }, 'The chain changes the score by +0.60 µV: 0.30 µV before, 0.90 µV after.'],
    [{ unit: 'ms', before: 104.4, after: 134.4 }, 'The chain moves the latency from 104 ms to 134 ms: later by 30 ms.'],
    [
      { unit: 'ms', before: 99.6, after: 100.4 },
      'The chain moves the latency from 99.6 ms to 100.4 ms: later by 0.8 ms.',
    ],
    [
      { unit: 'ms', before: 104.4, after: 95.2 },
      'The chain moves the latency from 104.4 ms to 95.2 ms: earlier by 9.2 ms.',
    ],
    [{ unit: 'ms', before: 104.4, after: 104.5 }, 'The chain leaves the latency at 104.5 ms.'],
    [
      { unit: 'µV·s', before: 0.4, after: 0.2 },
      'The chain takes 50 % of the score: 0.400 µV·s before, 0.200 µV·s after.',
    ],
    [{ before: 'no peak', after: 'no peak' }, 'The waveform has no peak in 80–140 ms, with the chain or without.'],
    [
      { before: 'no peak', after: -1 },
      'Before the chain the waveform has no peak in 80–140 ms; after it there is one.',
    ],
    [
      { before: 2, after: 'no onset' },
      'After the chain the waveform has no onset in 80–140 ms; before it there was one.',
    ],
    [
      { before: 0, after: 0, largestUv: 0 },
      'The chain leaves the score nearly as it was: 0.00 µV before, 0.00 µV after.',
    ],
  ])('%j: %s', (change, sentence) => {
    expect(remarkWords({ ...facts, ...change })).toBe(sentence)
  })

  test('adds for epochs how much of the score leans on invented samples', () => {
    const share = (unseenShare: number | null) =>
      remarkWords({ ...facts, before: 6.5, after: 6.4, extent: 'epochs', unseenShare }).split('after. ')[1]
    expect(share(0.123)).toBe(
      'Filtered as epochs, 12 % of the score’s weight falls on samples outside the data, which had to be invented.',
    )
    expect(share(0.0123)).toBe(
      'Filtered as epochs, 1.2 % of the score’s weight falls on samples outside the data, which had to be invented.',
    )
    expect(share(0.0001)).toBe(
      'Filtered as epochs, less than 0.05 % of the score’s weight falls on samples outside the data.',
    )
    expect(share(null)).toBeUndefined()
  })

  const amplitudes = fc
    .record({
      largestUv: fc.double({ min: 0.01, max: 100, noNaN: true }),
      before: fc.double({ min: -1, max: 1, noNaN: true }),
      after: fc.double({ min: -3, max: 3, noNaN: true }),
      small: fc.constantFrom(1, 0.1, 0.01, 0),
    })
    .map(({ largestUv, before, after, small }) => ({
      largestUv,
      before: before * small * largestUv,
      after: after * largestUv,
    }))

  test('says no number of µV that is not before, after or their difference, rounded', () => {
    fc.assert(
      fc.property(amplitudes, (change) => {
        const sentence = remarkWords({ ...facts, ...change })
        const said = [...sentence.matchAll(/([−+]?[\d.]+) µV/g)].map((match) => parseNumber(match[1]))
        // what was as good as nothing before needs no number
        expect(said.length).toBeGreaterThanOrEqual(sentence.includes('was not in the input') ? 1 : 2)
        const allowed = [change.before, change.after, change.after - change.before]
        for (const number of said)
          expect(
            allowed.some((value) => Math.abs(value - number) <= 0.005 + 1e-9),
            sentence,
          ).toBe(true)
      }),
      { numRuns: 500 },
    )
  })

  test('says that a deflection was not in the input exactly where isFalseDeflection tells so', () => {
    fc.assert(
      fc.property(amplitudes, fc.boolean(), (change, noFilter) => {
        const given = { ...facts, ...change, noFilter }
        expect(remarkWords(given).includes('was not in the input')).toBe(isFalseDeflection(given))
      }),
      { numRuns: 500 },
    )
    expect(isFalseDeflection(facts)).toBe(true)
    expect(isFalseDeflection({ ...facts, unit: 'ms' })).toBe(false)
    expect(isFalseDeflection({ ...facts, before: 'no peak' })).toBe(false)
  })

  test('is true in every branch', () => {
    fc.assert(
      fc.property(amplitudes, (change) => {
        const { before, after, largestUv } = change
        const sentence = remarkWords({ ...facts, ...change })
        if (sentence.includes('was not in the input')) {
          expect(Math.abs(before)).toBeLessThan(0.1 * largestUv)
          expect(before * after <= 0 || Math.abs(before) < 0.1 * Math.abs(after)).toBe(true)
        } else if (sentence.includes('turns the sign')) {
          expect(before * after).toBeLessThan(0)
        } else if (sentence.includes('takes')) {
          const percent = Number(/takes (\d+) %/.exec(sentence)?.[1])
          expect(percent).toBeLessThanOrEqual(100)
          expect(Math.abs(percent - 100 * (1 - after / before))).toBeLessThanOrEqual(
            before * after < 0 ? 5.5 : 0.5 + 1e-9,
          )
        } else if (sentence.includes('nearly as it was')) {
          expect(Math.abs(after - before)).toBeLessThan(0.05 * Math.max(Math.abs(before), 0.1 * largestUv))
        } else {
          expect(sentence).toContain('changes the score by')
          expect(Math.abs(after)).toBeGreaterThanOrEqual(Math.abs(before))
        }
      }),
      { numRuns: 1000 },
    )
  })

  test('says of a latency the way and the distance that it went', () => {
    const ms = fc.double({ min: -500, max: 2000, noNaN: true })
    fc.assert(
      fc.property(ms, ms, (before, after) => {
        const sentence = remarkWords({ ...facts, unit: 'ms', before, after })
        const match = /from (−?[\d.]+) ms to (−?[\d.]+) ms: (earlier|later) by ([\d.]+) ms\.$/.exec(sentence)
        if (!match) {
          expect(sentence).toContain('leaves the latency at')
          expect(Math.abs(after - before)).toBeLessThan(0.5)
          return
        }
        expect(Math.abs(parseNumber(match[1]) - before)).toBeLessThanOrEqual(0.5)
        expect(Math.abs(parseNumber(match[2]) - after)).toBeLessThanOrEqual(0.5)
        expect(match[3]).toBe(after < before ? 'earlier' : 'later')
        expect(Math.abs(parseNumber(match[4]) - Math.abs(after - before))).toBeLessThanOrEqual(0.5)
      }),
    )
  })
})
