import AxeBuilder from '@axe-core/playwright'
import type { ClaimForm } from '../src/evidence/claims/claim.ts'
import { defaultNoise } from '../src/erp/noise.ts'
import { seededRandom } from '../src/erp/seeded-random.ts'
import { drawNoise, noiseSource } from '../src/erp/simulate-noise.ts'
import { type Table, readTable } from '../src/files/index.ts'
import { designChain, runContinuous } from '../src/filter/index.ts'
import type { StageSpec } from '../src/filter/stage.ts'
import { addingClaim, CLAIM_FORMS, changingClaim } from '../src/state/claims.ts'
import { workspaceToText } from '../src/state/keeping.ts'
import { type Claim, readWorkspace, type Workspace } from '../src/state/workspace.ts'
import { brief, claimFormName } from '../src/words/index.ts'
import { answerTo, changeOf, firstSight, printed, saidOf } from './core-numbers.ts'
import { expect, expectAccessible, inBothThemes, test } from './fixtures.ts'
import { type GivenFile, textFile, Workbench } from './page-models/workbench.ts'

type Form = ClaimForm['form']

/** The first sight with claims of these forms, as the desk adds them. */
const claiming = (...forms: Form[]): Workspace =>
  forms.reduce((workspace, form) => addingClaim(form, null)(workspace), firstSight())

const saying = (place: number, says: Partial<ClaimForm>, workspace: Workspace): Workspace =>
  changingClaim(workspace.claims.list[place - 1].id, (claim) => ({
    ...claim,
    says: { ...claim.says, ...says } as Claim['says'],
  }))(workspace)

const withCutoff = (workspace: Workspace, hz: number): Workspace => ({
  ...workspace,
  chain: workspace.chain.map((spec) => (spec.design === 'butterworth' ? { ...spec, cutoffsHz: [hz] } : spec)),
})

async function changeCutoff(workbench: Workbench, hz: string): Promise<void> {
  await workbench.edit('stage 2, cutoff')
  await workbench.field('cutoff').fill(hz)
  await workbench.closeEditor()
}

const fileOf = (workspace: Workspace): GivenFile => ({
  name: 'work.json',
  mimeType: 'application/json',
  buffer: Buffer.from(workspaceToText(workspace), 'utf8'),
})

/** The workspace that is on the page, from the file that it saves. */
async function workspaceOn(workbench: Workbench): Promise<Workspace> {
  const { bytes } = await workbench.saved(() => workbench.page.keyboard.press('Control+s'))
  const found = readWorkspace(JSON.parse(bytes.toString('utf8')))
  if (!found.ok) throw new Error(found.reason)
  return found.workspace
}

const sentencesOf = async (workbench: Workbench) =>
  (
    await workbench.claims().evaluateAll((cards) => cards.map((card) => card.querySelector('p')?.textContent ?? ''))
  ).map((text) => text.replace(/\s+/g, ' ').trim())

async function expectNoSidewaysScrolling(workbench: Workbench): Promise<void> {
  const beyond = () => workbench.page.evaluate(() => document.documentElement.scrollWidth - innerWidth)
  await expect.poll(beyond, { message: 'pixels that the page is wider than its window' }).toBeLessThanOrEqual(0)
}

