import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { defaultNoise } from '../../src/erp/noise.ts'
import { epochTimesMs } from '../../src/erp/waveform.ts'
import { type TradeOffLimits, tradeOffAnswer } from '../../src/evidence/trade-off-answer.ts'
import type { Candidate } from '../../src/evidence/trade-off-candidate.ts'
import { logCutoffs } from '../../src/evidence/trade-off-candidate.ts'
import { type CellFigures, cellFigures } from '../../src/evidence/trade-off-figures.ts'
import { computeCell, prepareMap } from '../../src/evidence/trade-off-map.ts'
import { candidateWords, type MapLine, mapLineWords, tradeOffWords } from '../../src/words/trade-off-words.ts'

const candidate: Candidate = { design: 'butterworth', pass: 'high', meaning: 'half-amplitude', direction: 'both' }

/** A real map: mean amplitude of an early window under a late positivity, which a high-pass makes negative. */
const prepared = prepareMap({
  samplingRateHz: 250,
  timesMs: epochTimesMs(250, { fromMs: -400, toMs: 1000 }),
  chain: [],
  place: { at: 0, replaces: false },
  candidate,
  cutoffsHz: logCutoffs(0.02, 4, 30),
  rollOffs: [2],
  extent: 'continuous',
  baseline: { fromMs: -200, toMs: 0 },
  scores: [
    { score: { kind: 'mean', fromMs: 60, toMs: 130, polarity: 'positive' }, noise: 'with noise' },
    { score: { kind: 'peak-latency', fromMs: 250, toMs: 600, polarity: 'positive' }, noise: 'without noise' },
    { score: { kind: 'mean', fromMs: 300, toMs: 500, polarity: 'positive' }, noise: 'with noise' },
  ],
  waveforms: [
    {
      kind: 'built',
      components: [{ name: 'late', shape: 'gaussian', amplitudeUv: 10, latencyMs: 400, widthMs: 190 }],
    },
  ],
  noise: defaultNoise(),
  noisePassed: 'nothing',
  trials: 40,
  seed: 1,
})
const cells = prepared.question.cutoffsHz.map((_, i) => computeCell(prepared, i))
const rowOf = (score: number, trials: number) =>
  cells.map((cell) => cellFigures(prepared, cell, { score, latency: 1, trials, over: 0, largest: [10] }))

const say = (row: readonly CellFigures[], limits: TradeOffLimits, trials: number) =>
  tradeOffWords({
    answer: tradeOffAnswer(row, limits),
    candidate,
    rollOff: 2,
    limits,
    trials,
    unit: 'µV',
    waveforms: 1,
    over: 0,
  })

const number = '(\\d+(?:\\.\\d+)?)'
/** Whether a printed number is the value rounded to the digits that it shows. */
const prints = (text: string, value: number) => {
  const decimals = text.split('.')[1]?.length ?? 0
  return Math.abs(Number(text) - value) <= 0.5000001 * 10 ** -decimals || Number(text) === Number(value.toPrecision(3))
}

