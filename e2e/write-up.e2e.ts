import { spawnSync } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import type { Locator } from '@playwright/test'
import { findPython, NO_SCIPY } from '../.ci/find-python.mjs'
import { designChain } from '../src/filter/index.ts'
import { stating, writeUpFacts, writeUpWords } from '../src/state/write-up.ts'
import { coefficientsCsv, coefficientsJson, exportPlan, pythonSource } from '../src/words/index.ts'
import { evaluated, firstSight, type Workspace } from './core-numbers.ts'
import { expect, expectAccessible, test } from './fixtures.ts'
import type { Workbench } from './page-models/workbench.ts'

test.describe.configure({ timeout: 120_000 })

const wordsOf = (workspace: Workspace) => writeUpWords(writeUpFacts(workspace, evaluated(workspace)))
const chainOf = ({ chain }: Workspace) => designChain(chain, 500)

const part = ({ page }: Workbench, name: string): Locator => page.getByRole('region', { name, exact: true })
const paragraph = (workbench: Workbench): Locator => part(workbench, 'Methods paragraph').locator('.methods')
const code = ({ page }: Workbench): Locator => page.getByRole('region', { name: /^Text of sidelobe/ })

async function openDesk(workbench: Workbench): Promise<void> {
  await workbench.button(/^Write-up: /).click()
  await expect(paragraph(workbench)).toBeVisible()
}

/** Chooses a word of a part's title line; the radio button behind it is hidden from the eye, not from the keyboard. */
async function choose(workbench: Workbench, group: string, option: string): Promise<void> {
  const choice = workbench.page.getByRole('group', { name: group, exact: true })
  await choice.getByText(option, { exact: true }).click()
  await expect(choice.getByRole('radio', { name: option, exact: true })).toBeChecked()
}

async function copied(workbench: Workbench, what: string): Promise<string> {
  await workbench.button(`copy ${what}`).click()
  await expect(workbench.page.getByRole('status').filter({ hasText: /^copied$/ })).toBeVisible()
  return workbench.page.evaluate(() => navigator.clipboard.readText())
}

test.beforeEach(async ({ context }) => {
  await context.grantPermissions(['clipboard-read', 'clipboard-write'])
})

test('the paragraph is the core’s own in each markup; copy and save give the same; a new cutoff is a new paragraph', async ({
  workbench,
}) => {
  await openDesk(workbench)
  const workspace = firstSight()
  const { text, markdown, latex } = wordsOf(workspace).paragraph
  for (const [option, expected, file] of [
    ['plain text', text, 'methods-paragraph.txt'],
    ['Markdown', markdown, 'methods-paragraph.md'],
    ['LaTeX', latex, 'methods-paragraph.tex'],
  ]) {
    await choose(workbench, 'markup of the methods paragraph', option)
    await expect(paragraph(workbench)).toHaveText(expected)
    expect(await copied(workbench, 'the methods paragraph')).toBe(expected)
    const saved = await workbench.saved(() => workbench.button('save the methods paragraph').click())
    expect(saved.name).toBe(file)
    expect(saved.bytes.toString('utf8')).toBe(expected)
  }
  await choose(workbench, 'markup of the methods paragraph', 'plain text')
  await workbench.edit('stage 2, cutoff')
  await workbench.field('cutoff').fill('0.3')
  await workbench.closeEditor()
  const changed = structuredClone(workspace)
  Object.assign(changed.chain[1], { cutoffsHz: [0.3] })
  await expect(paragraph(workbench)).toHaveText(wordsOf(changed).paragraph.text)
  await expect(paragraph(workbench)).toContainText('half-amplitude cutoff of 0.3 Hz')
  const old = workbench.page.getByText('below is still the write-up of what it said before')
  await expect(old).toHaveCount(0)

  // what cannot be has no write-up: the last one stays, said to be old, and is not taken away
  await workbench.edit('stage 2, cutoff')
  await workbench.field('cutoff').fill('400')
  await workbench.closeEditor()
  await expect(old).toBeVisible()
  await expect(paragraph(workbench)).toContainText('half-amplitude cutoff of 0.3 Hz')
  for (const what of ['the methods paragraph', 'the Python file'])
    await expect(workbench.button(`save ${what}`)).toBeDisabled()
  await workbench.button('Undo').click()
  await expect(old).toHaveCount(0)
  await expect(workbench.button('save the Python file')).toBeEnabled()
})

