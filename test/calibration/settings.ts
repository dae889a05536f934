import type { CalibrationRow } from '../../src/evidence/index.ts'
import type { NoiseModel } from '../../src/erp/index.ts'
import type { StageSpec } from '../../src/filter/index.ts'

/**
 * What the late-only fit is calibrated on: 250 Hz, 500 samples, 40 trials, a late positivity, 1/f noise, and a 1 Hz high-pass of order 2 per
 * pass run both ways where nothing else is said. All waveforms and noises are invented.
 */
export interface CalibrationSetting {
  readonly id: string
  readonly title: string
  readonly kind: CalibrationRow['kind']
  readonly chain: readonly StageSpec[]
  readonly extent: 'continuous' | 'epochs'
  /** What the fit is told. */
  readonly assumed: NoiseModel
  /** What the data have. */
  readonly noise: NoiseModel
  /** Added to every latency of the late positivity. */
  readonly shiftMs: number
  /** White noise of the table itself, which the model takes to be 0.01 µV; 0 where absent: values that were never rounded. */
  readonly residualUv?: number
}

export const SAMPLING_RATE_HZ = 250
export const SAMPLES = 500
export const START_MS = -500
export const TRIALS = 40
export const T0_MS = 150
export const EARLY = { fromMs: 40, toMs: 120 }
export const BASELINE = { fromMs: -200, toMs: 0 }
/** The early component that should be found, in standard errors of a fit under the assumed noise. */
export const EFFECT = 4

/** Late positivity: 10 µV at 350 ms, exactly 0 before 150 ms and after 750 ms. */
export function latePositivity(tMs: number): number {
  if (tMs <= T0_MS || tMs >= 750) return 0
  const place = tMs < 350 ? (tMs - T0_MS) / 200 : (750 - tMs) / 400
  return 5 * (1 - Math.cos(Math.PI * place))
}

function highPass(cutoffHz: number, direction: 'both' | 'forward'): StageSpec {
  return { design: 'butterworth', pass: 'high', order: 2, cutoffsHz: [cutoffHz], meaning: 'half-amplitude', direction }
}
const LOW_PASS: StageSpec = {
  design: 'butterworth',
  pass: 'low',
  order: 4,
  cutoffsHz: [30],
  meaning: 'half-amplitude',
  direction: 'both',
}
function sinc(delay: 'compensated' | 'causal' | 'minimum-phase'): StageSpec {
  return {
    design: 'windowed-sinc',
    pass: 'high',
    cutoffsHz: [1.5],
    meaning: 'half-amplitude',
    transitionHz: 2,
    window: { name: 'hamming' },
    delay,
  }
}

/** Single-trial standard deviation about 14 µV. */
const PINK: NoiseModel = {
  kind: 'model',
  exponent: 1,
  levelAt1HzUv2PerHz: 20,
  flatBelowHz: 0.02,
  whiteUv2PerHz: 0.02,
  lines: [],
}
const WHITE: NoiseModel = { ...PINK, levelAt1HzUv2PerHz: 0, whiteUv2PerHz: 1 }

interface Wrong {
  readonly id: string
  readonly title: string
  readonly of: 'scale' | 'exponent' | 'alpha' | 'onset'
  readonly noise: (noise: NoiseModel) => NoiseModel
  readonly shiftMs: number
}

function scaled(factor: number): (noise: NoiseModel) => NoiseModel {
  return (noise) => ({
    ...noise,
    levelAt1HzUv2PerHz: factor * noise.levelAt1HzUv2PerHz,
    whiteUv2PerHz: factor * noise.whiteUv2PerHz,
  })
}
/** 10 µV standard deviation in single trials, narrower than the peak that is fitted; its phase is random. */
const ALPHA = { centreHz: 10, sdHz: 1.5, peakUv2PerHz: 100 / (1.5 * Math.sqrt(2 * Math.PI)) }

