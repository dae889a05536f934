/** What is drawn inside the time figure's frame. */
import { useMemo } from 'react'
import type { Score } from '../erp/score.ts'
import { Cursor, type Frame, linearScale, type Scale } from '../plot/index.ts'
import type { Evaluation } from '../state/evaluation.ts'
import { windowWords } from '../words/index.ts'
import { LabelTexts, Unspoken } from './label-text.tsx'
import { errorBands } from './error-bands.ts'
import { drawnPins } from './pin-line.tsx'
import { courseOf } from './placed-labels.ts'
import { scoreMark, scoreText } from './score-mark.ts'
import { ScoreMarkLine } from './score-mark-line.tsx'
import { amplitudeDomain, msText, type TimeAxis, unseenStretches, uvText } from './time-axis.ts'
import { TimeBands, type Windows } from './time-bands.tsx'
import { conditionTone, Grounds, TimeAxes, TimeCurves } from './time-layers.tsx'
import { readingWords } from './time-reading.ts'
import { useFrame } from './shared-axis.ts'
import { type CursorReading, cursorLabels, handles, markExtent, stillLabels, type WindowLabel } from './time-labels.ts'

interface TimePlotProps {
  frame: Frame
  evaluation: Evaluation
  axis: TimeAxis
  windows: Windows
  /** The score that the evaluation's value belongs to. */
  score: Score
  cursor: number
  onCursor: (ms: number) => void
  onHold: (held: boolean) => void
  takenOut: boolean
  polarity: 'up' | 'down'
}

export function TimePlot(props: TimePlotProps) {
  const { evaluation, axis, windows, score, cursor, onCursor, onHold, takenOut, polarity } = props
  const frame = useFrame(props.frame)
  const { curves, chosen } = evaluation
  const main = curves[chosen]
  const pins = useMemo(() => drawnPins(evaluation), [evaluation])
  const bands = useMemo(() => errorBands(evaluation), [evaluation])
  const x = useMemo(() => linearScale([axis.fromMs, axis.toMs], [frame.left, frame.right]), [axis, frame])
  const [bottomUv, topUv] = useMemo(() => {
    const drawn = curves.flatMap(({ before, after }) => [before, after])
    if (takenOut) drawn.push(main.takenOut)
    drawn.push(...pins.map(({ result }) => result.after))
    for (const { lower, upper } of bands ?? []) drawn.push(lower, upper)
    return amplitudeDomain(drawn, polarity)
  }, [curves, main, pins, bands, takenOut, polarity])
  // by its numbers, so that the curves' paths are kept while only the score's window is moved
  const y = useMemo(
    () => linearScale([bottomUv, topUv], [frame.bottom, frame.top]),
    [bottomUv, topUv, frame.bottom, frame.top],
  )
  const courses = useMemo(() => {
    const course = (values: Float64Array) => courseOf(values, axis.firstMs, axis.stepMs, frame, x, y)
    const others = curves.flatMap((entry, i) =>
      i === chosen ? [] : [{ name: entry.name, tone: conditionTone(i), ...course(entry.after) }],
    )
    const own = [main.before, main.after, ...(takenOut ? [main.takenOut] : [])].map(course)
    const pinned = pins.map(({ result }) => course(result.after))
    return { others, pinned, all: [...own, ...others, ...pinned] }
  }, [curves, chosen, main, pins, takenOut, axis, frame, x, y])

  const unseen = useMemo(
    () =>
      unseenStretches(evaluation.unseenBySample, axis).map(({ fromMs, toMs }) => ({
        fromPx: x.toPixel(fromMs),
        toPx: x.toPixel(toMs),
      })),
    [evaluation.unseenBySample, axis, x],
  )
  const { after: value, unit } = evaluation.rows[0]
  const mark = useMemo(() => scoreMark(score, value, main.after, axis), [score, value, main, axis])
  const { score: window, baseline } = windows
  const still = useMemo(() => {
    const text = `score after ${scoreText(value, unit)}`
    const labelled = windowLabels(
      x,
      window,
      baseline,
      mark ? null : `after${typeof value === 'number' ? '' : ':'} ${scoreText(value, unit)}`,
    )
    const extent = mark ? markExtent(mark, x, y) : null
    return {
      extent,
      windows: labelled,
      labels: stillLabels({
        frame,
        windows: labelled,
        mark: extent && { ...extent, text },
        unseen,
        others: courses.others,
        zeroY: y.toPixel(0),
        courses: courses.all,
      }),
    }
  }, [frame, x, y, window, baseline, mark, value, unit, unseen, courses])

  const cursorMs = axis.firstMs + cursor * axis.stepMs
  const readings: CursorReading[] = [
    { id: 'before', tone: 'before', name: 'before', ...readAt(main.before, cursor, y) },
    { id: 'after', tone: 'after', name: 'after', ...readAt(main.after, cursor, y) },
  ]
  const difference = evaluation.delayIncluded
    ? frame.plotWidth > 560
      ? 'before − after, delay included'
      : 'before − after'
    : 'taken out'
  if (takenOut)
    readings.push({ id: 'taken out', tone: 'taken-out', name: difference, ...readAt(main.takenOut, cursor, y) })
  for (const [i, { index, name, result }] of pins.entries()) {
    const { heights } = courses.pinned[i]
    readings.push({ id: `pin ${index}`, tone: 'quiet', name, ...readAt(result.after, cursor, y), along: heights })
  }
  const inTheWay = [...still.labels.map((label) => label.box), ...handles(still.windows, frame)]
  const moving = cursorLabels(frame, x.toPixel(cursorMs), msText(cursorMs), readings, courses.all, inTheWay)

  const band = [x.toPixel(window.fromMs), x.toPixel(window.toMs)] as const
  return (
    <>
      <Grounds {...{ frame, x, y, axis, windows, unseen }} />
      <TimeCurves {...{ frame, x, y, axis, evaluation, pins, bands, takenOut }} />
      <TimeAxes {...{ frame, x, y }} />
      {mark && still.extent ? <ScoreMarkLine kind={mark.kind} {...still.extent} labels={still.labels} /> : null}
      <Cursor
        {...{ frame, scale: x, min: axis.firstMs, max: axis.lastMs, step: axis.stepMs }}
        value={cursorMs}
        dots={readings.map((reading) => ({ y: reading.y, tone: reading.tone }))}
        name="cursor"
        valueText={`${msText(cursorMs)}: ${readingWords(evaluation, cursor, takenOut)}`}
        onChange={onCursor}
      />
      <Unspoken>
        <LabelTexts labels={still.labels} band={band} />
        <LabelTexts labels={moving} band={band} />
      </Unspoken>
      <TimeBands {...{ frame, x, axis, windows, onHold }} />
    </>
  )
}

function readAt(values: Float64Array, index: number, y: Scale): { text: string; y: number } {
  return { text: uvText(values[index]), y: y.toPixel(values[index]) }
}

function windowLabels(x: Scale, score: Score, baseline: Windows['baseline'], note: string | null): WindowLabel[] {
  const label = (id: string, window: { fromMs: number; toMs: number }, more: string | null): WindowLabel => ({
    id,
    fromPx: x.toPixel(window.fromMs),
    toPx: x.toPixel(window.toMs),
    rows: [
      { strong: id },
      { plain: windowWords(window.fromMs, window.toMs) },
      ...(more === null ? [] : [{ plain: more }]),
    ],
  })
  return [...(baseline === 'none' ? [] : [label('baseline', baseline, null)]), label('score', score, note)]
}
