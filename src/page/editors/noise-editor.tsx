/** The noise of single trials: a model's fields or the estimate from the loaded trials, as a spectrum and as one trial. */
import { useMemo, useRef, useState } from 'react'
import type { NoiseSpec } from '../../erp/noise.ts'
import { Axis, Clipped, FigureFrame, GridLines, Line, linearScale, logScale, ZeroLine } from '../../plot/index.ts'
import {
  type ChosenNoise,
  checkNoise,
  chosenNoise,
  defaultNoise,
  hasTrials,
  noiseDensity,
  simulatedTrial,
  trialsChosen,
} from '../../state/chosen-noise.ts'
import type { RecordedData } from '../../state/recorded-data.ts'
import { say } from '../../state/store.ts'
import type { Workspace } from '../../state/workspace.ts'
import { brief, exact, inWords } from '../../words/index.ts'
import { Actions, Choice, NumberField, WordButton } from '../fields.tsx'
import { Unspoken } from '../label-text.tsx'
import { Editor } from './editor.tsx'

type Model = Workspace['noise']

interface NoiseEditorProps {
  workspace: Workspace
  table: RecordedData | null
  samplingRateHz: number
  error: string | undefined
}

export function NoiseEditor({ workspace, table, samplingRateHz, error }: NoiseEditorProps) {
  const trials = hasTrials(table)
  const from = trials ? workspace.noiseFrom : 'model'
  const outcome = useMemo(() => attempt(() => chosenNoise(workspace, table)), [workspace, table])
  return (
    <Editor title="Noise" subtitle="of single trials of the continuous EEG" error={error ?? outcome.problem}>
      {trials ? (
        <Choice
          label="where the noise is taken from"
          value={from}
          options={[
            { value: 'model', text: 'a model' },
            { value: 'trials', text: 'estimated from the single trials' },
          ]}
          onChange={(noiseFrom) => say((w) => ({ ...w, noiseFrom }))}
        />
      ) : null}
      {outcome.value ? <Drawn chosen={outcome.value} samplingRateHz={samplingRateHz} /> : null}
      {from === 'model' ? (
        <ModelFields noise={workspace.noise} />
      ) : (
        table && outcome.value && <Estimated chosen={outcome.value} {...trialsChosen(workspace, table)} />
      )}
    </Editor>
  )
}

function attempt<T>(compute: () => T): { value: T | null; problem: string | undefined } {
  try {
    return { value: compute(), problem: undefined }
  } catch (error) {
    if (!(error instanceof RangeError)) throw error
    return { value: null, problem: inWords(error.message) }
  }
}

function Estimated({ chosen, conditions, channel }: { chosen: ChosenNoise; conditions: string[]; channel: string }) {
  const { estimate, estimateOfSecond: second } = chosen
  if (!estimate) return null
  const from = second
    ? `From ${estimate.trials} trials of ${conditions[0]} and ${second.trials} of ${conditions[1]}, each ${brief(estimate.secondsOfTrial, 3)} s (${channel}); drawn is the mean of both`
    : `From ${estimate.trials} trials of ${brief(estimate.secondsOfTrial, 3)} s (${conditions[0]}, ${channel})`
  const exponents = second
    ? `power laws with exponents ${brief(estimate.exponent, 2)} and ${brief(second.exponent, 2)} go on there`
    : `a power law with exponent ${brief(estimate.exponent, 2)} goes on there`
  return (
    <p className="quiet">
      {from}; what is evoked is cancelled. Below {brief(estimate.extrapolatedBelowHz, 2)} Hz (2/T, dashed) the trials
      are too short: {exponents}. The estimate holds what the stages in the data left.
    </p>
  )
}

interface Field {
  label: string
  unit: string
  ratio?: number
  step?: number
  get: (noise: Model) => number
  set: (noise: Model, value: number) => Model
}

const FIELDS: readonly Field[] = [
  {
    label: 'exponent',
    unit: '',
    step: 0.1,
    get: (noise) => noise.exponent,
    set: (noise, exponent) => ({ ...noise, exponent }),
  },
  {
    label: 'level at 1 Hz',
    unit: 'µV²/Hz',
    ratio: 1.1,
    get: (noise) => noise.levelAt1HzUv2PerHz,
    set: (noise, levelAt1HzUv2PerHz) => ({ ...noise, levelAt1HzUv2PerHz }),
  },
  {
    label: 'flat below',
    unit: 'Hz',
    ratio: 1.1,
    get: (noise) => noise.flatBelowHz,
    set: (noise, flatBelowHz) => ({ ...noise, flatBelowHz }),
  },
  {
    label: 'white floor',
    unit: 'µV²/Hz',
    ratio: 1.1,
    get: (noise) => noise.whiteUv2PerHz,
    set: (noise, whiteUv2PerHz) => ({ ...noise, whiteUv2PerHz }),
  },
  {
    label: 'alpha peak',
    unit: 'µV²/Hz',
    step: 1,
    get: (noise) => noise.alpha?.peakUv2PerHz ?? 0,
    set: (noise, peakUv2PerHz) => ({ ...noise, alpha: { ...alphaOf(noise), peakUv2PerHz } }),
  },
  {
    label: 'alpha centre',
    unit: 'Hz',
    step: 0.5,
    get: (noise) => alphaOf(noise).centreHz,
    set: (noise, centreHz) => ({ ...noise, alpha: { ...alphaOf(noise), centreHz } }),
  },
  {
    label: 'alpha SD',
    unit: 'Hz',
    step: 0.1,
    get: (noise) => alphaOf(noise).sdHz,
    set: (noise, sdHz) => ({ ...noise, alpha: { ...alphaOf(noise), sdHz } }),
  },
  {
    label: 'slow drift at 1 Hz',
    unit: 'µV²/Hz',
    step: 0.5,
    get: (noise) => noise.driftAt1HzUv2PerHz ?? 0,
    set: (noise, driftAt1HzUv2PerHz) => ({ ...noise, driftAt1HzUv2PerHz }),
  },
]

