/** What the core says, in the digits in which the page prints it: the journeys hold the page's text against this. */
import { answerClaim } from '../src/evidence/claims/answer-claim.ts'
import type { ClaimAnswer, ClaimCurve } from '../src/evidence/claims/claim.ts'
import { claimCurve } from '../src/evidence/claims/claim-curve.ts'
import { lateOnlyClaim } from '../src/evidence/claims/late-only-claim.ts'
import { claimContext } from '../src/state/claim-facts.ts'
import { claimSetting, variedOf } from '../src/state/claims.ts'
import { evaluate } from '../src/state/evaluate.ts'
import type { Evaluation } from '../src/state/evaluation.ts'
import { SCENARIOS, type Workspace, workspaceOf } from '../src/state/workspace.ts'
import { noiseQuestion, noiseSlice } from '../src/state/simulated-noise.ts'
import type { RecordedData } from '../src/state/recorded-data.ts'
import { claimReason, claimVerdictWords, curveSentence, rowWords } from '../src/words/index.ts'

export { SCENARIOS, type Workspace, workspaceOf }

export interface ReadoutLine {
  name: string
  before: string
  after: string
  change: string
}

/** A number as it is printed: so many decimals, a true minus sign, no sign on a rounded zero. */
export function printed(value: number, decimals: number): string {
  const text = value.toFixed(decimals)
  return Number(text) === 0 ? text.replace('-', '') : text.replace('-', '\u2212')
}

const DECIMALS = { µV: 2, ms: 1, µV·s: 3 } as const

/** A change carries its sign. */
export function printedChange(value: number, decimals: number): string {
  const text = printed(value, decimals)
  return value > 0 && Number(text) !== 0 ? `+${text}` : text
}

/** The evaluation of a built waveform. */
export function evaluated(workspace: Workspace): Evaluation {
  const outcome = evaluate(workspace, null)
  if (!outcome.ok) throw new Error(`this workspace has problems: ${outcome.problems.map((p) => p.message).join(' ')}`)
  return outcome.evaluation
}

/** The first sight: the scenario that opens on a first visit. */
export const firstSight = (): Workspace => workspaceOf(SCENARIOS[0])

/** Every line of the readout as the page must print it, the noise of the score last. */
export function readoutOf(workspace: Workspace): ReadoutLine[] {
  const evaluation = evaluated(workspace)
  const { rows, precision } = evaluation
  const lines = rows.map((row): ReadoutLine => {
    const { name, where } = rowWords(row)
    const cell = (value: number | string) =>
      typeof value === 'string' ? value : printed(value, DECIMALS[row.unit]) + row.unit
    return {
      name: `${name} ${where}`.trim(),
      before: cell(row.before),
      after: cell(row.after),
      change: row.change === null ? '–' : printedChange(row.change, DECIMALS[row.unit]) + row.unit,
    }
  })
  // a peak or an area is marked: its formula holds its place fixed
  const mark = precision && !['mean', 'moment'].includes(workspace.score.kind) ? ' †' : ''
  const noise = `noise of the score, ${workspace.trials} trials, noise model${mark}`
  const simulated = precision ? null : simulatedNoise(workspace, evaluation)
  if (simulated) {
    const { before, after, unit } = simulated
    const decimals = DECIMALS[unit]
    const said = ({ value, standardError }: typeof before) =>
      `${printed(value, decimals)} ± ${Number(standardError.toPrecision(1))}${unit}`
    const change = printedChange(after.value - before.value, decimals) + unit
    lines.push({ name: noise, before: said(before), after: said(after), change })
  } else if (!precision)
    lines.push({ name: noise, before: 'no score of both waveforms, so that it has no noise', after: '', change: '' })
  else {
    const decimals = DECIMALS[precision.unit]
    lines.push({
      name: noise,
      before: printed(precision.before, decimals) + precision.unit,
      after: printed(precision.after, decimals) + precision.unit,
      change: printedChange(precision.change, decimals) + precision.unit,
    })
  }
  return lines
}

/** All draws of the simulation that the readout refines; null where there is no such score. */
function simulatedNoise(workspace: Workspace, evaluation: Evaluation) {
  const question = noiseQuestion(workspace, evaluation, null)
  return question && noiseSlice(JSON.stringify(workspace), question, Number.POSITIVE_INFINITY)
}

/** The answer to the claim at a place of the list, from 1. */
export function answerTo(workspace: Workspace, place: number, data: RecordedData | null = null): ClaimAnswer {
  const claim = workspace.claims.list[place - 1]
  const setting = claimSetting(claim, workspace, data)
  if (claim.says.form === 'late-only') return lateOnlyClaim(claim.says, setting)
  return answerClaim(claim.says, setting)
}

/** Verdict and reason as the page must print them. */
export function saidOf(workspace: Workspace, place: number, data: RecordedData | null = null) {
  const claim = workspace.claims.list[place - 1]
  const answer = answerTo(workspace, place, data)
  return {
    verdict: claimVerdictWords(answer.verdict),
    reason: claimReason(claim.says, answer, claimContext(claim, workspace)),
  }
}

/** What would change the answer, and the sentence about it. */
export function changeOf(workspace: Workspace, place: number): { curve: ClaimCurve; sentence: string } {
  const claim = workspace.claims.list[place - 1]
  if (claim.says.form === 'late-only') throw new Error('the curve of a fit takes too long to be computed twice')
  const setting = claimSetting(claim, workspace, null)
  const search = claimCurve(claim.says, setting, variedOf(claim, setting.chain))
  let step = search.next()
  while (!step.done) step = search.next()
  if (!step.value) throw new Error('there is nothing to vary')
  return { curve: step.value, sentence: curveSentence(claim.says, step.value, setting.chain) }
}
