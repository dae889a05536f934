import { readFileSync, readdirSync } from 'node:fs'
import type { ReactElement } from 'react'
import { renderToStaticMarkup } from 'react-dom/server'
import { describe, expect, test } from 'vitest'
import {
  Area,
  Axis,
  Band,
  Clipped,
  Cursor,
  DirectLabel,
  FigureFrame,
  GridLines,
  Handle,
  HatchedZone,
  hatchId,
  Line,
  linearScale,
  logScale,
  makeFrame,
  PathLine,
  sampleAt,
  StaticCursor,
  textWidth,
  ticksAt,
  ZeroLine,
} from '../../src/plot/index.ts'

const frame = makeFrame(400, 200, { top: 10, right: 20, bottom: 30, left: 40 }, 'f')
const x = linearScale([-200, 800], [frame.left, frame.right])
const y = linearScale([-5, 10], [frame.bottom, frame.top])
const markup = (element: ReactElement) => renderToStaticMarkup(element)
const ms = (v: number) => `${v} ms`

/** The values of one attribute, in document order. */
function attributes(html: string, name: string): string[] {
  return [...html.matchAll(new RegExp(` ${name}="([^"]*)"`, 'g'))].map((m) => m[1])
}

describe('makeFrame', () => {
  test('the plot area is what the margins leave', () => {
    expect(frame).toMatchObject({ left: 40, right: 380, top: 10, bottom: 170, plotWidth: 340, plotHeight: 160 })
  })

  test('margins larger than the figure leave one pixel', () => {
    expect(makeFrame(30, 20, { top: 20, right: 20, bottom: 20, left: 20 }, 'f')).toMatchObject({
      plotWidth: 1,
      plotHeight: 1,
    })
  })
})

describe('FigureFrame', () => {
  const figure = (interactive: boolean) =>
    markup(
      <FigureFrame
        title="Time"
        description="Before and after."
        width={400}
        height={200}
        margin={{ top: 10, right: 20, bottom: 30, left: 40 }}
        interactive={interactive}
      >
        {(f) => (
          <Clipped frame={f}>
            <PathLine d={`M${f.left},0`} tone="ink" />
          </Clipped>
        )}
      </FigureFrame>,
    )

  test('has a name and a description that its svg points to', () => {
    const html = figure(false)
    const name = /aria-labelledby="([^"]+)"/.exec(html)![1]
    const description = /aria-describedby="([^"]+)"/.exec(html)![1]
    expect(html).toContain(`<title id="${name}">Time</title>`)
    expect(html).toContain(`<desc id="${description}">Before and after.</desc>`)
  })

  test('is an image without sliders and a group with them', () => {
    expect(figure(false)).toMatch(/<svg[^>]* role="img"/)
    expect(figure(true)).toMatch(/<svg[^>]* role="group"/)
  })

  test('gives its children the plot area and clips what is Clipped to it', () => {
    const html = figure(false)
    const clip = /clip-path="url\(#([^)]+)\)"/.exec(html)![1]
    expect(html).toContain(`<clipPath id="${clip}"><rect x="40" y="10" width="340" height="160"></rect></clipPath>`)
    expect(html).toContain('d="M40,0"')
  })

  test('draws nothing before it knows its width, but keeps its height', () => {
    const html = markup(
      <FigureFrame title="t" description="d" height={200} margin={{ top: 0, right: 0, bottom: 0, left: 0 }}>
        {() => <g />}
      </FigureFrame>,
    )
    expect(html).toBe('<div class="plot-parent" style="height:200px"></div>')
  })

  test('two figures on a page have different ids', () => {
    const one = (
      <FigureFrame title="t" description="d" width={9} height={9} margin={{ top: 0, right: 0, bottom: 0, left: 0 }}>
        {() => null}
      </FigureFrame>
    )
    const ids = attributes(
      markup(
        <div>
          {one}
          {one}
        </div>,
      ),
      'id',
    )
    expect(new Set(ids).size).toBe(ids.length)
    expect(ids.length).toBe(10)
  })
})

