/** A claim's number over one quantity of the chain, with every place where the answer changes. */
import type { RefObject } from 'react'
import type { ClaimAnswer, ClaimCurve, ClaimForm, ClaimVerdict } from '../../../evidence/claims/claim.ts'
import {
  Axis,
  Clipped,
  DirectLabel,
  Dot,
  FigureFrame,
  type Frame,
  GridLines,
  Line,
  linearScale,
  logScale,
  type Scale,
  textWidth,
  ZeroLine,
} from '../../../plot/index.ts'
import { claimBounds } from '../../../state/claims.ts'
import { brief, claimVerdictWords, curveSentence } from '../../../words/index.ts'
import { FigureHead } from '../../figure-head.tsx'
import { verdictStretches } from './verdict-strip.ts'

interface CurveFigureProps {
  /** The claim's place in the list, from 1. */
  number: number
  form: ClaimForm
  answer: ClaimAnswer
  curve: ClaimCurve
  /** "cutoff of the Butterworth high-pass". */
  quantity: string
  caption: () => string
  svg: RefObject<SVGSVGElement | null>
}

const HEIGHT = 190
const MARGIN = { left: 44, right: 12, top: 40, bottom: 26 }
/** Told apart by weight and dash, not by colour alone. */
const STRIP: Record<ClaimVerdict, { tone: string; width: number; dash?: string }> = {
  holds: { tone: 'var(--after)', width: 5 },
  'does not hold': { tone: 'var(--taken-out)', width: 2 },
  'cannot be told': { tone: 'var(--quiet)', width: 2, dash: '2 3' },
}

export function CurveFigure({ number, form, answer, curve, quantity, caption, svg }: CurveFigureProps) {
  const title = `Claim ${number}: what would change it`
  return (
    <>
      <FigureHead title={title} svg={svg} caption={caption} fileName={`claim-${number}`} />
      <FigureFrame
        title={title}
        description={`${answer.unit} over the ${quantity}. ${curveSentence(form, curve)}`}
        height={HEIGHT}
        margin={MARGIN}
        svgRef={svg}
      >
        {(frame) => <CurvePlot {...{ frame, form, answer, curve, quantity }} />}
      </FigureFrame>
    </>
  )
}

function CurvePlot(props: Pick<CurveFigureProps, 'form' | 'answer' | 'curve' | 'quantity'> & { frame: Frame }) {
  const { frame, form, answer, curve, quantity } = props
  const { points, flips, present, unit } = curve
  const x = quantityScale(curve, frame)
  const numbers = points.map((point) => point.number ?? Number.NaN)
  const bounds = claimBounds(form)
  const y = numberScale(numbers, bounds, frame)
  const here = points.find((point) => point.at === present)
  return (
    <>
      <GridLines frame={frame} scale={x} along="x" />
      <GridLines frame={frame} scale={y} along="y" />
      <ZeroLine frame={frame} scale={y} along="y" />
      <Clipped frame={frame}>
        {drawnBounds(bounds, numbers).map((bound) => (
          <path
            key={bound}
            d={`M${frame.left},${y.toPixel(bound)}H${frame.right}`}
            stroke="var(--ink)"
            strokeDasharray="4 3"
            fill="none"
          />
        ))}
        {flips.map(({ at }) => (
          <path
            key={at}
            d={`M${x.toPixel(at)},${frame.top}V${frame.bottom}`}
            stroke="var(--over)"
            strokeDasharray="2 2"
            fill="none"
          />
        ))}
        <Line xs={Float64Array.from(points, ({ at }) => at)} ys={numbers} x={x} y={y} tone="after" />
      </Clipped>
      {unit === null
        ? points.map(({ at, number }) =>
            number === null ? null : (
              <circle key={at} cx={x.toPixel(at)} cy={y.toPixel(number)} r={3} fill="var(--after)" />
            ),
          )
        : null}
      <Strip {...{ frame, x, curve }} />
      <FlipLabels {...{ frame, x, curve }} />
      {here ? <Present {...{ frame, x, y, at: here.at, number: here.number, unit }} /> : null}
      <BoundLabels {...{ frame, y, unit: answer.unit }} bounds={drawnBounds(bounds, numbers)} />
      <Axis side="left" scale={y} at={frame.left} title={answer.unit} />
      <Axis
        side="bottom"
        scale={x}
        at={frame.bottom}
        title={`${quantity.charAt(0).toUpperCase()}${quantity.slice(1)}${unit === null ? '' : ', Hz'}`}
        {...(unit === null
          ? { ticks: points.map(({ at }) => ({ value: at, pixel: x.toPixel(at), label: String(at) })) }
          : {})}
      />
    </>
  )
}

function quantityScale({ points, unit }: ClaimCurve, frame: Frame): Scale {
  const [first, last] = [points[0].at, points[points.length - 1].at]
  if (unit === 'Hz') return logScale([first, last > first ? last : first * 1.1], [frame.left, frame.right])
  return linearScale([first - 0.5, last + 0.5], [frame.left, frame.right])
}

