import { readFileSync } from 'node:fs'
import { evaluated, firstSight, readoutOf, type Workspace } from './core-numbers.ts'
import { expect, test } from './fixtures.ts'
import { textFile, Workbench } from './page-models/workbench.ts'

const table = textFile(
  'two-conditions.csv',
  readFileSync(new URL('./tables/two-conditions.csv', import.meta.url), 'utf8'),
)

/** The first sight with three things changed by hand. */
async function work(workbench: Workbench): Promise<Workspace> {
  await workbench.edit('stage 2, cutoff')
  await workbench.field('cutoff').fill('0.3')
  await workbench.edit('number of trials')
  await workbench.field('trials').fill('55')
  await workbench.edit('score')
  await workbench.choose('kind of score', 'peak latency')
  await workbench.closeEditor()
  const start = firstSight()
  const chain = start.chain.map((spec) => (spec.design === 'butterworth' ? { ...spec, cutoffsHz: [0.3] } : spec))
  const now: Workspace = { ...start, chain, trials: 55, score: { ...start.score, kind: 'peak-latency' } }
  await workbench.expectReadout(readoutOf(now))
  return now
}

test('a workspace saved to a file and opened again gives the same page', async ({ workbench }) => {
  const now = await work(workbench)
  const sentence = await workbench.sentenceText()
  await workbench.button('Save').click()
  await expect(workbench.field('name')).toHaveValue('Late positivity to rare targets')
  const { name, bytes } = await workbench.saved(() => workbench.button('save as a file').click())
  expect(name).toBe('Late-positivity-to-rare-targets.sidelobe.json')
  expect(JSON.parse(bytes.toString('utf8'))).toEqual(JSON.parse(JSON.stringify(now)))

  await workbench.button('New').click()
  await workbench.expectReadout(readoutOf(firstSight()))
  await workbench.openFile({ name, mimeType: 'application/json', buffer: bytes })
  await workbench.expectReadout(readoutOf(now))
  expect(await workbench.sentenceText()).toBe(sentence)
  // Opening is one step that can be taken back.
  await workbench.button('Undo').click()
  await workbench.expectReadout(readoutOf(firstSight()))
})

test('a workspace saved with its table inside opens in a browser that never saw the table', async ({
  workbench,
  browser,
  baseURL,
}) => {
  await workbench.openFile(table)
  await expect(workbench.editor()).toContainText('2 channels, 2 conditions')
  await workbench.button('Save').click()
  await workbench.choose('data of the table', 'with the table inside')
  await workbench.field('name').fill('faces and houses')
  const { name, bytes } = await workbench.saved(() => workbench.field('name').press('Enter'))
  expect(name).toBe('faces-and-houses.sidelobe.json')
  await workbench.closeEditor()
  const sentence = await workbench.sentenceText()
  const readout = await workbench.readout()

  const elsewhere = await browser.newContext({ baseURL })
  try {
    const other = new Workbench(await elsewhere.newPage())
    await other.open()
    await other.openFile({ name, mimeType: 'application/json', buffer: bytes })
    await other.expectReadout(readout)
    expect(await other.sentenceText()).toBe(sentence)
  } finally {
    await elsewhere.close()
  }
})

test('two tabs on one workspace do not overwrite each other: the later one asks', async ({ workbench, context }) => {
  await workbench.edit('number of trials')
  await workbench.field('trials').fill('41')
  const other = new Workbench(await context.newPage())
  // what this tab said is kept within half a second, and a tab that opens earlier goes on from what was kept before
  await workbench.page.waitForTimeout(1000)
  await expect(async () => {
    await other.open()
    await expect(other.token('number of trials')).toHaveText('41 trials', { timeout: 500 })
  }).toPass()
  await other.edit('number of trials')
  await other.field('trials').fill('99')
  const third = new Workbench(await context.newPage())
  await expect(async () => {
    await third.open()
    await expect(third.token('number of trials')).toHaveText('99 trials', { timeout: 500 })
  }).toPass()

  await workbench.field('trials').fill('42')
  await expect(workbench.top().getByRole('alert')).toContainText('changed in another tab')
  await expect(workbench.token('number of trials')).toHaveText('42 trials')
  await workbench.button('take the other tab’s work').click()
  await expect(workbench.token('number of trials')).toHaveText('99 trials')
  await expect(workbench.top().getByRole('alert')).toHaveCount(0)
})

test('a copied link opened elsewhere gives the same page', async ({ workbench, context, browser, baseURL }) => {
  await context.grantPermissions(['clipboard-read', 'clipboard-write'])
  const now = await work(workbench)
  const sentence = await workbench.sentenceText()
  await workbench.button('Copy link').click()
  await expect(workbench.page.getByRole('status')).toHaveText(/^The link to this workspace is copied\./)
  const link = await workbench.page.evaluate(() => navigator.clipboard.readText())
  expect(link.startsWith(`${baseURL}#w=`)).toBe(true)

  // Another person's browser: nothing kept, nothing shared.
  const elsewhere = await browser.newContext()
  try {
    const other = new Workbench(await elsewhere.newPage())
    await other.page.goto(link)
    await other.ready()
    await other.expectReadout(readoutOf(now))
    expect(await other.sentenceText()).toBe(sentence)
    // The address is clean again, so that a reload does not undo what is done from here.
    await expect.poll(() => other.page.url()).toBe(baseURL)
  } finally {
    await elsewhere.close()
  }
})

