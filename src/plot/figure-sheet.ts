// Several figures in one file: one below the other where they are wide, side by side where they fit, each with its letter and title, and at
// the foot what they show. Made of text alone, so that it is tried without a page.

import { type DrawnFigure, escapeXml, round, wrapText } from './save-figure.ts'

export type SheetFigure = {
  /** "Effective window" */
  title: string
  /** What it shows, of which data, through which filter. */
  caption: string
  drawn: DrawnFigure
}

export type SheetText = {
  /** Name of the sheet: the file's title. */
  title: string
  /** @font-face rules with data: addresses, see fontFaceCss; for a page to print also the rule that says in which its text is set. */
  fontCss?: string
}

/** px, of the sheet's edge and between figures */
const MARGIN = 24
const GAP_X = 32
const GAP_Y = 20
const HEAD = 26
const LINE_HEIGHT = 18
/** Mean width of a letter of 13 px, for breaking captions. */
const LETTER = 6.3

/** A, B, …, Z, AA: the letter under which a figure is spoken of. */
export function letterOf(index: number): string {
  const last = String.fromCharCode(65 + (index % 26))
  return index < 26 ? last : letterOf(Math.floor(index / 26) - 1) + last
}

/**
 * A figure's elements with every id, and every reference to one, under a prefix, so that patterns and clip paths of several figures stay
 * apart in one file.
 *
 * @param body  as drawFigure writes it: attributes in double quotes, quotes in text escaped.
 */
export function withOwnIds(body: string, prefix: string): string {
  return body
    .replace(/ id="([^"]*)"/g, (_, id: string) => ` id="${prefix}${id}"`)
    .replace(/="url\(#([^")]*)\)"/g, (_, id: string) => `="url(#${prefix}${id})"`)
}

type Place = { x: number; y: number }

/** Two figures may share a row that is a little wider than the widest figure. */
const WIDER = 1.1

/** Rows from the top, in order: a figure goes beside the one before it where the widest figure leaves room for both, or nearly. */
export function placesOnSheet(sizes: readonly { width: number; height: number }[]): {
  places: Place[]
  width: number
  height: number
} {
  const limit = WIDER * Math.max(0, ...sizes.map((size) => size.width))
  const places: Place[] = []
  let x = 0
  let top = 0
  let bottom = 0
  let width = 0
  for (const size of sizes) {
    if (places.length > 0 && x + size.width > limit) {
      x = 0
      top = bottom + GAP_Y
    }
    places.push({ x, y: top })
    width = Math.max(width, x + size.width)
    x += size.width + GAP_X
    bottom = Math.max(bottom, top + HEAD + size.height)
  }
  return { places, width, height: bottom }
}

/** "A", "A and C", "A to D" */
function lettersWords(indices: readonly number[]): string {
  const letters = indices.map(letterOf)
  const run = indices.every((index, i) => index === indices[0] + i)
  if (run && letters.length > 2) return `${letters[0]} to ${letters[letters.length - 1]}`
  return letters.length < 2 ? letters.join('') : `${letters.slice(0, -1).join(', ')} and ${letters[letters.length - 1]}`
}

/** The captions at the foot of a sheet: one that several figures share is said once, under their letters. */
export function sheetCaptions(
  figures: readonly Pick<SheetFigure, 'caption'>[],
): { letters: string; caption: string }[] {
  const by = new Map<string, number[]>()
  figures.forEach(({ caption }, i) => by.set(caption, [...(by.get(caption) ?? []), i]))
  return [...by].map(([caption, indices]) => ({ letters: lettersWords(indices), caption }))
}

/**
 * Figures as one self-contained svg file.
 *
 * @throws RangeError without a figure.
 */
