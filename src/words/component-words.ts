import type { Component } from '../erp/component.ts'
import { exact } from './number.ts'

const SHAPE_WORDS: Readonly<Record<Component['shape'], string>> = {
  gaussian: 'Gaussian',
  asymmetric: 'asymmetric',
  'slow-wave': 'slow wave',
  ramp: 'ramp',
  'damped-oscillation': 'damped oscillation',
  tone: 'steady tone',
}

/**
 * A component of a built waveform with every number that it has, so that it can be built again: "late positivity (Gaussian, 7.9 µV at
 * 400 ms, 213 ms wide at half maximum)".
 */
export function componentWords(component: Component): string {
  return `${component.name} (${[SHAPE_WORDS[component.shape], ...numbersOf(component)].join(', ')})`
}

function numbersOf(component: Component): string[] {
  const size = `${exact(component.amplitudeUv)} µV`
  if (component.shape === 'tone')
    return [`${size} at ${exact(component.frequencyHz)} Hz`, `phase ${exact(component.phaseRad)} rad at 0 ms`]
  const place = [`${size} at ${exact(component.latencyMs)} ms`, `${exact(component.widthMs)} ms wide at half maximum`]
  switch (component.shape) {
    case 'gaussian':
      return place
    case 'slow-wave':
      return [...place, `on- and offset of ${exact(component.edgeMs)} ms`]
    case 'damped-oscillation':
      return [...place, rise(component.riseShare), `${exact(component.frequencyHz)} Hz`]
    default:
      return [...place, rise(component.riseShare)]
  }
}

const rise = (share: number) => `${exact(Number((100 * share).toPrecision(12)))} % of the width before the peak`
