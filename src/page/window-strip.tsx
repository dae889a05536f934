/** The effective window: the weight of the score, after the chain and the baseline, on every moment of the unfiltered waveform. */
import { useMemo, useRef } from 'react'
import { FigureFrame } from '../plot/index.ts'
import type { WindowFigure } from '../state/evaluation.ts'
import { look } from '../state/view.ts'
import { FigureHead, Switch } from './figure-head.tsx'
import { useView } from './hooks.ts'
import { drawnPins } from './pin-line.tsx'
import { msText } from './time-axis.ts'
import { cursorAt, MARGIN, type SharedAxis } from './shared-axis.ts'
import { WindowPlot } from './window-plot.tsx'
import { noWindowWords, outsideWords, perHundredMs, weightText } from './window-words.ts'

const HEIGHT = 80

export function WindowStrip(props: SharedAxis) {
  const { window } = props.evaluation
  if (window) return <DrawnWindow {...props} window={window} />
  return (
    <>
      <div className="figure-head">
        <h2>Effective window</h2>
      </div>
      <p className="no-window" style={{ height: HEIGHT }}>
        {noWindowWords(props.evaluation.rows[0].after)}
      </p>
    </>
  )
}

function DrawnWindow(props: SharedAxis & { window: WindowFigure }) {
  const { evaluation, workspace, window, caption, axis, windows, cursor, onCursor } = props
  const svg = useRef<SVGSVGElement>(null)
  const scale = useView((view) => view.windowScale)
  const { score } = workspace
  const pins = useMemo(() => drawnPins(evaluation), [evaluation])
  const at = cursor - window.fromIndex
  const pinned = pins.flatMap(({ name, result }) => {
    if (!result.window) return []
    const [pinnedWeight] = perHundredMs(result.window.subarray(at, at + 1), axis.stepMs)
    return [`; pinned ${name} ${weightText(pinnedWeight, score)}`]
  })
  const cursorMs = axis.firstMs + cursor * axis.stepMs
  const [weight] = perHundredMs(window.filtered.subarray(at, at + 1), axis.stepMs)
  const unit = score.kind === 'area' ? 'weight in s per 100 ms' : 'weight per 100 ms'
  const extent = evaluation.unseenBySample ? 'epochs' : 'continuous'
  const outside = outsideWords(window.shareOutside, extent)
  const of =
    window.heldFixed === null ? ' of the unfiltered waveform' : ` of the unfiltered waveform, ${window.heldFixed}`
  return (
    <div className="window-strip">
      <FigureHead title="Effective window" svg={svg} caption={caption} fileName="effective-window">
        <span className="quiet">
          {unit}
          {window.heldFixed === null ? (
            <span className="of-what"> of the unfiltered waveform</span>
          ) : (
            `, ${window.heldFixed}`
          )}
          ,{' '}
          <Switch
            value={scale}
            options={['compressed', 'linear']}
            words={{ compressed: 'compressed scale', linear: 'linear scale' }}
            label="Effective window"
            onChange={(windowScale) => look({ windowScale })}
          />
        </span>
        <span className="outside">{outsideWords(window.shareOutside, extent, window.heldFixed !== null)}</span>
      </FigureHead>
      <div className="time-hanging">
        <FigureFrame
          title="Effective window"
          description={`${unit}${of}. After the chain ${weightText(weight, score)} at ${msText(cursorMs)}${pinned.join('')}; ${outside}.`}
          height={HEIGHT}
          margin={{ ...MARGIN, top: 2, bottom: 2 }}
          svgRef={svg}
          onHover={(point, frame) => (point ? onCursor(cursorAt(point, frame, axis)) : undefined)}
        >
          {(frame) => <WindowPlot {...{ frame, window, workspace, axis, windows, cursor, scale, pins }} />}
        </FigureFrame>
      </div>
    </div>
  )
}
