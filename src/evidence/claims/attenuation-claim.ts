import { appliedStages, type Chain } from '../../filter/chain.ts'
import { gainAt } from '../../filter/stage-response.ts'
import type { AttenuationClaim, ToneClaim } from './claim.ts'
import { isAtLeast, part, verdictOf, type Weighed } from './claim-parts.ts'
import type { PreparedClaim } from './claimed-waveform.ts'

/** A smaller gain is rounding: 300 dB stands for 300 and more. */
const LEAST_GAIN = 1e-15

/**
 * Form 6: the attenuation of the applied stages at a frequency, −20·log10|H|, dB; at most 300.
 *
 * @throws RangeError for a frequency outside 0 to half the sampling rate, or an amount that is not finite.
 */
export function attenuationClaim({ setting }: PreparedClaim, form: AttenuationClaim, chain: Chain): Weighed {
  checkHz(form.hz, setting.samplingRateHz)
  if (!Number.isFinite(form.db)) throw new RangeError(`db must be finite, was ${form.db}`)
  const gain = gainAt(appliedStages(chain), form.hz)
  const number = -20 * Math.log10(Math.max(gain, LEAST_GAIN)) + 0
  const enough = part(isAtLeast(number, form.db), number, [form.db], null)
  return {
    ...verdictOf([enough]),
    number,
    unit: 'dB',
    interval: null,
    values: [{ name: 'gain', value: 100 * gain, unit: '%' }],
    decisions: enough.decisions,
  }
}

/**
 * Form 6: what is left in the average of a tone in single trials. Locked to the event it keeps its amplitude times the gain of the applied stages; otherwise its
 * phase is random, and the average over N trials has the root mean square amplitude A·|H|/√N.
 *
 * @throws RangeError for a frequency outside 0 to half the sampling rate, amounts below 0, or trials below 1.
 */
export function toneClaim({ setting }: PreparedClaim, form: ToneClaim, chain: Chain): Weighed {
  const { hz, amplitudeUv, belowUv, locked } = form
  checkHz(hz, setting.samplingRateHz)
  for (const [name, value] of Object.entries({ amplitudeUv, belowUv })) {
    if (!(value >= 0) || !Number.isFinite(value)) throw new RangeError(`${name} must be at least 0, was ${value}`)
  }
  const { trials } = setting
  if (!(trials >= 1) || !Number.isFinite(trials)) throw new RangeError(`trials must be at least 1, was ${trials}`)
  const gain = gainAt(appliedStages(chain), hz)
  const averaged = locked ? 1 : 1 / Math.sqrt(trials)
  const number = amplitudeUv * averaged * gain
  const below = part(number < belowUv, number, [belowUv], null)
  return {
    ...verdictOf([below]),
    number,
    unit: 'µV',
    interval: null,
    values: [
      { name: 'unfiltered', value: amplitudeUv * averaged, unit: 'µV' },
      { name: 'gain', value: 100 * gain, unit: '%' },
    ],
    decisions: below.decisions,
  }
}

function checkHz(hz: number, samplingRateHz: number): void {
  if (!(hz >= 0 && hz <= samplingRateHz / 2))
    throw new RangeError(`hz must lie between 0 and ${samplingRateHz / 2} (half the sampling rate), was ${hz}`)
}