test('a damaged link says so and opens the page as it was', async ({ workbench, baseURL }) => {
  await workbench.page.goto('about:blank')
  await workbench.page.goto(`${baseURL}#w=eJzT0yMAAGTvBe8`)
  await workbench.ready()
  await expect(workbench.top().getByRole('alert')).toContainText('the link is damaged or was cut off')
  await workbench.expectReadout(readoutOf(firstSight()))
})

test('a reload keeps the work, built or recorded, and the way of looking', async ({ workbench }) => {
  const now = await work(workbench)
  await workbench.chooseTheme('dark')
  await workbench.reload()
  await workbench.expectReadout(readoutOf(now))
  await expect(workbench.button('Theme: dark')).toBeVisible()

  await workbench.openFile(table)
  await expect(workbench.editor()).toContainText('2 channels, 2 conditions')
  await workbench.edit('conditions and channel shown')
  await workbench.editor().getByRole('checkbox', { name: 'difference wave' }).check()
  await workbench.closeEditor()
  const sentence = await workbench.sentenceText()
  const readout = await workbench.readout()
  expect(sentence).toContain('faces minus houses of two-conditions.csv')
  await workbench.reload()
  await expect.poll(() => workbench.sentenceText()).toBe(sentence)
  await workbench.expectReadout(readout)
})

test('figures are saved as SVG and PNG with the sentence as caption, the readout as CSV with every digit', async ({
  workbench,
}) => {
  const sentence = await workbench.sentenceText()
  for (const [title, file] of [
    ['Time', 'time'],
    ['Effective window', 'effective-window'],
    ['Frequency', 'frequency'],
    ['Kernel', 'kernel'],
  ]) {
    const save = async (kind: 'SVG' | 'PNG') => {
      await workbench.button(`save ${title}`).click()
      return workbench.saved(() => workbench.button(`save ${title} as ${kind}`).click())
    }
    const svg = await save('SVG')
    expect(svg.name).toBe(`${file}.svg`)
    const drawn = await workbench.page.evaluate((text) => {
      const parsed = new DOMParser().parseFromString(text, 'image/svg+xml')
      return {
        root: parsed.documentElement.tagName,
        texts: [...parsed.querySelectorAll('text')].map((node) => (node.textContent ?? '').trim()),
        paths: parsed.querySelectorAll('path').length,
        outside: [...parsed.querySelectorAll('[href], image, script, foreignObject')].length,
      }
    }, svg.bytes.toString('utf8'))
    expect(drawn.root).toBe('svg')
    expect(drawn.paths).toBeGreaterThan(1)
    expect(drawn.outside).toBe(0)
    expect(drawn.texts.join(' ').replace(/\s+/g, ' ')).toContain(sentence)

    const png = await save('PNG')
    expect(png.name).toBe(`${file}.png`)
    expect([...png.bytes.subarray(0, 8)]).toEqual([137, 80, 78, 71, 13, 10, 26, 10])
    expect(png.bytes.readUInt32BE(16), 'width, px').toBeGreaterThan(700)
    expect(png.bytes.length).toBeGreaterThan(5000)
  }

  const csv = await workbench.saved(() => workbench.button('save the readout as CSV').click())
  expect(csv.name).toBe('readout.csv')
  const lines = csv.bytes.toString('utf8').replace('\ufeff', '').trim().split(/\r?\n/)
  const header = lines[0].split(',')
  const { rows } = evaluated(firstSight())
  const cells = lines[1].split(',')
  expect(cells[header.indexOf('figure')]).toBe('mean amplitude')
  expect(Number(cells[header.indexOf('before')])).toBe(rows[0].before)
  expect(Number(cells[header.indexOf('after')])).toBe(rows[0].after)
  expect(Number(cells[header.indexOf('change')])).toBe(rows[0].change)
  expect(lines.find((line) => line.startsWith('protocol,'))).toContain(sentence)
})

test('work goes on where a second waveform is opened: the chain stays for the next table', async ({ workbench }) => {
  await workbench.openFile(table)
  await expect(workbench.editor()).toContainText('2 channels, 2 conditions')
  await workbench.closeEditor()
  // Asked for early: a key is faster than the browser's promise to hand the dialog over.
  const chooser = workbench.page.waitForEvent('filechooser')
  await workbench.token('add a stage to the chain').click()
  await workbench.editor().getByRole('button', { name: 'add Butterworth low-pass' }).click()
  await workbench.field('cutoff').fill('20')
  await workbench.closeEditor()
  const { name } = await workbench.saved(() => workbench.page.keyboard.press('Control+S'))
  expect(name).toBe('two-conditions-csv.sidelobe.json')
  const after = (await workbench.readout()).map((line) => line.after)
  await workbench.page.keyboard.press('Control+O')
  await (await chooser).setFiles({ ...table, name: 'second.csv' })
  await expect(workbench.token('scenario or file in use')).toHaveText('second.csv')
  expect(await workbench.sentenceText()).toContain('half-amplitude 20 Hz after both passes')
  expect((await workbench.readout()).map((line) => line.after)).toEqual(after)
})
