/** What each stage and the whole chain let through, over log frequency. */
import { useMemo, useRef, useState } from 'react'
import { Cursor, FigureFrame, type Frame, linearScale, logScale, type Point } from '../plot/index.ts'
import type { Evaluation, FrequencyFigure as FrequencyData } from '../state/evaluation.ts'
import { look, type View } from '../state/view.ts'
import type { Workspace } from '../state/workspace.ts'
import { fixed, list } from '../words/number.ts'
import { type CutoffMark, cutoffMarks } from './cutoff-marks.ts'
import { FigureHead, Switch } from './figure-head.tsx'
import './frequency-figure.css'
import { FrequencyGain } from './frequency-gain.tsx'
import { FrequencyPhase } from './frequency-phase.tsx'
import {
  DRAWN_GAIN,
  delayDomain,
  delayPieces,
  gainAxis,
  gainsIn,
  gainText,
  hzText,
  largest,
  phasePieces,
  valueAt,
} from './frequency-scale.ts'
import { useView } from './hooks.ts'

interface FrequencyFigureProps {
  evaluation: Evaluation
  workspace: Workspace
  /** Names filter, data and score for the saved figure; read when it is saved. */
  caption: () => string
  /** Of the svg, px. */
  height: number
  /** Of the svg, px; default: that of the column. */
  width?: number
}

/** Room for the axes; the numbers on the left hang into the gutter. */
const MARGIN = { top: 2, right: 0, bottom: 22, left: 44 }

const TITLE = { gain: 'gain of each stage and of the whole chain', phase: 'phase', 'group delay': 'group delay' }

export function FrequencyFigure({ evaluation, workspace, caption, height, width }: FrequencyFigureProps) {
  const { frequency } = evaluation
  const unit = useView((view) => view.gainUnit)
  const shows = useView((view) => view.frequencyShows)
  const svg = useRef<SVGSVGElement>(null)
  const [held, setHeld] = useState<readonly [number, number] | null>(null)
  const [hovered, setHovered] = useState<number | null>(null)
  const [kept, setKept] = useState<number | null>(null)
  const [focused, setFocused] = useState(false)

  const last = frequency.hz.length - 1
  const own: readonly [number, number] = [frequency.hz[0], frequency.hz[last]]
  // The axis begins where the chain asks for it; under a cutoff that is being dragged it must not move.
  const [fromHz, toHz] = held ?? own
  const cutoffs = useMemo(
    () => cutoffMarks(workspace.chain, evaluation.samplingRateHz, { fromHz, toHz }),
    [workspace.chain, evaluation.samplingRateHz, fromHz, toHz],
  )
  const at = Math.min(toHz, Math.max(fromHz, hovered ?? kept ?? Math.sqrt(fromHz * toHz)))
  const reading = readingAt(frequency, shows, at)
  const told = hovered === null && !focused
  return (
    <div className="figure-body wraps">
      <FigureHead title="Frequency" svg={svg} caption={caption} fileName="frequency">
        <span className="told">
          <Switch
            value={shows}
            options={['gain', 'phase', 'group delay']}
            label="Frequency figure shows"
            onChange={(next) => look({ frequencyShows: next })}
          />
          {shows === 'gain' ? (
            <>
              {' in '}
              <Switch
                value={unit}
                options={['percent', 'dB']}
                words={{ percent: 'per cent of amplitude' }}
                label="gain in"
                onChange={(next) => look({ gainUnit: next })}
              />
              {told ? '; spectra to their own scales' : null}
            </>
          ) : shows === 'phase' ? (
            ' in degrees'
          ) : (
            ' in ms'
          )}
          {told && shows !== 'gain' ? `, ${shows === 'phase' ? 'wrapped, ' : ''}where the gain exceeds 1 %` : null}
          {told ? null : <span className="read">{`, ${reading}`}</span>}
        </span>
      </FigureHead>
      <div
        className="hanging"
        onFocus={(event) => setFocused(event.target.getAttribute('aria-label') === CURSOR)}
        onBlur={() => setFocused(false)}
      >
        <FigureFrame
          title={`Frequency: ${TITLE[shows]}`}
          description={describe(evaluation, shows)}
          height={height}
          width={width}
          margin={MARGIN}
          interactive
          className={hovered === null ? 'resting' : undefined}
          svgRef={svg}
          onHover={(point, frame) => setHovered(hoveredHz(point, frame, fromHz, toHz))}
        >
          {(frame) => (
            <FrequencyPlot
              evaluation={evaluation}
              shows={shows}
              unit={unit}
              frame={frame}
              fromHz={fromHz}
              toHz={toHz}
              cutoffs={cutoffs}
              at={at}
              reading={reading}
              onDrag={(dragging) => setHeld(dragging ? own : null)}
              onCursor={setKept}
            />
          )}
        </FigureFrame>
      </div>
    </div>
  )
}

