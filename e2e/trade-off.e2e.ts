import type { Locator } from '@playwright/test'
import { expect, expectAccessible, test } from './fixtures.ts'
import type { Workbench } from './page-models/workbench.ts'

test.describe.configure({ timeout: 120_000 })

/** The late positivity, scored where it is: 300–500 ms, and the desk open with its whole map. */
async function openDesk(workbench: Workbench): Promise<void> {
  const { page } = workbench
  await workbench.edit('score window')
  await workbench.field('from').fill('300')
  await workbench.field('to').fill('500')
  await workbench.closeEditor()
  await workbench.button(/^Trade-off: /).click()
  await expect(page.locator('.map-progress')).toHaveText('480 filters.')
}

const cursor = ({ page }: Workbench): Locator => page.getByRole('button', { name: /^Cell of the map: / })
const summary = ({ page }: Workbench): Locator => page.locator('.trade-off-desk .summary')

test('the allowed region is found, a filter picked from it by keyboard, and everything follows; undo takes it back', async ({
  workbench,
}) => {
  const { page } = workbench
  await openDesk(workbench)
  await expect(summary(workbench)).toContainText(
    /With 40 trials, high-pass cutoffs \(order 2 per pass, both ways\) up to [\d.]+ Hz .* keep the bias within 0\.2 µV/,
  )
  // the filter in the chain, 1 Hz, is the cell to begin with, and it is over the limit
  await expect(cursor(workbench)).toHaveAccessibleName(/^Cell of the map: 1\.04 Hz, order 2: .*over a limit/)
  const before = await workbench.sentenceText()
  const readout = await workbench.readout()

  await cursor(workbench).focus()
  const text = (await summary(workbench).textContent()) ?? ''
  const best = Number(/of these ([\d.]+) Hz has the least total error/.exec(text)?.[1])
  expect(best).toBeGreaterThan(0.01)
  for (let i = 0; i < 60; i++) {
    const name = (await cursor(workbench).getAttribute('aria-label')) ?? ''
    if (name.startsWith(`Cell of the map: ${best} Hz,`)) break
    await page.keyboard.press('ArrowLeft')
  }
  await expect(cursor(workbench)).toHaveAccessibleName(/keeps the limits/)
  await page.keyboard.press('Enter')

  await expect(workbench.token('stage 2, cutoff')).toHaveText(`${best} Hz`)
  expect((await workbench.chainRows())[1][1]).toContain(String(best))
  const picked = await workbench.readout()
  expect(Math.abs(numberOf(picked[0].change))).toBeLessThanOrEqual(0.2)
  // the map's bias is the readout's change
  const said = /bias (−?\+?[\d.]+) µV/.exec((await cursor(workbench).getAttribute('aria-label')) ?? '')
  expect(numberOf(picked[0].change)).toBeCloseTo(numberOf(said?.[1] ?? ''), 1)
  await expect(cursor(workbench)).toBeFocused()

  await page.keyboard.press('Control+Z')
  await expect.poll(() => workbench.sentenceText()).toBe(before)
  await workbench.expectReadout(readout)
})

test('order and trials move the answer without computing another map', async ({ workbench }) => {
  const { page } = workbench
  await openDesk(workbench)
  await cursor(workbench).focus()
  await page.keyboard.press('ArrowUp')
  await expect(summary(workbench)).toContainText('(order 3 per pass, both ways)')
  await page.getByRole('textbox', { name: 'number of trials of the map' }).fill('400')
  await expect(workbench.token('number of trials')).toHaveText('400 trials')
  await expect(summary(workbench)).toContainText('With 400 trials')
  await expect(page.locator('.map-progress')).toHaveText('480 filters.')
})

test('the worst of many waveforms allows less than the waveform as built', async ({ workbench }) => {
  await openDesk(workbench)
  const allowed = async () =>
    Number(/^(\d+) of 480/.exec((await workbench.descriptionOf('Trade-off map')).split('roll-offs. ')[1])?.[1])
  const built = await allowed()
  await workbench.edit('waveforms of the map')
  await workbench.choose('waveforms of the map', 'the worst of 65 waveforms')
  await expect(workbench.page.locator('.map-progress')).toHaveText('480 filters, over 65 waveforms.')
  await expect(summary(workbench)).toContainText('the worst of 65 waveforms')
  const worst = await allowed()
  expect(worst).toBeGreaterThan(0)
  expect(worst).toBeLessThan(built)
})

