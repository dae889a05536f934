import { existsSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { readTable, type Table } from '../src/files/index.ts'
import { evaluate } from '../src/state/evaluate.ts'
import { evaluateTrace, type Tracing } from '../src/state/evaluate-trace.ts'
import { readWorkspace } from '../src/state/workspace.ts'
import { momentRowWords } from '../src/words/index.ts'
import { firstSight, printed, printedChange, type Workspace } from './core-numbers.ts'
import { expect, expectAccessible, test } from './fixtures.ts'
import type { Workbench } from './page-models/workbench.ts'

const data = process.env.SIDELOBE_DATA ?? fileURLToPath(new URL('../../shared/data', import.meta.url))
const average = join(data, 'uci-vep-dev', 'co2c0000345_S1obj_average.csv')

/** The account of the core, for what the page ought to say. */
function accountOf(workspace: Workspace, table: Table | null = null): Tracing {
  const outcome = evaluate(workspace, table)
  if (!outcome.ok) throw new Error(outcome.problems.map(({ message }) => message).join(' '))
  const found = evaluateTrace(workspace, outcome.evaluation, table)
  if (!found.ok) throw new Error(found.reason)
  return found.tracing
}

const desk = (workbench: Workbench) => workbench.page.getByRole('region', { name: 'Desks', exact: true })
const tab = (workbench: Workbench) => workbench.button('Trace-back: Where does this value come from?')
const shares = (workbench: Workbench) => desk(workbench).getByRole('table', { name: /^Shares of/ })
const question = (workbench: Workbench) => desk(workbench).getByRole('paragraph').first()
const summary = (workbench: Workbench) => desk(workbench).getByRole('status')
const boundary = (workbench: Workbench, name: string) => workbench.slider(`boundary between ${name}`)

/** Name and share of every row of the shares, as printed. */
function sharesRead(workbench: Workbench): Promise<string[][]> {
  return shares(workbench).evaluate((table) =>
    [...(table as HTMLTableElement).tBodies[0].rows].map((row) => {
      // the row's own words, without what can be done with it
      const name = [...row.cells[0].childNodes].filter((node) => node.nodeType === Node.TEXT_NODE)
      return [
        name.map((node) => node.textContent).join(''),
        row.cells[3].textContent ?? '',
        row.cells[4].textContent ?? '',
      ]
    }),
  )
}

/** The same from the core, the sum last. */
function sharesOf({ traced, back }: Tracing, asked: string): string[][] {
  const percent = (value: number | null) => (value === null ? '–' : `${printed(value, 0)}%`)
  const { rows, moments } = back
  return [
    ...rows.map((row) => [momentRowWords(row, traced), `${printedChange(row.share, 3)}µV`, percent(row.percent)]),
    [`Sum: ${asked}`, `${printedChange(moments.value, 3)}µV`, percent(moments.aboutZero ? null : 100)],
  ]
}

async function expectShares(workbench: Workbench, workspace: Workspace, asked: string, table: Table | null = null) {
  const expected = sharesOf(accountOf(workspace, table), asked)
  await expect.poll(() => sharesRead(workbench), { message: 'the shares' }).toEqual(expected)
}

/** The workspace that is on the page, from the file that it saves. */
async function workspaceOn(workbench: Workbench): Promise<Workspace> {
  const { bytes } = await workbench.saved(() => workbench.page.keyboard.press('Control+s'))
  const held: unknown = JSON.parse(bytes.toString('utf8'))
  const found = readWorkspace(typeof held === 'object' && held !== null && 'workspace' in held ? held.workspace : held)
  if (!found.ok) throw new Error(found.reason)
  return found.workspace
}

test('the false deflection of the first sight is traced to the late positivity, with the numbers of the core', async ({
  workbench,
}) => {
  const workspace = firstSight()
  const { back } = accountOf(workspace)
  await expect(desk(workbench).getByRole('table')).toHaveCount(0)
  const link = workbench.button('The trace-back desk shows where it came from.')
  await link.click()

  // It comes into sight, and the keyboard stays where it was.
  await expect(question(workbench)).toBeInViewport()
  await expect(link).toBeFocused()
  const value = `${printed(back.moments.value, 2)} µV`
  await expect(question(workbench)).toHaveText(`Where do the ${value} of the score after come from?`)
  await expect(workbench.readoutRow(/^mean amplitude 80 to 140 ms/)).toContainText(value.replace(' ', ''))
  await expectShares(workbench, workspace, 'the score after')

  // Most of it comes from the halves of the late positivity, and the sentence says so.
  const halves = back.rows.filter(({ component }) => component?.name === 'late positivity')
  const share = halves.reduce((sum, row) => sum + row.share, 0)
  expect(share / back.moments.value).toBeGreaterThan(0.9)
  await expect(summary(workbench)).toContainText(
    `From the late positivity: its stretch 250 to 550 ms gives ${printedChange(share, 2)} µV, ${printed((100 * share) / back.moments.value, 0)} % of the value.`,
  )
  const part = back.components?.rows.find(({ name }) => name === 'late positivity')
  expect(part?.share).toBeLessThan(-1)
  expect(await workbench.descriptionOf('Trace-back by component')).toContain(
    `late positivity ${printed(part?.share ?? 0, 3)} µV`,
  )
  await expect(desk(workbench)).toContainText('The Butterworth high-pass moves the value most')

  // It is still open after a reload, and closes again.
  await workbench.reload()
  await expect(question(workbench)).toHaveText(`Where do the ${value} of the score after come from?`)
  await tab(workbench).click()
  await expect(shares(workbench)).toHaveCount(0)
})

test('the shares follow the sentence, and what the padding invents is a row of its own', async ({ workbench }) => {
  await tab(workbench).click()
  await workbench.edit('what the chain is applied to')
  await workbench.choose('what the chain is applied to', 'the cut-out epochs')
  const epochs: Workspace = { ...firstSight(), extent: 'epochs' }
  await expectShares(workbench, epochs, 'the score after')
  expect((await sharesRead(workbench)).map(([name]) => name)).toContain('invented by the padding')
})

test('with a 0.1 Hz high-pass the score on the component is not made by the filter', async ({ workbench }) => {
  await workbench.edit('stage 2, cutoff')
  await workbench.field('cutoff').fill('0.1')
  await workbench.edit('score window')
  await workbench.field('to').fill('500')
  await workbench.field('from').fill('300')
  await workbench.closeEditor()
  await workbench.button('trace mean amplitude 300 to 500 ms back').first().click()
  await expect(summary(workbench)).toContainText('The value is not made by the filter')
  // Nothing is left to explain: the score was there before.
  await expect(workbench.button('The trace-back desk shows where it came from.')).toHaveCount(0)

  const workspace = firstSight()
  const chain = workspace.chain.map((spec) => (spec.design === 'butterworth' ? { ...spec, cutoffsHz: [0.1] } : spec))
  const slow: Workspace = { ...workspace, chain, score: { ...workspace.score, fromMs: 300, toMs: 500 } }
  await expectShares(workbench, slow, 'the score after')
  const { back } = accountOf(slow)
  expect(Math.abs(back.moments.value - back.unfiltered)).toBeLessThan(0.1 * Math.abs(back.moments.value))
})

test('a deflection of a real table after a high-pass is traced with the numbers of the core', async ({ workbench }) => {
  test.skip(!existsSync(average), `the recordings are not here (${average}): SIDELOBE_DATA names their folder`)
  const table = readTable(readFileSync(average, 'utf8'))
  if (!table.ok) throw new Error(table.reason)
  await workbench.openFile(average)
  await workbench.button('it is right').click()
  await workbench.edit('condition and channel')
  await workbench.editor().getByRole('combobox', { name: 'channel' }).selectOption('PO7')
  await workbench.edit('add a stage to the chain')
  await workbench.button('add Butterworth high-pass').click()
  await workbench.field('cutoff').fill('2')
  await workbench.closeEditor()
  await tab(workbench).click()

  const workspace = await workspaceOn(workbench)
  expect(workspace.chain).toHaveLength(1)
  await expectShares(workbench, workspace, 'the score after', table)
  const { back, trust } = accountOf(workspace, table)
  await expect(question(workbench)).toContainText(`${printed(back.moments.value, 2)} µV`)
  // an average has an end: what the filter had to invent beyond it is a row of its own
  expect((await sharesRead(workbench)).map(([name]) => name)).toContain('invented by the padding')
  expect(trust.unseenShare).toBeGreaterThan(0)
  await expect(desk(workbench)).toContainText('A built waveform has components; a recorded one has moments only.')

  // The threshold decides on the warning.
  await workbench.edit('unseen share that is too much')
  await workbench.field('unseen share').fill('0')
  await expect(desk(workbench)).toContainText('The value cannot be trusted')
  await workbench.field('unseen share').fill('100')
  await expect(desk(workbench)).not.toContainText('The value cannot be trusted')
})

test('a stretch is split, its boundary moved and taken away by keyboard alone', async ({ workbench }) => {
  const { keyboard } = workbench.page
  await workbench.tabTo('Trace-back: Where does this value come from?', 200)
  await keyboard.press('Enter')
  await workbench.tabTo('split 250 to 400 ms', 200)
  await keyboard.press('Enter')
  const names = async () => (await sharesRead(workbench)).map(([name]) => name)
  await expect.poll(names).toEqual(expect.arrayContaining(['250 to 324 ms', '324 to 400 ms']))
  const cut = (sample: number, atMs: number): Workspace => {
    const workspace = firstSight()
    const { stretches } = accountOf(workspace).back
    const more = [...stretches, { sample, atMs }].sort((a, b) => a.sample - b.sample)
    return { ...workspace, trace: { ...workspace.trace, stretches: more } }
  }
  await expectShares(workbench, cut(362, 324), 'the score after')

  const handle = boundary(workbench, '250 to 324 ms and 324 to 400 ms')
  await handle.focus()
  await keyboard.press('ArrowRight')
  await keyboard.press('Shift+ArrowRight')
  await expect.poll(names).toEqual(expect.arrayContaining(['250 to 346 ms', '346 to 400 ms']))
  await expectShares(workbench, cut(373, 346), 'the score after')
  // the keyboard is still on the boundary
  await expect.poll(() => workbench.focusedName()).toBe('boundary between 250 to 346 ms and 346 to 400 ms')
  await keyboard.press('Delete')
  await expectShares(workbench, firstSight(), 'the score after')

  await workbench.button('Undo').click()
  await expect.poll(names).toEqual(expect.arrayContaining(['250 to 346 ms']))
  await workbench.button('back to the suggested stretches').click()
  await expectShares(workbench, firstSight(), 'the score after')
})

test('boundaries of windows move by one sample a key press, and never past their neighbours', async ({ workbench }) => {
  await tab(workbench).click()
  const handle = boundary(workbench, '80 to 140 ms, the score window and 140 to 250 ms')
  await handle.focus()
  await workbench.page.keyboard.press('ArrowRight')
  const names = async () => (await sharesRead(workbench)).map(([name]) => name)
  // samples up to 142 ms, so that the next stretch begins at 144 ms
  await expect.poll(names).toEqual(expect.arrayContaining(['80 to 144 ms', '144 to 250 ms']))
  await workbench.page.keyboard.press('End')
  await expect.poll(names).toEqual(expect.arrayContaining(['80 to 248 ms', '248 to 250 ms']))
  const focused = workbench.page.locator(':focus')
  await expect(focused).toHaveAttribute('aria-valuenow', '248')
})

test('a boundary is dragged, with one undo for the drag, and a double click splits and joins', async ({
  workbench,
}) => {
  await workbench.page.emulateMedia({ reducedMotion: 'reduce' })
  await tab(workbench).click()
  await expect(shares(workbench)).toBeInViewport()
  const names = async () => (await sharesRead(workbench)).map(([name]) => name)
  const before = await names()
  await expect.poll(async () => (await workbench.page.evaluate(() => window.scrollY)) > 0).toBe(true)
  const middle = boundary(workbench, '250 to 400 ms and 400 to 550 ms')
  await middle.scrollIntoViewIfNeeded()
  await workbench.drag(middle, 40)
  await expect.poll(names).not.toEqual(before)
  expect((await names()).length).toBe(before.length)
  await workbench.button('Undo').click()
  await expect.poll(names).toEqual(before)

  const last = boundary(workbench, '400 to 550 ms and 550 to 1000 ms')
  await last.scrollIntoViewIfNeeded()
  const at = await workbench.gripOf(last)
  await workbench.page.mouse.dblclick(at.x + 60, at.y - 60)
  await expect.poll(async () => (await names()).length).toBe(before.length + 1)
  await workbench.page.mouse.dblclick(at.x, at.y)
  await expect.poll(async () => (await names()).length).toBe(before.length)
  expect(await names()).not.toContain('400 to 550 ms')
})

test('a moment is asked for by a click on the time figure and by T on its cursor, a row by its button or the editor', async ({
  workbench,
}) => {
  const asking = (atMs: number): Workspace => {
    const workspace = firstSight()
    return { ...workspace, trace: { ...workspace.trace, question: { kind: 'moment', atMs, of: 'after' } } }
  }
  const figure = workbench.page.getByRole('group', { name: 'Waveform over time' })
  const clickAt = async (share: number) => {
    await figure.scrollIntoViewIfNeeded()
    const box = await figure.boundingBox()
    if (!box) throw new Error('the time figure is not on the page')
    await workbench.page.mouse.click(box.x + box.width * share, box.y + 60)
  }
  // While no desk is open, a click asks nothing.
  await clickAt(0.5)
  await expect(shares(workbench)).toHaveCount(0)

  await tab(workbench).click()
  await clickAt(0.5)
  const cursor = workbench.slider('cursor')
  const now = async () => Number(await cursor.getAttribute('aria-valuenow'))
  const clicked = await now()
  await expect(question(workbench)).toContainText(`of the value at ${clicked} ms after`)
  await expectShares(workbench, asking(clicked), `the value at ${clicked} ms after`)

  await cursor.focus()
  await cursor.press('ArrowRight')
  await cursor.press('t')
  await expect(question(workbench)).toContainText(`of the value at ${clicked + 2} ms after`)
  await expectShares(workbench, asking(clicked + 2), `the value at ${clicked + 2} ms after`)

  // A latency is traced as the amplitude at its moment, and the page says so.
  await workbench.button(/^trace peak latency/).click()
  await expect(question(workbench)).toContainText('of the amplitude at the peak latency after come from?')
  await expect(desk(workbench)).toContainText('A latency is no sum over the waveform')

  await workbench.edit('the value that is traced')
  await expect(workbench.editor()).toBeInViewport()
  await workbench.choose('value that is traced', 'the value at a moment')
  await workbench.field('moment').fill('180')
  await expect(question(workbench)).toContainText('of the value at 180 ms after')
  await workbench.choose('after the chain or its change', 'change, after − before')
  await expect(question(workbench)).toContainText('of the change at 180 ms')
  await workbench.closeEditor()
  await expect(workbench.token('the value that is traced')).toBeFocused()
})

test('figures and tables of the desk are saved with the question and the protocol line', async ({ workbench }) => {
  await tab(workbench).click()
  const asked = 'of the score after come from?'
  for (const title of ['By moment', 'By component']) {
    await workbench.button(`save ${title}`).click()
    const { name, bytes } = await workbench.saved(() => workbench.button(`save ${title} as SVG`).click())
    expect(name).toMatch(/^trace-back-.*\.svg$/)
    const svg = bytes
      .toString('utf8')
      .replace(/<[^>]*>/g, ' ')
      .replace(/\s+/g, ' ')
    expect(svg).toContain(asked)
    expect(svg).toContain('Butterworth high-pass')
  }
  await workbench.button('save By moment').click()
  const { bytes: png } = await workbench.saved(() => workbench.button('save By moment as PNG').click())
  expect(png.subarray(1, 4).toString('latin1')).toBe('PNG')
  const { bytes } = await workbench.saved(() => workbench.button('save the shares as CSV').click())
  const text = bytes.toString('utf8')
  expect(text.startsWith('\ufeffstretch,')).toBe(true)
  const { back } = accountOf(firstSight())
  const printedShares = [...text.matchAll(/,([-\d.e]+),µV,/g)].map(([, share]) => Number(share))
  expect(printedShares).toHaveLength(back.rows.length + 1)
  // the browser's exponential function may differ from this one's in the last digit
  back.rows.forEach(({ share }, i) => expect(printedShares[i]).toBeCloseTo(share, 12))
  const stages = await workbench.saved(() => workbench.button('save the account by stage as CSV').click())
  expect(stages.bytes.toString('utf8')).toContain('before any stage')
})

test.describe('axe', () => {
  test.describe.configure({ timeout: 120_000 })

  test('finds nothing at the desk, and while its editor is open', async ({ workbench }) => {
    await tab(workbench).click()
    await workbench.button('split 250 to 400 ms').focus()
    await expectAccessible(workbench)
    await workbench.edit('the value that is traced')
    await expectAccessible(workbench)
  })

  test('finds nothing where the value cannot be trusted', async ({ workbench }) => {
    await tab(workbench).click()
    await workbench.edit('what the chain is applied to')
    await workbench.choose('what the chain is applied to', 'the cut-out epochs')
    await workbench.edit('unseen share that is too much')
    await workbench.field('unseen share').fill('1')
    await expect(desk(workbench)).toContainText('The value cannot be trusted')
    await expectAccessible(workbench)
  })
})
