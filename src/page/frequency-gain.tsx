/** Gains of the stages and of the whole chain over the spectra, with the cutoffs that can be dragged. */
import { useMemo } from 'react'
import { areaPath, linePath } from '../plot/path.ts'
import type { Scale } from '../plot/scale.ts'
import { ticksAt } from '../plot/ticks.ts'
import {
  Axis,
  Clipped,
  DirectLabel,
  Dot,
  type Frame,
  GridLines,
  Handle,
  PathArea,
  PathLine,
  ZeroLine,
} from '../plot/index.ts'
import { replaceStage } from '../state/chain-actions.ts'
import type { Evaluation } from '../state/evaluation.ts'
import { endGesture, say } from '../state/store.ts'
import { fixed } from '../words/number.ts'
import { type CutoffMark, withCutoff } from './cutoff-marks.ts'
import { frequencyLabels, type HalfPoint } from './frequency-labels.ts'
import {
  axisTitle,
  courseOf,
  type GainAxis,
  type GainUnit,
  gainsIn,
  hzText,
  largest,
  noiseIn,
  spectrumIn,
  valueAt,
} from './frequency-scale.ts'
import { stageDash } from './stage-dash.ts'

interface FrequencyGainProps {
  evaluation: Evaluation
  unit: GainUnit
  frame: Frame
  x: Scale
  y: Scale
  axis: GainAxis
  cutoffs: CutoffMark[]
  /** A drag begins (true) or ends. */
  onDrag: (dragging: boolean) => void
}

