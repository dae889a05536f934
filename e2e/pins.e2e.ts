import type { PinnedResult } from '../src/state/evaluation.ts'
import { evaluated, firstSight, printed, readoutOf, type Workspace } from './core-numbers.ts'
import { expect, expectAccessible, test } from './fixtures.ts'
import type { Workbench } from './page-models/workbench.ts'

const DECIMALS = { µV: 2, ms: 1, µV·s: 3 } as const

/** The first sight with another high-pass cutoff. */
function withCutoff(workspace: Workspace, hz: number): Workspace {
  const chain = workspace.chain.map((spec) => (spec.design === 'butterworth' ? { ...spec, cutoffsHz: [hz] } : spec))
  return { ...workspace, chain }
}

/** 1 Hz pinned, 0.1 Hz in use. */
const compared = (): Workspace => {
  const start = firstSight()
  const pins = [{ name: '', chain: start.chain, extent: start.extent }]
  return withCutoff({ ...start, pins }, 0.1)
}

async function changeCutoff(workbench: Workbench, hz: string): Promise<void> {
  await workbench.edit('stage 2, cutoff')
  await workbench.field('cutoff').fill(hz)
  await workbench.closeEditor()
}

/** The cells of one column of the readout, from the top, by the words of its head. */
function column(workbench: Workbench, head: string): Promise<string[]> {
  return workbench.readoutTable().evaluate((table, wanted) => {
    const words = (node: Element | undefined) => (node?.textContent ?? '').replace(/\s+/g, ' ').trim()
    const { tHead, tBodies } = table as HTMLTableElement
    const heads = [...(tHead?.rows[0].cells ?? [])]
    const before = heads.slice(
      0,
      heads.findIndex((cell) => words(cell) === wanted),
    )
    const place = before.reduce((sum, cell) => sum + cell.colSpan, 0)
    return before.length === heads.length ? [] : [...tBodies[0].rows].map((row) => words(row.cells[place]))
  }, head)
}

/** What a column must print of a chain's results. */
function printedValues(result: Pick<PinnedResult, 'rows' | 'precision'>): string[] {
  const rows = result.rows.map(({ after, unit }) =>
    typeof after === 'number' ? printed(after, DECIMALS[unit]) + unit : after,
  )
  const { precision } = result
  if (!precision) throw new Error('a mean amplitude has noise')
  return [...rows, printed(precision.after, DECIMALS[precision.unit]) + precision.unit]
}

const PINNED = 'after the pinned high-pass 1 Hz'

async function expectCompared(workbench: Workbench): Promise<void> {
  const now = evaluated(compared())
  await expect.poll(() => column(workbench, PINNED)).toEqual(printedValues(now.pins[0] as PinnedResult))
  await expect.poll(() => column(workbench, 'after')).toEqual(printedValues(now))
}

test('1 Hz pinned and 0.1 Hz in use stand side by side with the core’s numbers, and outlive a reload', async ({
  workbench,
}) => {
  const first = readoutOf(firstSight()).map((line) => line.after)
  await workbench.button('pin this chain').click()
  await changeCutoff(workbench, '0.1')
  await expectCompared(workbench)
  expect(await column(workbench, PINNED)).toEqual(first)
  const value = `${printed((evaluated(compared()).pins[0] as PinnedResult).after[400], 2)} µV`
  await expect(workbench.slider('cursor')).toHaveAttribute(
    'aria-valuetext',
    new RegExp(`pinned high-pass 1 Hz ${value}`),
  )
  for (const figure of ['Waveform over time', 'Effective window', 'Frequency: gain of each stage', 'Kernel: impulse'])
    expect(await workbench.descriptionOf(figure), figure).toContain('inned high-pass 1 Hz')

  await workbench.reload()
  await expectCompared(workbench)
})

test('use swaps the two chains, and undo takes it back', async ({ workbench }) => {
  await workbench.button('pin this chain').click()
  await changeCutoff(workbench, '0.1')
  await workbench.button('use high-pass 1 Hz: swap it with the present chain').click()
  expect(await workbench.sentenceText()).toContain('half-amplitude 1 Hz after both passes')
  const now = evaluated(compared())
  await expect.poll(() => column(workbench, 'after the pinned high-pass 0.1 Hz')).toEqual(printedValues(now))
  await expect.poll(() => column(workbench, 'after')).toEqual(readoutOf(firstSight()).map((line) => line.after))

  await workbench.button('Undo').click()
  expect(await workbench.sentenceText()).toContain('half-amplitude 0.1 Hz after both passes')
  await expectCompared(workbench)
  await workbench.button('Undo').click()
  await workbench.button('Undo').click()
  await workbench.expectReadout(readoutOf(firstSight()))
})

