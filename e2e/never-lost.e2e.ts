import type { BrowserContext, Page } from '@playwright/test'
import { workspaceToFragment } from '../src/state/keeping.ts'
import { evaluated, firstSight, readoutOf, SCENARIOS, type Workspace, workspaceOf } from './core-numbers.ts'
import { expect, test } from './fixtures.ts'
import { textFile, Workbench } from './page-models/workbench.ts'

/** Work is kept within this time, whatever is under way. */
const KEPT_WITHIN_MS = 1000

const handle = (workbench: Workbench) => workbench.slider('high-pass, half-amplitude cutoff')
const cutoff = (workbench: Workbench) => workbench.token('stage 2, cutoff')
const trials = (workbench: Workbench) => workbench.token('number of trials')
const alert = (workbench: Workbench) => workbench.top().getByRole('alert')

async function sayTrials(workbench: Workbench, count: string): Promise<void> {
  await workbench.edit('number of trials')
  await workbench.field('trials').fill(count)
  await workbench.closeEditor()
}

async function openAgain(context: BrowserContext): Promise<Workbench> {
  const again = new Workbench(await context.newPage())
  await again.open()
  return again
}

/** The workspace that is on the page, from the file that it saves. */
async function workspaceOn(workbench: Workbench): Promise<Workspace> {
  const { bytes } = await workbench.saved(() => workbench.page.keyboard.press('Control+S'))
  return JSON.parse(bytes.toString('utf8')) as Workspace
}

/** The process behind the page ends at once: no event, no last word. */
async function crash(page: Page): Promise<void> {
  const session = await page.context().newCDPSession(page)
  const crashed = page.waitForEvent('crash')
  void session.send('Page.crash').catch(() => undefined)
  await crashed
}

const ENDS: { how: string; end: (page: Page) => Promise<void> }[] = [
  { how: 'the tab is closed', end: (page) => page.close({ runBeforeUnload: false }) },
  { how: 'the renderer crashes', end: crash },
]

for (const { how, end } of ENDS) {
  test(`${how} in the middle of a drag: the cutoff stands where the hand had brought it`, async ({
    workbench,
    context,
  }) => {
    const { page } = workbench
    await sayTrials(workbench, '55')
    await workbench.startDrag(handle(workbench), -40)
    await expect(cutoff(workbench)).not.toHaveText('1 Hz')
    const sentence = await workbench.sentenceText()
    const readout = await workbench.readout()
    // the button stays down
    await page.waitForTimeout(KEPT_WITHIN_MS)
    expect(await workbench.sentenceText()).toBe(sentence)
    await end(page)

    const again = await openAgain(context)
    expect(await again.sentenceText()).toBe(sentence)
    await again.expectReadout(readout)
    await expect(alert(again)).toHaveCount(0)
    // and the handle can be taken again from there
    await again.drag(handle(again), 30)
    await expect.poll(() => again.sentenceText()).not.toBe(sentence)
    await again.button('Undo').click()
    await again.expectReadout(readout)
    expect(await again.sentenceText()).toBe(sentence)
  })

  test(`${how} in the middle of a load: the work before stands, and the table can be opened again`, async ({
    workbench,
    context,
  }) => {
    const { page } = workbench
    await sayTrials(workbench, '55')
    const sentence = await workbench.sentenceText()
    await page.waitForTimeout(KEPT_WITHIN_MS)
    const table = largeTable()
    expect(table.buffer.length).toBeGreaterThan(10_000_000)
    await workbench.openFile(table)
    await expect(page.getByText('Reading large.csv …')).toBeVisible()
    await end(page)

    const again = await openAgain(context)
    expect(await again.sentenceText()).toBe(sentence)
    await again.expectReadout(readoutOf({ ...firstSight(), trials: 55 }))
    await expect(again.page.getByText('Reading large.csv …')).toHaveCount(0)
    await expect(alert(again)).toHaveCount(0)
    await again.openFile(table)
    await expect(again.token('scenario or file in use')).toHaveText('large.csv', { timeout: 40_000 })
    const opened = await again.sentenceText()
    await again.page.waitForTimeout(KEPT_WITHIN_MS)
    await again.reload()
    await expect.poll(() => again.sentenceText(), { timeout: 40_000 }).toBe(opened)
  })
}

/** 40 channels, 140 trials of 1 s at 250 Hz; the values are a plain sequence, and invented. */
function largeTable() {
  const channels = Array.from({ length: 40 }, (_, i) => `E${i + 1}`)
  const lines = [['trial', 'time_ms', ...channels.map((name) => `${name} (µV)`)].join(',')]
  for (let trial = 1; trial <= 140; trial++)
    for (let i = 0; i < 250; i++) {
      const values = channels.map((_, channel) => (((i * 37 + channel * 101 + trial * 17) % 997) / 100 - 5).toFixed(4))
      lines.push([trial, -200 + 4 * i, ...values].join(','))
    }
  return textFile('large.csv', lines.join('\n'))
}