test('a co-author sees that the early deflection is the filter’s, at which cutoff it goes, and where it came from', async ({
  workbench,
}) => {
  const { page } = workbench
  const start = claiming('deflection')
  const answer = answerTo(start, 1)
  await workbench.openClaims()
  await workbench.addClaim('a deflection that the filter makes')
  await expect(workbench.claimSentence(1)).toHaveText(
    '1 The filter makes a deflection of at least 0.5 µV between 80 and 140 ms, where the unfiltered waveform has none.',
  )
  expect(answer.verdict).toBe('holds')
  await workbench.expectClaim(1, saidOf(start, 1))
  await expect(workbench.claimReason(1)).toContainText(`${printed(answer.number ?? 0, 2)} µV`)

  // Both critical cutoffs, in the sentence and in the figure.
  const { curve, sentence } = changeOf(start, 1)
  await expect(workbench.claimChange(1)).toHaveText(sentence)
  expect(curve.flips).toHaveLength(2)
  const figure = workbench.claim(1).getByRole('img', { name: 'Claim 1: what would change it' })
  for (const { at } of curve.flips) {
    expect(sentence).toContain(brief(at, 3))
    await expect(figure).toContainText(`${brief(at, 2)} Hz`)
  }
  await expect(figure).toContainText('now 1 Hz')
  expect(await workbench.descriptionOf('Claim 1: what would change it')).toContain(brief(curve.flips[0].at, 3))

  // The same value on the trace-back desk.
  const at = answer.values.find(({ name }) => name === 'at')?.value
  await workbench.button('Trace-back: Where does this value come from?').click()
  await workbench.edit('the value that is traced')
  await workbench.choose('value that is traced', 'the value at a moment')
  await workbench.field('moment').fill(String(at))
  await workbench.choose('after the chain or its change', 'change, after − before')
  await workbench.closeEditor()
  const trace = page.getByRole('region', { name: 'Desks', exact: true })
  await expect(trace.getByRole('paragraph').first()).toHaveText(
    `Where do the ${printed(answer.number ?? 0, 2)} µV of the change at ${at} ms come from?`,
  )
  await expect(trace.getByRole('status')).toContainText('From the late positivity: ')
  const share = Number(
    /([\d.]+) % of the value/.exec((await trace.getByRole('status').textContent()) ?? '')?.[1] ?? Number.NaN,
  )
  expect(share, 'per cent of the deflection that come from the late positivity').toBeGreaterThan(80)

  // A tenth of the cutoff, and it is gone; undo brings it back.
  await changeCutoff(workbench, '0.1')
  await workbench.openClaims()
  const lower = withCutoff(start, 0.1)
  expect(saidOf(lower, 1).verdict).toBe('Does not hold')
  await workbench.expectClaim(1, saidOf(lower, 1))
  await expect(figure).toContainText('now 0.1 Hz')
  await workbench.button('Undo').click()
  await workbench.expectClaim(1, saidOf(start, 1))
})

// The table of an author under review. Invented: a late positivity that begins at 200 ms, an early negativity or none, noise of 100
// trials; through the core's own high-pass, and rounded as a table would be.
const HIGH_PASS: StageSpec = {
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [1],
  meaning: 'half-amplitude',
  direction: 'both',
}
const RATE_HZ = 250
const SAMPLES = 225
const START_MS = -200
const TRIALS = 100

function reviewedTable(early: boolean): string {
  const around = 2000
  const total = SAMPLES + 2 * around
  const [noise] = drawNoise(noiseSource(defaultNoise(), RATE_HZ, total), seededRandom(20240611), TRIALS)
  const unfiltered = noise.map((value, i) => {
    const ms = START_MS + ((i - around) * 1000) / RATE_HZ
    const phase = (ms - 200) / 400
    const late = phase > 0 && phase < 1 ? 4 * (1 - Math.cos(2 * Math.PI * phase)) : 0
    return value + late - (early ? 3.5 * Math.exp(-(((ms - 110) / 26) ** 2)) : 0)
  })
  const { stages } = designChain([HIGH_PASS], RATE_HZ)
  const filtered = runContinuous(stages, unfiltered, around, around + SAMPLES)
  const lines = Array.from(filtered, (uv, i) => `${START_MS + (i * 1000) / RATE_HZ},${uv.toFixed(2)}`)
  return ['time_ms,Cz (µV)', ...lines].join('\n')
}

function read(text: string): Table {
  const table = readTable(text)
  if (!table.ok) throw new Error(table.reason)
  return table
}

