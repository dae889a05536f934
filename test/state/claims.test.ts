import { beforeEach, describe, expect, test } from 'vitest'
import {
  addingClaim,
  CLAIM_FORMS,
  chainOfClaim,
  changingClaim,
  claimKey,
  claimSetting,
  claimToBegin,
  conditionNames,
  duplicatingClaim,
  filteredBeforeOf,
  movingClaim,
  namingClaims,
  removingClaim,
  SHOWN_FORMS,
  shownToBegin,
  statingFilteredBefore,
  takenOf,
  variedChoices,
  variedOf,
} from '../../src/state/claims.ts'
import { recordedValues } from '../../src/state/evaluate-curves.ts'
import { endGesture, redo, say, undo, workspaceStore } from '../../src/state/store.ts'
import {
  type Claim,
  DIFFERENCE,
  MAX_CLAIMS,
  readWorkspace,
  startWorkspace,
  type Workspace,
} from '../../src/state/workspace.ts'
import { madeUpWorkspace } from './made-up-table.ts'

const start = startWorkspace()

function having(...forms: Parameters<typeof addingClaim>[0][]): Workspace {
  return forms.reduce((workspace, form) => addingClaim(form, null)(workspace), start)
}
const ids = ({ claims }: Workspace) => claims.list.map(({ id }) => id)
const forms = ({ claims }: Workspace) => claims.list.map(({ says }) => says.form)
const first = ({ claims }: Workspace) => claims.list[0]

describe('the list of claims', () => {
  test('takes up every form of the menu, each of which can be read again', () => {
    const all = having(...CLAIM_FORMS)
    expect(forms(all)).toEqual([...CLAIM_FORMS])
    expect(new Set(CLAIM_FORMS).size).toBe(10)
    const read = readWorkspace(JSON.parse(JSON.stringify(all)))
    expect(read).toEqual({ ok: true, workspace: all })
  })

  test('never gives an id twice, whatever is removed before', () => {
    const one = having('deflection', 'onset', 'tone')
    expect(ids(one)).toEqual([1, 2, 3])
    expect(ids(addingClaim('change', null)(removingClaim(2)(one)))).toEqual([1, 3, 4])
  })

  test('ends at its largest length: adding and duplicating then leave it as it was', () => {
    const full = having(...Array.from({ length: MAX_CLAIMS }, () => 'onset' as const))
    expect(ids(full)).toHaveLength(MAX_CLAIMS)
    expect(addingClaim('onset', null)(full)).toBe(full)
    expect(duplicatingClaim(1)(full)).toBe(full)
  })

  test('moves a claim by one place, and nowhere beyond its ends', () => {
    const one = having('deflection', 'onset', 'tone')
    expect(forms(movingClaim(1, 1)(one))).toEqual(['onset', 'deflection', 'tone'])
    expect(forms(movingClaim(3, -1)(one))).toEqual(['deflection', 'tone', 'onset'])
    expect(movingClaim(1, -1)(one)).toBe(one)
    expect(movingClaim(3, 1)(one)).toBe(one)
    expect(movingClaim(9, 1)(one)).toBe(one)
  })

  test('puts a copy right behind the claim that it is of, and the two change apart', () => {
    const copied = duplicatingClaim(1)(having('deflection', 'onset'))
    expect(ids(copied)).toEqual([1, 3, 2])
    const changed = changingClaim(3, (claim) => ({ ...claim, madeIn: 'Reviewer 2' }))(copied)
    expect(changed.claims.list.map(({ madeIn }) => madeIn)).toEqual(['', 'Reviewer 2', ''])
    expect(changed.claims.list[1].says).toEqual(changed.claims.list[0].says)
    expect(changed.claims.list[1].says).not.toBe(changed.claims.list[0].says)
  })

  test('is not touched by what is said of a claim that is gone', () => {
    const one = having('deflection')
    expect(changingClaim(7, (claim) => ({ ...claim, madeIn: 'nowhere' }))(one)).toBe(one)
    expect(duplicatingClaim(7)(one)).toBe(one)
    expect(removingClaim(7)(one).claims.list).toEqual(one.claims.list)
  })

  test('has a title no longer than a workspace can hold', () => {
    const named = namingClaims('x'.repeat(500))(start)
    expect(named.claims.title).toHaveLength(400)
    expect(readWorkspace(JSON.parse(JSON.stringify(named))).ok).toBe(true)
  })
})

