/** The claims desk: what a claim is answered from, as a function of the workspace, and what the user does with the list of claims. */
import { onsetOfBuilt } from '../evidence/onset-of-built.ts'
import { claimBounds } from '../evidence/claims/answer-claim.ts'
import type { ClaimForm, ClaimSetting, ShownClaim, Varied } from '../evidence/claims/claim.ts'
import { variedByDefaultOfFit } from '../evidence/claims/late-only-claim.ts'
import { statementOf } from '../evidence/claims/statement-of.ts'
import { variedByDefault, variedRange } from '../evidence/claims/varied-chain.ts'
import { type Score, scoreUnit } from '../erp/score.ts'
import type { StageSpec } from '../filter/stage.ts'
import { chosenNoise } from './chosen-noise.ts'
import { componentsOf, recordedValues, timeAxis } from './evaluate-curves.ts'
import type { RecordedData } from './recorded-data.ts'
import { type Claim, DIFFERENCE, MAX_CLAIMS, type Workspace } from './workspace.ts'

export { claimBounds }

/** The chain and the extent that a claim is about: its own where it keeps one. */
export function chainOfClaim(claim: Claim, workspace: Workspace): Pick<Workspace, 'chain' | 'extent'> {
  const { chain, extent } = claim.on ?? workspace
  // What is applied to a loaded average runs on its epoch; only a late-only fit asks on what its stages in the data ran.
  const loaded = workspace.source.kind === 'recorded' && claim.says.form !== 'late-only'
  return { chain, extent: loaded ? 'epochs' : extent }
}

/** The conditions of a waveform by name. */
export function conditionNames({ source }: Workspace, data: RecordedData | null): readonly string[] {
  return source.kind === 'built' ? source.conditions.map(({ name }) => name) : (data?.conditions ?? [])
}

/** A recorded average is what was measured, whatever is said. */
export const takenOf = (claim: Claim, { source }: Workspace): Claim['taken'] =>
  source.kind === 'recorded' ? 'as measured' : claim.taken

/**
 * Whether what a waveform passed before it came here is known. Nobody says which filters a recording has passed and leaves some out unawares, so
 * that a stage that is said to be in the data is taken for all of them, until the user says otherwise.
 */
export function filteredBeforeOf(claim: Claim | null, workspace: Workspace): 'as stated' | 'not known' {
  if (workspace.source.kind !== 'recorded') return 'as stated'
  const { chain } = claim?.on ?? workspace
  const stated = chain.some(({ inData, enabled }) => inData === true && enabled !== false)
  return workspace.claims.filteredBefore ?? (stated ? 'as stated' : 'not known')
}

/**
 * All that a claim is answered from.
 *
 * @throws RangeError where the data are not at hand, the waveform is impossible, or a condition is not there.
 */
export function claimSetting(claim: Claim, workspace: Workspace, data: RecordedData | null): ClaimSetting {
  const { source, shown, baseline, score, measure, trials } = workspace
  const { samplingRateHz, timesMs } = timeAxis(source, data)
  const { noise, passed } = chosenNoise(workspace, data)
  const { difference } = shown
  const chosen: ClaimSetting['chosen'] =
    shown.chosen === DIFFERENCE && difference
      ? { kind: 'difference', ...difference }
      : { kind: 'condition', name: shown.chosen }
  const names = namesNeeded(claim.says, chosen)
  const known = conditionNames(workspace, data)
  for (const name of names) if (!known.includes(name)) throw new RangeError(noCondition(name))
  return {
    ...{ samplingRateHz, timesMs, baseline, score, measure, trials, noise, chosen },
    ...chainOfClaim(claim, workspace),
    conditions: names.map((name) => ({
      name,
      source:
        source.kind === 'built'
          ? { kind: 'built', components: componentsOf(source, name, null), events: source.events }
          : { kind: 'recorded', values: recordedValues(source, data, name, shown.channel, null) },
    })),
    noisePassed: passed,
    taken: takenOf(claim, workspace),
    filteredBefore: filteredBeforeOf(claim, workspace),
    unseenThreshold: workspace.trace.threshold,
  }
}

/** A claim outlives the data that it was made about: another table need not have its conditions. */
const noCondition = (name: string) =>
  name === '' ? 'an effect is of two conditions, and one is not chosen' : `the waveform has no condition “${name}”`

/** A table may hold hundreds of conditions; a claim needs one or two of them, or four. */
function namesNeeded(form: ClaimForm, chosen: ClaimSetting['chosen']): string[] {
  const shown = statementOf(form)
  const own = chosen.kind === 'difference' ? [chosen.first, chosen.second] : [chosen.name]
  const named = shown.form === 'effect' ? [shown.first, shown.second] : []
  return [...new Set([...own, ...named])]
}

