import { firstSight, readoutOf } from './core-numbers.ts'
import { expect, test } from './fixtures.ts'

test('everything from the first Tab on can be done by keyboard: a cutoff, a window, theme, polarity and help', async ({
  workbench,
}) => {
  const { page } = workbench
  const { keyboard } = page

  await workbench.tabTo('1 Hz, stage 2, cutoff')
  await keyboard.press('Enter')
  await expect.poll(() => workbench.focusedName()).toBe('cutoff')
  await expect(workbench.editor().getByRole('slider', { name: 'cutoff' })).toBeFocused()
  await keyboard.press('ArrowRight')
  await expect(workbench.token('stage 2, cutoff')).toHaveText('1.02 Hz')
  await keyboard.press('Shift+ArrowLeft')
  await expect(workbench.token('stage 2, cutoff')).toHaveText('0.837 Hz')
  const chain = firstSight().chain.map((spec) =>
    spec.design === 'butterworth' ? { ...spec, cutoffsHz: [0.837] } : spec,
  )
  await workbench.expectReadout(readoutOf({ ...firstSight(), chain }))
  await keyboard.press('Escape')
  await expect(workbench.button('Esc closes')).toHaveCount(0)
  await expect(workbench.token('stage 2, cutoff')).toBeFocused()

  await workbench.tabTo('baseline, end')
  await keyboard.press('Shift+ArrowLeft')
  await expect(workbench.token('baseline')).toHaveText('−200 to −20 ms')
  await workbench.expectReadout(readoutOf({ ...firstSight(), chain, baseline: { fromMs: -200, toMs: -20 } }))
  await keyboard.press('Control+Z')
  await expect(workbench.token('baseline')).toHaveText('−200 to 0 ms')

  // Around to the header: from the last thing on the page the browser's Tab begins again.
  await page.getByRole('heading', { level: 1 }).click()
  await workbench.tabTo('Theme: light')
  await keyboard.press('Enter')
  await expect(workbench.button('Theme: dark')).toBeFocused()
  await expect(page.locator('html')).toHaveAttribute('data-theme', 'dark')
  await keyboard.press('Tab')
  await expect(workbench.button('Polarity: positive up')).toBeFocused()
  expect(await workbench.descriptionOf('Waveform over time')).toContain('positive up')
  await keyboard.press('Space')
  await expect(workbench.button('Polarity: positive down')).toBeFocused()
  expect(await workbench.descriptionOf('Waveform over time')).toContain('negative up')
  // The way of looking changes no number.
  await workbench.expectReadout(readoutOf({ ...firstSight(), chain }))

  await keyboard.press('?')
  const help = page.getByRole('region', { name: 'Help' })
  await expect(help).toBeVisible()
  await expect(help).toContainText('undo and redo')
  await expect(help).toContainText('For research planning, not for diagnosis.')
  await keyboard.press('Escape')
  await expect(help).toHaveCount(0)
  await expect(workbench.button('Polarity: positive down')).toBeFocused()
})

test('help opens from its button, and Escape or its own button closes it and hands the keyboard back', async ({
  workbench,
}) => {
  const { keyboard } = workbench.page
  const help = workbench.page.getByRole('region', { name: 'Help' })
  const button = workbench.button('Help')
  await button.focus()
  await keyboard.press('Enter')
  await expect(help).toBeVisible()
  await expect(button).toHaveAttribute('aria-expanded', 'true')
  await workbench.tabTo('close help')
  await keyboard.press('Enter')
  await expect(help).toHaveCount(0)
  await expect(button).toBeFocused()
})

test('a question mark typed into a field is no call for help', async ({ workbench }) => {
  await workbench.edit('stage 2, cutoff')
  await workbench.field('cutoff').press('?')
  await expect(workbench.page.getByRole('region', { name: 'Help' })).toHaveCount(0)
  await expect(workbench.field('cutoff')).toHaveAccessibleDescription(/is no number/)
})

test('what the keyboard stands on can be seen', async ({ workbench }) => {
  for (const name of ['1 Hz, stage 2, cutoff', 'score window, start', 'Help']) {
    await workbench.page.getByRole('heading', { level: 1 }).click()
    await workbench.tabTo(name)
    const seen = await workbench.page.evaluate(() => {
      const node = document.activeElement
      if (!node) return false
      const ring = node.querySelector('.plot-focus-ring') ?? node
      const style = getComputedStyle(ring)
      const outlined = style.outlineStyle !== 'none' && Number.parseFloat(style.outlineWidth) > 0
      const stroked = style.stroke !== 'none' && ring !== node && style.opacity !== '0' && style.visibility !== 'hidden'
      return outlined || stroked
    })
    expect(seen, `a ring around ${name}`).toBe(true)
  }
})

test('each action of a stage is there for the keyboard: move, switch off, duplicate, remove', async ({ workbench }) => {
  const { keyboard } = workbench.page
  const whole = await workbench.sentenceText()
  await workbench.token('stage 2, cutoff').focus()
  await keyboard.press('Enter')
  await workbench.tabTo('move down')
  await keyboard.press('Enter')
  await expect(workbench.token('stage 3, cutoff')).toHaveText('1 Hz')
  // Two filters applied one after the other are the same in either order.
  await workbench.expectReadout(readoutOf(firstSight()))
  await workbench.tabTo('move up')
  await keyboard.press('Enter')
  await expect(workbench.token('stage 2, cutoff')).toHaveText('1 Hz')
  expect(await workbench.sentenceText()).toBe(whole)

  await workbench.tabTo('switch off')
  await keyboard.press('Enter')
  const { chain } = firstSight()
  await workbench.expectReadout(
    readoutOf({ ...firstSight(), chain: chain.map((spec, i) => (i === 1 ? { ...spec, enabled: false } : spec)) }),
  )
  await expect(workbench.token('stage 2: Butterworth high-pass, switched off')).toBeVisible()
  await workbench.tabTo('switch on')
  await keyboard.press('Enter')
  await workbench.expectReadout(readoutOf(firstSight()))

  await workbench.tabTo('duplicate')
  await keyboard.press('Enter')
  await expect(workbench.token('stage 3, cutoff')).toHaveText('1 Hz')
  await workbench.expectReadout(readoutOf({ ...firstSight(), chain: [chain[0], chain[1], chain[1], chain[2]] }))
  await workbench.tabTo('remove')
  await keyboard.press('Enter')
  await workbench.expectReadout(readoutOf(firstSight()))
  expect(await workbench.sentenceText()).toBe(whole)
})
