/** The editor of one stage: which of its parts is in front follows from the token that was opened. */
import { causalTwin, hzToTimeConstant, timeConstantToHz, zeroPhaseTwin } from '../../state/stage-facts.ts'
import type { CutoffMeaning, StageSpec, WindowSpec } from '../../filter/stage.ts'
import {
  canMove,
  duplicateStage,
  moveStage,
  newStage,
  removeStage,
  replaceStage,
  type StageKind,
} from '../../state/chain-actions.ts'
import { endGesture, say } from '../../state/store.ts'
import type { Problem } from '../../state/evaluation.ts'
import { look } from '../../state/view.ts'
import type { Workspace } from '../../state/workspace.ts'
import { brief, PASS_WORD, stageName, WINDOW_WORD } from '../../words/index.ts'
import { Actions, Choice, NumberField, SliderField, WordButton } from '../fields.tsx'
import { Editor } from './editor.tsx'

const LOG_TICKS = [0.01, 0.05, 0.1, 0.5, 1, 5, 10, 50, 100, 500, 1000]

interface StageEditorProps {
  workspace: Workspace
  samplingRateHz: number
  index: number
  part: string
  problems: readonly Problem[]
  /** Design cutoffs of the stage, for the line that states them; null where it cannot be designed. */
  designHz: readonly number[] | null
}

const PART_WORD: Record<string, string> = {
  design: 'design',
  order: 'order',
  direction: 'direction',
  cutoff: 'cutoff',
  delay: 'phase and delay',
  transition: 'transition width',
  harmonics: 'harmonics',
  bandwidth: 'bandwidth',
  duration: 'duration',
}

export function StageEditor({ workspace, samplingRateHz, index, part, problems, designHz }: StageEditorProps) {
  const { chain } = workspace
  const spec = chain[index]
  if (!spec) return null
  const set = (stage: StageSpec, group?: string) =>
    say((w) => ({ ...w, chain: replaceStage(w.chain, index, stage) }), group && `stage:${index}:${group}`)
  const problem = problems.find((entry) => entry.at.startsWith(`stage:${index}`))?.message
  // of a cutoff that cannot be designed there is no design cutoff to state
  const parts: Parts = { spec, set, samplingRateHz, problem, designHz: problem ? null : designHz }
  return (
    <Editor
      title={stageName(spec)}
      subtitle={`stage ${index + 1} of ${chain.length}: ${PART_WORD[part] ?? part}`}
      error={problem}
    >
      <StagePart part={part} {...parts} />
      {workspace.source.kind === 'recorded' ? (
        <Choice
          label="where the stage acts"
          value={spec.inData ? 'in the data' : 'applied here'}
          options={[
            { value: 'in the data', text: 'in the data' },
            { value: 'applied here', text: 'applied here' },
          ]}
          onChange={(value) => set({ ...spec, inData: value === 'in the data' })}
        />
      ) : null}
      <Actions>
        <WordButton
          disabled={!canMove(chain, index, -1)}
          onPress={() => {
            say((w) => ({ ...w, chain: moveStage(w.chain, index, -1) }))
            look({ open: `stage:${index - 1}:design` })
          }}
        >
          move up
        </WordButton>
        <WordButton
          disabled={!canMove(chain, index, 1)}
          onPress={() => {
            say((w) => ({ ...w, chain: moveStage(w.chain, index, 1) }))
            look({ open: `stage:${index + 1}:design` })
          }}
        >
          move down
        </WordButton>
        <WordButton onPress={() => set({ ...spec, enabled: spec.enabled === false })}>
          {spec.enabled === false ? 'switch on' : 'switch off'}
        </WordButton>
        <WordButton onPress={() => say((w) => ({ ...w, chain: duplicateStage(w.chain, index) }))}>duplicate</WordButton>
        <WordButton
          onPress={() => {
            say((w) => ({ ...w, chain: removeStage(w.chain, index) }))
            look({ open: null })
          }}
        >
          remove
        </WordButton>
      </Actions>
    </Editor>
  )
}

interface Parts {
  spec: StageSpec
  set: (stage: StageSpec, group?: string) => void
  samplingRateHz: number
  problem: string | undefined
  designHz: readonly number[] | null
}