/** Says what an answer hangs on: the same text is the same answer. */
export function claimKey(claim: Claim, workspace: Workspace): string {
  const { source, shown, baseline, score, measure, trials, noise, noiseFrom, trace } = workspace
  return JSON.stringify([
    claim.says,
    chainOfClaim(claim, workspace),
    takenOf(claim, workspace),
    claim.varied,
    source,
    { chosen: shown.chosen, difference: shown.difference, channel: shown.channel },
    { baseline, score, measure, trials, noise, noiseFrom },
    { threshold: trace.threshold, filteredBefore: filteredBeforeOf(claim, workspace) },
  ])
}

/** The unit of the score, for the sentence of a claim about it. */
export const claimScoreUnit = ({ score }: { score: Score }) => scoreUnit(score.kind)

type Form = ClaimForm['form']
type ShownForm = ShownClaim['form']

/** The forms in the order of the menu. */
export const CLAIM_FORMS: readonly Form[] = [
  'deflection',
  'change',
  'from-outside',
  'onset',
  'effect',
  'twin',
  'meaning',
  'attenuation',
  'tone',
  'late-only',
]

export const SHOWN_FORMS: readonly ShownForm[] = ['deflection', 'change', 'from-outside', 'onset', 'effect']

export const isShownForm = (form: Form): form is ShownForm => (SHOWN_FORMS as readonly Form[]).includes(form)

/** A statement of a form to begin with, about what the page shows. */
export function shownToBegin(form: ShownForm, workspace: Workspace, data: RecordedData | null): ShownClaim {
  const { score, measure, limits } = workspace
  const window = { fromMs: score.fromMs, toMs: score.toMs }
  switch (form) {
    case 'change': {
      const own = scoreUnit(score.kind)
      const amount = limits.score && limits.score.unit === own ? limits.score.value : own === 'ms' ? 10 : 0.5
      return { form, row: 'score', relation: 'at least', amount, unit: 'own' }
    }
    case 'deflection':
      return { form, window, amount: 0.5, unit: 'µV' }
    case 'from-outside':
      return { form, window, percent: 50 }
    case 'onset':
      return { form, direction: 'earlier', ms: 10 }
    case 'effect': {
      const names = conditionNames(workspace, data)
      const { first, second } = workspace.shown.difference ?? { first: names[0] ?? '', second: names[1] ?? '' }
      return { form, first, second, window: measure.mean, says: 'exists without the filter', leastUv: 0.5 }
    }
  }
}

const isCausal = (spec: StageSpec) =>
  ('direction' in spec && spec.direction === 'forward') ||
  ('delay' in spec && (spec.delay === 'causal' || spec.delay === 'minimum-phase'))

/** A claim of a form to begin with. */
export function claimToBegin(form: Form, workspace: Workspace, data: RecordedData | null): ClaimForm {
  const { chain, score } = workspace
  if (isShownForm(form)) return shownToBegin(form, workspace, data)
  const deflection = shownToBegin('deflection', workspace, data)
  switch (form) {
    case 'attenuation':
      return { form, hz: 50, db: 20 }
    case 'tone':
      return { form, hz: 50, amplitudeUv: 5, belowUv: 0.1, locked: false }
    case 'twin': {
      const causal = chain.some((spec) => spec.enabled !== false && spec.inData !== true && isCausal(spec))
      return { form, twin: causal ? 'zero-phase' : 'causal', shows: deflection }
    }
    case 'meaning': {
      const stated = chain.find((spec) => 'meaning' in spec && spec.enabled !== false)
      const meaning = stated && 'meaning' in stated ? stated.meaning : 'half-amplitude'
      const other = meaning === 'half-amplitude' ? 'half-power' : 'half-amplitude'
      return { form, stated: meaning, other, conclusion: deflection }
    }
    case 'late-only':
      return {
        form,
        t0Ms: Math.round(onsetToBegin(workspace, data)),
        early: { fromMs: score.fromMs, toMs: score.toMs },
        slackMs: 30,
      }
  }
}

/** A moment before which nothing is said to have happened: the onset where it is known, else the end of the score's window. */
function onsetToBegin(workspace: Workspace, data: RecordedData | null): number {
  const { source, score, shown, onsetMs } = workspace
  if (onsetMs !== null) return onsetMs
  if (source.kind === 'built') {
    const { timesMs } = timeAxis(source, data)
    const onset = onsetOfBuilt(componentsOf(source, shown.chosen, shown.difference), timesMs)
    if (typeof onset === 'number' && onset > score.fromMs) return onset
  }
  return score.toMs
}