test('a tab closed right after a word has been said has kept the word', async ({ workbench, context }) => {
  const { page } = workbench
  await page.waitForTimeout(KEPT_WITHIN_MS)
  await workbench.edit('number of trials')
  await workbench.field('trials').fill('73')
  await expect(trials(workbench)).toHaveText('73 trials')
  const closed = page.waitForEvent('close')
  await page.close({ runBeforeUnload: true })
  await closed
  const again = await openAgain(context)
  await expect(trials(again)).toHaveText('73 trials')
})

test('each kind of thing that can be said outlives a reload at once', async ({ workbench }) => {
  const { page } = workbench
  const desk = page.getByRole('region', { name: 'Desks', exact: true })
  let expected: Workspace = firstSight()
  const kept = async (change: Partial<Workspace>) => {
    await workbench.reload()
    expected = { ...expected, ...change }
    expect(await workspaceOn(workbench)).toEqual(JSON.parse(JSON.stringify(expected)))
  }

  await test.step('a token', async () => {
    await sayTrials(workbench, '64')
    await kept({ trials: 64 })
  })
  await test.step('a drag', async () => {
    await workbench.slider('score window, end').press('ArrowRight')
    const box = await workbench.slider('score window, end').getAttribute('aria-valuenow')
    await kept({ score: { ...expected.score, toMs: Number(box) } })
    expect(expected.score.toMs).toBeGreaterThan(firstSight().score.toMs)
  })
  await test.step('a pin', async () => {
    await workbench.button('pin this chain').click()
    await kept({ pins: [{ name: '', chain: expected.chain, extent: expected.extent }] })
  })
  await test.step('the question of the trace-back', async () => {
    await workbench
      .button(/^trace peak amplitude .* back$/)
      .first()
      .click()
    await kept({ trace: { ...expected.trace, question: { kind: 'row', row: 'peak-amplitude', of: 'after' } } })
    await expect(desk.getByRole('paragraph').first()).toContainText('peak amplitude')
  })
  await test.step('a limit of the trade-off', async () => {
    await workbench.button(/^Trade-off: /).click()
    await workbench.edit('limits of the map')
    await workbench.choose('limit of the bias', 'another')
    await workbench.field('bias within').fill('0.35')
    await kept({ tradeOff: { ...expected.tradeOff, limits: { bias: 0.35, unit: 'µV' } } })
  })
  await test.step('a statement for the write-up', async () => {
    await workbench.button(/^Write-up: /).click()
    await desk
      .getByRole('button', { name: /statement of Filter coefficients/ })
      .first()
      .click()
    await page.getByRole('textbox', { name: 'Filter coefficients' }).fill('in the supplement')
    await kept({ statements: { coefficients: 'in the supplement' } })
  })
})

test('205 changes go back and forth one by one; a drag is one step, a typed number is one step', async ({
  workbench,
}) => {
  const { page } = workbench
  const started = await workbench.sentenceText()
  await handle(workbench).focus()
  const seen: string[] = []
  for (let i = 0; i < 205; i++) {
    await page.keyboard.press('ArrowRight')
    seen.push((await cutoff(workbench).textContent()) ?? '')
  }
  expect(new Set(seen).size).toBeGreaterThan(150) // the token rounds, what was said does not
  const sentence = await workbench.sentenceText()
  const readout = await workbench.readout()
  for (let i = 0; i < 200; i++) await page.keyboard.press('Control+Z')
  await expect(cutoff(workbench)).toHaveText(seen[4])
  for (let i = 0; i < 5; i++) await page.keyboard.press('Control+Z')
  await expect(workbench.button('Undo')).toBeDisabled()
  expect(await workbench.sentenceText()).toBe(started)
  await workbench.expectReadout(readoutOf(firstSight()))
  for (let i = 0; i < 205; i++) await page.keyboard.press('Control+Shift+Z')
  expect(await workbench.sentenceText()).toBe(sentence)
  await workbench.expectReadout(readout)
  await expect(workbench.button('Redo')).toBeDisabled()

  await workbench.startDrag(workbench.slider('low-pass, half-amplitude cutoff'), -30)
  // longer than the pause that ends a burst of typing: the hand still holds it
  await page.waitForTimeout(1700)
  await page.mouse.move(600, 600, { steps: 3 })
  await page.mouse.up()
  await expect(workbench.token('stage 3, cutoff')).not.toHaveText('30 Hz')
  await page.keyboard.press('Control+Z')
  expect(await workbench.sentenceText()).toBe(sentence)

  await workbench.edit('number of trials')
  await workbench.field('trials').selectText()
  await workbench.field('trials').pressSequentially('1250', { delay: 80 })
  await workbench.closeEditor()
  await expect(trials(workbench)).toHaveText('1250 trials')
  await page.keyboard.press('Control+Z')
  expect(await workbench.sentenceText()).toBe(sentence)
})