function StagePart({ part, ...parts }: Parts & { part: string }) {
  switch (part) {
    case 'order':
      return <OrderPart {...parts} />
    case 'direction':
      return <DirectionPart {...parts} />
    case 'delay':
      return <DelayPart {...parts} />
    case 'cutoff':
      return <CutoffPart {...parts} />
    case 'transition':
    case 'bandwidth':
    case 'duration':
    case 'harmonics':
      return <SizePart {...parts} part={part} />
    default:
      return <DesignPart {...parts} />
  }
}

function DesignPart({ spec, set, samplingRateHz, ...rest }: Parts) {
  const pass = 'pass' in spec ? spec.pass : 'low'
  const change = (kind: StageKind, nextPass: typeof pass) => {
    const fresh = newStage(kind, nextPass, samplingRateHz)
    const keptCutoffs =
      'cutoffsHz' in spec && 'cutoffsHz' in fresh && spec.cutoffsHz.length === fresh.cutoffsHz.length
        ? { cutoffsHz: spec.cutoffsHz, meaning: spec.meaning }
        : {}
    set({ ...fresh, ...keptCutoffs, enabled: spec.enabled, inData: spec.inData } as StageSpec)
  }
  const kinds: readonly { value: StageKind; text: string }[] =
    spec.design === 'amplifier'
      ? [{ value: 'amplifier', text: 'amplifier' }]
      : [
          { value: 'butterworth', text: 'Butterworth' },
          { value: 'windowed-sinc', text: 'windowed sinc' },
          { value: 'notch', text: 'notch' },
          { value: 'moving-average', text: 'moving average' },
        ]
  const passes = spec.design === 'amplifier' ? (['high', 'low'] as const) : (['high', 'low', 'band', 'stop'] as const)
  return (
    <>
      {kinds.length > 1 ? (
        <Choice label="design" value={spec.design} options={kinds} onChange={(kind) => change(kind, pass)} />
      ) : null}
      {'pass' in spec ? (
        <Choice
          label="pass"
          value={spec.pass}
          options={passes.map((value) => ({ value, text: PASS_WORD[value] }))}
          onChange={(next) => change(spec.design, next)}
        />
      ) : null}
      {spec.design === 'windowed-sinc' ? (
        <>
          <Choice
            label="window"
            value={spec.window.name}
            options={(Object.keys(WINDOW_WORD) as WindowSpec['name'][]).map((value) => ({
              value,
              text: WINDOW_WORD[value],
            }))}
            onChange={(name) =>
              set({ ...spec, window: name === 'kaiser' ? { name, attenuationDb: 60 } : { name } } as StageSpec)
            }
          />
          {spec.window.name === 'kaiser' ? (
            <NumberField
              label="attenuation"
              unit="dB"
              value={spec.window.attenuationDb}
              onChange={(attenuationDb) => set({ ...spec, window: { name: 'kaiser', attenuationDb } }, 'window')}
            />
          ) : null}
        </>
      ) : null}
      {spec.design === 'amplifier' ? (
        <OrderPart spec={spec} set={set} samplingRateHz={samplingRateHz} {...rest} />
      ) : null}
    </>
  )
}

function OrderPart({ spec, set }: Parts) {
  if (!('order' in spec)) return null
  const most = spec.design === 'amplifier' || spec.pass === 'band' || spec.pass === 'stop' ? 8 : 12
  const setOrder = (order: number) => set({ ...spec, order }, 'order')
  const slope = spec.order * 6.02 * (spec.design === 'butterworth' && spec.direction === 'both' ? 2 : 1)
  return (
    <>
      <div className="editor-row">
        <SliderField
          label="order of one pass"
          unit=""
          value={spec.order}
          min={1}
          max={most}
          scale="linear"
          ticks={[1, 2, 3, 4, 6, 8, 10, 12]}
          onChange={setOrder}
          onEnd={endGesture}
        />
        <NumberField label="order of one pass" hideLabel value={spec.order} onChange={setOrder} />
      </div>
      <p className="quiet">
        {spec.design === 'butterworth' && spec.direction === 'both'
          ? `As applied: order ${brief(spec.order * 2)}, ${brief(slope)} dB/octave after both passes.`
          : `${brief(slope)} dB/octave.`}
      </p>
    </>
  )
}