describe('undo', () => {
  beforeEach(() => {
    workspaceStore.setState({ workspace: start })
    workspaceStore.temporal.getState().clear()
    endGesture()
  })
  const present = () => workspaceStore.getState().workspace

  test.each([
    ['adding', () => say(addingClaim('tone', null))],
    ['moving', () => say(movingClaim(1, 1))],
    ['duplicating', () => say(duplicatingClaim(2))],
    ['removing', () => say(removingClaim(1))],
    ['stating what was filtered before', () => say(statingFilteredBefore('as stated'))],
  ])('takes %s back in one step', (_, act) => {
    say(addingClaim('deflection', null))
    say(addingClaim('onset', null))
    const before = present()
    act()
    const after = present()
    expect(after).not.toBe(before)
    undo()
    expect(present()).toBe(before)
    redo()
    expect(present()).toEqual(after)
  })

  test('takes all that was typed into one field of one claim back in one step, and not what was typed into another', () => {
    say(addingClaim('deflection', null))
    say(addingClaim('deflection', null))
    const before = present()
    const amount = (id: number, amountUv: number) =>
      say(
        changingClaim(id, (claim) => ({ ...claim, says: { ...claim.says, amount: amountUv } as Claim['says'] })),
        `claim:${id}:amount`,
      )
    amount(1, 1)
    amount(1, 1.2)
    amount(1, 1.25)
    const between = present()
    amount(2, 3)
    undo()
    expect(present()).toBe(between)
    undo()
    expect(present()).toBe(before)
  })

  test('takes a title that was typed letter by letter back in one step', () => {
    const before = present()
    for (const title of ['S', 'Sm', 'Smi']) say(namingClaims(title), 'claims-title')
    undo()
    expect(present()).toBe(before)
  })

  test('has nothing to take back where a claim stood at the end already', () => {
    say(addingClaim('onset', null))
    const steps = workspaceStore.temporal.getState().pastStates.length
    say(movingClaim(1, 1))
    expect(workspaceStore.temporal.getState().pastStates).toHaveLength(steps)
  })
})

