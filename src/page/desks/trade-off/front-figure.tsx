/** Bias against noise: every filter a point, and the front of those that no other beats, from which one can be picked. */
import { memo, useMemo, useRef, useState } from 'react'
import {
  Axis,
  compressedScale,
  FigureFrame,
  type Frame,
  GridLines,
  linearScale,
  type Scale,
  ZeroLine,
} from '../../../plot/index.ts'
import type { CellFigures } from '../../../evidence/trade-off-figures.ts'
import { FigureHead } from '../../figure-head.tsx'
import { Unspoken } from '../../label-text.tsx'
import { cellWords, type MapUnit } from './map-words.ts'
import type { DrawnMap } from './use-maps.ts'

const MARGIN = { top: 8, right: 10, bottom: 24, left: 44 }

interface FrontFigureProps {
  map: DrawnMap
  unit: MapUnit
  at: number
  inChain: number | null
  caption: () => string
  onMove: (index: number) => void
  onPick: (index: number) => void
}

type Point = { index: number; bias: number; noise: number }

export function FrontFigure({ map, unit, at, inChain, caption, onMove, onPick }: FrontFigureProps) {
  const svg = useRef<SVGSVGElement>(null)
  const [pointed, setPointed] = useState<number | null>(null)
  const { figures, limits, request } = map
  const { candidate } = request.question
  const points = useMemo(() => pointsOf(figures.cells), [figures])
  const front = useMemo(() => {
    const byIndex = new Map(points.map((point) => [point.index, point]))
    return figures.front.flatMap((index) => byIndex.get(index) ?? [])
  }, [figures, points])
  const most = Math.max(...points.map(({ bias }) => bias), limits.bias ?? 0, points.length > 0 ? 1e-6 : 1)
  const noises = points.map(({ noise }) => noise)
  const low = noises.length > 0 ? Math.min(...noises) : 0
  const high = noises.length > 0 ? Math.max(...noises) : 1
  const pad = Math.max(0.05 * (high - low), 1e-3 * Math.max(high, 1e-3))
  const scales = (frame: Frame) => ({
    x: compressedScale([0, most * 1.05], [frame.left + 5, frame.right], (limits.bias ?? most / 20) / 2),
    y: linearScale([low - pad, high + pad], [frame.bottom, frame.top]),
  })
  // the place on the front, for the keyboard: of the cursor's cell, or the nearest by bias
  const place = Math.max(
    0,
    front.findIndex(({ index }) => index === at),
  )
  const words = (index: number) => cellWords(figures.cells[index], candidate, limits, unit, null)
  return (
    <>
      <FigureHead title="Bias against noise" svg={svg} caption={caption} fileName="trade-off-front">
        <span className="told">in {unit}; ringed: no other beats it in both</span>
      </FigureHead>
      <FigureFrame
        title="Bias against noise"
        description={`${points.length} filters by the size of their bias and their noise, in ${unit}; ${front.length} that no other beats in both, from ${front[0] ? words(front[0].index) : 'none'} to ${front.length > 0 ? words(front[front.length - 1].index) : 'none'}.`}
        height={196}
        margin={MARGIN}
        interactive
        svgRef={svg}
        onHover={(point, frame) => {
          if (!point) return setPointed(null)
          const { x, y } = scales(frame)
          setPointed(nearest(points, point.x, point.y, x, y))
        }}
      >
        {(frame) => {
          const { x, y } = scales(frame)
          return (
            <>
              <GridLines frame={frame} scale={x} along="x" />
              <GridLines frame={frame} scale={y} along="y" />
              <ZeroLine frame={frame} scale={x} along="x" />
              <Points {...{ frame, points, front, x, y, limits }} />
              {[inChain, at, pointed].map((index, i) => {
                const point = points.find((entry) => entry.index === index)
                if (!point) return null
                const look = [
                  { r: 5, fill: 'var(--taken-out)', stroke: 'var(--sheet)', strokeWidth: 2 },
                  { r: 6, fill: 'none', stroke: 'var(--ink)', strokeWidth: 2 },
                  { r: 6, fill: 'none', stroke: 'var(--quiet)', strokeWidth: 1.5 },
                ][i]
                return (
                  <circle
                    key={i}
                    cx={x.toPixel(point.bias)}
                    cy={y.toPixel(point.noise)}
                    {...look}
                    pointerEvents="none"
                  />
                )
              })}
              <Axis side="left" scale={y} at={frame.left} />
              <Axis side="bottom" scale={x} at={frame.bottom} title={`|bias|, ${unit}`} />
              {front.length === 0 ? null : (
                <g
                  role="button"
                  tabIndex={0}
                  className="map-cursor plot-focus"
                  aria-label={`Filter on the front, ${place + 1} of ${front.length}: ${words(front[place].index)}. Arrow keys go along the front, Enter puts the filter into the chain.`}
                  onKeyDown={(event) => {
                    if (event.key === 'Enter' || event.key === ' ') {
                      event.preventDefault()
                      return onPick(front[place].index)
                    }
                    const by = { ArrowLeft: -1, ArrowUp: -1, ArrowRight: 1, ArrowDown: 1 }[event.key]
                    if (!by) return
                    event.preventDefault()
                    onMove(front[Math.max(0, Math.min(front.length - 1, place + by))].index)
                  }}
                  onClick={(event) => {
                    const index = event.detail === 0 || pointed === null ? front[place].index : pointed
                    onMove(index)
                    onPick(index)
                  }}
                >
                  <rect
                    x={frame.left}
                    y={frame.top}
                    width={frame.plotWidth}
                    height={frame.plotHeight}
                    fill="transparent"
                    data-save="omit"
                  />
                </g>
              )}
            </>
          )
        }}
      </FigureFrame>
    </>
  )
}