const alphaOf = ({ alpha }: Model) => alpha ?? { centreHz: 10, sdHz: 1.5, peakUv2PerHz: 0 }

/** Numbers that cannot be a noise stay in their field, with the reason under it. */
function ModelFields({ noise }: { noise: Model }) {
  const [bad, setBad] = useState<{ label: string; message: string } | null>(null)
  const typical = defaultNoise()
  const change = (label: string, next: Model) => {
    const { problem } = attempt(() => checkNoise(next))
    setBad(problem === undefined ? null : { label, message: problem })
    if (problem === undefined) say((w) => ({ ...w, noise: next }), `noise:${label}`)
  }
  const differs = FIELDS.some(({ get }) => get(noise) !== get(typical))
  return (
    <>
      <div className="noise-fields">
        {FIELDS.map((field) => {
          const usual = field.get(typical)
          const isUsual = field.get(noise) === usual
          return (
            <div key={field.label}>
              <NumberField
                label={field.label}
                unit={field.unit}
                value={field.get(noise)}
                {...(field.ratio ? { ratio: field.ratio } : { step: field.step ?? 1 })}
                error={bad?.label === field.label ? bad.message : undefined}
                onChange={(value) => {
                  if (!Number.isNaN(value)) change(field.label, field.set(noise, value))
                }}
              />
              <small className="quiet">{isUsual ? 'typical' : `typical: ${exact(usual)}`}</small>
            </div>
          )
        })}
      </div>
      <p className="quiet">
        Typical: for a resting adult’s scalp EEG, from memory; an estimate from own trials is better.
      </p>
      {noise.lines.map((line, i) => {
        const set = (next: Partial<typeof line>, label: string) =>
          change(label, { ...noise, lines: noise.lines.map((entry, k) => (k === i ? { ...entry, ...next } : entry)) })
        const name = `line ${i + 1}`
        return (
          <fieldset key={i} className="noise-line">
            <legend className="visually-hidden">{name}</legend>
            <NumberField
              label={`${name}, frequency`}
              unit="Hz"
              value={line.hz}
              error={bad?.label === `${name} hz` ? bad.message : undefined}
              onChange={(hz) => {
                if (!Number.isNaN(hz)) set({ hz }, `${name} hz`)
              }}
            />
            <NumberField
              label={`${name}, amplitude`}
              unit="µV"
              value={line.amplitudeUv}
              step={0.5}
              error={bad?.label === `${name} amplitude` ? bad.message : undefined}
              onChange={(amplitudeUv) => {
                if (!Number.isNaN(amplitudeUv)) set({ amplitudeUv }, `${name} amplitude`)
              }}
            />
            <label className="small">
              <input
                type="checkbox"
                checked={line.locked}
                onChange={(event) => set({ locked: event.target.checked }, `${name} locked`)}
              />{' '}
              locked to the event
            </label>
            <WordButton
              label={`remove ${name}`}
              onPress={() => change(name, { ...noise, lines: noise.lines.filter((_, k) => k !== i) })}
            >
              remove
            </WordButton>
          </fieldset>
        )
      })}
      <Actions>
        <WordButton
          onPress={() =>
            change('mains', { ...noise, lines: [...noise.lines, { hz: 50, amplitudeUv: 2, locked: false }] })
          }
        >
          add mains
        </WordButton>
        <WordButton
          onPress={() =>
            change('refresh', { ...noise, lines: [...noise.lines, { hz: 60, amplitudeUv: 1, locked: true }] })
          }
        >
          add display refresh
        </WordButton>
        {differs || noise.lines.length > 0 ? (
          <WordButton onPress={() => change('typical', typical)}>typical values</WordButton>
        ) : null}
      </Actions>
      {noise.lines.some(({ locked }) => locked) ? (
        <p className="quiet">
          Interference that is locked to the event does not average out. The trade-off map counts it as bias, and no
          number of trials as noise. Mains is locked too when the event interval is a multiple of its period.
        </p>
      ) : null}
    </>
  )
}

