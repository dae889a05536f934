import { type Download, expect, type Locator, type Page } from '@playwright/test'
import type { ReadoutLine } from '../core-numbers.ts'

export type Theme = 'light' | 'dark'

/** A file as the browser is handed it. */
export interface GivenFile {
  name: string
  mimeType: string
  buffer: Buffer
}

export const textFile = (name: string, text: string): GivenFile => ({
  name,
  mimeType: 'text/csv',
  buffer: Buffer.from(text, 'utf8'),
})

const escaped = (text: string) => text.replace(/[.*+?^${}()|[\]\\]/g, '\\$&')

/**
 * The page as a user meets it. Methods are what a user does, locators go by role and name, so that a journey reads as a
 * story and also proves that the names are there for a screen reader.
 */
export class Workbench {
  readonly page: Page

  constructor(page: Page) {
    this.page = page
  }

  /** Opens the page as on a first visit, and waits until its name and its readout stand there. */
  async open(): Promise<void> {
    await this.page.goto('./')
    await this.ready()
  }

  async reload(): Promise<void> {
    await this.page.reload()
    await this.ready()
  }

  async ready(): Promise<void> {
    await expect(this.heading()).toBeVisible()
    // what was kept has taken the place of what a first visit shows
    await expect(this.page.getByRole('main')).toHaveAttribute('aria-busy', 'false', { timeout: 15_000 })
    await expect(this.readoutTable()).toBeVisible()
  }

  /** The page's name in the header. */
  heading(): Locator {
    return this.page.getByRole('heading', { level: 1 })
  }

  button(name: string | RegExp): Locator {
    return this.page.getByRole('button', { name, exact: typeof name === 'string' })
  }

  /** Presses the header's button until the page is in this theme. */
  async chooseTheme(theme: Theme): Promise<void> {
    const button = this.page.getByRole('button', { name: /^Theme: / })
    const wanted = this.page.getByRole('button', { name: `Theme: ${theme}` })
    if (!(await wanted.isVisible())) await button.click()
    await expect(wanted).toBeVisible()
  }

  // The sentence

  /** The region with the sentence, its messages and, beside it, the chain table or a token's editor. */
  top(): Locator {
    return this.page.getByRole('region', { name: 'Protocol line', exact: true })
  }

  /** The sentence itself. */
  sentence(): Locator {
    return this.top().getByRole('paragraph').first()
  }

  /** The sentence as a reader has it, without the page's own "+ add a stage". */
  async sentenceText(): Promise<string> {
    const text = await this.sentence().textContent()
    return (text ?? '').replace(/\s+/g, ' ').replace(/ ?\+ add a stage ?/, '')
  }

  /** A phrase of the sentence (or of header, figure and readout) by what it is: "stage 2, cutoff", "score window". */
  token(what: string): Locator {
    return this.page.getByRole('button', { name: new RegExp(`, ${escaped(what)}(, |$)`) })
  }

  /** What stands in the way, in words, under the sentence. */
  problems(): Locator {
    return this.top().getByRole('alert')
  }

  /** The editor that is open: its frame offers to close it. */
  editor(): Locator {
    return this.page
      .getByRole('region')
      .filter({ has: this.page.getByRole('button', { name: 'Esc closes' }) })
      .last()
  }

  /** Opens a token's editor. */
  async edit(what: string): Promise<Locator> {
    await this.token(what).click()
    await expect(this.editor()).toBeVisible()
    return this.editor()
  }

  async closeEditor(): Promise<void> {
    await this.page.keyboard.press('Escape')
    await expect(this.button('Esc closes')).toHaveCount(0)
  }

  /** A text field of the open editor. */
  field(name: string): Locator {
    return this.editor().getByRole('textbox', { name, exact: true })
  }

  /** Chooses one of a few words in the open editor; the radio button behind the word is hidden from the eye, not from the keyboard. */
  async choose(group: string, option: string): Promise<void> {
    const choice = this.editor().getByRole('group', { name: group, exact: true })
    await choice.getByText(option, { exact: true }).click()
    await expect(choice.getByRole('radio', { name: option })).toBeChecked()
  }

