import { readFileSync } from 'node:fs'
import { expect, expectAccessible, test } from './fixtures.ts'
import { textFile } from './page-models/workbench.ts'

const table = textFile(
  'two-conditions.csv',
  readFileSync(new URL('./tables/two-conditions.csv', import.meta.url), 'utf8'),
)

// Reading the whole page takes seconds, twice a journey.
test.describe.configure({ timeout: 120_000 })

test('axe finds nothing at first sight, in either theme', async ({ workbench }) => {
  await expectAccessible(workbench)
})

test('axe finds nothing while editors are open', async ({ workbench }) => {
  await workbench.edit('stage 2, cutoff')
  await expectAccessible(workbench)
  await workbench.edit('components of the waveform')
  await expectAccessible(workbench)
})

test('axe finds nothing while the help is open', async ({ workbench }) => {
  await workbench.page.keyboard.press('?')
  await expect(workbench.page.getByRole('region', { name: 'Help' })).toBeVisible()
  await expectAccessible(workbench)
})

test('axe finds nothing beside an error, with the last good figures dimmed', async ({ workbench }) => {
  await workbench.edit('stage 2, cutoff')
  await workbench.field('cutoff').fill('300')
  await expect(workbench.problems().first()).toBeVisible()
  await expect(workbench.figures()).toHaveClass(/stale/)
  await expectAccessible(workbench)
})

test('axe finds nothing with a recorded table: how it was read, conditions and a difference', async ({ workbench }) => {
  await workbench.openFile(table)
  await expect(workbench.editor()).toContainText('2 channels, 2 conditions')
  await expectAccessible(workbench)
  await workbench.edit('conditions and channel shown')
  await workbench.editor().getByRole('checkbox', { name: 'difference wave' }).check()
  await expectAccessible(workbench)
})