/** Opens the table, and states the filter that it has passed. */
async function openReviewed(workbench: Workbench, text: string): Promise<void> {
  await workbench.openFile(textFile('reviewed.csv', text))
  await expect(workbench.editor()).toContainText(`${SAMPLES} samples at 250 Hz`)
  await workbench.editor().getByRole('button', { name: 'it is right' }).click()
  await workbench.token('add a stage to the chain').click()
  await workbench.editor().getByRole('button', { name: 'add Butterworth high-pass' }).click()
  await workbench.field('cutoff').fill('1')
  await workbench.choose('where the stage acts', 'in the data')
  await workbench.edit('number of trials')
  await workbench.field('trials').fill(String(TRIALS))
  await workbench.closeEditor()
  expect(await workbench.sentenceText()).toContain(
    'had passed a Butterworth high-pass of order 2 per pass, run both ways, half-amplitude 1 Hz after both passes',
  )
}

async function claimLateOnly(workbench: Workbench): Promise<void> {
  await workbench.openClaims()
  await workbench.addClaim('a deflection that the filter alone can make')
  await workbench.editClaim(1, 'window of the claim')
  await workbench.field('from').fill('80')
  await workbench.field('to').fill('140')
  await workbench.editClaim(1, 'onset of the activity')
  await workbench.field('no activity before').fill('200')
  await workbench.closeEditor()
}

test.describe('an author under review', () => {
  test('shows that the filter alone cannot have made the early component, how large it is, and for which onsets', async ({
    workbench,
  }) => {
    const text = reviewedTable(true)
    await openReviewed(workbench, text)
    await claimLateOnly(workbench)
    await expect(workbench.claimSentence(1)).toContainText(
      'The filter alone can make the deflection between 80 and 140 ms from activity that begins no earlier than 200 ms, or at most 30 ms before that.',
    )
    await expect(workbench.token('what the stages in the data ran on')).toHaveText('the continuous recording')
    await expect(workbench.claimVerdict(1)).toHaveText('Does not hold')

    const workspace = await workspaceOn(workbench)
    const answer = answerTo(workspace, 1, read(text))
    expect(answer.grounds).toMatchObject({ kind: 'late-only', verdict: 'not by late activity alone' })
    await workbench.expectClaim(1, saidOf(workspace, 1, read(text)))
    const [low, high] = answer.interval ?? [Number.NaN, Number.NaN]
    // what was put in lies in the interval, and nothing does not
    expect(low).toBeLessThan(-3.5)
    expect(high).toBeGreaterThan(-3.5)
    expect(high).toBeLessThan(0)
    await expect(workbench.claim(1)).toContainText(
      `Estimated early activity from 80 to 140 ms: ${printed(answer.number ?? 0, 2)} µV (95 % interval ${printed(low, 2)} to ${printed(high, 2)} µV`,
    )

    const account = workbench.claim(1).getByRole('img', { name: 'Claim 1: the best late-only account' })
    for (const curve of ['late activity, unfiltered', 'what is left', 'what the filter makes of it'])
      await expect(account).toContainText(curve)
    // the scan over the onset grows while it is looked for
    await expect(workbench.claim(1).getByText('Other onsets', { exact: true })).toBeVisible()
    const scan = () => workbench.descriptionOf('Claim 1: other onsets')
    await expect.poll(scan, { timeout: 20_000 }).toMatch(/^80 ms: .*; 1\d\d ms: .*not by late activity alone/)
  })

  test('is not told so of the same recording without an early component', async ({ workbench }) => {
    const text = reviewedTable(false)
    await openReviewed(workbench, text)
    await claimLateOnly(workbench)
    await expect(workbench.claimVerdict(1)).toHaveText(/^(Holds|Cannot be told)$/)
    const workspace = await workspaceOn(workbench)
    await workbench.expectClaim(1, saidOf(workspace, 1, read(text)))
    const [low, high] = answerTo(workspace, 1, read(text)).interval ?? [Number.NaN, Number.NaN]
    expect(low).toBeLessThan(0)
    expect(high).toBeGreaterThan(0)
  })

  test('cannot speak of the unfiltered waveform before it is said what the recording had passed', async ({
    workbench,
  }) => {
    const text = reviewedTable(true)
    await workbench.openFile(textFile('reviewed.csv', text))
    await workbench.editor().getByRole('button', { name: 'it is right' }).click()
    await workbench.token('add a stage to the chain').click()
    await workbench.editor().getByRole('button', { name: 'add Butterworth high-pass' }).click()
    await workbench.field('cutoff').fill('2')
    await workbench.closeEditor()
    await workbench.openClaims()
    await workbench.addClaim('a deflection that the filter makes')
    await expect(workbench.token('what the recording had passed')).toHaveText('not known in full')
    await expect(workbench.claimVerdict(1)).toHaveText('Cannot be told')
    await expect(workbench.claimReason(1)).toContainText('is not known in full')

    await workbench.edit('what the recording had passed')
    await workbench
      .editor()
      .getByText('only the stages that the protocol line says were in the data', { exact: true })
      .click()
    await workbench.closeEditor()
    await expect(workbench.token('what the recording had passed')).toHaveText('all stated in the protocol line')
    const workspace = await workspaceOn(workbench)
    const said = saidOf(workspace, 1, read(text))
    expect(answerTo(workspace, 1, read(text)).grounds.kind).not.toBe('filtered before')
    await workbench.expectClaim(1, said)
    await expect(workbench.claimToken(1, 'how the waveform is taken')).toHaveText('as measured in 40 trials')
  })
})

