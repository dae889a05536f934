/** The late-only fit behind a claim: what it found, in words, numbers and figures. */
import { type RefObject, useEffect, useRef } from 'react'
import type { ClaimForm } from '../../../evidence/claims/claim.ts'
import {
  Axis,
  Clipped,
  DirectLabel,
  FigureFrame,
  type Frame,
  GridLines,
  Line,
  linearScale,
  type Scale,
  StaticBand,
  ZeroLine,
} from '../../../plot/index.ts'
import { type CurveCourse, placesAlong } from '../../../plot/place-labels.ts'
import { lateOnlyFacts } from '../../../state/claim-facts.ts'
import type { LateOnlyResult } from '../../../state/late-only-steps.ts'
import { brief, lateOnlyWords } from '../../../words/index.ts'
import { FigureHead } from '../../figure-head.tsx'
import { LabelTexts, Unspoken } from '../../label-text.tsx'
import { courseOf, type DrawnLabel, drawnLabels, labelSize, type WantedText } from '../../placed-labels.ts'
import { timeTicks } from '../../time-axis.ts'
import { CalibrationTable } from './calibration-table.tsx'
import { type FitCurve, lateOnlyCurves } from './late-only-curves.ts'
import { unbrokenText } from './unbroken.ts'

interface LateOnlyPanelProps {
  form: Extract<ClaimForm, { form: 'late-only' }>
  result: LateOnlyResult
  number: number
  caption: () => string
  /** Where the figures are listed for the dossier, by what they show. */
  figures: Map<string, RefObject<SVGSVGElement | null>>
}

export function LateOnlyPanel({ form, result, number, caption, figures }: LateOnlyPanelProps) {
  const words = lateOnlyWords(lateOnlyFacts(form, result))
  const said: readonly [string, string][] = [
    ['Early activity', words.estimate],
    ['What decided it', words.reason],
    ['Other assumptions', words.robust],
    ['Noise found', `${words.noise} ${words.alpha}`],
    ['Limit of the method', words.phaseLocked],
    ...(words.scan === null ? [] : [['Other onsets', words.scan] as [string, string]]),
    ...(words.bumps === null ? [] : [['Anywhere before', words.bumps] as [string, string]]),
  ]
  return (
    <div className="late-only">
      <div className="grid">
        <div className="figure-body">
          <FitFigure {...{ form, result, number, caption, figures }} />
        </div>
        <div className="side figure-body">
          {result.scan && result.scan.rows.length > 1 ? (
            <ScanFigure {...{ form, result, number, caption, figures }} scan={result.scan} />
          ) : null}
        </div>
      </div>
      <dl className="late-only-words">
        {said.map(([name, text]) => (
          <div key={name}>
            <dt>{name}</dt>
            <dd>{unbrokenText(text)}</dd>
          </div>
        ))}
      </dl>
      <CalibrationTable />
    </div>
  )
}

const FIT_MARGIN = { left: 44, right: 12, top: 20, bottom: 26 }

function useListed(figures: LateOnlyPanelProps['figures'], title: string) {
  const svg = useRef<SVGSVGElement>(null)
  useEffect(() => {
    figures.set(title, svg)
    return () => {
      figures.delete(title)
    }
  }, [figures, title])
  return svg
}

const FIT_SHOWS =
  'The filtered waveform, the best unfiltered waveform that begins no earlier than stated, what the filter makes of it, and what is left.'
const SCAN_SHOWS =
  'Early activity with its 95 % interval for other onsets; open and dashed where late activity alone is ruled out.'

function FitFigure({ form, result, number, caption, figures }: LateOnlyPanelProps) {
  const svg = useListed(figures, FIT_SHOWS)
  const title = `Claim ${number}: the best late-only account`
  const { timesMs } = result
  const curves = lateOnlyCurves(result)
  return (
    <>
      <FigureHead title={title} svg={svg} caption={caption} fileName={`claim-${number}-late-only-fit`} />
      <FigureFrame
        title={title}
        description={
          `The filtered waveform in µV from ${brief(timesMs[0])} to ${brief(timesMs[timesMs.length - 1])} ms, the best unfiltered waveform that begins ` +
          `no earlier than ${brief(form.t0Ms - form.slackMs)} ms, what the filter makes of it, and what is left.`
        }
        height={230}
        margin={FIT_MARGIN}
        svgRef={svg}
      >
        {(frame) => <FitPlot {...{ frame, form, result, curves }} />}
      </FigureFrame>
    </>
  )
}

function FitPlot(
  props: Pick<LateOnlyPanelProps, 'form' | 'result'> & { frame: Frame; curves: ReturnType<typeof lateOnlyCurves> },
) {
  const { frame, form, result, curves } = props
  const { timesMs } = result
  const last = timesMs.length - 1
  const x = linearScale([timesMs[0], timesMs[last]], [frame.left, frame.right])
  const all = curves.flatMap(({ values }) => Array.from(values))
  const [low, high] = [Math.min(0, ...all), Math.max(0, ...all)]
  const room = (high - low || 1) * 0.06
  const y = linearScale([low - room, high + room], [frame.bottom, frame.top])
  const step = (timesMs[last] - timesMs[0]) / last
  const labels = fitLabels(
    curves,
    curves.map(({ values }) => courseOf(values, timesMs[0], step, frame, x, y)),
    frame,
  )
  return (
    <>
      <StaticBand frame={frame} scale={x} value={{ from: form.early.fromMs, to: form.early.toMs }} />
      <GridLines frame={frame} scale={x} along="x" ticks={timeTicks(x).ticks} />
      <GridLines frame={frame} scale={y} along="y" />
      <ZeroLine frame={frame} scale={y} along="y" />
      <Onset frame={frame} x={x} atMs={form.t0Ms} />
      <Clipped frame={frame}>
        {curves.map(({ name, values, tone, dash, weight }) => (
          <Line
            key={name}
            xs={{ start: timesMs[0], step }}
            ys={values}
            x={x}
            y={y}
            tone={tone}
            dash={dash}
            weight={weight}
          />
        ))}
      </Clipped>
      <Unspoken>
        <LabelTexts labels={labels} />
      </Unspoken>
      <Axis side="left" scale={y} at={frame.left} title="µV" />
      <Axis side="bottom" scale={x} at={frame.bottom} {...timeTicks(x)} />
    </>
  )
}

