/** What is drawn inside the frame of the figure by moment. */
import { memo, useMemo } from 'react'
import type { TimeWindow } from '../../../erp/time-axis.ts'
import type { MomentRow } from '../../../evidence/trace-by-moment.ts'
import type { Tracing } from '../../../state/evaluate-trace.ts'
import {
  Area,
  Axis,
  Clipped,
  type Frame,
  GridLines,
  Handle,
  HatchedZone,
  Line,
  linearScale,
  type Scale,
  StaticBand,
  StaticCursor,
  ZeroLine,
} from '../../../plot/index.ts'
import type { Workspace } from '../../../state/workspace.ts'
import { momentRowWords, momentWords } from '../../../words/index.ts'
import { LabelTexts, Unspoken } from '../../label-text.tsx'
import { around, courseOf } from '../../placed-labels.ts'
import { useFrame } from '../../shared-axis.ts'
import { type TimeAxis, timeTicks } from '../../time-axis.ts'
import { momentLabels } from './moment-labels.ts'
import { cutOut, type Density, densityDomain, densityOnAxis, largestShare, placeOf, tintOf } from './moment-shape.ts'
import { useStretches } from './use-stretches.ts'

interface MomentPlotProps {
  frame: Frame
  tracing: Tracing
  axis: TimeAxis
  baseline: Workspace['baseline']
  polarity: 'up' | 'down'
  /** Row that the pointer or the keyboard is on. */
  marked: number | null
}

export function MomentPlot({ tracing, axis, baseline, polarity, marked, ...props }: MomentPlotProps) {
  const frame = useFrame(props.frame)
  const { traced, back } = tracing
  const { moments, rows, stretches } = back
  const x = useMemo(() => linearScale([axis.fromMs, axis.toMs], [frame.left, frame.right]), [axis, frame])
  const density = useMemo(() => densityOnAxis(moments, axis), [moments, axis])
  const y = useMemo(
    () => linearScale(densityDomain(density, polarity), [frame.bottom, frame.top]),
    [density, polarity, frame],
  )
  const courses = useMemo(
    () => [courseOf(density.values, density.startMs, density.stepMs, frame, x, y)],
    [density, frame, x, y],
  )
  const window = traced.atMs === null ? traced.window : null
  const edges = useMemo(
    () =>
      [window, baseline === 'none' ? null : baseline].flatMap((some) =>
        some ? [x.toPixel(some.fromMs), x.toPixel(some.toMs)] : [],
      ),
    [window, baseline, x],
  )
  const labels = useMemo(
    () =>
      momentLabels({
        ...{ frame, x, y, axis, density, rows, courses, edges },
        unit: traced.unit,
        own: traced.atMs === null ? 'the score window' : `around ${momentWords(traced.atMs)}`,
        taken: stretches.map(({ sample }) => around(x.toPixel(moments.timesMs[sample]), frame.bottom, 8)),
      }),
    [frame, x, y, axis, density, rows, courses, edges, traced, stretches, moments],
  )
  const band = window ? ([x.toPixel(window.fromMs), x.toPixel(window.toMs)] as const) : undefined
  return (
    <>
      <Ground {...{ frame, x, y, axis, baseline, window }} />
      <Areas {...{ frame, x, y, axis, density, rows, marked }} />
      <Clipped frame={frame}>
        <Line
          xs={{ start: density.startMs, step: density.stepMs }}
          ys={density.values}
          {...{ x, y }}
          tone="after"
          className="share-density"
        />
      </Clipped>
      <Axis side="left" scale={y} at={frame.left} />
      <Axis side="bottom" scale={x} at={frame.bottom} {...timeTicks(x)} />
      {traced.atMs === null ? null : (
        <StaticCursor frame={frame} scale={x} value={traced.atMs} label={momentWords(traced.atMs)} />
      )}
      <Unspoken>
        <LabelTexts labels={labels} {...(band ? { band } : {})} />
      </Unspoken>
      <Boundaries {...{ frame, x, tracing }} />
    </>
  )
}

interface GroundProps {
  frame: Frame
  x: Scale
  y: Scale
  axis: TimeAxis
  baseline: Workspace['baseline']
  window: TimeWindow | null
}

