/** Impulse or step response of the stages applied here, with the reach of the kernel. */
import { useMemo, useRef } from 'react'
import { FigureFrame } from '../plot/index.ts'
import type { Evaluation } from '../state/evaluation.ts'
import { look, type View } from '../state/view.ts'
import { brief, fixed, list } from '../words/number.ts'
import { FigureHead, Switch } from './figure-head.tsx'
import './frequency-figure.css'
import { useView } from './hooks.ts'
import type { StepEnd } from './kernel-labels.ts'
import { KernelPlot } from './kernel-plot.tsx'
import { type KernelRange, type KernelWords, kernelRange, kernelWords, lagText } from './kernel-shape.ts'
import { drawnPins } from './pin-line.tsx'
import { SingleImpulsePlot } from './single-impulse-plot.tsx'

interface KernelFigureProps {
  evaluation: Evaluation
  /** Names filter, data and score for the saved figure; read when it is saved. */
  caption: () => string
  /** Of the svg, px. */
  height: number
  /** Of the svg, px; default: that of the column. */
  width?: number
}

/** Room for the axes; the numbers on the left hang into the gutter. */
const MARGIN = { top: 2, right: 0, bottom: 22, left: 44 }

export function KernelFigure({ evaluation, caption, height, width }: KernelFigureProps) {
  const shows = useView((view) => view.kernelShows)
  const scale = useView((view) => view.kernelScale)
  const svg = useRef<SVGSVGElement>(null)
  const { kernel } = evaluation
  const range = useMemo(() => kernelRange(evaluation), [evaluation])
  const words = useMemo(() => kernelWords(evaluation, range), [evaluation, range])
  const pins = useMemo(() => drawnPins(evaluation), [evaluation])
  const impulse = shows === 'impulse response'
  const end = useMemo(() => (impulse ? null : endOfStep(evaluation, range)), [evaluation, range, impulse])
  return (
    <div className="figure-body wraps">
      <FigureHead title="Kernel" svg={svg} caption={caption} fileName="kernel">
        <span className="told">
          <Switch
            value={shows}
            options={['impulse response', 'step response']}
            label="Kernel figure shows"
            onChange={(next) => look({ kernelShows: next })}
          />
          {impulse ? ', per second, ' : ', '}
          <Switch
            value={scale}
            options={['compressed', 'linear']}
            words={{ compressed: 'compressed scale', linear: 'linear scale' }}
            label="Kernel figure on"
            onChange={(next) => look({ kernelScale: next })}
          />
        </span>
      </FigureHead>
      <div className="hanging">
        <FigureFrame
          title={`Kernel: ${shows}`}
          description={kernelInWords(evaluation, shows, range, words, end)}
          height={height}
          width={width}
          margin={MARGIN}
          svgRef={svg}
        >
          {(frame) =>
            words === null ? (
              <SingleImpulsePlot
                shows={shows}
                value={impulse ? evaluation.samplingRateHz : 1}
                fromMs={-50}
                toMs={150}
                words={singleWords(evaluation.chain, impulse)}
                frame={frame}
              />
            ) : (
              <KernelPlot
                kernel={kernel}
                pins={pins}
                shows={shows}
                compressed={scale === 'compressed'}
                range={range}
                words={words}
                end={end}
                frame={frame}
              />
            )
          }
        </FigureFrame>
      </div>
    </div>
  )
}

/** What a figure says that has no filter to show. */
function singleWords({ stages }: Evaluation['chain'], impulse: boolean): { strong: string; quiet: string } {
  return {
    strong: stages.length === 0 ? 'no filter' : 'no filter applied here',
    quiet: impulse ? 'the kernel is a single impulse' : 'a step passes unchanged',
  }
}

/**
 * The value that a step settles at, and before it the value at the end of the figure where the two are not yet the same. Every design is
 * scaled to pass 0 Hz whole or to stop it, so that the final value is known without waiting for it.
 */
function endOfStep({ kernel, chain }: Evaluation, range: KernelRange): StepEnd | null {
  const last = kernel.step.length - 1
  if (last < 0) return null
  const index = Math.min(last, Math.round(range.toMs / kernel.stepMs) - kernel.fromIndex)
  const value = kernel.step[index]
  const applied = chain.stages.flatMap(({ spec }) => (spec.inData === true ? [] : [spec]))
  const stopped = applied.some((spec) => 'pass' in spec && (spec.pass === 'high' || spec.pass === 'band'))
  const slow = applied.some((spec) => spec.design === 'amplifier' && spec.pass === 'high')
  const final = stopped ? 0 : 1
  const settled = range.whole && !slow && fixed(value, 2) === fixed(final, 2)
  const at = `${fixed(value, 2)} at ${lagText((index + kernel.fromIndex) * kernel.stepMs)} ms`
  return { value, words: settled ? `final value ${final}` : `${at}, final value ${final}` }
}

/** The figure in words, with its numbers. */
function kernelInWords(
  { kernel, chain, pins }: Evaluation,
  shows: View['kernelShows'],
  range: KernelRange,
  words: KernelWords | null,
  end: StepEnd | null,
): string {
  if (words === null) {
    const { strong, quiet } = singleWords(chain, shows === 'impulse response')
    return `${strong}: ${quiet}.`
  }
  const drawn = `Drawn from ${lagText(range.fromMs)} to ${lagText(range.toMs)} ms.`
  const pinned = drawnPins({ pins }).map((pin) => pin.result.name)
  const beside = pinned.length > 0 ? ` Beside it the pinned ${list(pinned)}.` : ''
  const reach = `${words.reach}, ${words.more.join(', ')}.${beside}`
  if (shows === 'step response')
    return `Response to a step from 0 to 1. ${drawn} ${end ? `${end.words}. ` : ''}${reach}`
  let [low, high] = [0, 0]
  for (const value of kernel.impulse) {
    low = Math.min(low, value)
    high = Math.max(high, value)
  }
  const numbers = `between ${brief(low)} and ${brief(high)} per second`
  return `Impulse response of the stages applied here, ${numbers}. ${drawn} ${reach}`
}
