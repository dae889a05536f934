/** What each stage and the whole chain let through, over log frequency. */
import { useMemo, useRef, useState } from 'react'
import { FigureFrame, type Frame, logScale, type Point } from '../plot/index.ts'
import type { Evaluation } from '../state/evaluation.ts'
import { look } from '../state/view.ts'
import type { Workspace } from '../state/workspace.ts'
import { cutoffMarks } from './cutoff-marks.ts'
import { FigureHead, Switch } from './figure-head.tsx'
import './frequency-figure.css'
import { CURSOR, FrequencyPlot } from './frequency-plot.tsx'
import { frequencyInWords, readingAt } from './frequency-words.ts'
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
      {/* biome-ignore lint/a11y/noStaticElementInteractions: it only learns which of its sliders has the focus */}
      <div
        className="hanging"
        onFocus={(event) => setFocused(event.target.getAttribute('aria-label') === CURSOR)}
        onBlur={() => setFocused(false)}
      >
        <FigureFrame
          title={`Frequency: ${TITLE[shows]}`}
          description={frequencyInWords(evaluation, shows)}
          height={height}
          width={width}
          margin={MARGIN}
          interactive
          className={hovered === null || held !== null ? 'resting' : undefined}
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

function hoveredHz(point: Point | null, frame: Frame, fromHz: number, toHz: number): number | null {
  return point ? logScale([fromHz, toHz], [frame.left, frame.right]).fromPixel(point.x) : null
}
