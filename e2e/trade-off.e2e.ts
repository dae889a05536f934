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
    /With 40 trials, high-pass cutoffs up to [\d.]+ Hz .* \(order 2 per pass, both ways\) keep the bias within 0\.2 µV/,
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