describe('tradeOffWords', () => {
  test('a bound from below, the best, what it is worth and what is nearly as good', () => {
    const words = say(rowOf(2, 40), { bias: 0.5 }, 40)
    expect(words).toMatch(
      /^With 40 trials, high-pass cutoffs \(order 2 per pass, both ways\) up to [\d.]+ Hz \(the grid begins at 0\.02 Hz\) keep the bias within 0\.5 µV; of these [\d.]+ Hz has the least total error, [\d.]+ µV, and is worth [\d.]+ times the trials \(equal-trials factor, so the effect’s own change counts\); .+ within 5 % of it\.$/,
    )
  })

  test('every number is in the map and every claim true, for any limits and trials', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(0, 2),
        fc.integer({ min: 2, max: 1000 }),
        fc.record(
          {
            bias: fc.integer({ min: 1, max: 60 }).map((v) => v / 20),
            noise: fc.integer({ min: 1, max: 60 }).map((v) => v / 20),
            totalError: fc.integer({ min: 1, max: 60 }).map((v) => v / 20),
            latencyShiftMs: fc.integer({ min: 1, max: 60 }).map((v) => v / 10),
          },
          { requiredKeys: [] },
        ),
        (score, trials, limits) => {
          const row = rowOf(score, trials)
          const words = say(row, limits, trials)
          expect(words).toContain(`With ${trials} trials, `)
          expect(words).not.toMatch(/NaN|undefined|null|Infinity|–/)
          const keeps = (cell: CellFigures) =>
            (Object.keys(limits) as (keyof TradeOffLimits)[]).every(
              (name) => cell[name] !== null && Math.abs(cell[name]) <= (limits[name] as number) * (1 + 1e-9),
            )
          const at = (hz: string | undefined) => {
            const found = row.find((cell) => String(cell.cutoffHz) === hz)
            if (!found) throw new Error(`${hz} Hz is no cutoff of the map: ${words}`)
            return found
          }
          const usable = row.filter((cell) =>
            (Object.keys(limits) as (keyof TradeOffLimits)[]).every((name) => cell[name] !== null),
          )
          if (usable.length === 0) {
            expect(words).toMatch(/^Nothing can be said/)
            return
          }
          const kept = row.filter(keeps)
          if (kept.length === 0) {
            const none = words.match(
              new RegExp(
                `no high-pass from ${number} to ${number} Hz .* keeps .*What limits it most is the (.+): the least violation is at ${number} Hz, ${number} (µV|ms)(?:, ${number} times the limit|, just over the limit)`,
              ),
            )
            if (!none) throw new Error(words)
            const name = {
              bias: 'bias',
              'noise of the score': 'noise',
              'total error': 'totalError',
              'latency shift': 'latencyShiftMs',
            }[none[3]] as keyof TradeOffLimits
            const least = at(none[4])
            expect(prints(none[5], Math.abs(least[name] as number))).toBe(true)
            const worst = (cell: CellFigures) =>
              Math.max(
                ...(Object.keys(limits) as (keyof TradeOffLimits)[]).map(
                  (of) => Math.abs(cell[of] as number) / (limits[of] as number),
                ),
              )
            expect(worst(least)).toBe(Math.min(...usable.map(worst)))
            expect(Math.abs(least[name] as number) / (limits[name] as number)).toBe(worst(least))
            if (none[7]) expect(prints(none[7], worst(least))).toBe(true)
            return
          }
          // the region: what the words' intervals hold is exactly what keeps the limits
          const region = words.slice(0, words.search(/ keep | are open/))
          const inside = new Set<CellFigures>()
          const add = (from: number, to: number) => {
            for (const cell of row) if (cell.cutoffHz >= from && cell.cutoffHz <= to) inside.add(cell)
          }
          for (const m of region.matchAll(new RegExp(`of ${number} Hz only`, 'g')))
            add(at(m[1]).cutoffHz, at(m[1]).cutoffHz)
          for (const m of region.matchAll(new RegExp(`up to ${number} Hz \\(the grid begins at ${number} Hz\\)`, 'g')))
            add(at(m[2]).cutoffHz, at(m[1]).cutoffHz)
          for (const m of region.matchAll(new RegExp(`from ${number} Hz up \\(the grid ends at ${number} Hz\\)`, 'g')))
            add(at(m[1]).cutoffHz, at(m[2]).cutoffHz)
          for (const m of region.matchAll(new RegExp(`from ${number} to ${number} Hz`, 'g')))
            add(at(m[1]).cutoffHz, at(m[2]).cutoffHz)
          expect(row.filter((cell) => inside.has(cell))).toEqual(kept)

          const best = words.match(
            new RegExp(
              `of these ${number} Hz has the least total error, ${number} µV(?: \\(where the grid (begins|ends): what lies beyond was not tried\\))?(?:, and is worth (only )?(?:less than 0.001|${number}) times the trials|, with a precision factor of ${number} and no effect in this window to weigh it against)`,
            ),
          )
          if (!best) throw new Error(words)
          const cell = at(best[1])
          const least = Math.min(...kept.map(({ totalError }) => totalError as number))
          expect(cell.totalError).toBe(least)
          expect(prints(best[2], least)).toBe(true)
          const [, , , edge, only, factor, precision] = best
          const hz = usable.map(({ cutoffHz }) => cutoffHz)
          expect(edge).toBe({ [Math.min(...hz)]: 'begins', [Math.max(...hz)]: 'ends' }[cell.cutoffHz])
          if (precision) {
            expect(cell.equalTrialsFactor).toBe(null)
            expect(prints(precision, cell.precisionFactor as number)).toBe(true)
          } else {
            if (factor) expect(prints(factor, cell.equalTrialsFactor as number)).toBe(true)
            else expect(cell.equalTrialsFactor).toBeLessThan(0.001)
            expect(only !== undefined).toBe(factor !== undefined && (cell.equalTrialsFactor as number) < 0.995)
          }
          // never one best without its neighbours
          const close = kept.filter(({ totalError }) => (totalError as number) <= 1.05 * least * (1 + 1e-12))
          const tail = words.slice(words.lastIndexOf(';') + 1)
          if (close.length === 1) {
            expect(tail).toBe(' no other cutoff of the grid that is allowed is within 5 % of it.')
            return
          }
          expect(tail).toMatch(/ (is|are) within 5 % of it\.$/)
          const near = new Set<CellFigures>()
          for (const m of tail.matchAll(new RegExp(`${number}(?: to ${number})? Hz`, 'g'))) {
            const [from, to] = [at(m[1]).cutoffHz, at(m[2] ?? m[1]).cutoffHz]
            for (const c of row) if (c.cutoffHz >= from && c.cutoffHz <= to) near.add(c)
          }
          expect(row.filter((c) => near.has(c))).toEqual(close)
        },
      ),
      { numRuns: 300 },
    )
  })

  const figures = (i: number, bias: number, noise: number): CellFigures => ({
    index: i,
    cutoffIndex: i,
    rollOffIndex: 0,
    cutoffHz: [0.1, 0.2, 0.5, 1, 2][i],
    rollOff: 2,
    error: null,
    bias,
    noise,
    totalError: Math.hypot(bias, noise),
    precisionFactor: 1.5,
    equalTrialsFactor: 1.2,
    latencyShiftMs: 0,
    missingShare: 0,
  })
  const row = [
    figures(0, 0.1, 1),
    figures(1, 0.3, 0.9),
    figures(2, 0.1, 0.8),
    figures(3, 0.4, 0.3),
    figures(4, 0.05, 0.5),
  ]

  test('several regions are all named', () => {
    expect(say(row, { bias: 0.2 }, 40)).toBe(
      'With 40 trials, high-pass cutoffs (order 2 per pass, both ways) of 0.1 Hz only, of 0.5 Hz only and of 2 Hz only keep the bias within 0.2 µV; ' +
        'of these 2 Hz has the least total error, 0.50 µV (where the grid ends: what lies beyond was not tried), and is worth 1.2 times the trials (equal-trials factor, so the effect’s own change counts); ' +
        'no other cutoff of the grid that is allowed is within 5 % of it.',
    )
  })

  test('a filter that costs trials is worth only so many of them, and one for no effect is not said to be worth any', () => {
    const factor = (equalTrialsFactor: number | null) =>
      say(
        row.map((cell) => ({ ...cell, equalTrialsFactor })),
        { bias: 0.35 },
        40,
      )
    expect(factor(0.19)).toContain('and is worth only 0.19 times the trials')
    expect(factor(1e-7)).toContain('and is worth less than 0.001 times the trials')
    expect(factor(null)).toContain('with a precision factor of 1.5 and no effect in this window to weigh it against;')
  })

  test('no region names the tightest limit and the least violation', () => {
    expect(say(row, { bias: 1, totalError: 0.1 }, 1)).toBe(
      'With 1 trial, no high-pass from 0.1 to 2 Hz (order 2 per pass, both ways) keeps the bias within 1 µV and the total error within 0.1 µV. ' +
        'What limits it most is the total error: the least violation is at 1 Hz, 0.500 µV, 5 times the limit.',
    )
  })

  test('all, no limits, a windowed sinc, the worst case of many waveforms, and nothing at all', () => {
    expect(say(row, { bias: 1 }, 40)).toContain(
      'all high-pass cutoffs (order 2 per pass, both ways) from 0.1 to 2 Hz keep the bias within 1 µV;',
    )
    expect(say(row, {}, 40)).toContain('are open, since no limit is set;')
    const sinc = tradeOffWords({
      answer: tradeOffAnswer(row, { noise: 0.6 }),
      candidate: { design: 'windowed-sinc', pass: 'low', meaning: 'design', window: { name: 'hann' }, delay: 'causal' },
      rollOff: 1.5,
      limits: { noise: 0.6 },
      trials: 12.5,
      unit: 'µV',
      waveforms: 65,
      over: 'worst',
    })
    expect(sinc).toContain(
      'With 12.5 trials and the worst of 65 waveforms, low-pass cutoffs (transition width 1.5 Hz, causal) from 1 Hz up (the grid ends at 2 Hz) keep the noise of the score within 0.6 µV',
    )
    const broken = row.map((cell) => ({ ...cell, error: 'cutoffsHz[0] must lie below 125, was 200', bias: null }))
    expect(say(broken, {}, 40)).toBe('Nothing can be said. The cutoff must lie below 125, was 200.')
  })

  test('one of several maps is a line: its row, what is allowed, the least total error there and anywhere', () => {
    const line = (limits: TradeOffLimits, ofAllRows: MapLine['ofAllRows']) =>
      mapLineWords({ answer: tradeOffAnswer(row, limits), candidate, rollOff: 2, limits, unit: 'µV', ofAllRows })
    const better = { ...row[4], rollOff: 4, rollOffIndex: 1, totalError: 0.4 }
    expect(line({ bias: 0.35 }, row[4])).toBe(
      'Order 2: 0.1 to 0.5 Hz and 2 Hz keep the limit, least total error 0.50 µV at 2 Hz.',
    )
    expect(line({ bias: 0.35, noise: 0.6 }, better)).toBe(
      'Order 2: 2 Hz keeps the limits, least total error 0.50 µV at 2 Hz; of all rows 0.40 µV at 2 Hz, order 4.',
    )
    expect(line({}, row[3])).toBe('Order 2: no limit is set, least total error 0.50 µV at 1 Hz.')
    const over = 'Order 2: no cutoff keeps the limit, 1 Hz comes nearest (5 times the limit)'
    expect(line({ totalError: 0.1 }, 'none')).toBe(`${over}; nor does any other row.`)
    expect(line({ totalError: 0.1 }, 'not known')).toBe(`${over}.`)
    expect(line({ totalError: 0.1 }, better)).toBe(
      `${over}; other rows do, with a least total error of 0.40 µV at 2 Hz, order 4.`,
    )
  })

  test('kinds of filter are named by design and direction', () => {
    expect(candidateWords(candidate)).toBe('Butterworth high-pass run both ways')
    expect(candidateWords({ ...candidate, direction: 'forward' })).toBe('Butterworth high-pass run forward')
    const sinc = { design: 'windowed-sinc', pass: 'low', meaning: 'design', window: { name: 'hann' } } as const
    expect(candidateWords({ ...sinc, delay: 'compensated' })).toBe('zero-phase windowed-sinc low-pass')
    expect(candidateWords({ ...sinc, delay: 'minimum-phase' })).toBe('minimum-phase windowed-sinc low-pass')
  })
})