function DirectionPart({ spec, set, samplingRateHz }: Parts) {
  if (spec.design !== 'butterworth' && spec.design !== 'notch') return null
  return (
    <>
      <Choice
        stacked
        label="direction"
        value={spec.direction}
        options={[
          { value: 'both', text: 'run both ways', hint: 'zero-phase: no delay, but it reaches back in time' },
          { value: 'forward', text: 'run forward', hint: 'causal: nothing before its cause, but delayed' },
        ]}
        onChange={(direction) => set({ ...spec, direction })}
      />
      <TwinAction spec={spec} set={set} samplingRateHz={samplingRateHz} />
    </>
  )
}

/** The nearest causal or zero-phase form of the stage, in one press. */
function TwinAction({ spec, samplingRateHz }: Pick<Parts, 'spec' | 'set' | 'samplingRateHz'>) {
  const causal =
    ('direction' in spec && spec.direction === 'forward') || ('delay' in spec && spec.delay !== 'compensated')
  let twin: StageSpec[] | null = null
  try {
    twin = causal ? zeroPhaseTwin(spec, samplingRateHz) : causalTwin(spec, samplingRateHz)
  } catch {
    twin = null
  }
  if (!twin) return null
  const stages = twin
  return (
    <>
      <p className="quiet">
        {causal
          ? 'Its zero-phase twin keeps the order of one pass and the cutoffs as applied; run both ways, its roll-off doubles.'
          : stages.length > 1
            ? 'Its causal twin runs the same sections forward twice: the same gain, no reach back in time, a delay.'
            : 'Its causal twin has the same gain, no reach back in time, and a delay.'}
      </p>
      <WordButton
        onPress={() =>
          say((w) => {
            const index = w.chain.indexOf(spec)
            return index < 0 ? w : { ...w, chain: [...w.chain.slice(0, index), ...stages, ...w.chain.slice(index + 1)] }
          })
        }
      >
        {causal ? 'use its zero-phase twin' : 'use its causal twin'}
      </WordButton>
    </>
  )
}

function DelayPart({ spec, set, samplingRateHz }: Parts) {
  if (spec.design !== 'windowed-sinc' && spec.design !== 'moving-average') return null
  const options = [
    { value: 'compensated' as const, text: 'zero-phase', hint: 'its delay is compensated' },
    { value: 'causal' as const, text: 'causal', hint: 'its delay is left in' },
    ...(spec.design === 'windowed-sinc'
      ? [{ value: 'minimum-phase' as const, text: 'minimum-phase', hint: 'causal, with the least delay' }]
      : []),
  ]
  return (
    <>
      <Choice
        stacked
        label="phase and delay"
        value={spec.delay}
        options={options}
        onChange={(delay) => set({ ...spec, delay } as StageSpec)}
      />
      <TwinAction spec={spec} set={set} samplingRateHz={samplingRateHz} />
    </>
  )
}

