/** A cut through the map along one roll-off: bias, noise and total error over the cutoff, with their numbers at the cursor. */
import { useRef } from 'react'
import { Axis, Clipped, FigureFrame, GridLines, Line, linearScale, ZeroLine } from '../../../plot/index.ts'
import type { Frame, Scale, Tone } from '../../../plot/index.ts'
import type { CurveCourse } from '../../../plot/place-labels.ts'
import { brief, rollOffWords } from '../../../words/index.ts'
import { courseOf } from '../../curve-course.ts'
import { FigureHead } from '../../figure-head.tsx'
import { LabelTexts } from '../../label-text.tsx'
import { type DrawnLabel, drawnLabels, placesBeside } from '../../placed-labels.ts'
import { MAP_MARGIN } from './map-figure.tsx'
import { cutoffScale } from './map-shape.ts'
import { type MapUnit, sizeText } from './map-words.ts'
import type { DrawnMap } from './use-maps.ts'

interface CutFigureProps {
  map: DrawnMap
  unit: MapUnit
  at: number
  caption: () => string
}

interface CutCurve {
  name: string
  tone: Tone
  /** Sizes over the cutoffs; NaN where there is none. */
  values: readonly number[]
  limit: number | undefined
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
  const curves: readonly CutCurve[] = [
    { name: 'bias', tone: 'taken-out', values: cells.map((cell) => size(cell?.bias)), limit: limits.bias },
    { name: 'noise', tone: 'before', values: cells.map((cell) => size(cell?.noise)), limit: limits.noise },
    {
      name: 'total error',
      tone: 'after',
      values: cells.map((cell) => size(cell?.totalError)),
      limit: limits.totalError,
    },
  ]
  // a curve runs on over cutoffs that are not computed yet, and breaks at those without a figure
  const isDrawn = (_: unknown, i: number) => cells[i] !== null
  const drawnHz = Float64Array.from(cutoffsHz.filter(isDrawn))
  const known = curves.some(({ values }) => values.some(Number.isFinite))
  const most = Math.max(...curves.flatMap(({ values }) => values.filter(Number.isFinite)), limits.bias ?? 0, 1e-6)
  const said = curves.map(({ name, values }) =>
    Number.isNaN(values[column]) ? `no ${name}` : `${name} ${sizeText(values[column])} ${unit}`,
  )
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
          return (
            <>
              <GridLines frame={frame} scale={x} along="x" />
              {known ? <GridLines frame={frame} scale={y} along="y" /> : null}
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
                    <Line xs={drawnHz} ys={Float64Array.from(values.filter(isDrawn))} x={x} y={y} tone={tone} />
                  </g>
                ))}
              </Clipped>
              <LabelTexts labels={cutLabels(curves, column, cutoffsHz, { frame, x, y })} />
              {known ? null : (
                <text
                  className="plot-text"
                  x={(frame.left + frame.right) / 2}
                  y={(frame.top + frame.bottom) / 2}
                  textAnchor="middle"
                  fill="var(--quiet)"
                >
                  {cells.every((cell) => cell === null) ? 'not computed yet' : 'nothing to draw: no filter of this row'}
                  {cells.every((cell) => cell === null) ? '' : ' has a bias or a noise'}
                </text>
              )}
              {known ? <Axis side="left" scale={y} at={frame.left} /> : null}
              <Axis side="bottom" scale={x} at={frame.bottom} title="Cutoff, Hz" />
            </>
          )
        }}
      </FigureFrame>
    </>
  )
}

/** The numbers at the cursor, beside it and off the curves and levels as far as there is room. */
export function cutLabels(
  curves: readonly CutCurve[],
  column: number,
  cutoffsHz: readonly number[],
  { frame, x, y }: { frame: Frame; x: Scale; y: Scale },
): DrawnLabel[] {
  const atHz = x.toPixel(cutoffsHz[column])
  const courses = curves.flatMap(({ values, limit }): CurveCourse[] => {
    const heights = courseOf(cutoffsHz, values, x, y, frame.left, Math.floor(frame.plotWidth))
    const level = limit === undefined ? [] : [{ heights: heights.slice().fill(y.toPixel(limit)), weight: 14 }]
    return [{ heights, weight: 30 }, ...level]
  })
  const wanted = curves.flatMap(({ name, tone, values }) =>
    Number.isFinite(values[column])
      ? [
          {
            ...{ id: name, tone, rows: [{ strong: name, plain: sizeText(values[column]) }] },
            places: placesBeside(atHz, y.toPixel(values[column]), 0),
          },
        ]
      : [],
  )
  // the one whose curve lies highest first, so that labels keep the order of the curves
  wanted.sort((a, b) => a.places[0].y - b.places[0].y)
  return drawnLabels(wanted, frame, courses, [])
}