describe('a claim to begin with', () => {
  test('is about the window of the score, and about the limit that the user has set for it', () => {
    const { fromMs, toMs } = start.score
    expect(claimToBegin('deflection', start, null)).toMatchObject({ window: { fromMs, toMs } })
    expect(claimToBegin('from-outside', start, null)).toMatchObject({ window: { fromMs, toMs } })
    const limited: Workspace = { ...start, limits: { ...start.limits, score: { value: 0.35, unit: 'µV' } } }
    expect(claimToBegin('change', limited, null)).toMatchObject({ row: 'score', amount: 0.35, unit: 'own' })
  })

  test('does not take a limit in µV for a score in ms', () => {
    const latency: Workspace = {
      ...start,
      score: { kind: 'peak-latency', fromMs: 300, toMs: 500, polarity: 'positive' },
      limits: { ...start.limits, score: { value: 0.35, unit: 'µV' } },
    }
    expect(shownToBegin('change', latency, null)).toMatchObject({ amount: 10, unit: 'own' })
  })

  test('asks for the other kind of filter than the one that is there', () => {
    expect(claimToBegin('twin', start, null)).toMatchObject({ twin: 'causal' })
    const causal: Workspace = {
      ...start,
      chain: start.chain.map((spec) =>
        spec.design === 'butterworth' ? { ...spec, direction: 'forward' as const } : spec,
      ),
    }
    expect(claimToBegin('twin', causal, null)).toMatchObject({ twin: 'zero-phase' })
  })

  test('compares the meaning that the chain states with another one', () => {
    for (const stated of ['half-amplitude', 'half-power', 'design'] as const) {
      const workspace: Workspace = {
        ...start,
        chain: start.chain.map((spec) => ('meaning' in spec ? { ...spec, meaning: stated } : spec)),
      }
      const form = claimToBegin('meaning', workspace, null)
      if (form.form !== 'meaning') throw new Error(form.form)
      expect(form.stated).toBe(stated)
      expect(form.other).not.toBe(stated)
    }
  })

  test('takes the onset of a built waveform, or the one that is stated, and of a table the end of the score’s window', () => {
    const onset = (workspace: Workspace, data: Parameters<typeof claimToBegin>[2] = null) => {
      const form = claimToBegin('late-only', workspace, data)
      return form.form === 'late-only' ? form.t0Ms : Number.NaN
    }
    // the late positivity of the first sight begins long before its peak at 400 ms and after the score's window
    expect(onset(start)).toBeGreaterThan(start.score.toMs)
    expect(onset(start)).toBeLessThan(400)
    expect(onset({ ...start, onsetMs: 212 })).toBe(212)
    const { workspace, table } = madeUpWorkspace()
    expect(onset({ ...workspace, onsetMs: null }, table)).toBe(workspace.score.toMs)
  })

  test('is about the difference that is shown, else about the first two conditions', () => {
    const { workspace, table } = madeUpWorkspace()
    expect(conditionNames(workspace, table)).toEqual(['rare', 'frequent'])
    expect(
      claimToBegin('effect', { ...workspace, shown: { ...workspace.shown, difference: null } }, table),
    ).toMatchObject({
      first: 'rare',
      second: 'frequent',
    })
    const difference = { first: 'frequent', second: 'rare' }
    expect(claimToBegin('effect', { ...workspace, shown: { ...workspace.shown, difference } }, table)).toMatchObject(
      difference,
    )
  })

  test.each(SHOWN_FORMS)('has an answer as it stands: %s within another', (form) => {
    expect(shownToBegin(form, start, null).form).toBe(form)
  })
})

