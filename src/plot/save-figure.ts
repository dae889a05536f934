// A figure on the page takes its colours and fonts from the page's style sheets. To stand alone, every element is written out with the
// values that those rules come to. The serialiser reads the elements through a few properties only, so that it is tried without a page.

/** Style properties that a saved figure keeps, with the value they have when nothing is said; true: children inherit it. */
const PROPERTIES: readonly (readonly [name: string, initial: string, inherited: boolean])[] = [
  ['fill', 'rgb(0, 0, 0)', true],
  ['fill-opacity', '1', true],
  ['stroke', 'none', true],
  ['stroke-width', '1px', true],
  ['stroke-opacity', '1', true],
  ['stroke-dasharray', 'none', true],
  ['stroke-linecap', 'butt', true],
  ['stroke-linejoin', 'miter', true],
  ['opacity', '1', false],
  ['font-family', '', true],
  ['font-size', '', true],
  ['font-weight', '400', true],
  ['font-style', 'normal', true],
  ['font-variant-numeric', 'normal', true],
  ['text-anchor', 'start', true],
  ['paint-order', 'normal', true],
  ['visibility', 'visible', true],
]

/** Attributes that are geometry or structure and are copied as they are. Everything else is style or serves the live page. */
const GEOMETRY = new Set(
  (
    'id x y x1 y1 x2 y2 cx cy r rx ry width height d points transform dx dy offset viewBox ' +
    'patternUnits patternTransform patternContentUnits clipPathUnits clip-path mask gradientUnits gradientTransform preserveAspectRatio'
  ).split(' '),
)

/** What the serialiser reads of an element; every DOM element has it. */
export type ReadElement = {
  readonly nodeType: number
  readonly tagName?: string
  readonly data?: string
  readonly attributes?: ArrayLike<{ readonly name: string; readonly value: string }>
  readonly childNodes?: ArrayLike<ReadElement>
}

/** What the serialiser reads of a computed style. */
export type ReadStyle = { getPropertyValue(name: string): string }

export type SavedText = {
  /** Name of the figure: the svg's title and the first line under it. */
  title: string
  /** What the figure shows and which filter was applied; wrapped to the figure's width. */
  caption: string
  /** @font-face rules with data: addresses, if the fonts are to travel with the file; see fontFaceCss. */
  fontCss?: string
}

/**
 * A figure as a self-contained svg file, with title and caption as text below it.
 *
 * @param svg   the figure on the page (FigureFrame's svgRef).
 * @returns  the file's text; handles, focus rings and hit areas are left out (data-save="omit" leaves out any other element).
 */
export function figureToSvg(svg: SVGSVGElement, text: SavedText): string {
  return serializeFigure(svg as unknown as ReadElement, text, (element) =>
    getComputedStyle(element as unknown as Element),
  )
}

/** figureToSvg with the reading of styles handed in. */
export function serializeFigure(
  svg: ReadElement,
  text: SavedText,
  styleOf: (element: ReadElement) => ReadStyle,
): string {
  const { width, height, paper, ink, fonts, body } = drawFigure(svg, styleOf)
  const lines = wrapText(text.caption, Math.max(20, Math.floor((width - 2 * PADDING) / 6.3)))
  const textHeight = PADDING + LINE_HEIGHT * (lines.length + 1) + PADDING / 2
  const captionText = [text.title, ...lines]
    .map((line, i) => {
      const y = height + PADDING + LINE_HEIGHT * (i + 0.7)
      const weight = i === 0 ? ' font-weight="600"' : ''
      return `<text x="${PADDING}" y="${round(y)}" font-size="13px"${weight}${ink && ` fill="${escapeXml(ink)}"`}>${escapeXml(line)}</text>`
    })
    .join('')
  return [
    '<?xml version="1.0" encoding="UTF-8"?>\n',
    `<svg xmlns="http://www.w3.org/2000/svg" width="${width}" height="${round(height + textHeight)}"`,
    ` viewBox="0 0 ${width} ${round(height + textHeight)}" role="img"${fonts}`,
    `><title>${escapeXml(text.title)}</title><desc>${escapeXml(text.caption)}</desc>`,
    text.fontCss ? `<style>${escapeXml(text.fontCss)}</style>` : '',
    paper && `<rect width="100%" height="100%" fill="${escapeXml(paper)}"/>`,
    `${body}<g class="caption">${captionText}</g></svg>\n`,
  ].join('')
}

