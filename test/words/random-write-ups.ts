import fc from 'fast-check'
import { designChain } from '../../src/filter/index.ts'
import { STATEMENT_FIELDS, type WriteUpFacts } from '../../src/words/index.ts'
import { stages } from '../filter/random-specs.ts'
import { protocols } from './random-protocols.ts'

/** Things that a user might type; none of them ends a sentence by itself. */
const SAID = ['linked mastoids', '0.1 to 100 Hz, 12 dB/octave', 'none', 'from 1000 Hz by a factor of 4']

const statements = fc.dictionary(
  fc.constantFrom(...STATEMENT_FIELDS.map(({ field }) => field)),
  fc.constantFrom(...SAID),
  { maxKeys: 3 },
)

const besides = fc.record(
  {
    epoch: fc
      .tuple(fc.integer({ min: -500, max: 0 }), fc.integer({ min: 1, max: 3000 }), fc.integer({ min: 2, max: 3000 }))
      .map(([fromMs, span, samples]) => ({ fromMs, toMs: fromMs + span, samples })),
    statements,
    noOtherFilters: fc.boolean(),
    softwareVersion: fc.constantFrom('0.3.0', '1.12.4'),
  },
  { requiredKeys: [] },
)

const trains = fc.constantFrom(
  undefined,
  'alone' as const,
  { fromMs: 1000, toMs: 1400 },
  { fromMs: 800.5, toMs: 800.5 },
)

/** Facts whose chain can be designed: amplifier stages first, what the sampling rate cannot carry left out. */
export const writeUps: fc.Arbitrary<WriteUpFacts> = fc
  .tuple(protocols, fc.array(fc.tuple(stages, fc.boolean(), fc.boolean()), { maxLength: 4 }), besides, trains)
  .map(([protocol, chosen, more, events]) => {
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
    return { ...protocol, chain, ...more, ...(protocol.source === 'built' ? { events } : {}) }
  })