describe('what a claim is answered from', () => {
  const { workspace, table } = madeUpWorkspace()
  const claimOf = (from: Workspace, form: Parameters<typeof addingClaim>[0], data = table) =>
    addingClaim(form, data)(from).claims.list[0]

  test('of a table: its values, the chain on the epochs, and always with its noise', () => {
    const claim = claimOf(workspace, 'deflection')
    const continuous: Workspace = { ...workspace, extent: 'continuous' }
    const setting = claimSetting(claim, continuous, table)
    expect(setting.extent).toBe('epochs')
    expect(setting.taken).toBe('as measured')
    expect(takenOf(claim, continuous)).toBe('as measured')
    expect(setting.samplingRateHz).toBe(250)
    if (workspace.source.kind !== 'recorded') throw new Error('not a table')
    expect(setting.conditions).toEqual([
      {
        name: workspace.shown.chosen,
        source: {
          kind: 'recorded',
          values: recordedValues(workspace.source, table, workspace.shown.chosen, workspace.shown.channel, null),
        },
      },
    ])
  })

  test('of a fit by late activity: the extent on which its stages were run before it was loaded', () => {
    const claim = claimOf(workspace, 'late-only')
    expect(chainOfClaim(claim, { ...workspace, extent: 'continuous' }).extent).toBe('continuous')
    expect(chainOfClaim(claim, { ...workspace, extent: 'epochs' }).extent).toBe('epochs')
  })

  test('of a difference: both its conditions, and of an effect those that it names as well', () => {
    const difference: Workspace = {
      ...workspace,
      shown: { ...workspace.shown, chosen: DIFFERENCE, difference: { first: 'rare', second: 'frequent' } },
    }
    const names = (claim: Claim, from: Workspace) => claimSetting(claim, from, table).conditions.map(({ name }) => name)
    expect(claimSetting(claimOf(difference, 'onset'), difference, table).chosen).toEqual({
      kind: 'difference',
      first: 'rare',
      second: 'frequent',
    })
    expect(names(claimOf(difference, 'onset'), difference)).toEqual(['rare', 'frequent'])
    expect(names(claimOf(workspace, 'onset'), workspace)).toEqual([workspace.shown.chosen])
    expect(names(claimOf(workspace, 'effect'), workspace).sort()).toEqual(['frequent', 'rare'])
  })

  test('of an effect on another table: a condition that is not there is named, and the others are not listed', () => {
    const claim = claimOf(workspace, 'effect')
    const about = (first: string): Claim => ({ ...claim, says: { ...claim.says, first } as Claim['says'] })
    expect(() => claimSetting(about('faces'), workspace, table)).toThrow(
      new RangeError('the waveform has no condition “faces”'),
    )
    expect(() => claimSetting(about(''), workspace, table)).toThrow('of two conditions, and one is not chosen')
  })

  test('of a built waveform: its history is never in doubt, and it stands as it is until it is said to be measured', () => {
    const built = addingClaim('deflection', null)(start)
    const [claim] = built.claims.list
    expect(built.claims.filteredBefore).toBeNull()
    expect(claimSetting(claim, built, null)).toMatchObject({ filteredBefore: 'as stated', taken: 'as it stands' })
    expect(claimSetting({ ...claim, taken: 'as measured' }, built, null).taken).toBe('as measured')
    expect(claimSetting(claim, built, null).chain).toBe(built.chain)
  })

  test('of a recording: what it had passed is known once a stage is said to be in the data, unless the user says otherwise', () => {
    const table: Workspace = { ...start, source: { kind: 'recorded', fileName: 'a.csv', fileId: '0', reading: {} } }
    const inData = { ...table, chain: start.chain.map((stage) => ({ ...stage, inData: true })) }
    expect(filteredBeforeOf(null, table)).toBe('not known')
    expect(filteredBeforeOf(null, inData)).toBe('as stated')
    const off = { ...inData, chain: inData.chain.map((stage) => ({ ...stage, enabled: false })) }
    expect(filteredBeforeOf(null, off)).toBe('not known')
    const said = (value: 'as stated' | 'not known') => statingFilteredBefore(value)
    expect(filteredBeforeOf(null, said('as stated')(table))).toBe('as stated')
    expect(filteredBeforeOf(null, said('not known')(inData))).toBe('not known')
    // a claim with a chain of its own says it by that chain
    const [claim] = addingClaim('deflection', null)(start).claims.list
    const kept = { ...claim, on: { name: 'as published', chain: inData.chain, extent: 'continuous' as const } }
    expect(filteredBeforeOf(kept, table)).toBe('as stated')
  })

  test('of a claim with a chain of its own: that chain, whatever the protocol line says', () => {
    const built = having('deflection')
    const on = { name: 'as published', chain: built.chain.slice(0, 1), extent: 'epochs' as const }
    const claim: Claim = { ...first(built), on }
    const later: Workspace = { ...built, chain: [], extent: 'continuous' }
    expect(claimSetting(claim, later, null)).toMatchObject({ chain: on.chain, extent: 'epochs' })
    expect(claimKey(claim, later)).toBe(claimKey(claim, built))
  })

  test('is refused in words where the table is not there', () => {
    expect(() => claimSetting(claimOf(workspace, 'deflection'), workspace, null)).toThrow(RangeError)
  })
})