test('a missing item is stated in its row, stands in the paragraph, is undone, and is kept over a reload', async ({
  workbench,
}) => {
  const { page } = workbench
  await openDesk(workbench)
  const row = part(workbench, 'Reporting checklist')
    .getByRole('row')
    .filter({ has: page.getByRole('rowheader', { name: 'Coefficients that do not depend on software' }) })
  await expect(row).toContainText('not stated')
  await row.getByRole('button', { name: /statement of Filter coefficients/ }).click()
  const field = page.getByRole('textbox', { name: 'Filter coefficients' })
  await expect(field).toBeFocused()
  await field.pressSequentially('Supplement S1, 2? rows', { delay: 5 })
  await page.keyboard.press('Enter')
  await expect(field).toHaveCount(0)
  const said = stating(firstSight(), 'coefficients', 'Supplement S1, 2? rows')
  await expect(paragraph(workbench)).toHaveText(wordsOf(said).paragraph.text)
  await expect(row).not.toContainText('not stated')
  await expect(row.getByRole('button', { name: /^Supplement S1, 2\? rows,/ })).toBeFocused()

  // all that was typed is one step
  await workbench.button('Undo').click()
  await expect(paragraph(workbench)).toHaveText(wordsOf(firstSight()).paragraph.text)
  await expect(row).toContainText('not stated')
  await workbench.button('Redo').click()
  await expect(paragraph(workbench)).toContainText('Supplement S1')
  await page.waitForTimeout(800)
  await workbench.reload()
  await expect(paragraph(workbench)).toHaveText(wordsOf(said).paragraph.text)

  // empty text takes it back
  await row.getByRole('button', { name: /^Supplement S1/ }).click()
  await field.fill('')
  await page.keyboard.press('Escape')
  await expect(row).toContainText('not stated')
  await expect(paragraph(workbench)).toHaveText(wordsOf(firstSight()).paragraph.text)
})

test('checklist and settings print what the core says, row by row, and are saved as CSV', async ({ workbench }) => {
  await openDesk(workbench)
  const { checklist, settings, caution } = wordsOf(firstSight())
  const asked = part(workbench, 'Reporting checklist').locator('tbody tr')
  await expect(asked).toHaveCount(checklist.length)
  for (const [i, { item, words }] of checklist.entries()) {
    await expect(asked.nth(i).getByRole('rowheader')).toHaveText(item)
    await expect(asked.nth(i)).toContainText(words)
  }
  const published = part(workbench, 'Published settings')
  await expect(published).toContainText(caution)
  await expect(published.locator('tbody tr:not(.source-row)')).toHaveCount(settings.length)
  const low = published.getByRole('row').filter({ hasText: 'high-pass corner of at most 1 Hz' })
  await expect(low).toContainText('half-power point at 1.2476 Hz')
  await expect(low).toContainText('not kept: 0.24757 Hz above 1 Hz')
  const csv = await workbench.saved(() => workbench.button('save the reporting checklist as CSV').click())
  expect(csv.name).toBe('reporting-checklist.csv')
  expect(csv.bytes.toString('utf8').trim().split('\r\n')).toHaveLength(1 + checklist.length)
})

test('the Python file is the core’s own, and its self-check passes in SciPy', async ({ workbench }) => {
  await openDesk(workbench)
  await expect(code(workbench)).toContainText('import numpy as np')
  const saved = await workbench.saved(() => workbench.button('save the Python file').click())
  expect(saved.name).toBe('sidelobe_chain.py')
  const text = saved.bytes.toString('utf8')
  expect(text).toBe(pythonSource(exportPlan(chainOf(firstSight()), 'continuous')))
  expect(await copied(workbench, 'the Python file')).toBe(text)
  const python = findPython()
  test.skip(python === undefined, NO_SCIPY)
  const folder = mkdtempSync(join(tmpdir(), 'sidelobe-write-up-'))
  try {
    writeFileSync(join(folder, saved.name), text)
    const run = spawnSync(python?.path ?? '', [saved.name], { cwd: folder, encoding: 'utf8', timeout: 60_000 })
    expect(run.stdout, run.stderr).toMatch(/^OK: /)
    expect(run.status).toBe(0)
  } finally {
    rmSync(folder, { recursive: true, force: true })
  }
})

