import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import {
  figurePage,
  figureSheet,
  letterOf,
  placesOnSheet,
  type SheetFigure,
  sheetCaptions,
  withOwnIds,
} from '../../src/plot/figure-sheet.ts'

const figure = (title: string, width: number, height: number, body = '', caption = 'High-pass 1 Hz.'): SheetFigure => ({
  title,
  caption,
  drawn: { width, height, body, paper: '#f6f4ee', ink: '#22262b', fonts: ' font-family="&quot;A Face&quot;"' },
})

/** As two figures of one component have it: the same ids, a clip path and a pattern. */
const BODY =
  '<defs><clipPath id="p-clip"><rect x="0" y="0" width="9" height="9"/></clipPath><pattern id="p-unseen"/></defs>' +
  '<g clip-path="url(#p-clip)"><rect fill="url(#p-unseen)"/></g><text>say url(#p-clip)</text>'

/** Every element is closed in its order, and every attribute is quoted. */
function wellFormed(text: string): void {
  const open: string[] = []
  const rest = text
    .replace(/^<\?xml[^?]*\?>\s*/, '')
    .replace(/<(\/?)([A-Za-z][\w]*)((?: [\w:-]+="[^"<]*")*)(\/?)>/g, (_, close: string, name: string, __, alone) => {
      if (close) expect(open.pop()).toBe(name)
      else if (!alone) open.push(name)
      return ''
    })
  expect(open).toEqual([])
  expect(rest).not.toMatch(/[<>]/)
}

const idsOf = (text: string) => [...text.matchAll(/ id="([^"]*)"/g)].map(([, id]) => id)
const referencesOf = (text: string) => [...text.matchAll(/="url\(#([^)]*)\)"/g)].map(([, id]) => id)

describe('ids', () => {
  test('get a prefix together with what refers to them, and words that look like a reference stay words', () => {
    const own = withOwnIds(BODY, 'f1-')
    expect(idsOf(own)).toEqual(['f1-p-clip', 'f1-p-unseen'])
    expect(referencesOf(own)).toEqual(['f1-p-clip', 'f1-p-unseen'])
    expect(own).toContain('<text>say url(#p-clip)</text>')
  })

  test.each([
    ['svg', figureSheet],
    ['page', figurePage],
  ])('are unique in a %s of two figures that had the same, and every reference leads to one', (_, make) => {
    const text = make([figure('One', 300, 100, BODY), figure('Two', 300, 100, BODY)], { title: 'A sheet' })
    const ids = idsOf(text)
    expect(ids).toHaveLength(4)
    expect(new Set(ids).size).toBe(4)
    for (const reference of referencesOf(text)) expect(ids).toContain(reference)
  })
})

describe('places', () => {
  test('wide figures stand below one another, two narrow ones share a row', () => {
    const { places, width, height } = placesOnSheet([
      { width: 880, height: 300 },
      { width: 880, height: 90 },
      { width: 420, height: 180 },
      { width: 420, height: 150 },
    ])
    expect(width).toBe(880)
    expect(places.map(({ x }) => x)).toEqual([0, 0, 0, 452])
    expect(places[2].y).toBe(places[3].y)
    expect(height).toBe(places[2].y + 26 + 180)
  })

  test('a row may be a tenth wider than the widest figure, and no more', () => {
    const wide = (width: number) =>
      placesOnSheet([{ width: 900, height: 9 }, ...[width, width].map((w) => ({ width: w, height: 9 }))])
    expect(wide(474).width).toBe(474 + 32 + 474)
    expect(wide(474).places[2].y).toBe(wide(474).places[1].y)
    expect(wide(480).width).toBe(900)
    expect(wide(480).places[2].y).toBeGreaterThan(wide(480).places[1].y)
  })

  test('no two figures ever overlap, none leaves the sheet, and they stay in order', () => {
    const size = fc.record({ width: fc.integer({ min: 1, max: 900 }), height: fc.integer({ min: 1, max: 400 }) })
    fc.assert(
      fc.property(fc.array(size, { minLength: 1, maxLength: 12 }), (sizes) => {
        const { places, width, height } = placesOnSheet(sizes)
        const boxes = places.map(({ x, y }, i) => ({
          x,
          y,
          right: x + sizes[i].width,
          bottom: y + 26 + sizes[i].height,
        }))
        boxes.forEach((a, i) => {
          expect(a.right).toBeLessThanOrEqual(width)
          expect(a.bottom).toBeLessThanOrEqual(height)
          for (const b of boxes.slice(i + 1)) {
            expect(a.right <= b.x || b.right <= a.x || a.bottom <= b.y || b.bottom <= a.y).toBe(true)
            expect(b.y > a.y || (b.y === a.y && b.x > a.x)).toBe(true)
          }
        })
      }),
    )
  })
})

