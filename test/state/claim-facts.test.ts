import { beforeEach, describe, expect, test } from 'vitest'
import {
  answerOf,
  claimContext,
  dossierOf,
  lateOnlyFacts,
  unanswerable,
  unanswered,
} from '../../src/state/claim-facts.ts'
import { claimStore, runClaim } from '../../src/state/claim-run.ts'
import { claimSlice } from '../../src/state/claim-worker.ts'
import {
  addingClaim,
  changingClaim,
  claimKey,
  claimSetting,
  namingClaims,
  statingRunOn,
  variedOf,
} from '../../src/state/claims.ts'
import { evaluate } from '../../src/state/evaluate.ts'
import type { RecordedData } from '../../src/state/recorded-data.ts'
import { SOFTWARE_VERSION } from '../../src/state/software-version.ts'
import { startWorkspace, type Workspace } from '../../src/state/workspace.ts'
import { dossierHtml, dossierMarkdown } from '../../src/words/index.ts'
import { madeUpWorkspace } from './made-up-table.ts'

const start: Workspace = startWorkspace()
type Form = Parameters<typeof addingClaim>[0]

const having = (from: Workspace, data: RecordedData | null, ...forms: Form[]) =>
  forms.reduce((workspace, form) => addingClaim(form, data)(workspace), from)

async function answerAll(workspace: Workspace, data: RecordedData | null = null): Promise<void> {
  for (const claim of workspace.claims.list) {
    const setting = claimSetting(claim, workspace, data)
    const request = {
      key: claimKey(claim, workspace),
      form: claim.says,
      setting,
      varied: variedOf(claim, setting.chain),
    }
    await runClaim(
      request,
      (key, question) => Promise.resolve(claimSlice(key, question, 60_000)),
      new AbortController().signal,
    )
  }
}

function evaluationOf(workspace: Workspace, data: RecordedData | null = null) {
  const outcome = evaluate(workspace, data)
  if (!outcome.ok) throw new Error(outcome.problems.map(({ message }) => message).join(' '))
  return outcome.evaluation
}

const dossier = (workspace: Workspace, data: RecordedData | null = null, figure: string | null = null) =>
  dossierOf(workspace, evaluationOf(workspace, data), data, () => figure)

beforeEach(() => claimStore.setState({ answers: {} }))

describe('unanswered', () => {
  test('counts the claims without a complete answer, and follows each change of a question', async () => {
    const three = having(start, null, 'deflection', 'onset', 'attenuation')
    expect(unanswered(three)).toBe(3)
    await answerAll(three)
    expect(unanswered(three)).toBe(0)
    const later: Workspace = { ...three, baseline: 'none' }
    expect(unanswered(later)).toBe(3)
    const two = changingClaim(2, (claim) => ({ ...claim, taken: 'as measured' }))(three)
    expect(unanswered(two)).toBe(1)
  })

  test('counts a search that was stopped', () => {
    const one = having(start, null, 'deflection')
    const key = claimKey(one.claims.list[0], one)
    claimStore.setState({
      answers: { [key]: { key, result: null, done: 3, total: 80, status: 'cancelled', reason: null } },
    })
    expect(unanswered(one)).toBe(1)
  })
})

describe('unanswerable', () => {
  test('names the claims that waiting does not answer: about a condition that is not there, or refused', () => {
    const three = having(start, null, 'deflection', 'effect', 'attenuation')
    expect(unanswerable(three, null)).toEqual([])
    const lost = changingClaim(2, (claim) => ({
      ...claim,
      says: { ...claim.says, first: 'faces' } as typeof claim.says,
    }))(three)
    expect(unanswerable(lost, null)).toEqual([2])
    const key = claimKey(lost.claims.list[2], lost)
    claimStore.setState({
      answers: { [key]: { key, result: null, done: 0, total: 1, status: 'failed', reason: 'The frequency …' } },
    })
    expect(unanswerable(lost, null)).toEqual([2, 3])
  })
})