test('every language and both tables of coefficients can be had, and follow the chain', async ({ workbench }) => {
  await openDesk(workbench)
  for (const [option, file, holds] of [
    ['Octave', 'sidelobe_chain.m', 'function y = sidelobe_chain('],
    ['R', 'sidelobe_chain.R', 'stats::filter'],
    ['Julia', 'sidelobe_chain.jl', 'function apply_chain'],
  ]) {
    await choose(workbench, 'language of the code', option)
    await expect(code(workbench)).toHaveAccessibleName(`Text of ${file}`)
    await expect(code(workbench)).toContainText(holds)
  }
  await expect(part(workbench, 'Code')).toContainText('do not run Julia')

  await choose(workbench, 'language of the code', 'coefficients, JSON')
  await expect(code(workbench)).toContainText('"samplingRateHz": 500')
  const json = await workbench.saved(() => workbench.button('save the coefficients, JSON file').click())
  expect(json.name).toBe('sidelobe-coefficients.json')
  expect(json.bytes.toString('utf8')).toBe(coefficientsJson(chainOf(firstSight())))
  await choose(workbench, 'language of the code', 'coefficients, CSV')
  await expect(code(workbench)).toContainText('stage,name,kind')
  const csv = await workbench.saved(() => workbench.button('save the coefficients, CSV file').click())
  expect(csv.bytes.toString('utf8')).toBe(coefficientsCsv(chainOf(firstSight())))

  await workbench.edit('stage 2, cutoff')
  await workbench.field('cutoff').fill('0.3')
  await workbench.closeEditor()
  const changed = structuredClone(firstSight())
  Object.assign(changed.chain[1], { cutoffsHz: [0.3] })
  await expect(code(workbench).locator('pre')).toHaveText(coefficientsCsv(chainOf(changed)))
})

/** Sees every time that the code is out of date, however short: whether it could be copied then. */
async function watchBusyCode(workbench: Workbench): Promise<() => Promise<boolean[]>> {
  const seen = await code(workbench).evaluateHandle((region) => {
    const copyable: boolean[] = []
    new MutationObserver(() => {
      if (region.getAttribute('aria-busy') !== 'true') return
      const copy = document.querySelector<HTMLButtonElement>('button[aria-label="copy the Python file"]')
      copyable.push(copy !== null && !copy.disabled)
    }).observe(region, { attributes: true, attributeFilter: ['aria-busy'] })
    return copyable
  })
  return () => seen.jsonValue()
}

test('a kernel of many taps is written away from the page: what stands there is dimmed, and undo calls the work off', async ({
  workbench,
}) => {
  await openDesk(workbench)
  await expect(code(workbench)).toContainText('import numpy as np')
  const before = await code(workbench).locator('pre').textContent()
  await workbench.edit('stage 3, transition width')
  const whileBusy = await watchBusyCode(workbench)
  await workbench.field('transition width').fill('0.02')
  await expect(code(workbench)).toHaveAttribute('aria-busy', 'false', { timeout: 60_000 })
  await expect(paragraph(workbench)).toContainText('82501 taps', { timeout: 60_000 })
  await expect(part(workbench, 'Code')).toContainText(/The first \d+ of \d+ lines; copy and save take all of them/)
  const copyable = await whileBusy()
  expect(copyable, 'times that the code was out of date').not.toHaveLength(0)
  expect(copyable, 'whether it could be copied then').not.toContain(true)
  await workbench.field('transition width').fill('0.021')
  await workbench.closeEditor()
  for (let i = 0; i < 2; i++)
    if ((await workbench.sentenceText()).includes('0.02')) await workbench.button('Undo').click()
  await expect(code(workbench).locator('pre')).toHaveText(before ?? '')
  await expect(paragraph(workbench)).toHaveText(wordsOf(firstSight()).paragraph.text)
})