/** Of two bounds the one on the side where the number hardly is says nothing. */
function drawnBounds(bounds: readonly number[], numbers: readonly number[]): readonly number[] {
  const [low, high] = extent(numbers)
  return bounds.filter(
    (bound) => bounds.length === 1 || (bound < 0 ? -low >= high || low < bound / 2 : high > -low || high > bound / 2),
  )
}

function extent(numbers: readonly number[]): [number, number] {
  const finite = numbers.filter(Number.isFinite)
  return [Math.min(0, ...finite), Math.max(0, ...finite)]
}

/** A share of what passes through zero grows beyond all bounds beside it: the curve leaves the figure there. */
const MOST_TIMES_USUAL = 6

function numberScale(numbers: readonly number[], bounds: readonly number[], frame: Frame): Scale {
  const sizes = numbers
    .filter(Number.isFinite)
    .map(Math.abs)
    .sort((a, b) => a - b)
  const usual = Math.max(sizes[Math.floor(0.75 * sizes.length)] ?? 0, ...bounds.map(Math.abs))
  const kept = numbers.map((value) => Math.max(-MOST_TIMES_USUAL * usual, Math.min(MOST_TIMES_USUAL * usual, value)))
  const [low, high] = extent([...kept, ...drawnBounds(bounds, numbers)])
  const room = (high - low || 1) * 0.08
  // critical values stand at the foot
  return linearScale([low - 2.8 * room, high + room], [frame.bottom, frame.top])
}

const STRIP_Y = 24

/** The verdict along the quantity, above the plot. */
function Strip({ frame, x, curve }: { frame: Frame; x: Scale; curve: ClaimCurve }) {
  const stretches = verdictStretches(curve)
  const whole = (i: number) => [
    i === 0 ? frame.left : x.toPixel(stretches[i].from),
    i === stretches.length - 1 ? frame.right : x.toPixel(stretches[i].to),
  ]
  return (
    <g>
      {stretches.map(({ verdict, from }, i) => {
        if (verdict === null) return null
        const { tone, width, dash } = STRIP[verdict]
        const [left, right] = whole(i)
        const words = claimVerdictWords(verdict).toLowerCase()
        return (
          <g key={from}>
            <path
              d={`M${left},${STRIP_Y}H${right}`}
              stroke={tone}
              strokeWidth={width}
              strokeDasharray={dash}
              fill="none"
            />
            {textWidth(words) + 6 < right - left ? (
              <DirectLabel x={(left + right) / 2} y={STRIP_Y - 12} tone="quiet" anchor="middle" ground="none">
                {words}
              </DirectLabel>
            ) : null}
          </g>
        )
      })}
    </g>
  )
}

/** Critical values at the foot of their lines; one that would stand on its neighbour is left to the sentence. */
function FlipLabels({ frame, x, curve }: { frame: Frame; x: Scale; curve: ClaimCurve }) {
  let taken = Number.NEGATIVE_INFINITY
  return (
    <g>
      {curve.flips.map(({ at }) => {
        const words = curve.unit === 'Hz' ? `${brief(at, 2)} Hz` : String(at)
        const width = textWidth(words)
        const pixel = x.toPixel(at)
        const middle = Math.min(frame.right - width / 2, Math.max(frame.left + width / 2, pixel))
        if (middle - width / 2 < taken + 6) return null
        taken = middle + width / 2
        return (
          <DirectLabel key={at} x={middle} y={frame.bottom - 9} tone="over" anchor="middle" strong>
            {words}
          </DirectLabel>
        )
      })}
    </g>
  )
}

/** Where the chain stands. */
function Present(props: { frame: Frame; x: Scale; y: Scale; at: number; number: number | null; unit: 'Hz' | null }) {
  const { frame, x, y, at, number, unit } = props
  const pixel = x.toPixel(at)
  const height = number === null ? frame.top + 10 : y.toPixel(number)
  const words = `now ${brief(at, 3)}${unit === null ? '' : ' Hz'}`
  const left = pixel + textWidth(words) + 14 > frame.right
  const above = height - 12 > frame.top + 8
  return (
    <g>
      {number === null ? null : <Dot x={pixel} y={height} tone="after" />}
      <DirectLabel
        x={pixel + (left ? -9 : 9)}
        y={above ? height - 11 : height + 13}
        tone="after"
        anchor={left ? 'end' : 'start'}
        strong
      >
        {words}
      </DirectLabel>
    </g>
  )
}

function BoundLabels({ frame, y, unit, bounds }: { frame: Frame; y: Scale; unit: string; bounds: readonly number[] }) {
  return (
    <g>
      {bounds
        .filter((bound) => bound !== 0)
        .map((bound) => (
          <DirectLabel key={bound} x={frame.right - 4} y={y.toPixel(bound) - 9} tone="ink" anchor="end">
            claimed {brief(bound, 3)} {unit}
          </DirectLabel>
        ))}
    </g>
  )
}