export function figureSheet(figures: readonly SheetFigure[], { title, fontCss }: SheetText): string {
  if (figures.length === 0) throw new RangeError('a sheet must have at least one figure, has 0')
  const { places, width, height } = placesOnSheet(figures.map(({ drawn }) => drawn))
  const [{ paper, ink, fonts }] = figures.map(({ drawn }) => drawn)
  const fill = ink && ` fill="${escapeXml(ink)}"`
  const drawings = figures.map(({ title: name, drawn }, i) => {
    const head = `<text x="0" y="17" font-size="15px"${fill}><tspan font-weight="600">${letterOf(i)}</tspan><tspan dx="8">${escapeXml(name)}</tspan></text>`
    const body = `<g transform="translate(0 ${HEAD})">${withOwnIds(drawn.body, `f${i + 1}-`)}</g>`
    return `<g transform="translate(${round(MARGIN + places[i].x)} ${round(MARGIN + places[i].y)})"${drawn.fonts}>${head}${body}</g>`
  })
  const columns = Math.max(20, Math.floor(width / LETTER))
  const lines = sheetCaptions(figures).flatMap(({ letters, caption }) => {
    const [first = '', ...rest] = wrapText(`${letters}: ${caption}`, columns)
    const begins = `<tspan font-weight="600">${escapeXml(letters)}</tspan>${escapeXml(first.slice(letters.length))}`
    return [begins, ...rest.map(escapeXml)]
  })
  const foot = MARGIN + height + GAP_Y
  const caption = lines
    .map(
      (line, i) =>
        `<text x="${MARGIN}" y="${round(foot + LINE_HEIGHT * (i + 0.7))}" font-size="13px"${fill}>${line}</text>`,
    )
    .join('')
  const fullWidth = round(width + 2 * MARGIN)
  const fullHeight = round(foot + LINE_HEIGHT * lines.length + MARGIN)
  return [
    '<?xml version="1.0" encoding="UTF-8"?>\n',
    `<svg xmlns="http://www.w3.org/2000/svg" width="${fullWidth}" height="${fullHeight}"`,
    ` viewBox="0 0 ${fullWidth} ${fullHeight}" role="img"${fonts}>`,
    `<title>${escapeXml(title)}</title>`,
    `<desc>${escapeXml(
      sheetCaptions(figures)
        .map(({ letters, caption }) => `${letters}: ${caption}`)
        .join(' '),
    )}</desc>`,
    fontCss ? `<style>${escapeXml(fontCss)}</style>` : '',
    paper && `<rect width="100%" height="100%" fill="${escapeXml(paper)}"/>`,
    `${drawings.join('')}<g class="caption">${caption}</g></svg>\n`,
  ].join('')
}

/**
 * Figures as one self-contained page to be printed, or saved as PDF by the browser's print dialog: each figure as vectors with its caption
 * in full, none broken across two sheets of paper. The paper's size is left to the printer.
 *
 * @throws RangeError without a figure.
 */
export function figurePage(figures: readonly SheetFigure[], { title, fontCss = '' }: SheetText): string {
  if (figures.length === 0) throw new RangeError('a page must have at least one figure, has 0')
  // one scale for all, so that their text is of one size
  const widest = Math.max(...figures.map(({ drawn }) => drawn.width))
  const parts = figures.map(({ title: name, caption, drawn }, i) => {
    const { width, height, fonts, body } = drawn
    const share = ` style="width: ${round((100 * width) / widest)}%"`
    const size = `width="${round(width)}" height="${round(height)}" viewBox="0 0 ${round(width)} ${round(height)}"`
    return [
      '<figure>',
      `<svg xmlns="http://www.w3.org/2000/svg" ${size} role="img" aria-label="${escapeXml(name)}"${share}${fonts}>`,
      `${withOwnIds(body, `f${i + 1}-`)}</svg>`,
      `<figcaption><b>Figure ${i + 1}. ${escapeXml(name)}.</b> ${escapeXml(caption)}</figcaption>`,
      '</figure>',
    ].join('\n')
  })
  const [{ ink }] = figures.map(({ drawn }) => drawn)
  return [
    '<!doctype html>',
    '<html lang="en">',
    '<head>',
    '<meta charset="utf-8">',
    '<meta name="viewport" content="width=device-width">',
    `<title>${escapeXml(title)}</title>`,
    `<style>\n${fontCss.replaceAll('</', '<\\/')}\n${PAGE_CSS}${ink ? `body { color: ${ink.replace(/[^#\w(),.% -]/g, '')}; }\n` : ''}</style>`,
    '</head>',
    '<body>',
    `<h1>${escapeXml(title)}</h1>`,
    ...parts,
    '</body>',
    '</html>\n',
  ].join('\n')
}

const PAGE_CSS = `@page { margin: 18mm; }
* { box-sizing: border-box; }
body { margin: 0 auto; max-width: 960px; padding: 24px; font-size: 15px; line-height: 1.4; }
h1 { font-size: 20px; font-weight: 600; margin: 0 0 18px; }
figure { margin: 0 0 28px; break-inside: avoid; }
svg { display: block; height: auto; overflow: visible; }
figcaption { margin-top: 8px; max-width: 100ch; font-size: 13px; }
@media print {
  body { max-width: none; padding: 0; font-size: 11pt; }
  h1 { font-size: 13pt; }
  figcaption { font-size: 9pt; max-width: none; }
  * { print-color-adjust: exact; }
}
`