const Ground = memo(function Ground({ frame, x, y, axis, baseline, window }: GroundProps) {
  return (
    <>
      <HatchedZone frame={frame} kind="outside" fromPx={frame.left} toPx={x.toPixel(axis.firstMs)} />
      <HatchedZone frame={frame} kind="outside" fromPx={x.toPixel(axis.lastMs)} toPx={frame.right} />
      <GridLines frame={frame} scale={x} along="x" ticks={timeTicks(x).ticks} />
      <GridLines frame={frame} scale={y} along="y" />
      {baseline === 'none' ? null : (
        <StaticBand frame={frame} scale={x} look="light" value={{ from: baseline.fromMs, to: baseline.toMs }} />
      )}
      {window ? <StaticBand frame={frame} scale={x} value={{ from: window.fromMs, to: window.toMs }} /> : null}
      <ZeroLine frame={frame} scale={y} along="y" />
      <ZeroLine frame={frame} scale={x} along="x" />
    </>
  )
})

interface AreasProps {
  frame: Frame
  x: Scale
  y: Scale
  axis: TimeAxis
  density: Density
  rows: readonly MomentRow[]
  marked: number | null
}

/** The stretches under the curve, each tinted by the size of its share; a line of the ground's colour between two of them. */
const Areas = memo(function Areas({ frame, x, y, axis, density, rows, marked }: AreasProps) {
  const cut = useMemo(
    () =>
      rows.flatMap((row, i) => {
        const place = placeOf(row, axis)
        return place ? [{ i, row, place, ...cutOut(density, place.fromMs, place.toMs) }] : []
      }),
    [rows, axis, density],
  )
  const largest = largestShare(rows)
  return (
    <Clipped frame={frame}>
      {cut.map(({ i, row, xs, ys }) => (
        <Area key={i} {...{ xs, ys, x, y }} tone="after" opacity={tintOf(row, largest) + (i === marked ? 0.25 : 0)} />
      ))}
      {cut.slice(1).map(({ i, place, ys }) => {
        const at = x.toPixel(place.fromMs)
        return (
          <line
            key={i}
            x1={at}
            x2={at}
            y1={y.toPixel(0)}
            y2={y.toPixel(ys[0])}
            stroke="var(--sheet)"
            strokeWidth={1.5}
            pointerEvents="none"
          />
        )
      })}
      {cut.map(({ i, place }) =>
        i === marked ? (
          <rect
            key={i}
            className="marked-stretch"
            x={x.toPixel(place.fromMs)}
            y={frame.top}
            width={x.toPixel(place.toMs) - x.toPixel(place.fromMs)}
            height={frame.plotHeight}
            fill="var(--after)"
            fillOpacity={0.07}
            stroke="var(--after)"
            strokeWidth={1}
            pointerEvents="none"
            data-save="omit"
          />
        ) : null,
      )}
    </Clipped>
  )
})

/** What can be taken hold of: the boundaries between stretches, on the axis. */
function Boundaries({ frame, x, tracing }: { frame: Frame; x: Scale; tracing: Tracing }) {
  const { traced, back } = tracing
  const { stretches, rows, moments } = back
  const { timesMs } = moments
  const edit = useStretches(stretches, timesMs)
  const last = timesMs.length - 1
  return stretches.map(({ sample, atMs }, i) => {
    const sampleOf = (ms: number) =>
      Math.max(0, Math.min(last, Math.round(((ms - timesMs[0]) / (timesMs[last] - timesMs[0])) * last)))
    const said = (ms: number) => momentWords(sampleOf(ms) === sample ? atMs : ms)
    return (
      // biome-ignore lint/a11y/noStaticElementInteractions: the slider in it is what has the keyboard
      <g
        key={i}
        data-boundary={i}
        onKeyDown={(event) => {
          if (event.key !== 'Delete' && event.key !== 'Backspace') return
          event.preventDefault()
          edit.remove(i)
        }}
      >
        <Handle
          {...edit.gesture}
          scale={x}
          value={timesMs[sample]}
          y={frame.bottom}
          radius={4}
          min={timesMs[i === 0 ? 1 : stretches[i - 1].sample + 1]}
          max={timesMs[i === stretches.length - 1 ? last : stretches[i + 1].sample - 1]}
          label={`boundary between ${momentRowWords(rows[i + 1], traced)} and ${momentRowWords(rows[i + 2], traced)}`}
          valueText={said}
          snap={(ms) => timesMs[sampleOf(ms)]}
          stepBy={(ms, steps) => timesMs[Math.max(0, Math.min(last, sampleOf(ms) + steps))]}
          onChange={(ms) => edit.move(i, ms)}
        />
      </g>
    )
  })
}