test('figures of the page and of a desk go on one sheet, saved as SVG, PNG and a page to print', async ({
  workbench,
  context,
}) => {
  const { page } = workbench
  await workbench.chooseTheme('dark')
  await workbench.button(/^Trace-back: /).click()
  await workbench.button('save By moment').click()
  await workbench.button('put By moment on the sheet of the write-up desk').click()
  await expect(page.getByText('on the sheet of the write-up desk')).toBeVisible()
  await openDesk(workbench)
  const figures = part(workbench, 'Figures')
  await expect(figures.getByRole('checkbox')).toHaveCount(5)
  await figures.getByRole('checkbox', { name: 'Frequency' }).uncheck()

  const svg = await workbench.saved(() => workbench.button('save the sheet as SVG').click())
  expect(svg.name).toBe('sidelobe-figures.svg')
  const sheet = svg.bytes.toString('utf8')
  const seen = await page.evaluate((text) => {
    const parsed = new DOMParser().parseFromString(text, 'image/svg+xml')
    const ids = [...parsed.querySelectorAll('[id]')].map((node) => node.id)
    const references = [...text.matchAll(/="url\(#([^)]*)\)"/g)].map(([, id]) => id)
    return {
      error: parsed.querySelector('parsererror')?.textContent ?? null,
      twice: ids.length - new Set(ids).size,
      dead: references.filter((id) => !ids.includes(id)),
      references: references.length,
      words: parsed.querySelector('.caption')?.textContent ?? '',
      heads: [...parsed.querySelectorAll('svg > g:not(.caption) > text > tspan:first-child')].map(
        (node) => node.textContent,
      ),
      paper: parsed.querySelector('svg > rect')?.getAttribute('fill'),
    }
  }, sheet)
  expect(seen).toMatchObject({ error: null, twice: 0, dead: [], paper: '#f6f4ee' })
  expect(seen.references).toBeGreaterThan(4)
  expect(seen.heads.filter((head) => /^[A-Z]$/.test(head ?? ''))).toEqual(['A', 'B', 'C', 'D'])
  for (const words of ['A late positivity', 'half-amplitude 1 Hz', 'mean amplitude', '80 to 140 ms'])
    expect(seen.words.replace(/\s+/g, ' ').toLowerCase()).toContain(words.toLowerCase())
  expect(sheet).toContain('@font-face')
  expect(sheet).not.toContain('var(--')
  expectInside(sheet)

  const png = await workbench.saved(() => workbench.button('save the sheet as PNG').click())
  const [width, height] = /<svg[^>]* width="([\d.]+)" height="([\d.]+)"/.exec(sheet)?.slice(1).map(Number) ?? []
  expect(png.bytes.subarray(1, 4).toString()).toBe('PNG')
  expect(png.bytes.readUInt32BE(16)).toBe(Math.round(width * 2))
  expect(png.bytes.readUInt32BE(20)).toBe(Math.round(height * 2))

  // text is drawn as well, in fonts that come with the file: none of the captions' lines is blank
  const inked = await page.evaluate(async (base64) => {
    const image = new Image()
    image.src = `data:image/png;base64,${base64}`
    await image.decode()
    const canvas = document.createElement('canvas')
    ;[canvas.width, canvas.height] = [image.width, image.height]
    const context = canvas.getContext('2d')
    context?.drawImage(image, 0, 0)
    const { data } = context?.getImageData(300, image.height - 200, 600, 140) ?? { data: [] }
    return Array.from({ length: data.length / 4 }, (_, i) => data[4 * i]).filter((red) => red < 120).length
  }, png.bytes.toString('base64'))
  expect(inked).toBeGreaterThan(1000)

  const html = await workbench.saved(() => workbench.button('save the sheet as a page to print').click())
  expect(html.name).toBe('sidelobe-figures.html')
  expectInside(html.bytes.toString('utf8'))
  const printed = await context.newPage()
  await printed.setContent(html.bytes.toString('utf8'))
  await expect(printed.getByRole('figure')).toHaveCount(4)
  await expect(printed.getByRole('img')).toHaveCount(4)
  for (const caption of await printed.locator('figcaption').allTextContents()) {
    expect(caption).toMatch(/^Figure \d\. /)
    expect(caption).toContain('half-amplitude 1 Hz')
    expect(caption).toContain('80 to 140 ms')
  }
  const face = await printed
    .locator('figcaption')
    .first()
    .evaluate((node) => getComputedStyle(node).fontFamily)
  expect(face).toContain('Source Serif 4')
  const pdf = await printed.pdf({ format: 'A4', preferCSSPageSize: true })
  expect(pdf.subarray(0, 5).toString()).toBe('%PDF-')
  await printed.close()

  await workbench.button(/^take .* off the sheet$/).click()
  await expect(figures.getByRole('checkbox')).toHaveCount(4)
  for (const name of ['Time', 'Effective window', 'Kernel']) await figures.getByRole('checkbox', { name }).uncheck()
  await expect(workbench.button('save the sheet as SVG')).toBeDisabled()
})