interface FrequencyPlotProps {
  evaluation: Evaluation
  shows: View['frequencyShows']
  unit: View['gainUnit']
  frame: Frame
  fromHz: number
  toHz: number
  cutoffs: CutoffMark[]
  at: number
  reading: string
  onDrag: (dragging: boolean) => void
  onCursor: (hz: number) => void
}

function FrequencyPlot(props: FrequencyPlotProps) {
  const { evaluation, shows, unit, frame, fromHz, toHz, cutoffs, at, reading, onDrag, onCursor } = props
  const { frequency } = evaluation
  const { left, right, top, bottom } = frame
  const x = useMemo(() => logScale([fromHz, toHz], [left, right]), [fromHz, toHz, left, right])
  const axis = useMemo(() => gainAxis(frequency, unit), [frequency, unit])
  const pieces = useMemo(() => (shows === 'phase' ? phasePieces : delayPieces)(frequency), [frequency, shows])
  const y = useMemo(() => {
    const domain = { gain: axis.domain, phase: PHASE_DOMAIN, 'group delay': delayDomain(pieces.values) }[shows]
    return linearScale(domain, [bottom, top])
  }, [shows, axis, pieces, bottom, top])
  const value =
    shows === 'gain'
      ? gainsIn(unit, [valueAt(frequency.hz, frequency.gain, at)], axis)[0]
      : valueAt(pieces.hz, pieces.values, at)
  return (
    <>
      {shows === 'gain' ? (
        <FrequencyGain {...{ evaluation, unit, frame, x, y, axis, cutoffs, onDrag }} />
      ) : (
        <FrequencyPhase {...{ frequency, shows, frame, x, y, pieces }} />
      )}
      <Cursor
        frame={frame}
        scale={x}
        value={at}
        dots={[{ y: Math.min(bottom, y.toPixel(value)), tone: 'after' }]}
        min={fromHz}
        max={toHz}
        step={at * 0.02}
        name={CURSOR}
        valueText={reading}
        onChange={onCursor}
      />
    </>
  )
}

const CURSOR = 'frequency cursor'
const PHASE_DOMAIN: [number, number] = [-200, 200]

/** "1.25 Hz: 71 %, −3.0 dB" */
function readingAt(frequency: FrequencyData, shows: View['frequencyShows'], hz: number): string {
  const gain = valueAt(frequency.hz, frequency.gain, hz)
  if (shows === 'gain') return `${hzText(hz)}: ${gainText(gain)}`
  if (gain < DRAWN_GAIN) return `${hzText(hz)}: gain below 1 %`
  if (shows === 'phase') {
    const { hz: at, values } = phasePieces(frequency)
    return `${hzText(hz)}: ${fixed(valueAt(at, values, hz), 0)}°`
  }
  return `${hzText(hz)}: ${fixed(valueAt(frequency.hz, frequency.groupDelayMs, hz), 1)} ms`
}

function hoveredHz(point: Point | null, frame: Frame, fromHz: number, toHz: number): number | null {
  return point ? logScale([fromHz, toHz], [frame.left, frame.right]).fromPixel(point.x) : null
}

/** The figure in words, with its numbers. */
function describe({ frequency, table }: Evaluation, shows: View['frequencyShows']): string {
  const ends = `${hzText(frequency.hz[0])} to ${hzText(frequency.hz[frequency.hz.length - 1])}`
  if (shows !== 'gain') {
    const { values } = (shows === 'phase' ? phasePieces : delayPieces)(frequency)
    const drawn = values.filter(Number.isFinite)
    const what = shows === 'phase' ? 'Phase in degrees' : 'Group delay in milliseconds'
    if (drawn.length === 0) return `${what} of the whole chain: its gain exceeds 1 % nowhere from ${ends}.`
    const unit = shows === 'phase' ? '°' : ' ms'
    const [low, high] = [Math.min(...drawn), Math.max(...drawn)].map(
      (value) => fixed(value, shows === 'phase' ? 0 : 1) + unit,
    )
    const range = low === high ? `${low} throughout` : `between ${low} and ${high}`
    return `${what} of the whole chain from ${ends}, where its gain exceeds 1 %: ${range}.`
  }
  const points = (hz: number[]) => (hz.length > 0 ? `at ${list(hz.map(hzText))}` : 'nowhere on the axis')
  const { halfAmplitudeHz, halfPowerHz, stages } = frequency
  const names = stages.map(({ index, inData }) => {
    const name = table.find((row) => row.index === index)?.name ?? `stage ${index + 1}`
    return inData ? `${name} (in the data)` : name
  })
  return [
    `Gain over frequency from ${ends}.`,
    `The whole chain passes half the amplitude ${points(halfAmplitudeHz)} and half the power ${points(halfPowerHz)}`,
    `and at most ${fixed(100 * largest(frequency.gain), 0)} % of the amplitude.`,
    names.length > 0 ? `Stages: ${list(names)}.` : 'There is no stage.',
    'Behind it the amplitude spectra of the waveform before and after, and of the noise, to their own scales.',
  ].join(' ')
}