function CutoffPart({ spec, set, samplingRateHz, designHz }: Parts) {
  const highest = samplingRateHz / 2
  const slider = (label: string, value: number, change: (hz: number) => void, max = highest * 0.9) => {
    const min = Math.min(value > 0 ? value : 0.05, value < 0.05 || max < 1 ? 0.001 : 0.05)
    return (
      <div className="editor-row">
        <SliderField
          label={label}
          unit="Hz"
          value={value}
          min={min}
          max={Math.max(max, min * 2)}
          scale="log"
          ticks={LOG_TICKS}
          onChange={change}
          onEnd={endGesture}
        />
        <NumberField label={label} hideLabel unit="Hz" value={value} ratio={1.01} onChange={change} />
      </div>
    )
  }
  if (spec.design === 'amplifier') {
    const tau = spec.cutoffHz > 0 ? Number(hzToTimeConstant(spec.cutoffHz).toPrecision(10)) : 0
    const setTau = (seconds: number) =>
      set({ ...spec, cutoffHz: seconds > 0 ? timeConstantToHz(seconds) : 0 }, 'cutoff')
    return (
      <>
        {spec.pass === 'high' && spec.order === 1 ? (
          <div className="editor-row">
            <SliderField
              label="time constant"
              unit="s"
              value={tau}
              min={0.01}
              max={30}
              scale="log"
              ticks={[0.01, 0.1, 0.3, 1, 3, 10, 30]}
              onChange={setTau}
              onEnd={endGesture}
            />
            <NumberField label="time constant" hideLabel unit="s" value={tau} ratio={1.05} onChange={setTau} />
          </div>
        ) : null}
        {slider('half-power cutoff', spec.cutoffHz, (cutoffHz) => set({ ...spec, cutoffHz }, 'cutoff'))}
        <p className="quiet">Half-power (−3 dB) by convention of amplifiers. Always causal, always first.</p>
      </>
    )
  }
  if (spec.design === 'notch')
    return slider('notch frequency', spec.frequencyHz, (frequencyHz) => set({ ...spec, frequencyHz }, 'cutoff'))
  if (spec.design === 'moving-average') return null
  const setCutoff = (edge: number, hz: number) =>
    set({ ...spec, cutoffsHz: spec.cutoffsHz.map((value, place) => (place === edge ? hz : value)) }, 'cutoff')
  const both = spec.design === 'butterworth' && spec.direction === 'both'
  const meanings: { value: CutoffMeaning; text: string }[] = [
    { value: 'half-amplitude', text: 'half-amplitude, −6 dB' },
    { value: 'half-power', text: 'half-power, −3 dB' },
    { value: 'design', text: spec.design === 'butterworth' ? 'design, −3 dB of one pass' : 'nominal' },
  ]
  return (
    <>
      {spec.cutoffsHz.map((value, edge) => (
        <div key={edge}>
          {slider(spec.cutoffsHz.length === 1 ? 'cutoff' : edge === 0 ? 'lower cutoff' : 'upper cutoff', value, (hz) =>
            setCutoff(edge, hz),
          )}
        </div>
      ))}
      <Choice
        label="meaning of the cutoff"
        value={spec.meaning}
        options={meanings}
        onChange={(meaning) => set({ ...spec, meaning })}
      />
      <p className="quiet">
        {spec.meaning === 'design'
          ? 'The cutoff is stated as designed.'
          : both
            ? 'As applied, after both passes.'
            : 'As applied.'}
        {designHz ? ` Design cutoff ${designHz.map((hz) => brief(hz, 5)).join(' and ')} Hz.` : ''}
      </p>
    </>
  )
}

function SizePart({ spec, set, samplingRateHz, part }: Parts & { part: string }) {
  if (part === 'transition' && spec.design === 'windowed-sinc') {
    const change = (transitionHz: number) => set({ ...spec, transitionHz }, 'transition')
    return (
      <div className="editor-row">
        <SliderField
          label="transition width"
          unit="Hz"
          value={spec.transitionHz}
          min={Math.min(0.05, spec.transitionHz > 0 ? spec.transitionHz : 0.05)}
          max={samplingRateHz / 4}
          scale="log"
          ticks={LOG_TICKS}
          onChange={change}
          onEnd={endGesture}
        />
        <NumberField
          label="transition width"
          hideLabel
          unit="Hz"
          value={spec.transitionHz}
          ratio={1.02}
          onChange={change}
        />
      </div>
    )
  }
  if (spec.design === 'notch' && part === 'bandwidth')
    return (
      <NumberField
        label="bandwidth at half-power, as applied"
        unit="Hz"
        value={spec.bandwidthHz}
        ratio={1.02}
        onChange={(bandwidthHz) => set({ ...spec, bandwidthHz }, 'bandwidth')}
      />
    )
  if (spec.design === 'notch' && part === 'harmonics')
    return (
      <NumberField
        label="harmonics above the frequency"
        value={spec.harmonics}
        onChange={(harmonics) => set({ ...spec, harmonics }, 'harmonics')}
      />
    )
  if (spec.design === 'moving-average' && part === 'duration')
    return (
      <>
        <NumberField
          label="duration"
          unit="ms"
          value={spec.durationMs}
          step={1000 / samplingRateHz}
          onChange={(durationMs) => set({ ...spec, durationMs }, 'duration')}
        />
        <p className="quiet">Nulls at multiples of {brief(1000 / spec.durationMs, 4)} Hz.</p>
      </>
    )
  return null
}