  // Figures

  /** A part of a window in the time figure: "score window, start". */
  slider(name: string): Locator {
    return this.page.getByRole('slider', { name, exact: true })
  }

  /** Where a part can be taken hold of, in pixels of the page. */
  async gripOf(slider: Locator): Promise<{ x: number; y: number }> {
    const box = await slider.boundingBox()
    if (!box) throw new Error('the slider is not on the page')
    return { x: box.x + box.width / 2, y: box.y + box.height / 2 }
  }

  /** Takes hold of a part and moves it, in several steps as a hand does; the button stays down. */
  async startDrag(slider: Locator, dx: number): Promise<void> {
    await slider.scrollIntoViewIfNeeded()
    const from = await this.gripOf(slider)
    await this.page.mouse.move(from.x, from.y)
    await this.page.mouse.down()
    await this.page.mouse.move(from.x + dx, from.y, { steps: 8 })
  }

  async drag(slider: Locator, dx: number): Promise<void> {
    await this.startDrag(slider, dx)
    await this.page.mouse.up()
  }

  /** What the figure says of itself, its numbers included. */
  async descriptionOf(figure: string): Promise<string> {
    const drawn = this.page.getByRole('group', { name: figure }).or(this.page.getByRole('img', { name: figure }))
    return drawn.first().evaluate((node) => {
      const id = node.getAttribute('aria-describedby') ?? ''
      return document.getElementById(id)?.textContent ?? ''
    })
  }

  /** The block that dims while its figures are not those of the sentence. */
  figures(): Locator {
    return this.page.locator('.figures')
  }

  // Claims

  /** Opens the claims desk. */
  async openClaims(): Promise<void> {
    const tab = this.button('Claims: Is this statement about the filter true?')
    if ((await tab.getAttribute('aria-expanded')) !== 'true') await tab.click()
    await expect(this.page.getByRole('region', { name: 'add a claim' })).toBeVisible()
  }

  /** Adds a claim of a form, named as in the menu. */
  async addClaim(form: string): Promise<void> {
    const part = this.page.getByRole('region', { name: 'add a claim' })
    const offer = part.getByRole('button', { name: form, exact: true })
    if (!(await offer.isVisible())) await part.getByRole('button', { name: '+ add a claim' }).click()
    await offer.click()
    // the list closes behind the claim
    await expect(offer).toHaveCount(0)
  }

  /** The card of a claim, from 1. */
  claim(number: number): Locator {
    return this.page.getByRole('region', { name: `claim ${number}`, exact: true })
  }

  claims(): Locator {
    return this.page.getByRole('region', { name: /^claim \d+$/ })
  }

  claimSentence(number: number): Locator {
    return this.claim(number).getByRole('paragraph').first()
  }

  /** A phrase of a claim by what it is: "window of the claim". */
  claimToken(number: number, what: string): Locator {
    return this.claim(number).getByRole('button', { name: new RegExp(`, ${escaped(what)}$`) })
  }

  async editClaim(number: number, what: string): Promise<void> {
    await this.claimToken(number, what).click()
    await expect(this.editor()).toBeVisible()
  }

  claimVerdict(number: number): Locator {
    return this.claim(number).locator('.claim-verdict')
  }

  claimReason(number: number): Locator {
    return this.claim(number).locator('.claim-reason')
  }

  /** What would change the answer, in words; while it is being looked for, how far that has come. */
  claimChange(number: number): Locator {
    return this.claim(number).locator('.claim-flips').first()
  }

  async expectClaim(number: number, said: { verdict: string; reason: string }): Promise<void> {
    await expect(this.claimReason(number)).toHaveText(said.reason)
    await expect(this.claimVerdict(number)).toHaveText(said.verdict)
  }

  // Numbers

  readoutTable(): Locator {
    return this.page.getByRole('region', { name: 'Readout' }).getByRole('table')
  }

