import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import type { StageSpec } from '../../src/filter/stage.ts'
import { pinName, pinNames, sameChain, shortened } from '../../src/words/pin-name.ts'

type Butterworth = Extract<StageSpec, { design: 'butterworth' }>

const highPass = (hz: number, more: Partial<Butterworth> = {}): StageSpec => ({
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [hz],
  meaning: 'half-amplitude',
  direction: 'both',
  ...more,
})
const lowPass: StageSpec = {
  design: 'windowed-sinc',
  pass: 'low',
  cutoffsHz: [30],
  meaning: 'half-amplitude',
  transitionHz: 7.5,
  window: { name: 'hamming' },
  delay: 'compensated',
}
const amplifier = (cutoffHz: number): StageSpec => ({ design: 'amplifier', pass: 'high', order: 1, cutoffHz })
const notch: StageSpec = { design: 'notch', frequencyHz: 50, bandwidthHz: 2, harmonics: 0, direction: 'both' }

const run = (...chain: StageSpec[]) => ({ chain, extent: 'continuous' as const })
const usual = run(amplifier(0.0159), highPass(0.1), lowPass)

describe('pinName', () => {
  test.each<[string, StageSpec[]]>([
    ['high-pass 1 Hz', [amplifier(0.0159), highPass(1), lowPass]],
    ['high-pass order 4', [amplifier(0.0159), highPass(0.1, { order: 4 }), lowPass]],
    ['high-pass 1 Hz, order 4', [amplifier(0.0159), highPass(1, { order: 4 }), lowPass]],
    ['high-pass run forward', [amplifier(0.0159), highPass(0.1, { direction: 'forward' }), lowPass]],
    ['high-pass half-power 0.1 Hz', [amplifier(0.0159), highPass(0.1, { meaning: 'half-power' }), lowPass]],
    ['amplifier 1 s', [amplifier(1 / (2 * Math.PI)), highPass(0.1), lowPass]],
    ['low-pass causal', [amplifier(0.0159), highPass(0.1), { ...lowPass, delay: 'causal' } as StageSpec]],
    [
      'low-pass transition 10 Hz, Hann window',
      [amplifier(0.0159), highPass(0.1), { ...lowPass, transitionHz: 10, window: { name: 'hann' } } as StageSpec],
    ],
    ['Butterworth low-pass', [amplifier(0.0159), highPass(0.1), highPass(30, { pass: 'low' })]],
    ['with notch 50 Hz', [amplifier(0.0159), highPass(0.1), notch, lowPass]],
    ['without high-pass', [amplifier(0.0159), lowPass]],
    ['without high-pass', [amplifier(0.0159), { ...highPass(0.1), enabled: false }, lowPass]],
    ['high-pass in the data', [amplifier(0.0159), { ...highPass(0.1), inData: true }, lowPass]],
    ['notch 50 Hz', [amplifier(0.0159), notch, lowPass]],
    ['stages in another order', [amplifier(0.0159), lowPass, highPass(0.1)]],
    ['no filter', []],
    ['chain as pinned', [amplifier(0.0159), highPass(0.1), lowPass]],
  ])('says “%s”', (name, chain) => {
    expect(pinName(run(...chain), usual)).toBe(name)
  })

  test('names what the chain ran on where nothing else differs', () => {
    expect(pinName({ ...usual, extent: 'epochs' }, usual)).toBe('on the cut-out epochs')
    expect(pinName(usual, { ...usual, extent: 'epochs' })).toBe('on the continuous recording')
  })

  test('is “chain as pinned” exactly for the same chain, whatever is switched off', () => {
    const stage = fc.constantFrom(
      highPass(0.1),
      highPass(1),
      highPass(1, { order: 4 }),
      lowPass,
      notch,
      amplifier(0.016),
      { ...highPass(0.1), inData: true },
      { ...notch, enabled: false },
    )
    const chain = fc.record({
      chain: fc.array(stage, { maxLength: 5 }),
      extent: fc.constantFrom('continuous' as const, 'epochs' as const),
    })
    fc.assert(
      fc.property(chain, chain, (a, b) => {
        const name = pinName(a, b)
        expect(name === 'chain as pinned').toBe(sameChain(a, b))
        expect(name.trim()).not.toBe('')
        expect(pinName(a, a)).toBe('chain as pinned')
        expect(sameChain(a, b)).toBe(sameChain(b, a))
      }),
    )
  })
})

describe('pinNames', () => {
  const named = (name: string, ...chain: StageSpec[]) => ({ name, ...run(...chain) })

  test('keep the user’s own names', () => {
    expect(pinNames([named(' of the lab ', highPass(1)), named('', highPass(1))], usual)[0]).toBe('of the lab')
  })

  test('tell two pins apart that differ from the present chain in the same way', () => {
    const first = named('', amplifier(0.0159), highPass(1), lowPass)
    const second = named('', amplifier(0.0159), highPass(1), { ...lowPass, cutoffsHz: [20] } as StageSpec)
    expect(pinNames([first, second], usual)).toEqual([
      'high-pass 1 Hz, low-pass 30 Hz',
      'high-pass 1 Hz, low-pass 20 Hz',
    ])
  })
})

describe('shortened', () => {
  test('is never longer than it may be, and whole where it fits', () => {
    fc.assert(
      fc.property(fc.string(), fc.integer({ min: 2, max: 40 }), (name, most) => {
        expect(shortened(name, most).length).toBeLessThanOrEqual(most)
        if (name.length <= most) expect(shortened(name, most)).toBe(name)
      }),
    )
  })
})