/** A figure written out with its colours and fonts, free of the page: what a file is made of. */
export type DrawnFigure = {
  /** px */
  readonly width: number
  readonly height: number
  /** Colours of the page that it was drawn on; '' where none is set. */
  readonly paper: string
  readonly ink: string
  /** Attributes of the element that holds the body: family and size of its text. Each begins with a space. */
  readonly fonts: string
  /** Elements in the figure's own pixels, from 0 0. */
  readonly body: string
}

/**
 * A figure as it stands on the page now.
 *
 * @throws RangeError for a figure without size.
 */
export function drawFigure(svg: ReadElement, styleOf: (element: ReadElement) => ReadStyle): DrawnFigure {
  const width = Number(attribute(svg, 'width'))
  const height = Number(attribute(svg, 'height'))
  if (!(width > 0 && height > 0))
    throw new RangeError(`the figure must have a width and a height above 0, has ${width} × ${height}`)
  const root = styleOf(svg)
  const inherited = new Map(PROPERTIES.map(([name, initial]) => [name, initial]))
  // the fonts of the whole file are stated once, on the root
  const fonts = ['font-family', 'font-size'].map((name) => [name, root.getPropertyValue(name).trim()] as const)
  for (const [name, value] of fonts) inherited.set(name, value)
  return {
    ...{ width, height },
    paper: root.getPropertyValue('--paper').trim(),
    ink: root.getPropertyValue('--ink').trim(),
    fonts: fonts.flatMap(([name, value]) => (value === '' ? [] : [` ${name}="${escapeXml(value)}"`])).join(''),
    body: Array.from(svg.childNodes ?? [], (child) => serialize(child, inherited, styleOf)).join(''),
  }
}

/** drawFigure of a figure on the page. */
export function drawnFigure(svg: SVGSVGElement): DrawnFigure {
  return drawFigure(svg as unknown as ReadElement, (element) => getComputedStyle(element as unknown as Element))
}

const PADDING = 16
const LINE_HEIGHT = 18

/** Text broken into lines of at most so many characters, at spaces; a word that is longer is cut. */
export function wrapText(text: string, columns: number): string[] {
  const lines: string[] = []
  for (const paragraph of text.split('\n')) {
    let line = ''
    for (const word of paragraph.split(/[ \t]+/).filter(Boolean)) {
      const letters = [...word]
      for (let i = 0; i < letters.length; i += columns) {
        const piece = letters.slice(i, i + columns).join('')
        if (line !== '' && [...line].length + 1 + [...piece].length > columns) {
          lines.push(line)
          line = ''
        }
        line = line === '' ? piece : `${line} ${piece}`
      }
    }
    if (line !== '') lines.push(line)
  }
  return lines
}

/** Text made safe for XML 1.0, in content and in attributes; control characters, which XML cannot hold, become U+FFFD. */
export function escapeXml(text: string): string {
  return text
    .replace(/[\u0000-\u0008\u000b\u000c\u000e-\u001f\ufffe\uffff]/g, '\ufffd')
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;')
    .replaceAll("'", '&#39;')
}

