/** The map: every filter of the grid as a cell, a line at each limit, the allowed region unveiled, the front marked. */
import { memo, type ReactNode, useMemo, useRef, useState } from 'react'
import { Axis, FigureFrame, type Frame, hatchId } from '../../../plot/index.ts'
import type { CellFigures } from '../../../evidence/trade-off-figures.ts'
import { nearestComputed } from '../../../state/map-figures.ts'
import { say } from '../../../state/store.ts'
import type { TradeOff } from '../../../state/workspace.ts'
import { brief, list } from '../../../words/index.ts'
import { Choice } from '../../fields.tsx'
import { FigureHead } from '../../figure-head.tsx'
import { Unspoken } from '../../label-text.tsx'
import { limitedMap, limitLabel, unlinedWords } from './limit-lines.ts'
import { LimitMarks, LimitNames } from './limit-marks.tsx'
import { cutoffScale, movedCell, rowTop, type Shade } from './map-shape.ts'
import { capital, cellWords, layerUnit, type MapUnit } from './map-words.ts'
import type { DrawnMap } from './use-maps.ts'

export const MAP_MARGIN = { top: 6, right: 10, bottom: 24, left: 54 }
const ROW_PX = 25

interface MapFigureProps {
  map: DrawnMap
  /** Which of several maps it is, in words; null where it is the only one. */
  name: string | null
  fileName: string
  layer: TradeOff['layer']
  shade: Shade
  unit: MapUnit
  /** Cell under the cursor; of the filter in the chain. */
  at: number
  inChain: number | null
  noiseErrorOf: (index: number) => number | null
  caption: () => string
  onMove: (index: number) => void
  onPick: (index: number) => void
  /** Words and switches beside the title. */
  children?: ReactNode
}

const LAYERS: readonly TradeOff['layer'][] = ['bias', 'noise', 'total error', 'equal-trials factor', 'latency shift']

