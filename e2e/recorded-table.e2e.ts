import { existsSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { printed, printedChange } from './core-numbers.ts'
import { expect, test } from './fixtures.ts'

const here = (path: string) => fileURLToPath(new URL(path, import.meta.url))
const data = process.env.SIDELOBE_DATA ?? here('../../shared/data')
const average = join(data, 'uci-vep-dev', 'co2c0000345_S1obj_average.csv')

interface Peak {
  latencyMs: number
  amplitudeUv: number
}

// Source of the waveform: UCI Machine Learning Repository, EEG Database (Begleiter, 1997), mean of 20 trials, channel PO7.
// Source of the numbers: SciPy's sosfiltfilt, peaks by a script of its own (test/reference/make_vep_lowpass.py).
const reference = JSON.parse(readFileSync(here('../test/reference/vep-lowpass.json'), 'utf8')).cases[0] as {
  designCutoffHz: number
  peaks: { name: string; before: Peak; after: Peak }[]
}

test('a real table is opened, a channel chosen and a low-pass added by keyboard only, and the peak changes as in SciPy', async ({
  workbench,
}) => {
  test.skip(!existsSync(average), `the recordings are not here (${average}): SIDELOBE_DATA names their folder`)
  const { page } = workbench
  const { keyboard } = page

  const chooser = page.waitForEvent('filechooser')
  await workbench.tabTo('Open')
  await keyboard.press('Enter')
  await (await chooser).setFiles(average)

  // What was guessed is shown for confirmation.
  await expect(workbench.editor().getByRole('heading')).toHaveText('co2c0000345_S1obj_average.csv')
  await expect(workbench.editor()).toContainText('64 channels, 1 condition, 256 samples at 256 Hz, 0 to 996.09 ms')
  await expect(workbench.editor()).toContainText('time in ms')
  await expect(workbench.editor()).toContainText('amplitude in µV')
  await expect(workbench.editor()).toContainText('inferred: ')
  await workbench.tabTo('it is right')
  await keyboard.press('Enter')
  await expect(workbench.button('Esc closes')).toHaveCount(0)

  // The channel, by typing its name in the menu.
  await workbench.tabTo(/condition and channel$/)
  await keyboard.press('Enter')
  await expect.poll(() => workbench.focusedName()).toBe('channel')
  await keyboard.type('PO7')
  await expect(workbench.token('condition and channel')).toHaveText('PO7 of co2c0000345_S1obj_average.csv')
  await keyboard.press('Escape')
  await expect(workbench.token('condition and channel')).toBeFocused()

  // A table brings no history: nothing is applied until it is said.
  await expect(workbench.page.getByText('No filter is applied here: before and after are the same.')).toBeVisible()
  await workbench.tabTo(/add a stage to the chain$/)
  await keyboard.press('Enter')
  await expect.poll(() => workbench.focusedName()).toBe('add Butterworth high-pass')
  await workbench.tabTo('add Butterworth low-pass')
  await keyboard.press('Enter')

  // Slider first, then the number beside it.
  await expect.poll(() => workbench.focusedName()).toBe('cutoff')
  await keyboard.press('ArrowRight')
  await expect(workbench.token('stage 1, cutoff')).toHaveText('30.6 Hz')
  await keyboard.press('Tab')
  await keyboard.press('Control+A')
  await keyboard.type('20')
  await expect(workbench.token('stage 1, cutoff')).toHaveText('20 Hz')
  await expect(workbench.editor()).toContainText(`Design cutoff ${reference.designCutoffHz} Hz.`)

  // The order, up and down again.
  await keyboard.press('Escape')
  await expect(workbench.token('stage 1, cutoff')).toBeFocused()
  await keyboard.press('Shift+Tab')
  await keyboard.press('Shift+Tab')
  await expect(workbench.token('stage 1, order')).toBeFocused()
  await keyboard.press('Enter')
  await expect.poll(() => workbench.focusedName()).toBe('order of one pass')
  await keyboard.press('ArrowUp')
  await expect(workbench.token('stage 1, order')).toHaveText('order 3 per pass')
  await keyboard.press('ArrowDown')
  await expect(workbench.token('stage 1, order')).toHaveText('order 2 per pass')
  await keyboard.press('Escape')

  expect(await workbench.sentenceText()).toContain(
    'Offline it passed a Butterworth low-pass of order 2 per pass, run both ways, half-amplitude 20 Hz after both passes.',
  )
  const n1 = reference.peaks.find((peak) => peak.name === 'N1')
  if (!n1) throw new Error('the reference has the negative peak N1')
  const row = (name: string) => workbench.readoutRow(new RegExp(`^${name} `)).getByRole('cell')
  await expect(row('peak amplitude').nth(0)).toHaveText(`${printed(n1.before.amplitudeUv, 2)}µV`)
  await expect(row('peak amplitude').nth(1)).toHaveText(`${printed(n1.after.amplitudeUv, 2)}µV`)
  await expect(row('peak amplitude').nth(2)).toHaveText(
    `${printedChange(n1.after.amplitudeUv - n1.before.amplitudeUv, 2)}µV`,
  )
  await expect(row('peak latency').nth(0)).toHaveText(`${printed(n1.before.latencyMs, 1)}ms`)
  await expect(row('peak latency').nth(1)).toHaveText(`${printed(n1.after.latencyMs, 1)}ms`)
  await expect(row('peak latency').nth(2)).toHaveText(`${printedChange(n1.after.latencyMs - n1.before.latencyMs, 1)}ms`)

  // A loaded average is filtered as epochs: the page says what leans on samples that had to be invented.
  expect(await workbench.sentenceText()).toContain('The chain ran on the cut-out epochs.')
  await expect(page.getByText(/Filtered as epochs, /)).toBeVisible()
  expect(await workbench.descriptionOf('Waveform over time')).toContain(
    'Hatched because it leans on samples that are not in the data: ',
  )
  await expect(workbench.chainTable()).toContainText(/unseen share \d+\.\d %/)
})

test('a score at the epoch’s edge leans on invented samples, and the page says how much of it', async ({
  workbench,
}) => {
  test.skip(!existsSync(average), `the recordings are not here (${average}): SIDELOBE_DATA names their folder`)
  await workbench.openFile(average)
  await workbench.editor().getByRole('button', { name: 'it is right' }).click()
  await workbench.token('add a stage to the chain').click()
  await workbench.editor().getByRole('button', { name: 'add Butterworth low-pass' }).click()
  await workbench.field('cutoff').fill('20')
  await workbench.edit('score window')
  await workbench.field('from').fill('0')
  await workbench.field('to').fill('8')
  await workbench.closeEditor()
  const cell = workbench.chainTable().getByRole('cell', { name: /unseen share/ })
  const share = Number(/unseen share (\d+\.\d) %/.exec((await cell.textContent()) ?? '')?.[1])
  // A symmetric kernel centred in the first three samples has not quite half of its weight before them.
  expect(share, 'unseen share, per cent').toBeGreaterThan(20)
  expect(share, 'unseen share, per cent').toBeLessThan(50)
  await expect(
    workbench.page.getByText(
      `Filtered as epochs, ${Math.round(share)} % of the score’s weight falls on samples outside the data, which had to be invented.`,
    ),
  ).toBeVisible()
})