function serialize(
  node: ReadElement,
  inherited: ReadonlyMap<string, string>,
  styleOf: (element: ReadElement) => ReadStyle,
): string {
  if (node.nodeType === 3) return escapeXml(node.data ?? '')
  if (node.nodeType !== 1 || node.tagName === undefined || leftOut(node)) return ''
  const style = styleOf(node)
  if (style.getPropertyValue('display') === 'none') return ''
  let out = `<${node.tagName}`
  for (const { name, value } of Array.from(node.attributes ?? [])) {
    if (GEOMETRY.has(name)) out += ` ${name}="${escapeXml(value)}"`
  }
  const own = new Map(inherited)
  for (const [name, initial, passedOn] of PROPERTIES) {
    // a computed reference may have become an absolute address, which is dead in a file
    const written = attribute(node, name)
    const value = written?.startsWith('url(') ? written : style.getPropertyValue(name).trim()
    if (value === '' || value === (passedOn ? inherited.get(name) : initial)) continue
    out += ` ${name}="${escapeXml(value)}"`
    if (passedOn) own.set(name, value)
  }
  const children = Array.from(node.childNodes ?? [], (child) => serialize(child, own, styleOf)).join('')
  return children === '' ? `${out}/>` : `${out}>${children}</${node.tagName}>`
}

function leftOut(element: ReadElement): boolean {
  if (element.tagName === 'title' || element.tagName === 'desc') return true
  if (attribute(element, 'data-save') === 'omit') return true
  const classes = (attribute(element, 'class') ?? '').split(' ')
  return ['plot-hit', 'plot-focus-ring', 'plot-pill'].some((name) => classes.includes(name))
}

function attribute(element: ReadElement, name: string): string | undefined {
  return Array.from(element.attributes ?? []).find((a) => a.name === name)?.value
}

/** To hundredths: a coordinate as it is written. */
export function round(v: number): number {
  return Math.round(v * 100) / 100
}

/**
 * A saved svg as a PNG, drawn by the browser.
 *
 * @param svgText  what figureToSvg gave.
 * @param scale    pixels of the picture per pixel of the figure, default 2.
 * @throws RangeError for a scale that is not above 0 or an svg without size, Error if the browser cannot draw it.
 */
export async function figureToPng(svgText: string, scale = 2): Promise<Blob> {
  if (!(scale > 0 && Number.isFinite(scale))) throw new RangeError(`scale must lie above 0, was ${scale}`)
  const { text, width, height, probes } = withFontProbes(svgText)
  const drawing = document.createElement('canvas')
  drawing.width = Math.round(width * scale)
  drawing.height = Math.round((height + probes * PROBE_HEIGHT) * scale)
  const context = drawing.getContext('2d', { willReadFrequently: true })
  if (context === null) throw new Error('This browser gave no canvas to draw the figure on.')
  const address = URL.createObjectURL(new Blob([text], { type: 'image/svg+xml' }))
  try {
    // A picture counts as loaded before the fonts inside it do, and text in a font that is still to come is left out.
    for (let attempt = 0; ; attempt++) {
      const image = new Image()
      image.src = address
      await image.decode()
      context.clearRect(0, 0, drawing.width, drawing.height)
      context.drawImage(image, 0, 0, drawing.width, drawing.height)
      if (attempt === MOST_ATTEMPTS || showsProbes(context, height * scale, probes, scale)) break
      await new Promise((resolve) => setTimeout(resolve, 25 * (attempt + 1)))
    }
  } finally {
    URL.revokeObjectURL(address)
  }
  const picture = document.createElement('canvas')
  picture.width = drawing.width
  picture.height = Math.round(height * scale)
  picture.getContext('2d')?.drawImage(drawing, 0, 0)
  return await new Promise<Blob>((resolve, reject) => {
    picture.toBlob(
      (blob) => (blob === null ? reject(new Error('The browser could not write the PNG.')) : resolve(blob)),
      'image/png',
    )
  })
}

const PROBE_HEIGHT = 24
const MOST_ATTEMPTS = 12

/**
 * A saved svg with a letter in each of its own fonts below it, a row each, by which it is seen whether they are there.
 *
 * @returns size of the figure without the rows, px.
 * @throws  RangeError for an svg that does not state its size.
 */