const TRIAL_SECONDS = 2
const SEED = 7

function Drawn({ chosen, samplingRateHz }: { chosen: ChosenNoise; samplingRateHz: number }) {
  const spectrum = useRef<SVGSVGElement>(null)
  const { noise, estimate } = chosen
  const nyquist = samplingRateHz / 2
  const belowHz = estimate?.extrapolatedBelowHz ?? 0
  const [low, high] = useMemo(() => {
    const hz = logSteps(0.01, nyquist)
    const densities = noiseDensity(noise, hz)
    const split = hz.findIndex((value) => value >= belowHz)
    const part = (from: number, to: number) => ({ hz: hz.slice(from, to), densities: densities.slice(from, to) })
    // both hold the sample at the join
    return [part(0, split + 1), part(split, hz.length)]
  }, [noise, nyquist, belowHz])
  const all = [...low.densities, ...high.densities].filter((value) => value > 0)
  const top = Math.max(...all, 1e-3) * 1.6
  const bottom = Math.max(top * 1e-7, Math.min(...all, top / 10) / 1.6)
  return (
    <>
      <FigureFrame
        title="Noise spectrum"
        description={`Power spectral density of single trials over 0.01 to ${brief(nyquist, 4)} Hz: ${densityWords(noise, 0.1)} at 0.1 Hz, ${densityWords(noise, 1)} at 1 Hz, ${densityWords(noise, 10)} at 10 Hz.`}
        height={124}
        margin={{ top: 18, right: 8, bottom: 22, left: 44 }}
        svgRef={spectrum}
      >
        {(frame) => {
          const x = logScale([0.01, nyquist], [frame.left, frame.right])
          const y = logScale([bottom, top], [frame.bottom, frame.top])
          return (
            <>
              <GridLines frame={frame} scale={x} along="x" />
              <GridLines frame={frame} scale={y} along="y" />
              <Clipped frame={frame}>
                {belowHz > 0 ? <Line xs={low.hz} ys={low.densities} {...{ x, y }} tone="before" dash="dashed" /> : null}
                <Line xs={high.hz} ys={high.densities} {...{ x, y }} tone="before" />
                {noise.kind === 'model'
                  ? noise.lines
                      .filter(({ hz }) => hz < nyquist)
                      .map((line, i) => (
                        <path
                          key={i}
                          d={`M${x.toPixel(line.hz)},${frame.bottom}V${frame.top + 6}`}
                          stroke="var(--taken-out)"
                          strokeDasharray={line.locked ? undefined : '2 2'}
                          fill="none"
                        />
                      ))
                  : null}
              </Clipped>
              <Axis side="left" scale={y} at={frame.left} title="µV²/Hz" />
              <Axis side="bottom" scale={x} at={frame.bottom} title="Hz" />
            </>
          )
        }}
      </FigureFrame>
      <Trial noise={noise} samplingRateHz={samplingRateHz} />
    </>
  )
}

function Trial({ noise, samplingRateHz }: { noise: NoiseSpec; samplingRateHz: number }) {
  const samples = Math.max(2, Math.round(TRIAL_SECONDS * samplingRateHz))
  const drawn = useMemo(
    () => attempt(() => simulatedTrial(noise, samplingRateHz, samples, SEED)),
    [noise, samplingRateHz, samples],
  )
  const trial = drawn.value
  if (!trial) return <p className="quiet">No trial can be simulated. {drawn.problem}</p>
  const most = Math.max(...trial.map(Math.abs), 1e-6)
  const sd = Math.sqrt(trial.reduce((sum, value) => sum + value * value, 0) / samples)
  return (
    <FigureFrame
      title="One simulated trial"
      description={`${TRIAL_SECONDS} s of noise alone, standard deviation ${brief(sd, 2)} µV.`}
      height={96}
      margin={{ top: 18, right: 8, bottom: 22, left: 44 }}
    >
      {(frame) => {
        const x = linearScale([0, TRIAL_SECONDS], [frame.left, frame.right])
        const y = linearScale([-most, most], [frame.bottom, frame.top])
        return (
          <>
            <ZeroLine frame={frame} scale={y} along="y" />
            <Line xs={{ start: 0, step: 1 / samplingRateHz }} ys={trial} {...{ x, y }} tone="before" weight="hair" />
            <Axis side="left" scale={y} at={frame.left} title="µV" />
            <Axis side="bottom" scale={x} at={frame.bottom} title="s" />
            <Unspoken>
              <text className="plot-text" x={frame.right} y={frame.top - 6} textAnchor="end" fill="var(--quiet)">
                one simulated trial of noise alone
              </text>
            </Unspoken>
          </>
        )
      }}
    </FigureFrame>
  )
}

const densityWords = (noise: NoiseSpec, hz: number) => `${brief(noiseDensity(noise, Float64Array.of(hz))[0], 2)} µV²/Hz`

function logSteps(from: number, to: number): Float64Array {
  const count = 240
  return Float64Array.from({ length: count }, (_, i) => from * (to / from) ** (i / (count - 1)))
}