test('claims are added, changed, moved, removed and brought back by keyboard alone', async ({ workbench }) => {
  const { keyboard } = workbench.page
  await workbench.tabTo(/^Claims: /)
  await keyboard.press('Enter')
  await workbench.tabTo('a deflection that the filter makes')
  await keyboard.press('Enter')
  // the keyboard stands on the new claim's first phrase
  await expect(workbench.claimToken(1, 'amount claimed')).toBeFocused()
  await keyboard.press('Enter')
  await expect(workbench.field('amount claimed')).toBeFocused()
  await keyboard.press('ArrowUp')
  await keyboard.press('Shift+ArrowUp')
  await expect(workbench.claimToken(1, 'amount claimed')).toHaveText('1.6')
  await keyboard.press('Control+A')
  await keyboard.type('-1')
  await expect(workbench.editor().getByRole('alert')).toHaveText(
    'amount claimed must be 0 or more; the claim keeps 1.6',
  )
  await keyboard.press('Control+A')
  await keyboard.type('1.2')
  await expect(workbench.editor().getByRole('alert')).toHaveCount(0)
  await keyboard.press('Escape')
  await expect(workbench.claimToken(1, 'amount claimed')).toBeFocused()
  await workbench.tabTo('80 and 140 ms, window of the claim')
  await keyboard.press('Enter')
  await expect(workbench.field('from')).toBeFocused()
  await keyboard.press('ArrowDown')
  await keyboard.press('Tab')
  await keyboard.press('Control+A')
  await keyboard.type('160')
  await keyboard.press('Escape')
  const own = saying(
    1,
    { amount: 1.2, window: { fromMs: 78, toMs: 160 } } as Partial<ClaimForm>,
    claiming('deflection'),
  )
  await workbench.expectClaim(1, saidOf(own, 1))

  await workbench.tabTo('+ add a claim')
  await keyboard.press('Enter')
  await expect.poll(() => workbench.focusedName()).toBe(claimFormName(CLAIM_FORMS[0]))
  await workbench.tabTo(claimFormName('onset'))
  await keyboard.press('Enter')
  await expect(workbench.claimToken(2, 'earlier or later')).toBeFocused()
  await workbench.tabTo('move claim 2 up')
  await keyboard.press('Enter')
  await expect(workbench.claimSentence(1)).toContainText('The filter moves the onset')
  // at the end of the list the only way is back
  await expect.poll(() => workbench.focusedName()).toBe('move claim 1 down')
  await keyboard.press('Enter')
  await expect(workbench.claimSentence(2)).toContainText('The filter moves the onset')
  await expect.poll(() => workbench.focusedName()).toBe('move claim 2 up')

  await workbench.tabTo('duplicate claim 2')
  await keyboard.press('Enter')
  await expect(workbench.claims()).toHaveCount(3)
  await workbench.tabTo('remove claim 2')
  await keyboard.press('Enter')
  await expect(workbench.claims()).toHaveCount(2)
  await expect.poll(() => workbench.focusedName()).toBe('remove claim 2')
  await keyboard.press('Enter')
  await expect.poll(() => workbench.focusedName()).toBe('remove claim 1')
  await keyboard.press('Enter')
  await expect(workbench.claims()).toHaveCount(0)
  await expect.poll(() => workbench.focusedName()).toBe(claimFormName(CLAIM_FORMS[0]))

  await keyboard.press('Control+Z')
  await expect(workbench.claims()).toHaveCount(1)
  await workbench.expectClaim(1, saidOf(own, 1))
  // removed twice, duplicated, moved twice, added: each is one step
  for (let i = 0; i < 6; i++) await keyboard.press('Control+Z')
  await expect(workbench.claims()).toHaveCount(1)
  await expect(workbench.claimSentence(1)).toContainText('1.2 µV between 78 and 160 ms')
  // and so is a window, both its ends
  await keyboard.press('Control+Z')
  await expect(workbench.claimSentence(1)).toContainText('1.2 µV between 80 and 140 ms')
})