/** Said once, whatever is done afterwards; and everything else goes on. */
async function expectWorkGoesOn(workbench: Workbench): Promise<void> {
  const { page } = workbench
  const complaint = alert(workbench).filter({ hasText: 'This browser keeps nothing' })
  await expect(complaint).toHaveCount(1)
  await complaint.getByRole('button', { name: 'dismiss' }).click()
  for (const count of ['41', '42', '43']) {
    await sayTrials(workbench, count)
    await page.waitForTimeout(KEPT_WITHIN_MS)
    await expect(alert(workbench)).toHaveCount(0)
  }
  await workbench.drag(handle(workbench), -40)
  await workbench.button('Undo').click()
  const now: Workspace = { ...firstSight(), trials: 43 }
  await workbench.expectReadout(readoutOf(now))
  await workbench.openFile(largeTableOf(1))
  await expect(workbench.token('scenario or file in use')).toHaveText('small.csv')
  await expect(alert(workbench)).toHaveCount(0)
  await expect(workbench.top().getByRole('status')).toHaveCount(0)
  await workbench.button('Undo').click()
  await workbench.expectReadout(readoutOf(now))
  const { bytes } = await workbench.saved(() => page.keyboard.press('Control+S'))
  expect(JSON.parse(bytes.toString('utf8'))).toEqual(JSON.parse(JSON.stringify(now)))
}

const largeTableOf = (trialCount: number) => {
  const lines = ['trial,time_ms,Cz (µV)']
  for (let trial = 1; trial <= trialCount; trial++)
    for (let i = 0; i < 250; i++) lines.push(`${trial},${-200 + 4 * i},${((i * 37 + trial * 17) % 97) / 10}`)
  return textFile('small.csv', lines.join('\n'))
}

test('storage that is forbidden is said once, and the work goes on', async ({ page }) => {
  await page.addInitScript(() => {
    for (const name of ['indexedDB', 'localStorage', 'sessionStorage'])
      Object.defineProperty(window, name, {
        get: () => {
          throw new DOMException('The operation is insecure.', 'SecurityError')
        },
      })
  })
  const workbench = new Workbench(page)
  await workbench.open()
  await expectWorkGoesOn(workbench)
})

test('storage that refuses what is put there is said once, and the work goes on', async ({ page }) => {
  await page.addInitScript(() => {
    const full = () => {
      throw new DOMException('The quota has been exceeded.', 'QuotaExceededError')
    }
    IDBObjectStore.prototype.put = full
    Storage.prototype.setItem = full
  })
  const workbench = new Workbench(page)
  await workbench.open()
  await expectWorkGoesOn(workbench)
})

test('storage that the browser itself finds full is said once, and the work goes on', async ({ page, baseURL }) => {
  const session = await page.context().newCDPSession(page)
  await session.send('Storage.overrideQuotaForOrigin', { origin: new URL(baseURL ?? '').origin, quotaSize: 1 })
  const workbench = new Workbench(page)
  await workbench.open()
  await expectWorkGoesOn(workbench)
})

test('a table for which there is no room is said once; the rest is kept, and a reload asks for the file by name', async ({
  page,
}) => {
  await page.addInitScript(() => {
    const put = IDBObjectStore.prototype.put
    IDBObjectStore.prototype.put = function (this: IDBObjectStore, ...args: Parameters<typeof put>) {
      if (typeof args[0] === 'string' && args[0].length > 1000)
        throw new DOMException('The quota has been exceeded.', 'QuotaExceededError')
      return put.apply(this, args)
    }
  })
  const workbench = new Workbench(page)
  await workbench.open()
  const said = workbench.top().getByRole('status').filter({ hasText: 'no room to keep the table' })
  const table = largeTableOf(2)
  await workbench.openFile(table)
  await expect(said).toContainText('open small.csv again')
  await workbench.openFile({ ...table, name: 'other.csv', buffer: Buffer.concat([table.buffer, Buffer.from('\n')]) })
  await expect(workbench.token('scenario or file in use')).toHaveText('other.csv')
  await expect(said).toHaveCount(0)
  await sayTrials(workbench, '66')
  const sentence = await workbench.sentenceText()

  await page.reload()
  await expect(alert(workbench).first()).toContainText('other.csv')
  await expect(trials(workbench)).toHaveText('66 trials')
  await workbench.openFile({ ...table, name: 'other.csv', buffer: Buffer.concat([table.buffer, Buffer.from('\n')]) })
  await workbench.ready()
  await expect.poll(() => workbench.sentenceText()).toBe(sentence)
})