test('pinning, renaming, using and unpinning go by keyboard alone', async ({ workbench }) => {
  const { page } = workbench
  await workbench.tabTo('pin this chain')
  await page.keyboard.press('Enter')
  expect(await workbench.focusedName()).toBe('pin this chain')
  await changeCutoff(workbench, '0.1')
  await workbench.token('rename pin 1').focus()
  await page.keyboard.press('Enter')
  await expect(workbench.field('name')).toBeFocused()
  await page.keyboard.type('of the lab')
  await page.keyboard.press('Escape')
  expect(await workbench.focusedName()).toBe('of the lab, rename pin 1')
  await expect.poll(() => column(workbench, 'after the pinned of the lab')).not.toEqual([])
  await workbench.tabTo(/^use of the lab/)
  await page.keyboard.press('Enter')
  expect(await workbench.sentenceText()).toContain('half-amplitude 1 Hz after both passes')
  await workbench.tabTo(/^unpin high-pass 0.1 Hz/)
  await page.keyboard.press('Enter')
  expect(await workbench.focusedName()).toBe('pin this chain')
  await expect(workbench.button(/^unpin/)).toHaveCount(0)
})

test('a third pin is the last one, and the page says so', async ({ workbench }) => {
  for (const hz of ['0.5', '0.3', '0.1']) {
    await workbench.button('pin this chain').click()
    await changeCutoff(workbench, hz)
  }
  const pin = workbench.button('pin this chain')
  await expect(pin).toHaveAttribute('aria-disabled', 'true')
  await expect(pin).toHaveAccessibleDescription('three chains are pinned: unpin one first')
  await pin.press('Enter')
  await expect(workbench.button(/^unpin/)).toHaveCount(3)
  // three columns more, and the page still fits
  const fits = () => workbench.page.evaluate(() => document.documentElement.scrollWidth <= window.innerWidth)
  expect(await fits()).toBe(true)
  await workbench.page.setViewportSize({ width: 1024, height: 768 })
  expect(await fits()).toBe(true)
  await workbench.button('unpin high-pass 0.5 Hz').click()
  await expect(pin).toHaveAttribute('aria-disabled', 'false')
})

test('a link carries the pins', async ({ workbench, context }) => {
  await context.grantPermissions(['clipboard-read', 'clipboard-write'])
  await workbench.button('pin this chain').click()
  await changeCutoff(workbench, '0.1')
  await workbench.button('Copy link').click()
  const link = await workbench.page.evaluate(() => navigator.clipboard.readText())
  await workbench.button('New').click()
  await workbench.expectReadout(readoutOf(firstSight()))
  await workbench.page.goto('about:blank')
  await workbench.page.goto(link)
  await workbench.ready()
  await expectCompared(workbench)
})

test('a pin that this sampling rate cannot carry says why, and the rest goes on', async ({ workbench }) => {
  test.setTimeout(120_000)
  await workbench.token('add a stage to the chain').click()
  await workbench.editor().getByRole('button', { name: 'add a notch', exact: true }).click()
  await workbench.closeEditor()
  await workbench.button('pin this chain').click()
  await workbench.edit('stage 4, frequency')
  await workbench.editor().getByRole('textbox').first().fill('20')
  await workbench.edit('sampling rate')
  await workbench.field('sampling rate').fill('100')
  await workbench.closeEditor()
  await expect(workbench.top().getByText(/^Not drawn: /)).toBeVisible()
  await expect(workbench.page.getByText(/^No column for the pinned notch 50 Hz: /)).toBeVisible()
  await expect(workbench.figures()).not.toHaveClass(/stale/)
  await expectAccessible(workbench)
})

test('axe finds nothing with pins and with the editor of one', async ({ workbench }) => {
  test.setTimeout(120_000)
  await workbench.button('pin this chain').click()
  await changeCutoff(workbench, '0.1')
  await expectAccessible(workbench)
  await workbench.edit('rename pin 1')
  await expectAccessible(workbench)
})
