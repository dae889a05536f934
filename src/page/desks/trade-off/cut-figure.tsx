/** A cut through the map along one roll-off: bias, noise and total error over the cutoff, with their numbers at the cursor. */
import { useRef } from 'react'
import { Axis, Clipped, DirectLabel, FigureFrame, GridLines, Line, linearScale, ZeroLine } from '../../../plot/index.ts'
import type { Tone } from '../../../plot/index.ts'
import { brief, measured, rollOffWords } from '../../../words/index.ts'
import { FigureHead } from '../../figure-head.tsx'
import { MAP_MARGIN } from './map-figure.tsx'
import { cutoffScale } from './map-shape.ts'
import type { MapUnit } from './map-words.ts'
import type { DrawnMap } from './use-maps.ts'

interface CutFigureProps {
  map: DrawnMap
  unit: MapUnit
  at: number
  caption: () => string
}

export function CutFigure({ map, unit, at, caption }: CutFigureProps) {
  const svg = useRef<SVGSVGElement>(null)
  const { request, figures, limits } = map
  const { cutoffsHz, rollOffs, candidate } = request.question
  const row = Math.floor(at / cutoffsHz.length)
  const column = at % cutoffsHz.length
  const cells = figures.cells.slice(row * cutoffsHz.length, (row + 1) * cutoffsHz.length)
  const size = (value: number | null | undefined) =>
    value === null || value === undefined ? Number.NaN : Math.abs(value)
  const curves: readonly { name: string; tone: Tone; values: number[]; limit: number | undefined }[] = [
    { name: 'bias', tone: 'taken-out', values: cells.map((cell) => size(cell?.bias)), limit: limits.bias },
    { name: 'noise', tone: 'before', values: cells.map((cell) => size(cell?.noise)), limit: limits.noise },
    {
      name: 'total error',
      tone: 'after',
      values: cells.map((cell) => size(cell?.totalError)),
      limit: limits.totalError,
    },
  ]
  const most = Math.max(...curves.flatMap(({ values }) => values.filter(Number.isFinite)), limits.bias ?? 0, 1e-6)
  const said = curves.map(({ name, values }) => `${name} ${measured(values[column], 3)} ${unit}`)
  return (
    <>
      <FigureHead
        title={`Cut along ${candidate.design === 'butterworth' ? '' : 'filters '}${rollOffWords(candidate, rollOffs[row])}`}
        svg={svg}
        caption={caption}
        fileName="trade-off-cut"
      >
        <span className="told">size in {unit} over the cutoff; dashed levels: limits</span>
      </FigureHead>
      <FigureFrame
        title="Cut through the map"
        description={`Size of bias, noise and total error over cutoffs from ${brief(cutoffsHz[0], 3)} to ${brief(cutoffsHz[cutoffsHz.length - 1], 3)} Hz. At ${brief(cutoffsHz[column], 3)} Hz: ${said.join(', ')}.`}
        height={170}
        margin={{ ...MAP_MARGIN, top: 10 }}
        svgRef={svg}
      >
        {(frame) => {
          const x = cutoffScale(cutoffsHz, frame.left, frame.right)
          const y = linearScale([0, most * 1.06], [frame.bottom, frame.top])
          const cursor = x.toPixel(cutoffsHz[column])
          const side = cursor > frame.right - 150 ? -1 : 1
          const labels = spread(
            curves.map(({ values }) => y.toPixel(values[column])),
            frame.top + 8,
            frame.bottom - 8,
          )
          return (
            <>
              <GridLines frame={frame} scale={x} along="x" />
              <GridLines frame={frame} scale={y} along="y" />
              <ZeroLine frame={frame} scale={y} along="y" />
              <path
                d={`M${cursor},${frame.top}V${frame.bottom}`}
                stroke="var(--quiet)"
                strokeDasharray="1.5 3"
                fill="none"
              />
              <Clipped frame={frame}>
                {curves.map(({ name, tone, values, limit }) => (
                  <g key={name}>
                    {limit === undefined ? null : (
                      <path
                        d={`M${frame.left},${y.toPixel(limit)}H${frame.right}`}
                        stroke="var(--over)"
                        strokeDasharray="4 3"
                        fill="none"
                      />
                    )}
                    <Line xs={Float64Array.from(cutoffsHz)} ys={Float64Array.from(values)} x={x} y={y} tone={tone} />
                  </g>
                ))}
              </Clipped>
              <g>
                {curves.map(({ name, tone, values }, i) =>
                  Number.isFinite(values[column]) ? (
                    <DirectLabel
                      key={name}
                      x={cursor + side * 8}
                      y={labels[i]}
                      tone={tone}
                      anchor={side < 0 ? 'end' : 'start'}
                    >
                      <tspan className="plot-strong">{name}</tspan> {measured(values[column], 3)}
                    </DirectLabel>
                  ) : null,
                )}
              </g>
              <Axis side="left" scale={y} at={frame.left} />
              <Axis side="bottom" scale={x} at={frame.bottom} title="Cutoff, Hz" />
            </>
          )
        }}
      </FigureFrame>
    </>
  )
}

/** Heights moved apart until labels of 16 px fit between the limits, in their order. */
export function spread(heights: readonly number[], top: number, bottom: number): number[] {
  const order = heights.map((_, i) => i).sort((a, b) => heights[a] - heights[b] || a - b)
  const placed = heights.slice()
  let least = top
  for (const i of order) {
    placed[i] = Math.max(least, Number.isFinite(heights[i]) ? heights[i] : least)
    least = placed[i] + 16
  }
  let most = bottom
  for (const i of order.reverse()) {
    placed[i] = Math.min(placed[i], most)
    most = placed[i] - 16
  }
  return placed
}