test('of two tabs the one that asks keeps asking, through other messages and through a crash, until it is answered', async ({
  workbench,
  context,
}) => {
  const question = (of: Workbench) => alert(of).filter({ hasText: 'Nothing is overwritten until you choose' })
  await context.grantPermissions(['clipboard-read', 'clipboard-write'])
  await sayTrials(workbench, '41')
  await workbench.page.waitForTimeout(KEPT_WITHIN_MS)
  const other = await openAgain(context)
  await expect(trials(other)).toHaveText('41 trials')
  await sayTrials(other, '99')
  await other.page.waitForTimeout(KEPT_WITHIN_MS)

  await sayTrials(workbench, '42')
  await expect(question(workbench)).toContainText('changed in another tab')
  await workbench.button('Copy link').click()
  await expect(workbench.page.getByText(/^The link to this workspace is copied\./)).toBeVisible()
  await expect(question(workbench)).toBeVisible()
  // What is said while the question stands is not lost either.
  await sayTrials(workbench, '43')
  await workbench.page.waitForTimeout(KEPT_WITHIN_MS)
  await other.page.close()
  await crash(workbench.page)

  const again = await openAgain(context)
  await expect(trials(again)).toHaveText('43 trials')
  await expect(question(again)).toContainText('There is other work here from last time.')
  await again.button('take the work from last time').click()
  await expect(trials(again)).toHaveText('99 trials')
  await expect(question(again)).toHaveCount(0)
  await again.button('Undo').click()
  await expect(trials(again)).toHaveText('43 trials')
  await again.page.waitForTimeout(KEPT_WITHIN_MS)
  await again.reload()
  await expect(trials(again)).toHaveText('43 trials')
  await expect(alert(again)).toHaveCount(0)
})

test('a link opened over work from last time asks before it takes its place', async ({
  workbench,
  context,
  baseURL,
}) => {
  await sayTrials(workbench, '77')
  await workbench.page.waitForTimeout(KEPT_WITHIN_MS)
  await workbench.page.close()
  const linked: Workspace = { ...workspaceOf(SCENARIOS[1]), trials: 12 }
  const again = new Workbench(await context.newPage())
  await again.page.goto(`${baseURL}${workspaceToFragment(linked)}`)
  await again.ready()
  await again.expectReadout(readoutOf(linked))
  await expect(alert(again)).toContainText('There is other work here from last time.')
  // A reload, with the address clean again, shows the link's work and asks again.
  await again.reload()
  await again.expectReadout(readoutOf(linked))
  await again.button('take the work from last time').click()
  await again.expectReadout(readoutOf({ ...firstSight(), trials: 77 }))
})

test('work that a newer page has kept is put aside, can be saved as a file, and is dropped only by word', async ({
  workbench,
}) => {
  const { page } = workbench
  await page.waitForTimeout(KEPT_WITHIN_MS)
  // what a later version of the page would have left in the browser's own storage
  await page.evaluate(
    (record) =>
      new Promise<void>((resolve, reject) => {
        const opening = indexedDB.open('keyval-store')
        opening.onerror = () => reject(opening.error)
        opening.onsuccess = () => {
          const transaction = opening.result.transaction('keyval', 'readwrite')
          transaction.objectStore('keyval').put(record, 'sidelobe.workspace')
          transaction.oncomplete = () => resolve()
        }
      }),
    { workspace: { version: 99, title: 'from the future' }, tab: 'later', savedAt: Date.now() },
  )
  await workbench.reload()
  await expect(alert(workbench)).toContainText('version 99')
  for (let i = 0; i < 2; i++) {
    const { name, bytes } = await workbench.saved(() => workbench.button('save it as a file').click())
    expect(name).toBe('unread.sidelobe.json')
    expect(JSON.parse(bytes.toString('utf8'))).toEqual({ version: 99, title: 'from the future' })
    await page.waitForTimeout(KEPT_WITHIN_MS)
    await workbench.reload()
  }
  await workbench.button('drop it').click()
  await page.waitForTimeout(100)
  await workbench.reload()
  await expect(workbench.button('drop it')).toHaveCount(0)
  expect(evaluated(await workspaceOn(workbench)).rows.length).toBeGreaterThan(5)
})
