/** Before, after and taken out over time, with the windows of score and baseline. */
import { useRef } from 'react'
import { FigureFrame } from '../plot/index.ts'
import { windowWords } from '../words/index.ts'
import { useAskMoment } from './desks/trace/ask-moment.ts'
import { useView } from './hooks.ts'
import { scoreText } from './score-mark.ts'
import { cursorAt, MARGIN, type SharedAxis } from './shared-axis.ts'
import { msText, unseenStretches } from './time-axis.ts'
import { shownWords, TimeHead } from './time-head.tsx'
import { TimePlot } from './time-plot.tsx'
import { readingWords } from './time-reading.ts'

interface TimeFigureProps extends SharedAxis {
  takenOut: boolean
  onDelayed: (shown: boolean) => void
}

const HEIGHT = 240

export function TimeFigure(props: TimeFigureProps) {
  const { evaluation, workspace, caption, axis, windows, cursor, onCursor, takenOut, onDelayed } = props
  const svg = useRef<SVGSVGElement>(null)
  const held = useRef(false)
  const polarity = useView((view) => view.polarity)
  return (
    <>
      <TimeHead {...{ evaluation, workspace, takenOut, onDelayed, svg, caption }} />
      <div {...useAskMoment(svg, axis, cursor)}>
        <FigureFrame
          title="Waveform over time"
          description={descriptionOf(props, polarity)}
          height={HEIGHT}
          margin={MARGIN}
          interactive
          svgRef={svg}
          // under a window that is being moved the cursor keeps its place
          onHover={(point, frame) => (point && !held.current ? onCursor(cursorAt(point, frame, axis)) : undefined)}
        >
          {(frame) => (
            <TimePlot
              {...{ frame, evaluation, axis, windows, cursor, onCursor, takenOut, polarity }}
              score={workspace.score}
              onHold={(now) => {
                held.current = now
              }}
            />
          )}
        </FigureFrame>
      </div>
    </>
  )
}

function descriptionOf(props: TimeFigureProps, polarity: 'up' | 'down'): string {
  const { evaluation, workspace, axis, windows, cursor, takenOut } = props
  const { score, baseline } = windows
  const { after, unit } = evaluation.rows[0]
  const unseen = unseenStretches(evaluation.unseenBySample, axis).map((part) => windowWords(part.fromMs, part.toMs))
  return [
    `${shownWords(evaluation, workspace.shown.channel)}, ${windowWords(axis.firstMs, axis.lastMs)}, in µV, ` +
      `${polarity === 'up' ? 'positive' : 'negative'} up.`,
    `At ${msText(axis.firstMs + cursor * axis.stepMs)}: ${readingWords(evaluation, cursor, takenOut)}.`,
    baseline === 'none' ? 'No baseline correction.' : `Baseline ${windowWords(baseline.fromMs, baseline.toMs)}.`,
    `Score window ${windowWords(score.fromMs, score.toMs)}, score after the chain: ${scoreText(after, unit)}.`,
    unseen.length > 0 ? `Hatched because it leans on samples that are not in the data: ${unseen.join(' and ')}.` : '',
  ]
    .filter(Boolean)
    .join(' ')
}