type Change = (workspace: Workspace) => Workspace

const withClaims = (workspace: Workspace, change: Partial<Workspace['claims']>): Workspace => ({
  ...workspace,
  claims: { ...workspace.claims, ...change },
})

/** Adds a claim at the end; a full list stays as it is. */
export const addingClaim =
  (form: Form, data: RecordedData | null): Change =>
  (workspace) => {
    const { list } = workspace.claims
    if (list.length >= MAX_CLAIMS) return workspace
    const claim: Claim = {
      id: nextId(list),
      says: structuredClone(claimToBegin(form, workspace, data)) as Claim['says'],
      madeIn: '',
      on: null,
      taken: 'as it stands',
      varied: null,
    }
    return withClaims(workspace, { list: [...list, claim] })
  }

const nextId = (list: readonly Claim[]) => Math.max(0, ...list.map(({ id }) => id)) + 1

/** Changes one claim; a claim that is gone changes nothing. */
export const changingClaim =
  (id: number, change: (claim: Claim) => Claim): Change =>
  (workspace) => {
    const { list } = workspace.claims
    if (!list.some((claim) => claim.id === id)) return workspace
    return withClaims(workspace, { list: list.map((claim) => (claim.id === id ? change(claim) : claim)) })
  }

export const removingClaim =
  (id: number): Change =>
  (workspace) =>
    withClaims(workspace, { list: workspace.claims.list.filter((claim) => claim.id !== id) })

/** A copy right behind the claim, to be said differently. */
export const duplicatingClaim =
  (id: number): Change =>
  (workspace) => {
    const { list } = workspace.claims
    const place = list.findIndex((claim) => claim.id === id)
    if (place < 0 || list.length >= MAX_CLAIMS) return workspace
    const copy = { ...structuredClone(list[place]), id: nextId(list) }
    return withClaims(workspace, { list: [...list.slice(0, place + 1), copy, ...list.slice(place + 1)] })
  }

/** Moves a claim one place up or down; at the end of the list nothing moves. */
export const movingClaim =
  (id: number, by: -1 | 1): Change =>
  (workspace) => {
    const list = workspace.claims.list.slice()
    const from = list.findIndex((claim) => claim.id === id)
    const to = from + by
    if (from < 0 || to < 0 || to >= list.length) return workspace
    const [claim] = list.splice(from, 1)
    list.splice(to, 0, claim)
    return withClaims(workspace, { list })
  }

export const namingClaims =
  (title: string): Change =>
  (workspace) =>
    withClaims(workspace, { title: title.slice(0, 400) })

export const statingFilteredBefore =
  (filteredBefore: Workspace['claims']['filteredBefore']): Change =>
  (workspace) =>
    withClaims(workspace, { filteredBefore })

/** What can be varied in the search for what would change an answer, in the order of the chain. */
export function variedChoices(chain: readonly StageSpec[], samplingRateHz: number, inData: boolean): Varied[] {
  const whats = ['cutoff', 'order', 'transition'] as const
  return chain.flatMap((_, stage) =>
    whats.flatMap((what) =>
      ([0, 1] as const)
        .filter((cutoff) => what === 'cutoff' || cutoff === 0)
        .map((cutoff): Varied => ({ stage, what, cutoff }))
        .filter((varied) => variedRange(chain, varied, samplingRateHz, inData) !== null),
    ),
  )
}

/** Whether a recording's stages in the data ran before or after its epochs were cut; what is applied here runs on the epoch. */
export const statingRunOn =
  (extent: Workspace['extent']): Change =>
  (workspace) => ({ ...workspace, extent })

/** What is varied where the user has not said: of a statement about one frequency the cutoff that lies nearest to it, else the first. */
export function variedOf(claim: Claim, chain: readonly StageSpec[]): Varied | null {
  const { says, varied } = claim
  if (varied) return varied
  if (says.form === 'late-only') return variedByDefaultOfFit(chain)
  if (says.form !== 'attenuation' && says.form !== 'tone') return variedByDefault(chain)
  const octaves = (hz: number) => Math.abs(Math.log2(hz / says.hz))
  const cutoffs = chain.flatMap((spec, stage) =>
    spec.enabled === false || spec.inData === true || !('cutoffsHz' in spec)
      ? []
      : spec.cutoffsHz.map((hz, place) => ({ stage, hz, cutoff: place === 0 ? (0 as const) : (1 as const) })),
  )
  const [nearest] = cutoffs.sort((a, b) => octaves(a.hz) - octaves(b.hz))
  return nearest ? { stage: nearest.stage, what: 'cutoff', cutoff: nearest.cutoff } : null
}
