/** Gains of the stages and of the whole chain over the spectra, with the cutoffs that can be dragged. */
import { type ReactNode, useMemo } from 'react'
import { Axis, Clipped, DirectLabel, Dot, type Frame, GridLines, PathArea, PathLine, ZeroLine } from '../plot/index.ts'
import type { Scale } from '../plot/scale.ts'
import { ticksAt } from '../plot/ticks.ts'
import type { Evaluation } from '../state/evaluation.ts'
import { fixed } from '../words/number.ts'
import { CutoffHandles } from './cutoff-handles.tsx'
import type { CutoffMark } from './cutoff-marks.ts'
import { gainCourses, gainCurves, gainPaths, halfPoints, placeCutoffs } from './frequency-curves.ts'
import { frequencyLabels } from './frequency-labels.ts'
import { axisTitle } from './frequency-words.ts'
import type { GainAxis, GainUnit } from './gain-axis.ts'
import { PinPath } from './pin-line.tsx'
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
  /** Drawn under the handles: the cursor. */
  children: ReactNode
}

export function FrequencyGain(props: FrequencyGainProps) {
  const { evaluation, unit, frame, x, y, axis, cutoffs, onDrag, children } = props
  const { frequency } = evaluation
  const curves = useMemo(() => gainCurves(evaluation, unit, axis), [evaluation, unit, axis])
  const paths = useMemo(() => gainPaths(curves, x, y), [curves, x, y])
  const placed = useMemo(
    () => placeCutoffs(cutoffs, frequency, unit, axis, x, y),
    [cutoffs, frequency, unit, axis, x, y],
  )
  const { dots, labels } = useMemo(() => {
    const points = halfPoints(frequency, placed, axis, x, y)
    const all = [...points.dots, ...points.handles]
    return { dots: points.dots, labels: frequencyLabels({ ...gainCourses(curves, axis, x, y), points: all }) }
  }, [frequency, placed, curves, axis, x, y])
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
      <Axis side="bottom" scale={x} at={frame.bottom} title={axisTitle(x)} />
      <Axis side="left" scale={y} at={frame.left} ticks={ticks} />
      <mask id={maskId}>
        <path d={paths.chain} fill="none" stroke="#fff" strokeWidth={2.8} />
      </mask>
      <Clipped frame={frame}>
        <PathLine d={paths.before} tone="before" />
        <PathLine d={paths.noise} tone="quiet" dash="dotted" weight="hair" />
        {curves.pins.map(({ index }, i) => (
          <PinPath key={index} d={paths.pins[i]} index={index} />
        ))}
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
        {/* the stage that forms a stretch of the whole chain shows there by its dashes */}
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
      {children}
      <CutoffHandles placed={placed} x={x} onDrag={onDrag} />
    </>
  )
}