describe('the question of a claim', () => {
  const one = having('deflection')
  const key = (change: (workspace: Workspace) => Workspace) => claimKey(first(change(one)), change(one))
  const asItIs = key((workspace) => workspace)

  test.each<[string, (workspace: Workspace) => Workspace]>([
    ['the score', (w) => ({ ...w, score: { ...w.score, toMs: w.score.toMs + 2 } })],
    ['the baseline', (w) => ({ ...w, baseline: 'none' })],
    ['the trials', (w) => ({ ...w, trials: w.trials + 1 })],
    ['the chain', (w) => ({ ...w, chain: w.chain.slice(0, 1) })],
    ['the extent', (w) => ({ ...w, extent: 'epochs' })],
    ['the waveform', (w) => ({ ...w, source: { ...w.source, samplingRateHz: 250 } as Workspace['source'] })],
    ['the share that is too much', (w) => ({ ...w, trace: { ...w.trace, threshold: 0.31 } })],
    ['what is varied', changingClaim(1, (claim) => ({ ...claim, varied: { stage: 1, what: 'order', cutoff: 0 } }))],
    ['how it is taken', changingClaim(1, (claim) => ({ ...claim, taken: 'as measured' }))],
  ])('is another one with %s', (_, change) => {
    expect(key(change)).not.toBe(asItIs)
  })

  test.each<[string, (workspace: Workspace) => Workspace]>([
    ['where it was made', changingClaim(1, (claim) => ({ ...claim, madeIn: 'Reviewer 1' }))],
    ['the title', namingClaims('A review')],
    ['another claim', addingClaim('tone', null)],
    ['what a recording would have passed before', statingFilteredBefore('not known')],
    ['a limit', (w) => ({ ...w, limits: {} })],
    ['the limits of the trade-off map', (w) => ({ ...w, tradeOff: { ...w.tradeOff, fromHz: 0.02 } })],
  ])('is the same one with %s', (_, change) => {
    expect(key(change)).toBe(asItIs)
  })
})

describe('what is varied', () => {
  test('is the first cutoff of the chain where nothing was said, and what was said where it was', () => {
    const one = first(having('deflection'))
    expect(variedOf(one, start.chain)).toEqual({ stage: 1, what: 'cutoff', cutoff: 0 })
    const said = { stage: 1, what: 'order', cutoff: 0 } as const
    expect(variedOf({ ...one, varied: said }, start.chain)).toEqual(said)
  })

  test('is the cutoff nearest to the frequency that a claim is about, in octaves, among the stages that are applied here', () => {
    const [at50] = having('attenuation').claims.list
    expect(start.chain.map(({ design }) => design)).toContain('windowed-sinc')
    const place = start.chain.findIndex(({ design }) => design === 'windowed-sinc')
    expect(variedOf(at50, start.chain)?.stage).toBe(place)
    const slow: Claim = { ...at50, says: { form: 'attenuation', hz: 0.5, db: 3 } }
    expect(variedOf(slow, start.chain)?.stage).toBe(1)
    const off = start.chain.map((spec, i) => (i === place ? { ...spec, enabled: false } : spec))
    expect(variedOf(at50, off)?.stage).toBe(1)
  })

  test('is nothing where no stage has a cutoff', () => {
    for (const { id, ...claim } of having('deflection', 'tone', 'late-only').claims.list)
      expect(variedOf({ id, ...claim }, []), claim.says.form).toBeNull()
  })

  test('can be every cutoff, order and transition width of the stages that are applied here, in their order', () => {
    const choices = variedChoices(start.chain, 500, false)
    expect(choices).toContainEqual({ stage: 1, what: 'cutoff', cutoff: 0 })
    expect(choices).toContainEqual({ stage: 1, what: 'order', cutoff: 0 })
    expect(choices.some(({ what }) => what === 'transition')).toBe(true)
    expect(choices.map(({ stage }) => stage)).toEqual(choices.map(({ stage }) => stage).sort((a, b) => a - b))
    const inData = start.chain.map((spec) => ({ ...spec, inData: true }))
    expect(variedChoices(inData, 500, false)).toEqual([])
    // of what was done to the data before, a fit asks what would follow if it had been otherwise
    expect(variedChoices(inData, 500, true).length).toBeGreaterThan(0)
  })
})