const LABEL_PX = 16

/** Every curve's name along it, where it runs apart from the others. */
function fitLabels(curves: readonly FitCurve[], courses: readonly CurveCourse[], frame: Frame): DrawnLabel[] {
  const wanted = curves.map(({ name, tone }, own): WantedText => {
    const rows = tone === 'after' ? [{ strong: name }] : [{ plain: name }]
    const { width } = labelSize({ id: name, tone, rows })
    const alone = (column: number) => {
      const heights = courses.map((course) => course.heights[column])
      return Math.min(30, ...heights.filter((_, i) => i !== own).map((height) => Math.abs(height - heights[own])))
    }
    const size = { width, height: LABEL_PX }
    const places = placesAlong(courses[own].heights, size, frame.left, (column) => 12 - 0.4 * alone(column))
    return { id: name, tone, rows, places }
  })
  return drawnLabels(wanted, frame, courses, [])
}

/** The stated onset. */
function Onset({ frame, x, atMs }: { frame: Frame; x: Scale; atMs: number }) {
  const pixel = x.toPixel(atMs)
  if (pixel < frame.left || pixel > frame.right) return null
  return (
    <>
      <path d={`M${pixel},${frame.top}V${frame.bottom}`} stroke="var(--over)" strokeDasharray="2 2" fill="none" />
      <DirectLabel x={pixel + 5} y={frame.top + 9} tone="over">
        t0 {brief(atMs)} ms
      </DirectLabel>
    </>
  )
}

const SCAN_MARGIN = { left: 44, right: 12, top: 20, bottom: 26 }

/** β with its 95 % interval for every assumed onset. */
function ScanFigure(props: LateOnlyPanelProps & { scan: NonNullable<LateOnlyResult['scan']> }) {
  const { form, scan, number, caption, figures } = props
  const svg = useListed(figures, SCAN_SHOWS)
  const { rows } = scan
  const title = `Claim ${number}: other onsets`
  return (
    <>
      <FigureHead title={title} svg={svg} caption={caption} fileName={`claim-${number}-onsets`}>
        <span className="told">early activity and 95 % interval</span>
      </FigureHead>
      <FigureFrame
        title={title}
        description={rows
          .map(
            ({ t0Ms, beta, interval, verdict }) =>
              `${brief(t0Ms)} ms: ${brief(beta, 2)} µV (${brief(interval[0], 2)} to ${brief(interval[1], 2)}), ${verdict}`,
          )
          .join('; ')}
        height={230}
        margin={SCAN_MARGIN}
        svgRef={svg}
      >
        {(frame) => {
          const first = rows[0].t0Ms
          const end = rows[rows.length - 1].t0Ms
          const half = (end - first) / (rows.length - 1) / 2 || 1
          const x = linearScale([first - half, end + half], [frame.left, frame.right])
          const all = rows.flatMap(({ interval }) => interval)
          const [low, high] = [Math.min(0, ...all), Math.max(0, ...all)]
          const y = linearScale([low - (high - low) * 0.06, high + (high - low) * 0.06], [frame.bottom, frame.top])
          return (
            <>
              <GridLines frame={frame} scale={x} along="x" ticks={timeTicks(x).ticks} />
              <GridLines frame={frame} scale={y} along="y" />
              <ZeroLine frame={frame} scale={y} along="y" />
              <Onset frame={frame} x={x} atMs={form.t0Ms} />
              {rows.map(({ t0Ms, beta, interval, verdict }) => {
                const ruledOut = verdict === 'not by late activity alone'
                const tone = ruledOut ? 'var(--taken-out)' : 'var(--after)'
                const pixel = x.toPixel(t0Ms)
                return (
                  <g key={t0Ms} stroke={tone} fill={ruledOut ? 'var(--sheet)' : tone}>
                    <path
                      d={`M${pixel},${y.toPixel(interval[0])}V${y.toPixel(interval[1])}`}
                      strokeWidth={1.5}
                      strokeDasharray={ruledOut ? '3 2' : undefined}
                    />
                    <circle cx={pixel} cy={y.toPixel(beta)} r={3.2} strokeWidth={1.5} />
                  </g>
                )
              })}
              <Axis side="left" scale={y} at={frame.left} title="µV" />
              <Axis side="bottom" scale={x} at={frame.bottom} {...timeTicks(x)} title="Assumed onset, ms" />
            </>
          )
        }}
      </FigureFrame>
      <p className="small quiet">Open and dashed: late activity alone is ruled out.</p>
    </>
  )
}
