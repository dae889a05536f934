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
import { claimVerdictWords, curveSentence } from '../../../words/index.ts'
import { FigureHead } from '../../figure-head.tsx'
import { LabelTexts, Unspoken } from '../../label-text.tsx'
import { curveLabels } from './curve-labels.ts'
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
  const labels = curveLabels(curve, frame, x, y, drawnBounds(bounds, numbers), answer.unit)
  const now = labels.find(({ id }) => id === 'now')
  const head = now?.anchor === 'middle' ? now.box.bottom : frame.top
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
      {here && here.number !== null ? <Dot x={x.toPixel(here.at)} y={y.toPixel(here.number)} tone="after" /> : null}
      {here ? (
        <path
          d={`M${x.toPixel(here.at)},${here.number === null ? frame.bottom : y.toPixel(here.number) - 4}V${head}`}
          stroke="var(--after)"
          strokeWidth={1}
          fill="none"
        />
      ) : null}
      <Unspoken>
        <LabelTexts labels={labels} />
      </Unspoken>
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
  const drawn = drawnBounds(bounds, numbers)
  const [low, high] = extent([...kept, ...drawn])
  const room = (high - low || 1) * 0.08
  // critical values stand at the foot; over the highest line stands what is claimed
  const head = drawn.includes(high) && high !== 0 ? 2.6 * room : room
  return linearScale([low - 2.8 * room, high + head], [frame.bottom, frame.top])
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