describe('dossierOf', () => {
  test('throws where a claim has no answer, and says which', async () => {
    const two = having(start, null, 'onset', 'attenuation')
    expect(() => dossier(two)).toThrow(new RangeError('claim 1 has no answer yet'))
    await answerAll(having(start, null, 'onset'))
    expect(() => dossier(two)).toThrow(new RangeError('claim 2 has no answer yet'))
  })

  test('lets claims about one chain, taken in one way, share their assumptions', async () => {
    const three = having(start, null, 'deflection', 'onset', 'attenuation')
    const measured = changingClaim(2, (claim) => ({ ...claim, taken: 'as measured' }))(three)
    const kept = { name: 'as published', chain: start.chain.slice(0, 1), extent: 'epochs' as const }
    const workspace = changingClaim(3, (claim) => ({ ...claim, on: kept }))(
      having(measured, null, 'from-outside', 'attenuation'),
    )
    await answerAll(workspace)
    const { claims, settings } = dossier(workspace)
    expect(claims.map(({ setting }) => setting)).toEqual([0, 1, 2, 0, 0])
    expect(settings).toHaveLength(3)
    expect(settings.map(({ setting }) => setting.taken)).toEqual(['as it stands', 'as measured', 'as it stands'])
    expect(settings.map(({ chainName }) => chainName)).toEqual([null, null, 'as published'])
    expect(settings[2].facts.chain).toEqual(kept.chain)
    expect(settings[2].facts.extent).toBe('epochs')
    expect(claims[2].context.filter).toBe('the chain “as published”')
  })

  test('holds each claim as it is said, with its answer, curve and figure', async () => {
    const named = namingClaims('Smith and others, 2019')(having(start, null, 'deflection', 'attenuation'))
    const workspace = changingClaim(1, (claim) => ({ ...claim, madeIn: 'Results, paragraph 3' }))(named)
    await answerAll(workspace)
    const svg = '<svg xmlns="http://www.w3.org/2000/svg"><title>What would change it</title></svg>'
    const whole = dossier(workspace, null, svg)
    expect(whole).toMatchObject({ title: 'Smith and others, 2019', softwareVersion: SOFTWARE_VERSION })
    whole.claims.forEach((claim, i) => {
      const said = workspace.claims.list[i]
      const result = answerOf(said, workspace)
      expect(claim.form).toBe(said.says)
      expect(claim.answer).toBe(result?.answer)
      expect(claim.curve).toBe(result?.curve)
      expect(claim.figureSvg).toBe(svg)
      expect(claim.madeIn).toBe(said.madeIn)
      expect(claim).not.toHaveProperty('lateOnly')
    })
    expect(whole.claims[0].madeIn).toBe('Results, paragraph 3')
    // what it holds can be written down
    expect(dossierHtml(whole)).toContain('Smith and others, 2019')
    expect(dossierMarkdown(whole)).toContain('Results, paragraph 3')
  })

  test('holds what the late-only fit found, as the desk says it', async () => {
    const small: Workspace = {
      ...having(
        {
          ...start,
          source: { ...start.source, samplingRateHz: 100, epoch: { fromMs: -200, toMs: 720 } } as Workspace['source'],
          chain: start.chain.filter(({ design }) => design === 'butterworth'),
        },
        null,
        'late-only',
      ),
    }
    await answerAll(small)
    const [claim] = dossier(small).claims
    const [said] = small.claims.list
    const result = answerOf(said, small)
    if (said.says.form !== 'late-only' || !result?.lateOnly) throw new Error('there is no fit')
    expect(claim.lateOnly).toEqual(lateOnlyFacts(said.says, result.lateOnly))
    expect(claim.lateOnly).toMatchObject({ t0Ms: said.says.t0Ms, early: said.says.early, slackMs: 30 })
    expect(claim.lateOnly?.scan?.rows.length).toBeGreaterThan(1)
  })

  test('states of a recording on what its stages in the data ran, since the fit hangs on it', () => {
    const { workspace, table } = madeUpWorkspace()
    const chain = start.chain
      .filter(({ design }) => design === 'butterworth')
      .map((spec) => ({ ...spec, inData: true }))
    const written = (extent: Workspace['extent']) => {
      const one = statingRunOn(extent)(having({ ...workspace, chain }, table, 'late-only'))
      const [claim] = one.claims.list
      const setting = claimSetting(claim, one, table)
      const key = claimKey(claim, one)
      // the fit itself is enough: its scan takes long
      const slice = claimSlice(key, { form: claim.says, setting, varied: null }, 0)
      if (!slice) throw new Error('the question was sent')
      claimStore.setState({
        answers: { [key]: { key, ...slice, status: 'running', reason: null } },
      })
      return { text: dossierMarkdown(dossier(one, table)), answer: slice.result?.answer }
    }
    const continuous = written('continuous')
    const epochs = written('epochs')
    expect(continuous.text).toContain('**Stages in the data:** taken to have run on the continuous recording')
    expect(epochs.text).toContain('**Stages in the data:** taken to have run on the cut-out epochs')
    expect(epochs.answer?.number).not.toBe(continuous.answer?.number)
  })

  test('names the file of a table, where its noise is from, and that it carries its noise', async () => {
    const { workspace, table } = madeUpWorkspace()
    const one = having(workspace, table, 'onset', 'effect')
    await answerAll(one, table)
    const { settings, claims } = dossier(one, table)
    expect(settings[0]).toMatchObject({
      file: 'average-2024.csv',
      noiseFrom: 'as Sidelobe assumes where nothing else is stated',
    })
    const louder = { ...one, noise: { ...one.noise, whiteUv2PerHz: 0.5 } }
    await answerAll(louder, table)
    expect(dossier(louder, table).settings[0].noiseFrom).toBe('as stated by the user')
    expect(settings[0].setting.taken).toBe('as measured')
    expect(claims[0].context).toEqual({ filter: 'the filter', trials: one.trials, taken: 'as measured' })
    // an effect is about other conditions than the one that is shown
    expect(claims.map(({ setting }) => setting)).toEqual([0, 1])
    expect(settings[1].setting.conditions.map(({ name }) => name).sort()).toEqual(['frequent', 'rare'])
  })
})

test('claimContext names the chain of the claim, the trials and how the waveform is taken', () => {
  const [claim] = having(start, null, 'deflection').claims.list
  expect(claimContext(claim, { ...start, trials: 17 })).toEqual({
    filter: 'the filter',
    trials: 17,
    taken: 'as it stands',
  })
  const on = { name: 'pin', chain: start.chain, extent: start.extent }
  expect(claimContext({ ...claim, on, taken: 'as measured' }, start)).toMatchObject({
    filter: 'the chain “pin”',
    taken: 'as measured',
  })
})