describe('Axis', () => {
  test('a bottom axis has labels under its ticks and the title in the last gap wide enough', () => {
    const wide = linearScale([-200, 1000], [40, 840])
    const html = markup(<Axis side="bottom" scale={wide} at={170} title="Time, ms" />)
    expect([...html.matchAll(/>([^<]+)<\/text>/g)].map((m) => m[1])).toEqual([
      '−200',
      '0',
      '200',
      '400',
      '600',
      '800',
      '1000',
      'Time, ms',
    ])
    const title = /<text class="plot-axis-title" x="([\d.]+)" y="187" text-anchor="end">/.exec(html)!
    expect(Number(title[1])).toBeLessThan(813 - 5)
    expect(Number(title[1]) - 55).toBeGreaterThan(720)
  })

  test('the title of four decades stands between 1 and 10', () => {
    const log = logScale([0.01, 100], [40, 472])
    const html = markup(<Axis side="bottom" scale={log} at={170} title="Frequency, Hz" />)
    const end = Number(/class="plot-axis-title" x="([\d.]+)" y="187"/.exec(html)![1])
    expect(end).toBeLessThan(log.toPixel(10) - 6)
    expect(end - textWidth('Frequency, Hz')).toBeGreaterThan(log.toPixel(1) + 3)
  })

  test('a title with no gap goes into a line below', () => {
    const html = markup(
      <Axis
        side="bottom"
        scale={x}
        at={170}
        ticks={ticksAt(x, [-200, -100, 0, 100, 200, 300, 400, 500, 600, 700, 800])}
        title="Time, ms"
      />,
    )
    expect(html).toContain('x="380" y="203" text-anchor="end">Time, ms')
  })

  test('labels at the ends of the range do not stick out', () => {
    const log = logScale([0.01, 100], [40, 380])
    expect(attributes(markup(<Axis side="bottom" scale={log} at={170} />), 'text-anchor')).toEqual([
      'start',
      'middle',
      'middle',
      'middle',
      'end',
    ])
  })

  test('a left axis ends beside its ticks, with the unit at the top', () => {
    const html = markup(<Axis side="left" scale={y} at={40} title="µV" ticks={ticksAt(y, [-5, 0, 5])} />)
    expect(html).toContain('<text x="32" y="174.5" text-anchor="end">−5</text>')
    expect(html).toContain(`x="32" y="14.5" text-anchor="end">µV</text>`)
  })

  test('the unit makes way for a label at the very top', () => {
    const html = markup(<Axis side="left" scale={y} at={40} title="µV" ticks={ticksAt(y, [0, 10])} />)
    expect(html).toContain('y="-1" text-anchor="end">µV</text>')
  })
})

describe('grid and zero line', () => {
  test('grid lines stand on whole pixels at the ticks', () => {
    const html = markup(<GridLines frame={frame} scale={x} along="x" ticks={ticksAt(x, [0, 300])} />)
    expect(html).toContain('d="M108.5,10V170M210.5,10V170"')
  })

  test('a zero line spans the plot area, and is absent where zero is', () => {
    expect(markup(<ZeroLine frame={frame} scale={y} along="y" />)).toContain('d="M40,116.5H380"')
    expect(markup(<ZeroLine frame={frame} scale={linearScale([1, 2], [0, 9])} along="y" />)).toBe('')
  })
})

describe('curves', () => {
  const data = { xs: { start: -200, step: 500 }, ys: Float64Array.of(0, 10, -5), x, y }

  test('before is thin and solid, after thick, taken out dashed', () => {
    const before = markup(<Line {...data} tone="before" />)
    const after = markup(<Line {...data} tone="after" />)
    const out = markup(<Line {...data} tone="taken-out" />)
    for (const html of [before, after, out]) expect(html).toContain('d="M40,116.67L210,10L380,170"')
    expect(Number(attributes(after, 'stroke-width')[0])).toBeGreaterThan(Number(attributes(before, 'stroke-width')[0]))
    expect(attributes(before, 'stroke')).toEqual(['var(--before)'])
    expect(attributes(before, 'stroke-dasharray')).toEqual([])
    expect(attributes(out, 'stroke-dasharray')).toHaveLength(1)
  })

  test('an area closes along zero', () => {
    expect(markup(<Area {...data} tone="taken-out" />)).toContain('d="M40,116.67L40,116.67L210,10L380,170L380,116.67Z"')
  })
})

describe('HatchedZone', () => {
  test('is cut to the plot area and points to the pattern of its figure', () => {
    const html = markup(<HatchedZone frame={frame} kind="outside" fromPx={90} toPx={-20} />)
    expect(html).toContain('x="40" y="10" width="50" height="160"')
    expect(html).toContain(`fill="url(#${hatchId(frame, 'outside')})"`)
    expect(markup(<HatchedZone frame={frame} kind="unseen" fromPx={400} toPx={500} />)).toBe('')
  })
})

describe('DirectLabel', () => {
  test('has a halo in the colour of its ground, and pale tones a darker text', () => {
    const html = markup(
      <DirectLabel x={10} y={20} tone="before">
        before
      </DirectLabel>,
    )
    expect(html).toContain('stroke="var(--sheet)"')
    expect(html).toContain('paint-order="stroke"')
    expect(html).toContain('fill="var(--before-text, var(--quiet))"')
  })
})