export function withFontProbes(svgText: string): { text: string; width: number; height: number; probes: number } {
  const size = /<svg[^>]* width="([\d.]+)" height="([\d.]+)"/.exec(svgText)
  if (size === null) throw new RangeError('svgText must state width and height in pixels on its svg element')
  const [width, height] = [Number(size[1]), Number(size[2])]
  const faces = new Set(
    [...svgText.matchAll(/@font-face\{font-family:(.*?);font-weight:([^;]*);font-style:([^;]*);/g)].map(
      ([, family, weight, style]) => `font-family="${family}" font-weight="${weight}" font-style="${style}"`,
    ),
  )
  const rows = [...faces].map(
    (font, i) => `<text x="4" y="${round(height + PROBE_HEIGHT * (i + 0.8))}" font-size="20px" ${font}>H</text>`,
  )
  const tall = round(height + PROBE_HEIGHT * faces.size)
  const text = svgText
    .replace(size[0], size[0].replace(/ height="[^"]*"$/, ` height="${tall}"`))
    .replace(/ viewBox="0 0 ([\d.]+) [\d.]+"/, ` viewBox="0 0 $1 ${tall}"`)
    .replace(/<\/svg>\s*$/, `${rows.join('')}</svg>`)
  return { text, width, height, probes: faces.size }
}

/** Whether every row of the probes holds more than its ground. */
function showsProbes(context: CanvasRenderingContext2D, top: number, probes: number, scale: number): boolean {
  const side = Math.floor(PROBE_HEIGHT * scale)
  for (let row = 0; row < probes; row++) {
    const { data } = context.getImageData(0, Math.ceil(top + row * PROBE_HEIGHT * scale), side, side - 1)
    if (data.every((value, i) => value === data[i % 4])) return false
  }
  return true
}

/** Hands a file to the user under a name. */
export function downloadBlob(blob: Blob, name: string): void {
  const address = URL.createObjectURL(blob)
  const link = document.createElement('a')
  link.href = address
  link.download = name
  document.body.append(link)
  link.click()
  link.remove()
  // a browser may start reading only after the click has returned
  setTimeout(() => URL.revokeObjectURL(address), 60_000)
}

/**
 * The @font-face rules of the page whose fonts are in use now, with the files inside as data: addresses, for SavedText.fontCss. A picture
 * drawn from an svg cannot load fonts, so without them a PNG falls back to the system's.
 *
 * @returns  '' where there are none or they cannot be read; a figure is saved all the same.
 */
export async function fontFaceCss(): Promise<string> {
  const key = (family: string, weight: string, style: string, range: string) =>
    [family.replace(/["']/g, ''), weight, style, range.replace(/\s/g, '').toUpperCase()].join('|')
  const used = new Set<string>()
  for (const face of document.fonts) {
    if (face.status === 'loaded') used.add(key(face.family, face.weight, face.style, face.unicodeRange))
  }
  const rules: string[] = []
  for (const sheet of Array.from(document.styleSheets)) {
    let cssRules: CSSRule[] = []
    try {
      cssRules = Array.from(sheet.cssRules)
    } catch {
      // a sheet of another origin does not let itself be read
      continue
    }
    for (const rule of cssRules) {
      if (!(rule instanceof CSSFontFaceRule)) continue
      const get = (name: string) => rule.style.getPropertyValue(name)
      const id = key(
        get('font-family'),
        get('font-weight') || 'normal',
        get('font-style') || 'normal',
        get('unicode-range') || 'U+0-10FFFF',
      )
      const address = /url\(["']?([^"')]+)["']?\)/.exec(get('src'))?.[1]
      if (address === undefined || !used.has(id)) continue
      try {
        const url = new URL(address, sheet.href ?? document.baseURI)
        const data = await dataAddress(await (await fetch(url)).blob())
        const range = get('unicode-range')
        rules.push(
          `@font-face{font-family:${get('font-family')};font-weight:${get('font-weight') || 'normal'};` +
            `font-style:${get('font-style') || 'normal'};${range && `unicode-range:${range};`}src:url(${data})}`,
        )
      } catch {
        // that font stays outside the file, which then shows the next family of its list
      }
    }
  }
  return rules.join('\n')
}

function dataAddress(blob: Blob): Promise<string> {
  return new Promise((resolve, reject) => {
    const reader = new FileReader()
    reader.onload = () => resolve(String(reader.result))
    reader.onerror = () => reject(reader.error)
    reader.readAsDataURL(blob)
  })
}