export function pointsOf(cells: readonly (CellFigures | null)[]): Point[] {
  return cells.flatMap((cell, index) =>
    cell && cell.bias !== null && cell.noise !== null ? [{ index, bias: Math.abs(cell.bias), noise: cell.noise }] : [],
  )
}

function nearest(points: readonly Point[], px: number, py: number, x: Scale, y: Scale): number | null {
  let best: number | null = null
  // further away than this the pointer means none
  let least = 18 ** 2
  for (const { index, bias, noise } of points) {
    const distance = (x.toPixel(bias) - px) ** 2 + (y.toPixel(noise) - py) ** 2
    if (distance < least) {
      least = distance
      best = index
    }
  }
  return best
}

interface PointsProps {
  frame: Frame
  points: readonly Point[]
  front: readonly Point[]
  x: Scale
  y: Scale
  limits: { bias?: number; noise?: number }
}

const Points = memo(function Points({ frame, points, front, x, y, limits }: PointsProps) {
  const dots = points.map(({ bias, noise }) => `M${px(x.toPixel(bias))},${px(y.toPixel(noise))}h0`).join('')
  const biasAt = limits.bias === undefined ? null : x.toPixel(limits.bias)
  const noiseAt = limits.noise === undefined ? null : y.toPixel(limits.noise)
  return (
    <Unspoken>
      <g pointerEvents="none">
        <path d={dots} stroke="var(--before)" strokeWidth={2.4} strokeLinecap="round" fill="none" opacity={0.7} />
        {biasAt === null ? null : (
          <path d={`M${biasAt},${frame.top}V${frame.bottom}`} stroke="var(--over)" strokeDasharray="4 3" fill="none" />
        )}
        {noiseAt === null || noiseAt < frame.top || noiseAt > frame.bottom ? null : (
          <path d={`M${frame.left},${noiseAt}H${frame.right}`} stroke="var(--over)" strokeDasharray="4 3" fill="none" />
        )}
        {front.map(({ index, bias, noise }) => (
          <circle
            key={index}
            cx={x.toPixel(bias)}
            cy={y.toPixel(noise)}
            r={2.8}
            fill="var(--sheet)"
            stroke="var(--after)"
            strokeWidth={1.4}
          />
        ))}
      </g>
    </Unspoken>
  )
})

const px = (value: number) => Math.round(value * 10) / 10