/** No address outside the file: the names of the XML vocabularies are no addresses. */
function expectInside(text: string): void {
  const bare = text.replaceAll('http://www.w3.org/2000/svg', '')
  expect(bare).not.toMatch(/https?:\/\/|(?:href|src)=["'](?!data:)|url\((?!["']?(?:data:|#))|@import/)
}

test('the whole way by keyboard: open, choose LaTeX, copy, state the reference of a recording, save code', async ({
  workbench,
}) => {
  const { page } = workbench
  const table = fileURLToPath(new URL('tables/two-conditions.csv', import.meta.url))
  expect(readFileSync(table, 'utf8').length).toBeGreaterThan(100)
  await workbench.openFile(table)
  await expect(workbench.sentence()).toContainText('two-conditions.csv')
  await page.keyboard.press('Escape')
  await workbench.tabTo(/^Write-up: /, 200)
  await page.keyboard.press('Enter')
  await expect(paragraph(workbench)).toContainText('The filters of the amplifier were not stated.')
  await workbench.tabTo('plain text')
  await page.keyboard.press('ArrowRight')
  await page.keyboard.press('ArrowRight')
  await expect(page.getByRole('radio', { name: 'LaTeX' })).toBeChecked()
  await workbench.tabTo('copy the methods paragraph')
  await page.keyboard.press('Enter')
  await expect(page.getByRole('status').filter({ hasText: /^copied$/ })).toBeVisible()
  expect(await page.evaluate(() => navigator.clipboard.readText())).toBe(await paragraph(workbench).textContent())

  await workbench.tabTo('state it, statement of Reference')
  await page.keyboard.press('Enter')
  await page.keyboard.type('Linked mastoids')
  await page.keyboard.press('Escape')
  await expect(paragraph(workbench)).toContainText('Reference: Linked mastoids.')
  expect(await workbench.focusedName()).toBe('Linked mastoids, Reference, your words')

  await workbench.tabTo('Python')
  await page.keyboard.press('ArrowRight')
  await expect(code(workbench)).toContainText('function y = sidelobe_chain(')
  await workbench.tabTo('save the Octave file')
  const saved = await workbench.saved(() => page.keyboard.press('Enter'))
  expect(saved.name).toBe('sidelobe_chain.m')
  expect(saved.bytes.toString('utf8')).toContain('Applied to one cut-out epoch')
  await workbench.tabTo('Text of sidelobe_chain.m')
  await page.keyboard.press('PageDown')
  await expect.poll(() => code(workbench).evaluate((node) => node.scrollTop)).toBeGreaterThan(0)
})

test('axe finds nothing on the desk, a field open as well', async ({ workbench }) => {
  await openDesk(workbench)
  await expect(code(workbench)).toContainText('import numpy')
  await expectAccessible(workbench)
  await workbench.button(/statement of Filter coefficients/).click()
  await expectAccessible(workbench)
})

for (const width of [1024, 390])
  test(`nothing on the desk is wider than the page at ${width} px`, async ({ workbench }) => {
    const { page } = workbench
    await page.setViewportSize({ width, height: 800 })
    await openDesk(workbench)
    await expect(code(workbench)).toContainText('import numpy')
    await workbench.button(/statement of Filter coefficients/).click()
    const wide = await page.evaluate(() => ({
      page: document.documentElement.scrollWidth - document.documentElement.clientWidth,
      parts: [...document.querySelectorAll('.write-up-desk *')]
        .filter(
          (node) => !node.closest('.code, .visually-hidden') && node.getBoundingClientRect().right > innerWidth + 1,
        )
        .map((node) => node.outerHTML.slice(0, 80)),
    }))
    expect(wide).toEqual({ page: 0, parts: [] })
  })