export function FrequencyGain({ evaluation, unit, frame, x, y, axis, cutoffs, onDrag }: FrequencyGainProps) {
  const { frequency, table } = evaluation
  const { left, right, top, bottom, plotWidth } = frame
  const curves = useMemo(() => {
    const { hz, before } = frequency
    const most = largest(before)
    return {
      chain: gainsIn(unit, frequency.gain, axis),
      stages: frequency.stages.map((stage) => ({
        ...stage,
        name: table.find((row) => row.index === stage.index)?.name ?? `stage ${stage.index + 1}`,
        drawn: gainsIn(unit, stage.gain, axis),
        // where the stage itself forms the whole chain's curve
        forming: gainsIn(
          unit,
          Float64Array.from(stage.gain, (gain) => (gain < 0.985 ? gain : Number.NaN)),
          axis,
        ),
      })),
      before: spectrumIn(unit, before, most, axis),
      after: spectrumIn(unit, frequency.after, most, axis),
      noise: noiseIn(frequency.noise, axis),
      hz,
    }
  }, [frequency, table, unit, axis])
  const paths = useMemo(() => {
    const line = (values: Float64Array) => linePath(curves.hz, values, x, y)
    const under = curves.before.map((value, i) => Math.min(value, curves.after[i]))
    return {
      chain: line(curves.chain),
      stages: curves.stages.map((stage) => ({ whole: line(stage.drawn), forming: line(stage.forming) })),
      before: line(curves.before),
      noise: line(curves.noise),
      taken: areaPath(curves.hz, curves.before, x, y, under),
      after: areaPath(curves.hz, curves.after, x, y, axis.domain[0]),
    }
  }, [curves, x, y, axis])

  const halves = (points: readonly number[], value: number, strong: boolean): HalfPoint[] =>
    points
      .filter((hz) => hz >= x.domain[0] && hz <= x.domain[1])
      .map((hz) => ({ x: x.toPixel(hz), y: y.toPixel(value), text: hzText(hz), strong, stated: false }))
  const marks = cutoffs
    .filter(({ hz }) => hz >= x.domain[0] && hz <= x.domain[1])
    .map((cutoff) => {
      const stage = frequency.stages.find(({ index }) => index === cutoff.stage)
      const gain = cutoff.gain ?? (stage ? valueAt(curves.hz, stage.gain, cutoff.hz) : 0.5)
      const [drawn] = gainsIn(unit, [gain], axis)
      return { cutoff, x: x.toPixel(cutoff.hz), y: Math.min(bottom, y.toPixel(drawn)) }
    })
  const dots = [
    ...halves(frequency.halfAmplitudeHz, axis.halfAmplitude, true),
    ...halves(frequency.halfPowerHz, axis.halfPower, false),
  ]
  const near = (a: { x: number; y: number }, b: { x: number; y: number }) => Math.hypot(a.x - b.x, a.y - b.y) < 9
  // a handle takes the place of the point it stands on, and has its own number elsewhere
  const alone = marks.filter((mark) => !dots.some((dot) => near(dot, mark)))
  const points: HalfPoint[] = [
    ...dots,
    ...alone.map((mark) => ({ x: mark.x, y: mark.y, text: hzText(mark.cutoff.hz), strong: true, stated: true })),
  ]
  const pointKey = points.map(({ x: px, y: py, text, strong }) => `${px} ${py} ${text} ${strong}`).join('|')
  // biome-ignore lint/correctness/useExhaustiveDependencies: the points are what their key says
  const labels = useMemo(() => {
    const course = (values: ArrayLike<number>) => courseOf(curves.hz, values, x, y, left, plotWidth)
    const apart = Math.abs(y.toPixel(axis.halfPower) - y.toPixel(axis.halfAmplitude)) > 20
    return frequencyLabels({
      left,
      right,
      top,
      bottom,
      chain: course(curves.chain),
      stages: curves.stages.map(({ name, inData, drawn }) => ({ name, inData, heights: course(drawn) })),
      before: course(curves.before),
      after: course(curves.after),
      noise: course(curves.noise),
      points,
      halves: apart ? { amplitude: y.toPixel(axis.halfAmplitude), power: y.toPixel(axis.halfPower) } : null,
    })
  }, [curves, axis, x, y, left, right, top, bottom, plotWidth, pointKey])

  const ticks = ticksAt(y, axis.ticks, (value) => fixed(value, 0))
  const lines = ticksAt(y, [...new Set([...axis.ticks, axis.halfAmplitude, axis.halfPower])])
  const maskId = `${frame.id}-chain`
  return (
    <>
      <Clipped frame={frame}>
        <PathArea d={paths.taken} tone="taken-out" opacity={0.13} />
        <PathArea d={paths.after} tone="after" opacity={0.12} />
      </Clipped>
      <GridLines frame={frame} scale={x} along="x" />
      <GridLines frame={frame} scale={y} along="y" ticks={lines} />
      <ZeroLine frame={frame} scale={y} along="y" value={axis.domain[0]} />
      <Axis side="bottom" scale={x} at={bottom} title={axisTitle(x.domain[0], x.domain[1], frame.plotWidth)} />
      <Axis side="left" scale={y} at={left} ticks={ticks} />
      <mask id={maskId} maskUnits="userSpaceOnUse" x={left} y={top} width={plotWidth} height={bottom - top}>
        <path d={paths.chain} fill="none" stroke="#fff" strokeWidth={2.8} />
      </mask>
      <Clipped frame={frame}>
        <PathLine d={paths.before} tone="before" />
        <PathLine d={paths.noise} tone="quiet" dash="dotted" weight="hair" />
        {curves.stages.map((stage, i) => (
          <path
            key={stage.index}
            d={paths.stages[i].whole}
            fill="none"
            stroke={stage.inData ? 'var(--quiet)' : 'var(--ink)'}
            strokeOpacity={stage.inData ? 0.7 : 1}
            strokeWidth={1.4}
            strokeDasharray={stageDash(stage.index)}
            pointerEvents="none"
          />
        ))}
        <PathLine d={paths.chain} tone="after" />
        <g mask={`url(#${maskId})`}>
          {curves.stages.map((stage, i) =>
            stage.inData ? null : (
              <path
                key={stage.index}
                d={paths.stages[i].forming}
                fill="none"
                stroke="var(--sheet)"
                strokeWidth={1.1}
                strokeDasharray={stageDash(stage.index)}
                pointerEvents="none"
              />
            ),
          )}
        </g>
      </Clipped>
      {dots.map((dot) => (
        <Dot key={`${dot.x} ${dot.y}`} x={dot.x} y={dot.y} tone="after" radius={dot.strong ? 4.5 : 3.2} />
      ))}
      {labels.map((label) => (
        <DirectLabel
          key={`${label.text} ${label.x} ${label.y}`}
          x={label.x}
          y={label.y}
          tone={label.tone}
          anchor={label.anchor}
          strong={label.strong}
          ground={label.crossed ? 'sheet' : 'none'}
        >
          {label.text}
        </DirectLabel>
      ))}
      {marks.map((mark) => (
        <Handle
          key={`${mark.cutoff.stage} ${mark.cutoff.edge}`}
          scale={x}
          value={mark.cutoff.hz}
          y={mark.y}
          min={mark.cutoff.minHz}
          max={mark.cutoff.maxHz}
          stepBy={(hz, steps) => Number((hz * 1.01 ** steps).toPrecision(3))}
          label={mark.cutoff.label}
          valueText={hzText}
          onChangeStart={() => onDrag(true)}
          onChange={(hz) => setCutoff(mark.cutoff, hz)}
          onChangeEnd={() => {
            endGesture()
            onDrag(false)
          }}
        />
      ))}
    </>
  )
}

/** Says one cutoff; those of one drag are one step of undo. */
function setCutoff({ stage, edge }: CutoffMark, hz: number): void {
  say(
    (workspace) => ({
      ...workspace,
      chain: replaceStage(workspace.chain, stage, withCutoff(workspace.chain[stage], edge, hz)),
    }),
    `stage:${stage}:cutoff`,
  )
}
