import fc from 'fast-check'
import { designChain } from '../../src/filter/index.ts'
import type { WriteUpFacts } from '../../src/words/index.ts'
import { stages } from '../filter/random-specs.ts'
import { protocols } from './random-protocols.ts'

/** Facts whose chain can be designed: amplifier stages first, what the sampling rate cannot carry left out. */
export const writeUps: fc.Arbitrary<WriteUpFacts> = fc
  .tuple(
    protocols,
    fc.array(fc.tuple(stages, fc.boolean(), fc.boolean()), { maxLength: 4 }),
    fc.option(fc.constantFrom('linked mastoids', '0.1 to 100 Hz, 12 dB/octave'), { nil: undefined }),
  )
  .map(([protocol, chosen, said]) => {
    const rate = protocol.samplingRateHz
    const specs = chosen
      .map(([{ spec }, enabled, inData]) => ({ ...spec, enabled, inData }))
      .filter((spec) => {
        try {
          designChain([{ ...spec, enabled: true }], rate)
          return true
        } catch {
          return false
        }
      })
    const chain = [
      ...specs.filter(({ design }) => design === 'amplifier'),
      ...specs.filter(({ design }) => design !== 'amplifier'),
    ]
    return { ...protocol, chain, ...(said === undefined ? {} : { statements: { reference: said } }) }
  })
