/** Before, after and taken out over time, with the windows of score and baseline. */
import { useRef } from 'react'
import { FigureFrame, type Frame, linearScale, type Point } from '../plot/index.ts'
import type { Evaluation } from '../state/evaluation.ts'
import type { Workspace } from '../state/workspace.ts'
import { windowWords } from '../words/index.ts'
import { useView } from './hooks.ts'
import { scoreText } from './score-mark.ts'
import { msText, type TimeAxis, unseenStretches, uvText } from './time-axis.ts'
import type { Windows } from './time-bands.tsx'
import { shownWords, TimeHead } from './time-head.tsx'
import { TimePlot } from './time-plot.tsx'

export interface SharedAxis {
  evaluation: Evaluation
  workspace: Workspace
  caption: () => string
  axis: TimeAxis
  windows: Windows
  /** Sample of the epoch under the cursor. */
  cursor: number
  onCursor: (ms: number) => void
}

interface TimeFigureProps extends SharedAxis {
  takenOut: boolean
  onDelayed: (shown: boolean) => void
}

/** Room for the axes; the numbers on the left hang into the page's margin. */
export const MARGIN = { top: 2, right: 0, bottom: 24, left: 44 }
const HEIGHT = 238

/** Moves the cursor to the sample under the pointer. */
export function cursorAt(point: Point, frame: Frame, axis: TimeAxis): number {
  const ms = linearScale([axis.fromMs, axis.toMs], [frame.left, frame.right]).fromPixel(point.x)
  const index = Math.max(0, Math.min(axis.samples - 1, Math.round((ms - axis.firstMs) / axis.stepMs)))
  return axis.firstMs + index * axis.stepMs
}

export function TimeFigure(props: TimeFigureProps) {
  const { evaluation, workspace, caption, axis, windows, cursor, onCursor, takenOut, onDelayed } = props
  const svg = useRef<SVGSVGElement>(null)
  const held = useRef(false)
  const polarity = useView((view) => view.polarity)
  return (
    <>
      <TimeHead {...{ evaluation, workspace, takenOut, onDelayed, svg, caption }} />
      <div className="time-hanging">
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

/** What is read at the cursor, for those who do not see the labels. */
export function readingWords(evaluation: Evaluation, cursor: number, takenOut: boolean): string {
  const chosen = evaluation.curves[evaluation.chosen]
  const words = [`before ${uvText(chosen.before[cursor])}`, `after ${uvText(chosen.after[cursor])}`]
  const name = evaluation.delayIncluded ? 'before − after, delay included,' : 'taken out'
  if (takenOut) words.push(`${name} ${uvText(chosen.takenOut[cursor])}`)
  for (const [i, { name, before, after }] of evaluation.curves.entries())
    if (i !== evaluation.chosen) words.push(`${name} before ${uvText(before[cursor])}, after ${uvText(after[cursor])}`)
  return words.join(', ')
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
