/**
 * `npm test` sets SIDELOBE_SEED, so that a run can be repeated and one change at a time is judged; run by itself, vitest draws anew
 * each time, which is how new cases are found.
 */
import fc from 'fast-check'

const seed = process.env.SIDELOBE_SEED
if (seed !== undefined) fc.configureGlobal({ ...fc.readConfigureGlobal(), seed: Number(seed) })
