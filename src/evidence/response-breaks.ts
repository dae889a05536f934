import type { Chain } from '../filter/chain.ts'

/** Multiples of a narrow feature's width at which its response is divided: fine at the feature, coarser away from it. */
const AROUND = [0, 0.125, 0.25, 0.375, 0.5, 0.75, 1, 1.5, 2, 3, 4, 6, 8, 12, 16]
/** The same for the edge of a windowed sinc, which changes within its transition width … */
const EDGE = Array.from({ length: 17 }, (_, k) => k / 2)
/** … and for its ripples, which go on far from the edge, one every fs/taps. */
const RIPPLES = [...Array.from({ length: 8 }, (_, k) => 9 + k), ...Array.from({ length: 24 }, (_, k) => 18 + 2 * k)]
/** Lobes of a moving average that are followed; beyond them its power is below 1e-4. */
const LOBES = 64

/**
 * The frequencies around which a chain's response changes within less than a quarter octave: where an integral over |H|² needs a finer
 * grid (`breaksHz` of `scoreVarianceOfResponse`). Butterworth low- and high-passes and amplifiers need none.
 *
 * @returns ascending, in Hz; stages that are in the data are left out, as they are not part of the response.
 */
export function responseBreaksHz(chain: Chain): number[] {
  const breaks: number[] = []
  const around = (hz: number, widthHz: number, multiples: readonly number[]) => {
    for (const k of multiples) breaks.push(hz - k * widthHz, hz + k * widthHz)
  }
  const nyquist = chain.samplingRateHz / 2
  for (const { spec } of chain.stages) {
    if (spec.inData || spec.enabled === false) continue
    switch (spec.design) {
      case 'butterworth':
        if (spec.pass === 'band' || spec.pass === 'stop') {
          const [low, high] = spec.cutoffsHz
          around((low + high) / 2, high - low, AROUND)
        }
        break
      case 'notch':
        for (let k = 1; k <= spec.harmonics + 1; k++) around(k * spec.frequencyHz, spec.bandwidthHz, AROUND)
        break
      case 'windowed-sinc': {
        // in units of some three ripples: the transition width, of which a rectangular window needs less
        const ripplesHz = spec.window.name === 'rectangular' ? 3.7 * spec.transitionHz : spec.transitionHz
        for (const hz of spec.cutoffsHz) {
          around(hz, spec.transitionHz, EDGE)
          around(hz, ripplesHz, RIPPLES)
        }
        break
      }
      case 'moving-average': {
        const halfLobeHz = 500 / spec.durationMs
        for (let k = 1; k <= 2 * LOBES; k++) breaks.push(k * halfLobeHz)
        break
      }
    }
  }
  return breaks.filter((hz) => hz > 0 && hz < nyquist).sort((a, b) => a - b)
}