test('every limit in force has its line with its name, none over another or outside the map', async ({ workbench }) => {
  const { page } = workbench
  await openDesk(workbench)
  const names = page.locator('.limit-name')
  await expect(names).toHaveText(['bias 0.2 µV'])
  await workbench.edit('limits of the map')
  for (const [limit, most] of [
    ['noise of the score', '1'],
    ['total error', '1.03'],
  ]) {
    await workbench.editor().getByRole('checkbox', { name: limit }).check()
    await workbench.field(`${limit} within`).fill(most)
  }
  await workbench.closeEditor()
  await expect
    .poll(async () => [...new Set(await names.allTextContents())].sort())
    .toEqual(['bias 0.2 µV', 'noise 1 µV', 'total error 1.03 µV'])
  // no two lines have the same dash, so that none is told by its colour
  const dashes = await page
    .locator('.limit-line')
    .evaluateAll((lines) => lines.map((line) => line.getAttribute('stroke-dasharray')))
  expect(new Set(dashes).size).toBe(3)
  expect(await workbench.descriptionOf('Trade-off map')).toContain(
    'Lines at the limits: bias 0.2 µV, noise 1 µV and total error 1.03 µV.',
  )
  const map = await page.getByRole('group', { name: 'Trade-off map' }).boundingBox()
  const boxes = await names.evaluateAll((texts) => texts.map((text) => text.getBoundingClientRect().toJSON()))
  if (!map) throw new Error('no map')
  boxes.forEach((a, i) => {
    expect(a.left).toBeGreaterThanOrEqual(map.x)
    expect(a.right).toBeLessThanOrEqual(map.x + map.width)
    expect(a.top).toBeGreaterThanOrEqual(map.y)
    for (const b of boxes.slice(0, i))
      expect(a.left >= b.right || b.left >= a.right || a.top >= b.bottom || b.top >= a.bottom).toBe(true)
  })
  await expectAccessible(workbench)
})

test('kinds of filter stand side by side; one picked from the second map goes into the chain by keyboard, and undo takes it back', async ({
  workbench,
}) => {
  const { page } = workbench
  await openDesk(workbench)
  await workbench.edit('kinds of filter beside it')
  const editor = workbench.editor()
  for (const kind of ['Butterworth run forward', 'zero-phase windowed sinc']) {
    await editor.getByRole('checkbox', { name: kind }).focus()
    await page.keyboard.press('Space')
  }
  await expectAccessible(workbench)
  await workbench.closeEditor()
  await expect(page.locator('.map-progress')).toHaveText('1320 filters in 3 maps.')
  const lines = page.locator('.map-line')
  await expect(lines).toHaveText([
    /^Order 2: .* keep the limit, least total error [\d.]+ µV at [\d.]+ Hz/,
    /^Order 2: 0\.01 Hz keeps the limit/,
    /^0\.2 Hz wide: /,
  ])
  // the same cutoffs in all of them
  for (const kind of ['Butterworth run both ways', 'Butterworth run forward', 'zero-phase windowed sinc'])
    expect(await workbench.descriptionOf(`Trade-off map, ${kind}`)).toContain('over 60 cutoffs')
  await expectAccessible(workbench)

  const before = await workbench.sentenceText()
  const second = page.getByRole('button', { name: /^Cell of the map of Butterworth run forward: / })
  await second.focus()
  await page.keyboard.press('Home')
  await page.keyboard.press('ArrowDown')
  await expect(second).toHaveAccessibleName(/: 0\.01 Hz, order 1: .*keeps the limits/)
  await expect(summary(workbench)).toContainText('(order 1, forward)')
  const said = /bias (−?\+?[\d.]+) µV/.exec((await second.getAttribute('aria-label')) ?? '')
  await page.keyboard.press('Enter')
  await expect(workbench.token('stage 2, cutoff')).toHaveText('0.01 Hz')
  expect(await workbench.sentenceText()).toContain('order 1, run forward')
  const [score] = await workbench.readout()
  expect(numberOf(score.change)).toBeCloseTo(numberOf(said?.[1] ?? ''), 1)
  await expect(second).toBeFocused()
  // no other map was asked for
  await expect(page.locator('.map-progress')).toHaveText('1320 filters in 3 maps.')

  await page.keyboard.press('Control+Z')
  await expect.poll(() => workbench.sentenceText()).toBe(before)
  const csv = await workbench.saved(() => workbench.button('save the maps as CSV').click())
  expect(csv.bytes.toString('utf8').trim().split(/\r?\n/)).toHaveLength(1 + 1320 + 1)
})

test('the map is saved as SVG, PNG and CSV', async ({ workbench }) => {
  const { page } = workbench
  await openDesk(workbench)
  await workbench.button('save Map').click()
  const svg = await workbench.saved(() => workbench.button('save Map as SVG').click())
  expect(svg.name).toBe('trade-off-map.svg')
  expect(svg.bytes.toString('utf8')).toContain('keep the bias within 0.2 µV')
  await workbench.button('save Map').click()
  const png = await workbench.saved(() => workbench.button('save Map as PNG').click())
  expect([...png.bytes.subarray(1, 4)]).toEqual([...Buffer.from('PNG')])
  const csv = await workbench.saved(() => workbench.button('save the map as CSV').click())
  const lines = csv.bytes.toString('utf8').trim().split(/\r?\n/)
  expect(lines).toHaveLength(1 + 480 + 1)
  expect(lines[0]).toContain('cutoff (Hz),order of one pass,bias (µV)')
  expect(page.url()).toContain('127.0.0.1')
})

