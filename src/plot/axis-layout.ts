import type { Tick } from './ticks.ts'

/**
 * About how wide a text is in the page's sans face, px: enough to keep labels apart without asking a browser, and rather too wide
 * than too narrow. Digits are tabular, half their size wide.
 *
 * @param sizePx  size of the type, default 13.
 */
export function textWidth(text: string, sizePx = 13): number {
  let ems = 0
  for (const letter of text)
    ems += /[ .,:;!|'ijlI]/.test(letter) ? 0.26 : /[frt()/-]/.test(letter) ? 0.35 : wide(letter)
  return ems * sizePx
}

function wide(letter: string): number {
  if (/[mwMW%]/.test(letter)) return 0.83
  return /[A-Z]/.test(letter) ? 0.6 : /[0-9\u2212+]/.test(letter) ? 0.5 : 0.53
}

export type PlacedText = {
  readonly text: string
  readonly x: number
  readonly y: number
  readonly anchor: 'start' | 'middle' | 'end'
}

export type AxisLayout = { readonly labels: readonly PlacedText[]; readonly title: PlacedText | null }

const LABEL_DROP = 17
const TITLE_GAP = 8

/**
 * A bottom axis: labels centred under their ticks, moved inwards at the ends of the range; the title between the labels, in the last
 * gap wide enough for it, and in a line of its own below where there is none.
 *
 * @param y  pixel of the plot area's bottom.
 */
export function layoutBottomAxis(
  ticks: readonly Tick[],
  range: readonly [number, number],
  y: number,
  title?: string,
): AxisLayout {
  const left = Math.min(range[0], range[1])
  const right = Math.max(range[0], range[1])
  const baseline = y + LABEL_DROP
  const spans = ticks
    .map(({ label, pixel }) => {
      const half = textWidth(label) / 2
      const anchor = pixel - half < left ? 'start' : pixel + half > right ? 'end' : 'middle'
      const from = anchor === 'start' ? pixel : anchor === 'end' ? pixel - 2 * half : pixel - half
      return { label: { text: label, x: pixel, y: baseline, anchor } satisfies PlacedText, from, to: from + 2 * half }
    })
    .sort((a, b) => a.from - b.from)
  const labels = spans.map((span) => span.label)
  if (title === undefined || title === '') return { labels, title: null }

  const needed = textWidth(title) + 2 * TITLE_GAP
  const starts = [left - TITLE_GAP, ...spans.map((span) => span.to)]
  const ends = [...spans.map((span) => span.from), right + TITLE_GAP]
  for (let i = starts.length - 1; i >= 0; i--) {
    if (ends[i] - starts[i] >= needed) {
      return { labels, title: { text: title, x: ends[i] - TITLE_GAP, y: baseline, anchor: 'end' } }
    }
  }
  return { labels, title: { text: title, x: right, y: baseline + 16, anchor: 'end' } }
}

/**
 * A left axis: labels ending beside their ticks, the title (the unit) at the top end, above a label that stands there.
 *
 * @param x  pixel of the plot area's left edge.
 */
export function layoutLeftAxis(
  ticks: readonly Tick[],
  range: readonly [number, number],
  x: number,
  title?: string,
): AxisLayout {
  const top = Math.min(range[0], range[1])
  const end = x - 8
  const labels = ticks.map(({ label, pixel }): PlacedText => ({ text: label, x: end, y: pixel + 4.5, anchor: 'end' }))
  if (title === undefined || title === '') return { labels, title: null }
  const highest = Math.min(...ticks.map((tick) => tick.pixel))
  const y = highest - top < 20 ? Math.min(top, highest) - 11 : top + 4.5
  return { labels, title: { text: title, x: end, y, anchor: 'end' } }
}
