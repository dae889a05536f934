import { readFileSync } from 'node:fs'
import { printed } from './core-numbers.ts'
import { expect, test } from './fixtures.ts'
import { textFile } from './page-models/workbench.ts'

// Invented: two conditions and two channels, 250 Hz from −200 ms, in seconds, with semicolons and decimal commas.
const text = readFileSync(new URL('./tables/two-conditions.csv', import.meta.url), 'utf8')
const file = textFile('two-conditions.csv', text)

/** The table read a second time, in the plainest way. */
function column(condition: string, channel: 'PO7' | 'Cz'): { ms: number; uv: number }[] {
  const number = (cell: string) => Number(cell.replace(',', '.'))
  return text
    .trim()
    .split(/\r?\n/)
    .slice(1)
    .map((line) => line.split(';'))
    .filter((cells) => cells[0] === condition)
    .map((cells) => ({ ms: 1000 * number(cells[1]), uv: number(cells[channel === 'PO7' ? 2 : 3]) }))
}

function mean(of: { ms: number; uv: number }[], fromMs: number, toMs: number): number {
  const inside = of.filter(({ ms }) => ms > fromMs - 0.01 && ms < toMs + 0.01)
  return inside.reduce((sum, { uv }) => sum + uv, 0) / inside.length
}

const scoreOf = (of: { ms: number; uv: number }[], fromMs: number, toMs: number) =>
  mean(of, fromMs, toMs) - mean(of, -200, 0)

test('a dropped table with two conditions shows each, their difference and each channel with the values of its lines', async ({
  workbench,
}) => {
  await workbench.drop(file)
  await expect(workbench.editor()).toContainText('2 channels, 2 conditions, 250 samples at 250 Hz, −200 to 796 ms')
  await workbench.closeEditor()
  await expect(workbench.token('baseline')).toHaveText('−200 to 0 ms')

  await workbench.edit('score window')
  await workbench.field('from').fill('152')
  await workbench.field('to').fill('184')
  await workbench.closeEditor()
  const score = workbench.readoutRow('mean amplitude 152 to 184 ms').getByRole('cell').first()
  const faces = column('faces', 'PO7')
  const houses = column('houses', 'PO7')
  await expect(score).toHaveText(`${printed(scoreOf(faces, 152, 184), 2)}µV`)

  await workbench.edit('conditions and channel shown')
  await workbench.choose('condition that the readout is about', 'houses')
  await expect(score).toHaveText(`${printed(scoreOf(houses, 152, 184), 2)}µV`)
  await expect(workbench.editor().getByRole('checkbox', { name: 'faces' })).toBeChecked()
  await expect(workbench.token('conditions and channel shown')).toHaveText('houses, with faces, PO7')

  // Both conditions are read at the cursor.
  await workbench.slider('cursor').press('Home')
  const first = (of: { ms: number; uv: number }[]) => printed(of[0].uv - mean(of, -200, 0), 2)
  await expect(workbench.slider('cursor')).toHaveAttribute(
    'aria-valuetext',
    new RegExp(`^−200 ms: before ${first(houses)} µV, .*faces before ${first(faces)} µV, after ${first(faces)} µV$`),
  )

  await workbench.editor().getByRole('checkbox', { name: 'difference wave' }).check()
  await expect(workbench.token('condition and channel')).toHaveText('PO7, faces minus houses of two-conditions.csv')
  const difference = (channel: 'PO7' | 'Cz') =>
    scoreOf(column('faces', channel), 152, 184) - scoreOf(column('houses', channel), 152, 184)
  await expect(score).toHaveText(`${printed(difference('PO7'), 2)}µV`)

  await workbench.editor().getByRole('combobox', { name: 'channel' }).selectOption('Cz')
  await expect(workbench.token('condition and channel')).toHaveText('Cz, faces minus houses of two-conditions.csv')
  await expect(score).toHaveText(`${printed(difference('Cz'), 2)}µV`)

  // The other way round.
  await workbench.editor().getByRole('combobox', { name: 'of' }).selectOption('houses')
  await workbench.editor().getByRole('combobox', { name: 'minus' }).selectOption('faces')
  await expect(score).toHaveText(`${printed(-difference('Cz'), 2)}µV`)

  for (let step = 0; step < 3; step++) await workbench.button('Undo').click()
  await expect(score).toHaveText(`${printed(difference('PO7'), 2)}µV`)
})

test('how a table is read can be changed, and taken back', async ({ workbench }) => {
  await workbench.drop(file)
  const editor = workbench.editor()
  await expect(editor).toContainText('250 samples at 250 Hz, −200 to 796 ms')
  const peak = workbench
    .readoutRow(/^peak amplitude /)
    .getByRole('cell')
    .first()
  const inMicrovolts = Number(((await peak.textContent()) ?? '').replace('−', '-').replace('µV', ''))
  expect(Math.abs(inMicrovolts)).toBeGreaterThan(5)

  // A thousandfold amplitude, on the same time axis.
  await workbench.choose('amplitude unit', 'mV')
  await expect(peak).toHaveText(new RegExp(`^${inMicrovolts < 0 ? '−' : ''}\\d{4,}\\.\\d\\dµV$`))
  const inMillivolts = Number(((await peak.textContent()) ?? '').replace('−', '-').replace('µV', ''))
  expect(inMillivolts / 1000).toBeCloseTo(inMicrovolts, 1)
  await workbench.button('Undo').click()
  await expect(peak).toHaveText(`${printed(inMicrovolts, 2)}µV`)

  // Seconds read as milliseconds: another time axis altogether, refused or drawn, never silently the same.
  const before = await workbench.sentenceText()
  await workbench.choose('time unit', 'ms')
  await expect(workbench.token('sampling rate')).toHaveText('250000 Hz')
  await workbench.button('Undo').click()
  await expect(workbench.token('sampling rate')).toHaveText('250 Hz')
  expect(await workbench.sentenceText()).toBe(before)
})
