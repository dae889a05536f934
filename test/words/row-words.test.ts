import { describe, expect, test } from 'vitest'
import { type FidelityRow, fidelityRows } from '../../src/evidence/fidelity.ts'
import { changeWords, decimalsOf, rowWords, valueWords } from '../../src/words/row-words.ts'

const timesMs = Float64Array.from({ length: 351 }, (_, i) => -200 + 2 * i)
const bump = timesMs.map((ms) => 5 * Math.exp(-(((ms - 200) / 60) ** 2)))

function rows(onsetMs: number | null, fraction = 0.5): FidelityRow[] {
  return fidelityRows({
    timesMs,
    before: bump,
    after: bump.map((value, i) => 0.8 * value - (timesMs[i] === -40 ? 0.7 : 0)),
    score: { kind: 'onset-latency', fromMs: -10, toMs: 400, polarity: 'positive', fraction },
    measure: { mean: { fromMs: 150, toMs: 250 }, peak: { fromMs: 100, toMs: 300.5 }, polarity: 'positive' },
    onsetMs,
  })
}

const words = (row: FidelityRow) => {
  const { name, where } = rowWords(row)
  return `${name}|${where}`
}

describe('rowWords', () => {
  test('says of each row what is measured, and where', () => {
    expect(rows(60).map(words)).toEqual([
      'onset latency, 50 % of the peak|−10 to 400 ms',
      'mean amplitude|150 to 250 ms',
      'peak amplitude|100 to 300.5 ms',
      'signed area|100 to 300.5 ms',
      'peak latency|100 to 300.5 ms',
      'fractional-area latency, 50 % of the area|100 to 300.5 ms',
      'onset latency, 50 % of the peak|100 to 300.5 ms',
      'strongest false deflection before onset|at −40 ms',
    ])
  })

  test('says no moment where there is no false deflection to speak of', () => {
    expect(rowWords(rows(null)[7])).toEqual({ name: 'strongest false deflection before onset', where: '' })
  })

  test('says a fraction in per cent without the noise of binary numbers', () => {
    expect(rowWords(rows(60, 0.07)[0]).name).toBe('onset latency, 7 % of the peak')
    expect(rowWords(rows(60, 0.29)[0]).name).toBe('onset latency, 29 % of the peak')
  })

  test('puts a moment as one time', () => {
    const row: FidelityRow = { ...rows(60)[0], label: { figure: 'moment', window: { fromMs: 120, toMs: 120 } } }
    expect(words(row)).toBe('value|at 120 ms')
  })
})

describe('valueWords and changeWords', () => {
  test('have the digits that a unit is usually given in', () => {
    expect(['ms', 'µV', 'µV·s'].map((unit) => decimalsOf(unit as FidelityRow['unit']))).toEqual([1, 2, 3])
    expect(valueWords(151.0605, 'ms')).toBe('151.1')
    expect(valueWords(-1.1829, 'µV')).toBe('−1.18')
    expect(changeWords(0.02468, 'µV·s')).toBe('+0.025')
    expect(changeWords(-0.001, 'µV')).toBe('0.00')
  })

  test('say why there is no value', () => {
    expect(valueWords('no peak', 'µV')).toBe('no peak')
    expect(valueWords('onset not given', 'µV')).toBe('onset not given')
  })
})
