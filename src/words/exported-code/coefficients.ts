import { appliedStages, type Chain } from '../../filter/chain.ts'
import { epochPaddingSamples } from '../../filter/epoch-rules.ts'
import { stageName } from '../stage-words.ts'
import { literal, sectionRows } from './literal.ts'

/** Coefficients alone, for software that none of the exported files is written for. Every number is read back to the same double. */

/**
 * Applied stages as JSON: what was said, and the coefficients that follow. `inData` holds the stages that the data had passed already.
 *
 * `sections` are rows b0 b1 b2 a0 a1 a2 of one pass, `passes` how often they run (2: forward and backward); `taps` a kernel whose output
 * moves `leadSamples` earlier; `epochPaddingSamples` the odd reflection at an epoch's start.
 */
export function coefficientsJson(chain: Chain): string {
  const stages = appliedStages(chain).map((stage) => ({
    name: stageName(stage.spec),
    spec: stage.spec,
    ...(stage.sections ? { sections: sectionRows(stage.sections) } : { taps: Array.from(stage.taps as Float64Array) }),
    passes: stage.passes,
    leadSamples: stage.leadSamples,
    epochPaddingSamples: epochPaddingSamples(stage),
  }))
  const inData = chain.stages.filter(({ spec }) => spec.inData === true).map(({ spec }) => spec)
  return `${JSON.stringify({ samplingRateHz: chain.samplingRateHz, stages, inData }, null, 1)}\n`
}

/**
 * Applied stages as a comma-separated table, one row a section or a tap: columns stage (from 1), name, kind ('section' or 'tap'), index
 * (from 0), passes, lead_samples, b0, b1, b2, a0, a1, a2; a tap stands in b0.
 */
export function coefficientsCsv(chain: Chain): string {
  const lines = ['stage,name,kind,index,passes,lead_samples,b0,b1,b2,a0,a1,a2']
  appliedStages(chain).forEach(({ spec, sections, taps, passes, leadSamples }, stage) => {
    const head = (kind: string, index: number) =>
      [stage + 1, stageName(spec), kind, index, passes, leadSamples].join(',')
    if (taps) taps.forEach((tap, i) => lines.push(`${head('tap', i)},${literal(tap)},,,,,`))
    else
      sectionRows(sections as Float64Array).forEach((row, i) =>
        lines.push(`${head('section', i)},${row.map(literal).join(',')}`),
      )
  })
  return `${lines.join('\n')}\n`
}