describe('captions', () => {
  test('one that several figures share is said once, under their letters', () => {
    const captions = ['x', 'x', 'y', 'x', 'z', 'z', 'z'].map((caption) => ({ caption }))
    expect(sheetCaptions(captions)).toEqual([
      { letters: 'A, B and D', caption: 'x' },
      { letters: 'C', caption: 'y' },
      { letters: 'E to G', caption: 'z' },
    ])
  })

  test('letters go on after Z', () => {
    expect([0, 25, 26, 51, 52].map(letterOf)).toEqual(['A', 'Z', 'AA', 'AZ', 'BA'])
  })
})

describe('the sheet', () => {
  const hostile = figure('R < S & "T"', 300, 100, '', `</style><script>1</script> ${'long '.repeat(200)}`)

  test('is well-formed XML with title, letters and captions as text, whatever they hold', () => {
    const svg = figureSheet([figure('Time', 880, 300, BODY), hostile], { title: 'A & B', fontCss: '@font-face{}' })
    wellFormed(svg)
    expect(svg).toContain('<title>A &amp; B</title>')
    expect(svg).toContain('R &lt; S &amp; &quot;T&quot;')
    expect(svg).not.toContain('<script')
    expect(svg).toContain('<style>@font-face{}</style>')
  })

  test('has room for every line of the captions', () => {
    const svg = figureSheet([hostile], { title: 'x' })
    const height = Number(/<svg[^>]* height="([\d.]+)"/.exec(svg)?.[1])
    const lines = [...svg.matchAll(/<text x="24" y="([\d.]+)"/g)].map(([, y]) => Number(y))
    expect(lines.length).toBeGreaterThan(15)
    expect(Math.min(...lines)).toBeGreaterThan(24 + 26 + 100)
    expect(Math.max(...lines)).toBeLessThan(height)
  })

  test('without a figure there is none', () => {
    expect(() => figureSheet([], { title: 'x' })).toThrow(/at least one figure, has 0/)
    expect(() => figurePage([], { title: 'x' })).toThrow(/at least one figure, has 0/)
  })
})

describe('the page to print', () => {
  const html = figurePage([figure('Time', 880, 300, BODY), figure('Kernel', 420, 150, BODY, 'Low-pass <30 Hz>.')], {
    title: 'A & B',
    fontCss: '@font-face{src:url(data:font/woff2;base64,AA)}</style><b>',
  })

  test('has paper margins, keeps each figure with its caption on one sheet, and names every figure’s own caption', () => {
    expect(html).toContain('@page { margin: 18mm; }')
    expect(html).toContain('break-inside: avoid')
    expect(html).toContain('<figcaption><b>Figure 1. Time.</b> High-pass 1 Hz.</figcaption>')
    expect(html).toContain('<figcaption><b>Figure 2. Kernel.</b> Low-pass &lt;30 Hz&gt;.</figcaption>')
    expect(html.match(/<figure>/g)).toHaveLength(2)
  })

  test('draws all figures to one scale, so that their text is of one size', () => {
    const shares = [...html.matchAll(/width="(\d+)" height="\d+" [^>]*style="width: ([\d.]+)%"/g)].map((m) =>
      m.slice(1).map(Number),
    )
    expect(shares).toEqual([
      [880, 100],
      [420, 47.73],
    ])
  })

  test('cannot be left by what is put into its style', () => {
    expect(html.match(/<\/style>/g)).toHaveLength(1)
    expect(html.indexOf('</style>')).toBeGreaterThan(html.indexOf('break-inside'))
  })

  test('refers to nothing outside itself', () => {
    expect(html.replaceAll('xmlns="http://www.w3.org/2000/svg"', '')).not.toMatch(/https?:|src="|href=/)
  })
})