test('all ten forms can be added, and each gets the verdict, the number and the reason of the core', async ({
  workbench,
}) => {
  test.setTimeout(90_000)
  const all = claiming(...CLAIM_FORMS)
  await workbench.openClaims()
  for (const form of CLAIM_FORMS) await workbench.addClaim(claimFormName(form))
  await expect(workbench.claims()).toHaveCount(10)
  for (let place = 1; place <= 10; place++) {
    // ten claims take their turns at one worker
    await expect(workbench.claimVerdict(place)).toHaveText(/^(Holds|Does not hold|Cannot be told)$/, {
      timeout: 30_000,
    })
    await workbench.expectClaim(place, saidOf(all, place))
  }
  expect(new Set(await sentencesOf(workbench)).size).toBe(10)
  // what cannot be asked is said at the claim, and the others stand
  await workbench.editClaim(CLAIM_FORMS.indexOf('attenuation') + 1, 'frequency')
  await workbench.field('frequency').fill('4000')
  await expect(
    workbench
      .claim(CLAIM_FORMS.indexOf('attenuation') + 1)
      .getByRole('alert')
      .first(),
  ).toHaveText('The frequency must lie between 0 and 250 (half the sampling rate), was 4000.')
  await expect(workbench.claimVerdict(CLAIM_FORMS.indexOf('attenuation') + 1)).toHaveCount(0)
  await expect(workbench.claimVerdict(1)).toBeVisible()
  await expect(workbench.button('save as HTML')).toBeDisabled()
})

