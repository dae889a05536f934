/** By moment: the density of shares over the time figure's own axis, cut into stretches. */
import { useRef } from 'react'
import { FigureFrame, linearScale, makeFrame, svgPoint } from '../../../plot/index.ts'
import type { Tracing } from '../../../state/evaluate-trace.ts'
import type { Workspace } from '../../../state/workspace.ts'
import { momentRowWords, shareWords } from '../../../words/index.ts'
import { FigureHead } from '../../figure-head.tsx'
import { useView } from '../../hooks.ts'
import { MARGIN } from '../../shared-axis.ts'
import type { TimeAxis } from '../../time-axis.ts'
import { placeOf } from './moment-shape.ts'
import { MomentPlot } from './moment-plot.tsx'
import { useStretches } from './use-stretches.ts'

interface MomentFigureProps {
  tracing: Tracing
  axis: TimeAxis
  baseline: Workspace['baseline']
  /** What the figure is about, for its description and its file. */
  question: string
  caption: () => string
  marked: number | null
  onMark: (row: number | null) => void
}

const HEIGHT = 204

export function MomentFigure({ tracing, axis, baseline, question, caption, marked, onMark }: MomentFigureProps) {
  const svg = useRef<SVGSVGElement>(null)
  const polarity = useView((view) => view.polarity)
  const { traced, back } = tracing
  const { rows, stretches, moments } = back
  const edit = useStretches(stretches, moments.timesMs)
  const largest = [...rows].sort((a, b) => Math.abs(b.share) - Math.abs(a.share)).slice(0, 3)
  const said = largest.map((row) => `${momentRowWords(row, traced)}: ${shareWords(row.share, traced.unit)}`)
  const msAt = (px: number, left: number, right: number) =>
    linearScale([axis.fromMs, axis.toMs], [left, right]).fromPixel(px)
  return (
    <>
      <FigureHead title="By moment" svg={svg} caption={caption} fileName="trace-back-by-moment">
        <span className="told">share in {traced.unit} per 100 ms: effective window times waveform</span>
      </FigureHead>
      {/* biome-ignore lint/a11y/noStaticElementInteractions: each row of the table has the same by keyboard */}
      <div
        className="time-hanging by-moment"
        onDoubleClick={(event) => {
          const target = event.target as Element
          const held = target.closest('[data-boundary]')
          if (held) return edit.remove(Number(held.getAttribute('data-boundary')))
          if (!svg.current) return
          const frame = makeFrame(svg.current.clientWidth, svg.current.clientHeight, MARGIN, '')
          const point = svgPoint(svg.current, event.clientX, event.clientY)
          if (point.y <= frame.bottom) edit.split(msAt(point.x, frame.left, frame.right))
        }}
      >
        <FigureFrame
          title="Trace-back by moment"
          description={`${question} Share in ${traced.unit} per 100 ms over time. The largest: ${said.join('; ')}. A double click splits a stretch; on a boundary it joins two.`}
          height={HEIGHT}
          margin={MARGIN}
          interactive={stretches.length > 0}
          svgRef={svg}
          onHover={(point, frame) => {
            if (!point) return onMark(null)
            const ms = msAt(point.x, frame.left, frame.right)
            const at = rows.findIndex((row) => {
              const place = placeOf(row, axis)
              return place !== null && ms >= place.fromMs && ms < place.toMs
            })
            onMark(at < 0 ? null : at)
          }}
        >
          {(frame) => <MomentPlot {...{ frame, tracing, axis, baseline, polarity, marked }} />}
        </FigureFrame>
      </div>
    </>
  )
}