test('the map of a latency, whose noise is drawn, is stopped with what it has and goes on from there', async ({
  workbench,
}) => {
  const { page } = workbench
  await openDesk(workbench)
  await workbench.edit('score')
  await workbench.choose('kind of score', 'peak latency')
  await workbench.choose('side', 'positive')
  await workbench.closeEditor()
  const progress = page.locator('.map-progress')
  const done = async () => Number(/(\d+) of 480 filters/.exec((await progress.textContent()) ?? '')?.[1] ?? 0)
  await cursor(workbench).focus()
  await page.keyboard.press('ArrowDown')
  await page.keyboard.press('Home')
  await expect(cursor(workbench)).toHaveAccessibleName(/: 0\.01 Hz, order 1: .*noise [\d.]+ ± [\d.]+ ms/)
  await page.getByRole('button', { name: 'cancel', exact: true }).click()
  await expect(progress).toHaveText(/^Stopped at \d+ of 480 filters\. go on$/)
  const stopped = await done()
  expect(stopped).toBeGreaterThan(0)
  expect(stopped).toBeLessThan(480)
  // the coarse map has its answer already
  await expect(summary(workbench)).toContainText('With 40 trials')
  await page.waitForTimeout(400)
  expect(await done()).toBe(stopped)
  await page.getByRole('button', { name: 'go on', exact: true }).click()
  await expect(progress).toContainText('Computing: ')
  await expect.poll(done).toBeGreaterThan(stopped)
  await page.getByRole('button', { name: 'cancel', exact: true }).click()
  await expect(progress).toContainText('Stopped at')
})

test('a number that it cannot take is refused beside its field, and what holds stays on the desk', async ({
  workbench,
}) => {
  const { page } = workbench
  await openDesk(workbench)
  const said = (await summary(workbench).textContent()) ?? ''
  const trials = page.getByRole('textbox', { name: 'number of trials of the map' })
  for (const bad of ['0', '2.5', '-3']) {
    await trials.fill(bad)
    await expect(page.getByRole('alert').filter({ hasText: 'whole number from 1' })).toContainText('40 still holds')
    await expect(summary(workbench)).toHaveText(said)
  }
  await trials.fill('40')
  await workbench.edit('range of the map')
  await workbench.field('cutoffs from').fill('5')
  await expect(workbench.editor().getByRole('alert')).toContainText('not from 5 to 3 Hz: 0.01 to 3 Hz still holds')
  // whichever limit is written first: the two together are a range
  await workbench.field('to').fill('20')
  await expect(workbench.editor().getByRole('alert')).toHaveCount(0)
  await expect(workbench.token('range of the map')).toContainText('5 to 20 Hz')
})

test('a limit in µV is no limit of a latency, and both the readout and the desk say so', async ({ workbench }) => {
  const { page } = workbench
  await openDesk(workbench)
  await workbench.edit('limits of the map')
  await workbench.editor().getByRole('checkbox', { name: 'noise of the score' }).check()
  await workbench.closeEditor()
  await expect(workbench.token('limits of the map')).toHaveText('bias within 0.2 µV and noise within 1 µV')
  await workbench.edit('score')
  await workbench.choose('kind of score', 'peak latency')
  await workbench.choose('side', 'positive')
  await workbench.closeEditor()
  await expect(workbench.readoutRow(/^peak latency 300 to 500 ms/)).toContainText('the limit, in µV, does not apply')
  await expect(workbench.token('limits of the map')).toHaveText('no limit')
  await page.keyboard.press('Control+Z')
  await page.keyboard.press('Control+Z')
  await expect(workbench.token('limits of the map')).toHaveText('bias within 0.2 µV and noise within 1 µV')
})

test('interference locked to the event is told where it is not drawn: under the readout and at the map', async ({
  workbench,
}) => {
  const { page } = workbench
  await openDesk(workbench)
  await workbench.edit('noise of single trials')
  await workbench.button('add display refresh').click()
  await workbench.field('line 1, frequency').fill('11')
  await workbench.closeEditor()
  const note = page.getByText(/^Interference locked to the event \(11 Hz, 1 µV\)/)
  await expect(note).toContainText(/It adds [+−][\d.]+ µV to the score before the chain and [+−][\d.]+ µV after it/)
  await expect(page.getByText('Interference locked to the event is in the bias')).toBeVisible()
  await expectAccessible(workbench)
})

test('axe finds nothing on the desk and in the noise editor', async ({ workbench }) => {
  await openDesk(workbench)
  await expectAccessible(workbench)
  await workbench.edit('limits of the map')
  await expectAccessible(workbench)
  await workbench.edit('noise of single trials')
  await expectAccessible(workbench)
})

test('another noise is another noise of the score', async ({ workbench }) => {
  const row = workbench.readoutRow(/^noise of the score/)
  const before = await row.getByRole('cell').first().textContent()
  await workbench.edit('noise of single trials')
  await workbench.field('level at 1 Hz').fill('28')
  await expect(row.getByRole('cell').first()).not.toHaveText(before ?? '')
  await workbench.field('exponent').fill('9')
  await expect(workbench.editor().getByRole('alert')).toContainText('must lie between 0 and 4')
})

const numberOf = (text: string) => Number(text.replace('−', '-').replace(/[^\d.+-]/g, ''))
