import { describe, expect, test } from 'vitest'
import { escapeXml, serializeFigure, withFontProbes, wrapText } from '../../src/plot/save-figure.ts'
import type { ReadElement } from '../../src/plot/save-figure.ts'

type Fake = ReadElement & { style: Record<string, string>; childNodes: Fake[] }

function element(
  tagName: string,
  attributes: Record<string, string>,
  style: Record<string, string> = {},
  ...childNodes: Fake[]
): Fake {
  return {
    nodeType: 1,
    tagName,
    attributes: Object.entries(attributes).map(([name, value]) => ({ name, value })),
    style,
    childNodes,
  }
}
const text = (data: string): Fake => ({ nodeType: 3, data, style: {}, childNodes: [] })

/** Computed styles as a browser gives them: what an element does not say comes from its parent. */
function stylesOf(root: Fake) {
  const computed = new Map<ReadElement, Record<string, string>>()
  const visit = (node: Fake, parent: Record<string, string>) => {
    const own = { ...parent, opacity: '1', display: 'inline', ...node.style }
    computed.set(node, own)
    for (const child of node.childNodes) visit(child, own)
  }
  visit(root, { fill: 'rgb(0, 0, 0)', stroke: 'none', 'stroke-width': '1px', 'font-weight': '400' })
  return (node: ReadElement) => ({ getPropertyValue: (name: string) => computed.get(node)?.[name] ?? '' })
}

const theme = { '--paper': ' #eee', '--ink': '#111', 'font-family': '"A Face", sans-serif', 'font-size': '13px' }
const save = (root: Fake, title = 'Time', caption = 'High-pass 1 Hz.') =>
  serializeFigure(root, { title, caption }, stylesOf(root))

describe('serializeFigure', () => {
  test('writes the colours that the style sheets came to, and no custom property', () => {
    const svg = save(
      element(
        'svg',
        { width: '300', height: '100' },
        theme,
        element(
          'path',
          { d: 'M0,0L1,1', fill: 'none', stroke: 'var(--after)', class: 'x' },
          { fill: 'none', stroke: 'rgb(20, 87, 107)', 'stroke-width': '2.8px' },
        ),
      ),
    )
    expect(svg).toContain('<path d="M0,0L1,1" fill="none" stroke="rgb(20, 87, 107)" stroke-width="2.8px"/>')
    expect(svg).not.toContain('var(')
    expect(svg).not.toContain('class="x"')
  })

  test('states a font and inherited styles once', () => {
    const svg = save(
      element(
        'svg',
        { width: '300', height: '100' },
        theme,
        element('g', {}, { fill: 'rgb(95, 94, 88)' }, element('text', { x: '1', y: '2' }, {}, text('−200'))),
      ),
    )
    expect(svg.match(/font-family=/g)).toHaveLength(1)
    expect(svg).toContain('font-family="&quot;A Face&quot;, sans-serif"')
    expect(svg).toContain('<g fill="rgb(95, 94, 88)"><text x="1" y="2">−200</text></g>')
  })

  test('says black again inside a coloured group', () => {
    const svg = save(
      element(
        'svg',
        { width: '300', height: '100' },
        theme,
        element('g', {}, { fill: 'rgb(1, 2, 3)' }, element('rect', { x: '1' }, { fill: 'rgb(0, 0, 0)' })),
      ),
    )
    expect(svg).toContain('<rect x="1" fill="rgb(0, 0, 0)"/>')
  })

  test('keeps references to patterns local', () => {
    const svg = save(
      element(
        'svg',
        { width: '300', height: '100' },
        theme,
        element(
          'rect',
          { fill: 'url(#f-unseen)', 'clip-path': 'url(#f-clip)' },
          { fill: 'url("https://host/page#f-unseen")' },
        ),
      ),
    )
    expect(svg).toContain('<rect clip-path="url(#f-clip)" fill="url(#f-unseen)"/>')
  })

  test('leaves out hit areas, focus rings, handles, and what is hidden or marked', () => {
    const gone = [
      element('rect', { class: 'plot-hit' }),
      element('rect', { class: 'a plot-focus-ring' }),
      element('rect', { class: 'plot-pill' }),
      element('rect', { 'data-save': 'omit' }),
      element('rect', {}, { display: 'none' }),
    ]
    const svg = save(
      element(
        'svg',
        { width: '300', height: '100' },
        theme,
        element('g', { role: 'slider', tabindex: '0', 'aria-label': 'x' }, {}, ...gone),
      ),
    )
    expect(svg).toContain('<g/>')
  })

  test('title and caption stand below as text and are safe in XML', () => {
    const svg = save(
      element('svg', { width: '300', height: '100' }, theme),
      'A < B & "C"',
      `1 Hz ${'word '.repeat(30)}`,
    )
    expect(svg).toContain('<title>A &lt; B &amp; &quot;C&quot;</title>')
    const lines = [...svg.matchAll(/<text x="16" y="([\d.]+)"/g)].map((m) => Number(m[1]))
    expect(lines.length).toBeGreaterThan(4)
    expect(Math.min(...lines)).toBeGreaterThan(100)
    const height = Number(/<svg[^>]* height="([\d.]+)"/.exec(svg)![1])
    expect(Math.max(...lines)).toBeLessThan(height)
    expect(svg).toContain('<rect width="100%" height="100%" fill="#eee"/>')
  })

  test('a figure without size is refused', () => {
    expect(() => save(element('svg', {}, theme))).toThrow(/must have a width and a height above 0, has NaN × NaN/)
  })
})