const WRONG: readonly Wrong[] = [
  { id: 'scale-2', title: 'noise variance twice as stated', of: 'scale', noise: scaled(2), shiftMs: 0 },
  { id: 'scale-half', title: 'noise variance half as stated', of: 'scale', noise: scaled(0.5), shiftMs: 0 },
  { id: 'exponent-0.7', title: 'exponent 0.7', of: 'exponent', noise: (n) => ({ ...n, exponent: 0.7 }), shiftMs: 0 },
  { id: 'exponent-1.3', title: 'exponent 1.3', of: 'exponent', noise: (n) => ({ ...n, exponent: 1.3 }), shiftMs: 0 },
  { id: 'alpha', title: 'alpha of 10 µV', of: 'alpha', noise: (n) => ({ ...n, alpha: ALPHA }), shiftMs: 0 },
  { id: 'onset', title: 'onset 30 ms before t0', of: 'onset', noise: (n) => n, shiftMs: -30 },
]

const BASE = { chain: [highPass(1, 'both')], extent: 'continuous' as const, assumed: PINK, noise: PINK, shiftMs: 0 }

export const SETTINGS: readonly CalibrationSetting[] = [
  { ...BASE, id: 'as-assumed', title: 'as assumed', kind: 'as assumed' },
  ...WRONG.map(({ id, title, noise, shiftMs }): CalibrationSetting => {
    return { ...BASE, id, title, kind: 'misspecified', noise: noise(PINK), shiftMs }
  }),
  ...pairs(WRONG).map(([one, other]): CalibrationSetting => {
    return {
      ...BASE,
      id: `${one.id}+${other.id}`,
      title: `${one.title}, ${other.title}`,
      kind: 'misspecified',
      noise: other.noise(one.noise(PINK)),
      shiftMs: one.shiftMs + other.shiftMs,
    }
  }),
  ...[0.5, 1.5].map((exponent): CalibrationSetting => {
    const noise = { ...PINK, exponent }
    return { ...BASE, id: `exponent-${exponent}`, title: `exponent ${exponent}`, kind: 'far from assumed', noise }
  }),
  {
    ...BASE,
    id: 'as-assumed-low-pass',
    title: 'as assumed, 30 Hz low-pass of order 4 as well',
    kind: 'as assumed',
    chain: [highPass(1, 'both'), LOW_PASS],
    residualUv: 0.01,
  },
  {
    ...BASE,
    id: 'low-pass-exact',
    title: '30 Hz low-pass of order 4 as well, values never rounded',
    kind: 'misspecified',
    chain: [highPass(1, 'both'), LOW_PASS],
  },
  {
    ...BASE,
    id: 'as-assumed-sinc',
    title: 'as assumed, 1.5 Hz windowed sinc',
    kind: 'as assumed',
    chain: [sinc('compensated')],
  },
  { ...BASE, id: 'as-assumed-epochs', title: 'as assumed, filtered as epochs', kind: 'as assumed', extent: 'epochs' },
  {
    ...BASE,
    id: 'as-assumed-white',
    title: 'as assumed, white noise',
    kind: 'as assumed',
    assumed: WHITE,
    noise: WHITE,
  },
  { ...BASE, id: 'causal', title: 'causal high-pass', kind: 'causal', chain: [highPass(1, 'forward')] },
  { ...BASE, id: 'causal-sinc', title: 'causal 1.5 Hz windowed sinc', kind: 'causal', chain: [sinc('causal')] },
  {
    ...BASE,
    id: 'minimum-phase',
    title: 'minimum-phase 1.5 Hz windowed sinc',
    kind: 'causal',
    chain: [sinc('minimum-phase')],
  },
]

function pairs(wrong: readonly Wrong[]): [Wrong, Wrong][] {
  return wrong.flatMap((one, i) =>
    wrong.slice(i + 1).flatMap((other): [Wrong, Wrong][] => (one.of === other.of ? [] : [[one, other]])),
  )
}