test('an editor offers nothing that a claim cannot be', async ({ workbench }) => {
  await workbench.openClaims()
  await workbench.addClaim(claimFormName('change'))
  await workbench.editClaim(1, 'unit of the amount')
  await workbench.choose('unit of the amount', '% of its value before')
  await workbench.editClaim(1, 'what is changed')
  await workbench.choose('what is changed', 'peak latency')
  // a latency has no per cent
  await expect(workbench.claimToken(1, 'unit of the amount')).toHaveText('ms')
  await workbench.editClaim(1, 'unit of the amount')
  await expect(workbench.editor().getByRole('radio', { name: '% of its value before' })).toBeDisabled()
  await workbench.addClaim(claimFormName('effect'))
  await workbench.editClaim(2, 'first condition')
  await workbench.choose('first condition', 'frequent standards')
  await expect(workbench.claimToken(2, 'second condition')).toHaveText('rare targets')
  await workbench.editClaim(2, 'smallest effect that counts')
  await workbench.field('smallest effect that counts').fill('0')
  await expect(workbench.editor().getByRole('alert')).toHaveText(
    'smallest effect that counts must be more than 0; the claim keeps 0.5',
  )
  await expect(workbench.claimToken(2, 'smallest effect that counts')).toHaveText('0.5 µV')
  await expect(workbench.claimVerdict(2)).toBeVisible()
})

test('a claim keeps the pinned chain that it is about when the pin goes, over a reload and in a link', async ({
  workbench,
  context,
  browser,
}) => {
  await context.grantPermissions(['clipboard-read', 'clipboard-write'])
  await workbench.button('pin this chain').click()
  await workbench.openClaims()
  await workbench.addClaim('a deflection that the filter makes')
  await changeCutoff(workbench, '0.1')
  await expect(workbench.claimVerdict(1)).toHaveText('Does not hold')
  await workbench.editClaim(1, 'chain of the claim')
  await workbench.editor().getByText('pinned: high-pass 1 Hz', { exact: true }).click()
  await workbench.closeEditor()
  await expect(workbench.claimToken(1, 'chain of the claim')).toHaveText('high-pass 1 Hz')
  await workbench.button('unpin high-pass 1 Hz').click()

  const start = claiming('deflection')
  const { chain, extent } = start
  const kept = withCutoff(
    changingClaim(1, (claim) => ({ ...claim, on: { name: 'high-pass 1 Hz', chain, extent } as Claim['on'] }))(start),
    0.1,
  )
  const said = saidOf(kept, 1)
  expect(said.verdict).toBe('Holds')
  expect(said.reason).toContain('the chain “high-pass 1 Hz”')
  await workbench.expectClaim(1, said)
  await expect(workbench.claimChange(1)).toHaveText(changeOf(kept, 1).sentence)

  await workbench.reload()
  await workbench.openClaims()
  await workbench.expectClaim(1, said)

  await workbench.button('Copy link').click()
  await expect(workbench.page.getByText(/^The link to this workspace is copied\./)).toBeVisible()
  const link = await workbench.page.evaluate(() => navigator.clipboard.readText())
  const elsewhere = await browser.newContext()
  try {
    const other = new Workbench(await elsewhere.newPage())
    await other.page.goto(link)
    await other.ready()
    await other.openClaims()
    await other.expectClaim(1, said)
    await expect(other.claimToken(1, 'chain of the claim')).toHaveText('high-pass 1 Hz')
  } finally {
    await elsewhere.close()
  }
})