describe('wrapText', () => {
  test('breaks at spaces, never beyond the width, and loses no word', () => {
    const lines = wrapText('The chain ran on the continuous recording, zero-phase.', 20)
    expect(lines).toEqual(['The chain ran on the', 'continuous', 'recording,', 'zero-phase.'])
  })

  test('cuts a word that is longer than a line', () => {
    expect(wrapText('abcdefgh ij', 3)).toEqual(['abc', 'def', 'gh', 'ij'])
  })

  test('keeps paragraphs apart and gives nothing for nothing', () => {
    expect(wrapText('a\nb', 9)).toEqual(['a', 'b'])
    expect(wrapText('  ', 9)).toEqual([])
  })
})

describe('escapeXml', () => {
  test('escapes the five characters and replaces what XML cannot hold', () => {
    expect(escapeXml('<&>"\'\u0000\u001b')).toBe('&lt;&amp;&gt;&quot;&#39;\ufffd\ufffd')
    expect(escapeXml('µV − 1\n')).toBe('µV − 1\n')
  })
})

describe('withFontProbes', () => {
  const face = (family: string, weight: number) =>
    `@font-face{font-family:${family};font-weight:${weight};font-style:normal;src:url(data:font/woff2;base64,AA)}`
  const saved = (fontCss: string) => {
    const root = element('svg', { width: '300', height: '100' }, theme)
    return serializeFigure(root, { title: 'Time', caption: 'High-pass 1 Hz.', fontCss }, stylesOf(root))
  }

  test('adds a letter in each font of the file below the figure, each font once', () => {
    const svg = saved([face('"A Face"', 400), face('"A Face"', 600), face('"A Face"', 400), face('B', 400)].join('\n'))
    const { text, width, height, probes } = withFontProbes(svg)
    expect(probes).toBe(3)
    expect(svg).toContain(`width="${width}" height="${height}" viewBox="0 0 ${width} ${height}"`)
    expect(text).toContain(`width="${width}" height="${height + 72}" viewBox="0 0 ${width} ${height + 72}"`)
    const rows = [...text.matchAll(/<text x="4" y="([\d.]+)" font-size="20px" ([^>]*)>H<\/text>/g)]
    expect(rows.map(([, , font]) => font)).toEqual([
      'font-family="&quot;A Face&quot;" font-weight="400" font-style="normal"',
      'font-family="&quot;A Face&quot;" font-weight="600" font-style="normal"',
      'font-family="B" font-weight="400" font-style="normal"',
    ])
    for (const [, y] of rows) expect(Number(y)).toBeGreaterThan(height)
  })

  test('leaves a file without fonts as it is, and refuses one without a size', () => {
    expect(withFontProbes(saved('')).probes).toBe(0)
    expect(withFontProbes(saved('')).text.trim()).toBe(saved('').trim())
    expect(() => withFontProbes('<svg/>')).toThrow(/must state width and height/)
  })
})