export function MapFigure(props: MapFigureProps) {
  const { map, name, fileName, layer, shade, unit, at, inChain, noiseErrorOf, caption, onMove, onPick } = props
  const svg = useRef<SVGSVGElement>(null)
  const [pointed, setPointed] = useState<number | null>(null)
  const { request, figures, limits } = map
  const { cutoffsHz, rollOffs, candidate } = request.question
  const columns = cutoffsHz.length
  const rows = rollOffs.length
  const cells = useMemo(() => nearestComputed(figures, columns, rows), [figures, columns, rows])
  const limited = useMemo(() => limitedMap(cells, limits, columns, rows), [cells, limits, columns, rows])
  const marks = useMemo(() => (inChain === null ? figures.front : [...figures.front, inChain]), [figures, inChain])
  const lined = limited.limits.filter(({ lines }) => lines.length > 0).map((of) => limitLabel(of, unit))
  const unlined = unlinedWords(limited, unit)
  const words = (index: number) => cellWords(figures.cells[index], candidate, limits, unit, noiseErrorOf(index))
  const height = Math.max(150, MAP_MARGIN.top + MAP_MARGIN.bottom + ROW_PX * rows)
  const cellAt = (x: number, y: number, frame: Frame) => {
    const c = Math.floor(((x - frame.left) / frame.plotWidth) * columns)
    const r = Math.floor(((frame.bottom - y) / frame.plotHeight) * rows)
    return c < 0 || r < 0 || c >= columns || r >= rows ? null : r * columns + c
  }
  const kept = figures.kept.filter(Boolean).length
  return (
    <>
      <FigureHead title={name === null ? 'Map' : capital(name)} svg={svg} caption={caption} fileName={fileName}>
        {props.children}
      </FigureHead>
      <FigureFrame
        title={name === null ? 'Trade-off map' : `Trade-off map, ${name}`}
        description={`${layer} over ${columns} cutoffs and ${rows} roll-offs. ${kept} of ${columns * rows} filters keep the limits; ${figures.front.length} are on the front that no other beats in bias and noise.${lined.length > 0 ? ` Lines at the limits: ${list(lined)}.` : ''} At the cursor: ${words(at)}.`}
        height={height}
        margin={MAP_MARGIN}
        interactive
        svgRef={svg}
        onHover={(point, frame) => setPointed(point && cellAt(point.x, point.y, frame))}
      >
        {(frame) => (
          <>
            <Cells {...{ frame, cells, shade, columns, rows }} />
            <LimitMarks {...{ frame, columns, rows, limited }} />
            <Marks {...{ frame, columns, rows, inChain }} front={figures.front} />
            <LimitNames {...{ frame, columns, rows, limited, unit, marks }} cursor={at} />
            <Axis
              side="bottom"
              scale={cutoffScale(cutoffsHz, frame.left, frame.right)}
              at={frame.bottom}
              title="Cutoff, Hz"
            />
            <RowLabels {...{ frame, rollOffs }} orders={candidate.design === 'butterworth'} />
            <g
              role="button"
              tabIndex={0}
              className="map-cursor plot-focus"
              aria-label={`Cell of the map${name === null ? '' : ` of ${name}`}: ${words(at)}. Arrow keys move, Enter puts the filter into the chain.`}
              onKeyDown={(event) => {
                if (event.key === 'Enter' || event.key === ' ') {
                  event.preventDefault()
                  return onPick(at)
                }
                const next = movedCell(at, event.key, columns, rows, event.shiftKey)
                if (next === null) return
                event.preventDefault()
                onMove(next)
              }}
              onClick={(event) => {
                // a screen reader's press has no place: it means the cell at the cursor
                if (event.detail === 0 || pointed === null) return onPick(at)
                onMove(pointed)
                onPick(pointed)
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
              {pointed === null || pointed === at ? null : (
                <CellBox {...{ frame, columns, rows }} index={pointed} className="cell-pointed" />
              )}
              <CellBox {...{ frame, columns, rows }} index={at} className="cell-at" />
            </g>
          </>
        )}
      </FigureFrame>
      <p className="small map-reading" role="status">
        {words(pointed ?? at)}
      </p>
      {unlined === '' ? null : <p className="small quiet map-unlined">{unlined}</p>}
    </>
  )
}

interface CellsProps {
  frame: Frame
  cells: readonly (CellFigures | null)[]
  shade: Shade
  columns: number
  rows: number
}

const Cells = memo(function Cells({ frame, cells, shade, columns, rows }: CellsProps) {
  const width = frame.plotWidth / columns
  const height = frame.plotHeight / rows
  return (
    <Unspoken>
      <g>
        {cells.map((cell, index) => {
          if (!cell) return null
          const dark = shade.of(cell)
          if (dark === null && cell.error === null) return null
          const fill =
            cell.error === null
              ? { fill: 'var(--after)', fillOpacity: 0.04 + 0.66 * (dark as number) }
              : { fill: `url(#${hatchId(frame, 'unseen')})` }
          return (
            <rect
              key={index}
              x={frame.left + (index % columns) * width}
              y={rowTop(frame, Math.floor(index / columns), rows)}
              // no seam between two cells
              width={width + 0.3}
              height={height - 1}
              {...fill}
            />
          )
        })}
      </g>
    </Unspoken>
  )
})

interface MarksProps {
  frame: Frame
  columns: number
  rows: number
  front: readonly number[]
  inChain: number | null
}

const Marks = memo(function Marks({ frame, columns, rows, front, inChain }: MarksProps) {
  const centre = (index: number) => ({
    cx: frame.left + (((index % columns) + 0.5) * frame.plotWidth) / columns,
    cy: rowTop(frame, Math.floor(index / columns), rows) + frame.plotHeight / rows / 2,
  })
  return (
    <Unspoken>
      <g pointerEvents="none">
        {front.map((index) => (
          <circle key={index} {...centre(index)} r={2.6} fill="var(--sheet)" stroke="var(--ink)" strokeWidth={1.1} />
        ))}
        {inChain === null ? null : (
          <circle {...centre(inChain)} r={5} fill="var(--taken-out)" stroke="var(--sheet)" strokeWidth={2} />
        )}
      </g>
    </Unspoken>
  )
})

function CellBox(props: { frame: Frame; columns: number; rows: number; index: number; className: string }) {
  const { frame, columns, rows, index, className } = props
  return (
    <rect
      className={className}
      x={frame.left + ((index % columns) * frame.plotWidth) / columns - 1}
      y={rowTop(frame, Math.floor(index / columns), rows) - 1}
      width={frame.plotWidth / columns + 2}
      height={frame.plotHeight / rows + 1}
      fill="none"
      data-save="omit"
    />
  )
}

function RowLabels({ frame, rollOffs, orders }: { frame: Frame; rollOffs: readonly number[]; orders: boolean }) {
  return (
    <Unspoken>
      <g className="plot-text plot-number" fill="var(--quiet)">
        {rollOffs.map((rollOff, row) => (
          <text
            key={rollOff}
            x={frame.left - 8}
            y={rowTop(frame, row, rollOffs.length) + frame.plotHeight / rollOffs.length / 2 + 4.5}
            textAnchor="end"
          >
            {row === rollOffs.length - 1 && orders ? 'order ' : ''}
            {brief(rollOff, 3)}
            {row === rollOffs.length - 1 && !orders ? ' Hz' : ''}
          </text>
        ))}
      </g>
    </Unspoken>
  )
}

interface LayerChoiceProps {
  layer: TradeOff['layer']
  shade: Shade
  unit: MapUnit
}

/** What the maps show, and the scale of their shades. */
export function LayerChoice({ layer, shade, unit }: LayerChoiceProps) {
  return (
    <>
      <Choice
        label="what the map shows"
        value={layer}
        options={LAYERS.map((value) => ({ value, text: value }))}
        onChange={(next) => say((w) => ({ ...w, tradeOff: { ...w.tradeOff, layer: next } }))}
      />
      <Legend shade={shade} layer={layer} unit={unit} />
    </>
  )
}

function Legend({ shade, layer, unit }: { shade: Shade; layer: TradeOff['layer']; unit: MapUnit }) {
  if (!shade.range) return <span className="told">no cell has this figure</span>
  const [least, most] = shade.range
  return (
    <span className="told map-legend">
      {brief(least, 3)}
      <span className="map-ramp" aria-hidden="true" />
      {brief(most, 3)} {layerUnit(layer, unit)}
    </span>
  )
}