  /** Name, before, after and change of every line of the readout, as printed. */
  readout(): Promise<ReadoutLine[]> {
    return this.readoutTable().evaluate((table) => {
      const words = (node: Element | undefined) => (node?.textContent ?? '').replace(/\s+/g, ' ').trim()
      return [...(table as HTMLTableElement).tBodies[0].rows].map((row) => ({
        name: words(row.cells[1]),
        before: words(row.cells[2]),
        after: words(row.cells[3]),
        change: words(row.cells[4]),
      }))
    })
  }

  /** Waits until the readout prints exactly these lines. */
  async expectReadout(lines: ReadoutLine[]): Promise<void> {
    await expect.poll(() => this.readout(), { message: 'the readout' }).toEqual(lines)
  }

  readoutRow(name: string | RegExp): Locator {
    return this.readoutTable()
      .getByRole('row')
      .filter({ has: this.page.getByRole('rowheader', { name }) })
  }

  chainTable(): Locator {
    return this.page.getByRole('table', { name: 'The chain, stage by stage' })
  }

  /** The cells of the chain table, line by line, its head aside. */
  chainRows(): Promise<string[][]> {
    return this.chainTable().evaluate((table) =>
      [...(table as HTMLTableElement).tBodies[0].rows].map((row) =>
        [...row.cells].map((cell) => (cell.textContent ?? '').replace(/\s+/g, ' ').trim()),
      ),
    )
  }

  // Files

  /** Opens a file by the header's button. */
  async openFile(file: GivenFile | string): Promise<void> {
    const chooser = this.page.waitForEvent('filechooser')
    await this.button('Open').click()
    await (await chooser).setFiles(file)
  }

  /** Drops files on the page, as from the desktop. */
  async drop(...files: GivenFile[]): Promise<void> {
    const given = files.map(({ name, mimeType, buffer }) => ({ name, mimeType, base64: buffer.toString('base64') }))
    const transfer = await this.page.evaluateHandle((entries) => {
      const data = new DataTransfer()
      for (const { name, mimeType, base64 } of entries) {
        const bytes = Uint8Array.from(atob(base64), (letter) => letter.charCodeAt(0))
        data.items.add(new File([bytes], name, { type: mimeType }))
      }
      return data
    }, given)
    const target = this.page.getByRole('main')
    await target.dispatchEvent('dragover', { dataTransfer: transfer })
    await expect(this.page.getByText('Drop a table or a workspace to open it')).toBeVisible()
    await target.dispatchEvent('drop', { dataTransfer: transfer })
  }

  /** Does what saves a file, and hands back its name and content. */
  async saved(act: () => Promise<void>): Promise<{ name: string; bytes: Buffer }> {
    const [download] = await Promise.all([this.page.waitForEvent('download'), act()])
    return { name: download.suggestedFilename(), bytes: await bytesOf(download) }
  }

  // Keyboard

  /** Presses Tab until the keyboard stands on what has this name. */
  async tabTo(name: string | RegExp, most = 120): Promise<void> {
    const seen: string[] = []
    for (let i = 0; i < most; i++) {
      await this.page.keyboard.press('Tab')
      const here = await this.focusedName()
      seen.push(here)
      if (typeof name === 'string' ? here === name : name.test(here)) return
    }
    throw new Error(`Tab never reached ${name}; it went over: ${seen.join(' | ')}`)
  }

  /** Name of what the keyboard stands on, as a screen reader says it. */
  focusedName(): Promise<string> {
    return this.page.evaluate(() => {
      const node = document.activeElement
      if (!node || node === document.body) return ''
      const labels =
        node instanceof HTMLInputElement || node instanceof HTMLSelectElement ? [...(node.labels ?? [])] : []
      const said =
        node.getAttribute('aria-label') ?? (labels.map((label) => label.textContent).join(' ') || node.textContent)
      return (said ?? '').replace(/\s+/g, ' ').trim()
    })
  }
}

async function bytesOf(download: Download): Promise<Buffer> {
  const chunks: Buffer[] = []
  for await (const chunk of await download.createReadStream()) chunks.push(chunk as Buffer)
  return Buffer.concat(chunks)
}