describe('Band', () => {
  const html = markup(
    <Band
      frame={frame}
      scale={x}
      value={{ from: 80, to: 140 }}
      min={-200}
      max={800}
      step={2}
      label="score window"
      valueText={ms}
      onChange={() => {}}
    />,
  )

  test('is a group of three sliders with names, limits, values and values in words', () => {
    expect(attributes(html, 'role')).toEqual(['group', 'slider', 'slider', 'slider'])
    expect(attributes(html, 'aria-label')).toEqual([
      'score window',
      'score window, whole',
      'score window, start',
      'score window, end',
    ])
    expect(attributes(html, 'aria-valuenow')).toEqual(['80', '80', '140'])
    expect(attributes(html, 'aria-valuemin')).toEqual(['-200', '-200', '80'])
    expect(attributes(html, 'aria-valuemax')).toEqual(['740', '140', '800'])
    expect(attributes(html, 'aria-valuetext')).toEqual(['80 ms to 140 ms', '80 ms', '140 ms'])
    expect(attributes(html, 'tabindex')).toEqual(['0', '0', '0'])
  })

  test('covers its window, with a pill on each edge', () => {
    // 80 ms is at 135.2 px, 140 ms at 155.6 px
    expect(html).toContain('<rect x="135.2" y="10" width="20.4" height="160"')
    const pills = [...html.matchAll(/class="plot-pill" x="([\d.]+)" y="([\d.]+)" width="7"/g)].map((m) => [m[1], m[2]])
    expect(pills).toEqual([
      ['131.7', '63'],
      ['152.1', '63'],
    ])
  })

  test('edges have hit areas 24 px wide and do not scroll under touch', () => {
    const hits = [...html.matchAll(/class="plot-hit" x="[\d.]+" y="10" width="([\d.]+)"/g)].map((m) => Number(m[1]))
    expect(hits).toEqual([6.8, 24, 24])
    expect(html.match(/touch-action:none/g)).toHaveLength(3)
  })
})

describe('Handle', () => {
  test('is a slider on its scale with a hit area of 24 px or more', () => {
    const log = logScale([0.01, 100], [0, 400])
    const html = markup(
      <Handle
        scale={log}
        value={1}
        y={50}
        min={0.05}
        max={50}
        stepBy={(v, steps) => v * 1.01 ** steps}
        label="high-pass, half-amplitude cutoff"
        valueText={(v) => `${v.toFixed(2)} Hz`}
        onChange={() => {}}
      />,
    )
    expect(attributes(html, 'cx')).toEqual(['200', '200', '200'])
    expect(2 * Number(attributes(html, 'r')[0])).toBeGreaterThanOrEqual(24)
    expect(attributes(html, 'aria-valuetext')).toEqual(['1.00 Hz'])
    expect(attributes(html, 'aria-valuenow')).toEqual(['1'])
  })
})

describe('Cursor', () => {
  const dots = [
    { y: 60, tone: 'before', name: 'before', text: '7.90 µV' },
    { y: 64, tone: 'after', name: 'after', text: '4.58 µV' },
    { y: Number.NaN, tone: 'taken-out', name: 'taken out', text: '–' },
  ] as const

  test('has a line, a dot for each curve that has a value, and labels that do not cover each other', () => {
    const html = markup(<StaticCursor frame={frame} scale={x} value={300} dots={dots} label="300 ms" />)
    expect(html).toContain('d="M210,10V170"')
    expect(attributes(html, 'cy')).toEqual(['60', '64'])
    const heights = [...html.matchAll(/y="([\d.]+)" text-anchor="start"/g)].map((m) => Number(m[1]))
    expect(heights).toHaveLength(2)
    expect(heights[1] - heights[0]).toBeCloseTo(17, 9)
  })

  test('labels change to the left side where the right has no room', () => {
    const html = markup(<StaticCursor frame={frame} scale={x} value={780} dots={dots} />)
    expect(attributes(html, 'text-anchor')).toEqual(['end', 'end'])
  })

  test('is absent outside the plot area', () => {
    expect(markup(<StaticCursor frame={frame} scale={x} value={2000} dots={dots} />)).toBe('')
  })

  test('is a slider whose value is told in words', () => {
    const html = markup(
      <Cursor
        frame={frame}
        scale={x}
        value={300}
        min={-200}
        max={800}
        step={2}
        name="cursor"
        valueText="300 ms: before 7.90 µV"
        onChange={() => {}}
      />,
    )
    expect(attributes(html, 'role')).toEqual(['slider'])
    expect(attributes(html, 'aria-valuetext')).toEqual(['300 ms: before 7.90 µV'])
  })

  test('sampleAt gives the nearest sample and stays within the samples', () => {
    expect(sampleAt(x, 210.2, -200, 800, 2)).toBe(300)
    expect(sampleAt(x, 0, -200, 800, 2)).toBe(-200)
    expect(sampleAt(x, 900, -200, 799, 2)).toBeLessThanOrEqual(800)
  })
})

describe('the room as a whole', () => {
  const folder = new URL('../../src/plot/', import.meta.url)
  const sources = readdirSync(folder).map((name) => ({ name, text: readFileSync(new URL(name, folder), 'utf8') }))

  test('has no colour and no font face of its own', () => {
    for (const { name, text } of sources) {
      expect(text.match(/#[0-9a-f]{3,8}\b(?!;)/gi) ?? [], name).toEqual([])
      if (name !== 'save-figure.ts') expect(text.match(/rgba?\(|hsl|font-family/g) ?? [], name).toEqual([])
    }
  })

  test('imports nothing but itself, React and d3', () => {
    for (const { name, text } of sources) {
      for (const [, from] of text.matchAll(/from '([^']+)'/g))
        expect(from, name).toMatch(/^(\.\/[a-z-]+\.tsx?|react|d3)$/)
    }
  })
})
