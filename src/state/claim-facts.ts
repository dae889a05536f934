/** What the claims desk and its dossier say: contexts for the words, and all claims with their answers as one document. */
import type { ClaimAnswerContext, Dossier, DossierClaim, DossierSetting, LateOnlyFacts } from '../words/index.ts'
import { noiseWords } from '../words/noise-words.ts'
import type { ClaimForm } from '../evidence/claims/claim.ts'
import { defaultNoise } from './chosen-noise.ts'
import { claimStore } from './claim-run.ts'
import type { ClaimResult } from './claim-worker.ts'
import { chainOfClaim, claimKey, claimScoreUnit, claimSetting, takenOf } from './claims.ts'
import type { Evaluation } from './evaluation.ts'
import type { LateOnlyResult } from './late-only-steps.ts'
import type { RecordedData } from './recorded-data.ts'
import { SOFTWARE_VERSION } from './software-version.ts'
import type { Claim, Workspace } from './workspace.ts'
import { writeUpFacts } from './write-up.ts'

type LateOnlyForm = Extract<ClaimForm, { form: 'late-only' }>

/** What the reason of a claim names beside its answer. */
export function claimContext(claim: Claim, workspace: Workspace): ClaimAnswerContext {
  return {
    filter: claim.on ? `the chain “${claim.on.name}”` : 'the filter',
    trials: workspace.trials,
    taken: takenOf(claim, workspace),
  }
}

export function lateOnlyFacts(form: LateOnlyForm, result: LateOnlyResult): LateOnlyFacts {
  const { robust, sigmaUv, lengthMs, scan, bumps, noiseless } = result
  const { t0Ms, slackMs, early } = form
  return { robust, t0Ms, slackMs, early, sigmaUv, lengthMs, scan, bumps, noiseless }
}

/** The answer that stands for a claim as it is said now; null where it is not there yet. */
export function answerOf(claim: Claim, workspace: Workspace): ClaimResult | null {
  return claimStore.getState().answers[claimKey(claim, workspace)]?.result ?? null
}

/** How many claims have no complete answer: a dossier is written once there are none. */
export function unanswered(workspace: Workspace): number {
  const { answers } = claimStore.getState()
  return workspace.claims.list.filter((claim) => answers[claimKey(claim, workspace)]?.status !== 'complete').length
}

/** The noise that the page begins with was stated by nobody. */
const statedBy = ({ noise }: Workspace) =>
  noiseWords(noise) === noiseWords(defaultNoise())
    ? 'as Sidelobe assumes where nothing else is stated'
    : 'as stated by the user'

/** Places, from 1, of the claims that cannot be answered as they stand: waiting brings no dossier of them. */
export function unanswerable(workspace: Workspace, data: RecordedData | null): number[] {
  const { answers } = claimStore.getState()
  return workspace.claims.list.flatMap((claim, i) => {
    if (answers[claimKey(claim, workspace)]?.status === 'failed') return [i + 1]
    try {
      claimSetting(claim, workspace, data)
      return []
    } catch (error) {
      if (error instanceof RangeError) return [i + 1]
      throw error
    }
  })
}

/**
 * All claims with their answers. Claims about one chain, taken in one way, share their assumptions.
 *
 * @param figureOf the figure of a claim as the text of an svg file, or null.
 * @param moreOf   figures beside it: of a late-only fit its account and its scan.
 * @throws RangeError where a claim has no answer, or its setting cannot be.
 */
export function dossierOf(
  workspace: Workspace,
  evaluation: Pick<Evaluation, 'samplingRateHz' | 'timesMs'>,
  data: RecordedData | null,
  figureOf: (claim: Claim) => string | null,
  moreOf: (claim: Claim) => readonly { title: string; svg: string }[] = () => [],
): Dossier {
  const settings: DossierSetting[] = []
  const places = new Map<string, number>()
  const claims = workspace.claims.list.map((claim, i): DossierClaim => {
    const result = answerOf(claim, workspace)
    if (!result) throw new RangeError(`claim ${i + 1} has no answer yet`)
    const chain = chainOfClaim(claim, workspace)
    const setting = claimSetting(claim, workspace, data)
    const names = setting.conditions.map(({ name }) => name)
    const key = JSON.stringify([claim.on?.name ?? null, chain, setting.taken, names])
    let place = places.get(key)
    if (place === undefined) {
      place = settings.length
      places.set(key, place)
      settings.push({
        chainName: claim.on?.name ?? null,
        facts: { ...writeUpFacts({ ...workspace, ...chain }, evaluation), extent: chain.extent },
        setting,
        file: workspace.source.kind === 'recorded' ? workspace.source.fileName : null,
        noiseFrom: setting.noisePassed !== 'nothing' ? 'estimated from the plus–minus average' : statedBy(workspace),
        scoreUnit: claimScoreUnit(workspace),
      })
    }
    const { says } = claim
    return {
      form: says,
      madeIn: claim.madeIn,
      answer: result.answer,
      context: claimContext(claim, workspace),
      curve: result.curve ?? null,
      figureSvg: figureOf(claim),
      moreFigures: moreOf(claim),
      ...(says.form === 'late-only' && result.lateOnly ? { lateOnly: lateOnlyFacts(says, result.lateOnly) } : {}),
      setting: place,
    }
  })
  return { title: workspace.claims.title, claims, settings, softwareVersion: SOFTWARE_VERSION }
}
