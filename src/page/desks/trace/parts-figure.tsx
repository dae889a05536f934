/** Bars for the parts of a value, their sum under them: by component, or by condition. */
import { useRef } from 'react'
import { FigureFrame, type Frame, linearScale, textWidth } from '../../../plot/index.ts'
import type { PartTrace } from '../../../evidence/trace-by-component.ts'
import { fixed, traceValueWords } from '../../../words/index.ts'
import { FigureHead } from '../../figure-head.tsx'
import { Unspoken } from '../../label-text.tsx'

interface PartsFigureProps {
  title: string
  parts: PartTrace
  /** Names the total: "the score after". */
  asked: string
  caption: () => string
  fileName: string
}

interface Bar {
  name: string
  share: number
  percent: number | null
}

/** More bars than this would push the rest of the desk away. */
const MOST = 7
const ROW = 30

/** The parts in their own order, the smallest of many together in one bar. */
export function barsOf({ rows }: PartTrace): Bar[] {
  if (rows.length <= MOST) return [...rows]
  const bySize = [...rows].sort((a, b) => Math.abs(b.share) - Math.abs(a.share))
  const kept = rows.filter((row) => bySize.indexOf(row) < MOST - 1)
  const rest = bySize.slice(MOST - 1)
  const percent = rest.reduce<number | null>(
    (sum, row) => (sum === null || row.percent === null ? null : sum + row.percent),
    0,
  )
  return [...kept, { name: `${rest.length} others`, share: rest.reduce((sum, row) => sum + row.share, 0), percent }]
}

export function PartsFigure({ title, parts, asked, caption, fileName }: PartsFigureProps) {
  const svg = useRef<SVGSVGElement>(null)
  const bars = barsOf(parts)
  const { value, unit } = parts
  const said = bars.map(
    ({ name, share, percent }) => `${name} ${digits(share, unit)} ${unit}${percentWords(percent, ', ')}`,
  )
  return (
    <>
      <FigureHead title={title} svg={svg} caption={caption} fileName={fileName}>
        <span className="told">share in {unit}</span>
      </FigureHead>
      <FigureFrame
        title={`Trace-back ${title.toLowerCase()}`}
        description={`${said.join('; ')}. Sum, ${asked}: ${traceValueWords(value, unit)}.`}
        height={ROW * (bars.length + 1) + 12}
        margin={{ top: 4, right: 0, bottom: 0, left: 0 }}
        sheet={false}
        svgRef={svg}
      >
        {(frame) => <Bars {...{ frame, bars, value, unit, asked }} hasPercent={!parts.aboutZero} />}
      </FigureFrame>
    </>
  )
}

const digits = (share: number, unit: PartTrace['unit']) => fixed(share, unit === 'µV' ? 3 : 4)

const percentWords = (percent: number | null, before = '') =>
  percent === null ? '' : `${before}${fixed(percent, Math.abs(percent) < 0.95 && Math.abs(percent) >= 0.05 ? 1 : 0)} %`

interface BarsProps {
  frame: Frame
  bars: readonly Bar[]
  value: number
  unit: PartTrace['unit']
  asked: string
  hasPercent: boolean
}

function Bars({ frame, bars, value, unit, asked, hasPercent }: BarsProps) {
  const most = frame.plotWidth * 0.36
  const full = asked.replace(/^the /, '')
  // a long phrase stands in the question already
  const total = textWidth(full) * 1.06 + 12 > most ? 'sum' : full
  const nameWidth = Math.min(
    most,
    Math.max(...[...bars.map(({ name }) => name), total].map((name) => textWidth(name) * 1.06)) + 12,
  )
  const percentWidth = hasPercent ? 54 : 0
  const numberWidth = 74 + (unit === 'µV' ? 0 : 12)
  const left = frame.left + nameWidth
  const right = Math.max(left + 20, frame.right - numberWidth - percentWidth)
  const shares = [...bars.map(({ share }) => share), value, 0]
  const low = Math.min(...shares)
  const high = Math.max(...shares)
  const x = linearScale(low === high ? [-1, 1] : [low, high], [left, right - 4])
  const zero = Math.round(x.toPixel(0)) + 0.5
  const sumTop = frame.top + ROW * bars.length + 6
  const row = (bar: Bar, top: number, sum: boolean) => (
    <g key={top} className={sum ? 'plot-strong' : undefined}>
      <Text x={frame.left} y={top + ROW / 2} text={cut(bar.name, nameWidth - 8)} />
      <rect
        x={Math.min(zero, x.toPixel(bar.share))}
        y={top + ROW / 2 - 6.5}
        width={Math.abs(x.toPixel(bar.share) - zero)}
        height={13}
        fill={sum ? 'var(--ink)' : 'var(--after)'}
        fillOpacity={sum ? 0.85 : 1}
      />
      <Text x={frame.right - percentWidth} y={top + ROW / 2} text={`${digits(bar.share, unit)} ${unit}`} end />
      {hasPercent ? <Text x={frame.right} y={top + ROW / 2} text={percentWords(bar.percent)} end quiet /> : null}
    </g>
  )
  return (
    <Unspoken>
      {bars.map((bar, i) => row(bar, frame.top + ROW * i, false))}
      {row({ name: total, share: value, percent: 100 }, sumTop, true)}
      <path
        d={`M${frame.left},${sumTop - 2.5}H${frame.right}`}
        stroke="var(--rule-strong)"
        strokeWidth={1.5}
        fill="none"
      />
      <path d={`M${zero},${frame.top}V${frame.bottom}`} stroke="var(--quiet)" strokeWidth={1} fill="none" />
    </Unspoken>
  )
}

function Text(props: { x: number; y: number; text: string; end?: boolean; quiet?: boolean }) {
  return (
    <text
      className="plot-text plot-number"
      x={props.x}
      y={props.y + 4.5}
      textAnchor={props.end ? 'end' : 'start'}
      fill={props.quiet ? 'var(--quiet)' : 'var(--ink)'}
    >
      {props.text}
    </text>
  )
}

/** A name too long for its column, cut where it still fits. */
function cut(name: string, width: number): string {
  if (textWidth(name) <= width) return name
  let end = name.length
  while (end > 1 && textWidth(`${name.slice(0, end)}…`) > width) end--
  return `${name.slice(0, end).trimEnd()}…`
}