test('the dossier holds every claim with its verdict, number, figure and assumptions, and stands alone', async ({
  workbench,
  context,
}) => {
  const { page } = workbench
  await workbench.chooseTheme('dark')
  await workbench.openClaims()
  await page.getByRole('textbox', { name: 'title of the claims' }).fill('Answer to reviewers & “others” <2>')
  const forms: Form[] = ['deflection', 'onset', 'effect', 'twin']
  for (const form of forms) await workbench.addClaim(claimFormName(form))
  await workbench.claim(2).getByRole('textbox', { name: 'made in' }).fill('Reviewer 2, comment 4')
  const all = claiming(...forms)
  await expect(workbench.button('save as HTML')).toBeEnabled({ timeout: 30_000 })

  const html = await workbench.saved(() => workbench.button('save as HTML').click())
  expect(html.name).toBe('Answer-to-reviewers-others-2.html')
  await expect(page.getByRole('region', { name: 'dossier' }).getByRole('status')).toHaveText(`saved as ${html.name}`)
  const text = html.bytes.toString('utf8')
  expect(text).not.toMatch(/<script/i)

  // Read by a browser: nothing is asked for (the fixture watches), nothing is mended, nothing points outside.
  const dossier = await context.newPage()
  await dossier.setContent(text)
  await expect(dossier).toHaveTitle('Answer to reviewers & “others” <2>')
  await expect(dossier.getByRole('heading', { level: 1 })).toHaveText('Answer to reviewers & “others” <2>')
  const found = await dossier.evaluate(() => {
    const all = [...document.querySelectorAll('*')]
    const ids = all.map(({ id }) => id).filter(Boolean)
    const attributes = all.flatMap((node) => [...node.attributes])
    return {
      elements: all.length,
      twice: ids.filter((id, i) => ids.indexOf(id) !== i),
      outside: attributes
        .filter(({ name, value }) => !name.startsWith('xmlns') && /(?:https?:)?\/\//.test(value))
        .map(({ name, value }) => `${name}=${value}`),
      dangling: attributes
        .filter(({ name, value }) => name.endsWith('href') && !ids.includes(value.replace(/^#/, '')))
        .map(({ value }) => value),
      handlers: attributes.filter(({ name }) => name.startsWith('on')).length,
    }
  })
  const tags = text.replace(/<style>[\s\S]*?<\/style>/, '<style></style>').match(/<[a-z][^>]*>/gi) ?? []
  expect(found).toEqual({ elements: tags.length, twice: [], outside: [], dangling: [], handlers: 0 })
  for (let place = 1; place <= forms.length; place++) {
    const section = dossier.getByRole('region', { name: `Claim ${place}`, exact: true })
    const { verdict, reason } = saidOf(all, place)
    await expect(section).toContainText(`Verdict${verdict}`)
    await expect(section).toContainText(reason)
    await expect(section).toContainText(changeOf(all, place).sentence)
    // the effect is about a second condition
    await expect(section.getByRole('link')).toHaveText(`Assumptions ${forms[place - 1] === 'effect' ? 'B' : 'A'}`)
    await expect(section.locator('figure svg')).toBeVisible()
    await expect(section.locator('figure svg')).toContainText('now 1 Hz')
    // a light page, though the dark theme was on
    await expect(section.locator('figure svg rect').first()).toHaveAttribute('fill', '#f6f4ee')
  }
  await expect(dossier.getByRole('region', { name: 'Claim 2' })).toContainText('Reviewer 2, comment 4')
  await expect(dossier.getByRole('region', { name: 'Assumptions' })).toContainText('Butterworth high-pass filter')
  const { violations } = await new AxeBuilder({ page: dossier }).analyze()
  expect(violations.map(({ id, nodes }) => `${id}: ${nodes.map(({ target }) => target.join(' ')).join(', ')}`)).toEqual(
    [],
  )
  await dossier.setViewportSize({ width: 390, height: 844 })
  expect(await dossier.evaluate(() => document.documentElement.scrollWidth - innerWidth)).toBeLessThanOrEqual(0)
  await dossier.close()

  const markdown = await workbench.saved(() => workbench.button('save as Markdown').click())
  expect(markdown.name).toBe('Answer-to-reviewers-others-2.md')
  const lines = markdown.bytes.toString('utf8').split('\n')
  expect(lines[0]).toMatch(/^# Answer to reviewers /)
  forms.forEach((_, i) => {
    expect(lines).toContain(`## Claim ${i + 1}`)
    expect(
      lines.filter((line) => line.startsWith(`| ${i + 1} | `) && line.includes(saidOf(all, i + 1).verdict)),
    ).toHaveLength(1)
  })
  expect(lines.join('\n')).not.toMatch(/https?:/)
})

/** A built waveform of few samples, so that a whole fit takes seconds. */
function smallFit(samplingRateHz = 100): Workspace {
  const start = firstSight()
  if (start.source.kind !== 'built') throw new Error('the first sight is built')
  const source = { ...start.source, samplingRateHz, epoch: { fromMs: -200, toMs: 720 } }
  const chain = start.chain.filter(({ design }) => design === 'butterworth')
  return addingClaim('late-only', null)({ ...start, source, chain })
}

test('a long search says how far it is, stops where it is told to, and goes on from there to its end', async ({
  workbench,
}) => {
  const workspace = smallFit(250)
  await workbench.openFile(fileOf(workspace))
  await workbench.openClaims()
  const progress = workbench.claimChange(1)
  await expect(workbench.claimVerdict(1)).toBeVisible()
  await expect(progress).toHaveText(/^Looking for what would change it: \d+ of about \d+ steps cancel$/)
  await workbench.claim(1).getByRole('button', { name: 'cancel' }).click()
  await expect(progress).toHaveText(/^Stopped after \d+ of about \d+ steps\. go on$/)
  const stopped = await progress.textContent()
  await workbench.expectClaim(1, saidOf(workspace, 1))
  await expect(workbench.button('save as HTML')).toBeDisabled()
  await workbench.page.waitForTimeout(700)
  expect(await progress.textContent()).toBe(stopped)

  await workbench.claim(1).getByRole('button', { name: 'go on' }).click()
  const counted = async () => Number(/ (\d+) of about/.exec((await progress.textContent()) ?? '')?.[1] ?? 1000)
  await expect.poll(counted).toBeGreaterThan(Number(/after (\d+) of/.exec(stopped ?? '')?.[1]))
  await expect(workbench.button('save as HTML')).toBeEnabled({ timeout: 45_000 })
  await expect(progress).toHaveText(/values were tried|changes the answer|^With the cutoff|^It /)
  await expect(workbench.claim(1).getByText('Anywhere before', { exact: true })).toBeVisible()
})

test.describe('the desk', () => {
  test.describe.configure({ timeout: 120_000 })

  test('has nothing for axe to find with an editor, the late-only panel and the calibration table open, in either theme', async ({
    workbench,
  }) => {
    const workspace = addingClaim('deflection', null)(smallFit())
    await workbench.openFile(fileOf(workspace))
    await workbench.openClaims()
    await expect(workbench.button('save as HTML')).toBeEnabled({ timeout: 30_000 })
    await workbench.claim(1).getByText('How often is this fit wrong?').click()
    await expect(workbench.claim(1).getByRole('table')).toBeVisible()
    await expect(workbench.claim(1).getByRole('img', { name: 'Claim 1: other onsets' })).toBeVisible()
    await workbench.editClaim(2, 'window of the claim')
    await expectAccessible(workbench)
    await workbench.closeEditor()
    await workbench.editClaim(1, 'chain of the claim')
    await expectAccessible(workbench)
  })

  for (const [width, height] of [
    [1024, 768],
    [390, 844],
  ])
    test(`does not scroll sideways at ${width} × ${height}, with every form and an editor`, async ({ workbench }) => {
      await workbench.page.setViewportSize({ width, height })
      const small = smallFit(100)
      const workspace = CLAIM_FORMS.filter((form) => form !== 'late-only').reduce(
        (before, form) => addingClaim(form, null)(before),
        small,
      )
      await workbench.openFile(fileOf(workspace))
      await workbench.openClaims()
      await expect(workbench.claims()).toHaveCount(10)
      await expect(workbench.button('save as HTML')).toBeEnabled({ timeout: 60_000 })
      await expectNoSidewaysScrolling(workbench)
      await workbench.claim(1).getByText('How often is this fit wrong?').click()
      await expectNoSidewaysScrolling(workbench)
      await workbench.editClaim(3, 'amount claimed')
      await expect(workbench.field('amount claimed')).toBeInViewport()
      await expectNoSidewaysScrolling(workbench)
      await inBothThemes(workbench, () => expectNoSidewaysScrolling(workbench))
    })
})
