import { expect, test } from './fixtures.ts'

test('the page opens under its name, without an error and without a request that leaves it', async ({ workbench }) => {
  await expect(workbench.page).toHaveTitle('Sidelobe')
  await expect(workbench.heading()).toBeVisible()
})
