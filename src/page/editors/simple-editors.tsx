/** The editors of one or two fields each: rate, extent, baseline, trials, score and its window, a limit, a readout window. */
import type { FigureId, Limit } from '../../erp/figure.ts'
import type { ScoreKind } from '../../erp/score.ts'
import { addStage, newStage, type StageKind } from '../../state/chain-actions.ts'
import { endGesture, say } from '../../state/store.ts'
import { limitFits } from '../../state/verdict.ts'
import { look } from '../../state/view.ts'
import type { Workspace } from '../../state/workspace.ts'
import { exact, PASS_WORD } from '../../words/index.ts'
import { Choice, NumberField, SliderField, WindowFields, WordButton } from '../fields.tsx'
import { Editor } from './editor.tsx'

interface EditorProps {
  workspace: Workspace
  samplingRateHz: number
  error: string | undefined
}

export function RateEditor({ workspace, samplingRateHz, error }: EditorProps) {
  if (workspace.source.kind === 'recorded')
    return (
      <Editor title="Sampling rate" error={error}>
        <p>The recorded waveform has {samplingRateHz} samples a second, from the steps of its time column.</p>
      </Editor>
    )
  const change = (hz: number) =>
    say((w) => (w.source.kind === 'built' ? { ...w, source: { ...w.source, samplingRateHz: hz } } : w), 'rate')
  return (
    <Editor title="Sampling rate" subtitle="of the built waveform" error={error}>
      <div className="editor-row">
        <SliderField
          label="sampling rate"
          unit="Hz"
          value={samplingRateHz}
          min={100}
          max={4096}
          scale="log"
          ticks={[100, 250, 500, 1000, 2048, 4096]}
          onChange={(hz) => change(Math.round(hz))}
          onEnd={endGesture}
        />
        <NumberField label="sampling rate" hideLabel unit="Hz" value={samplingRateHz} onChange={change} />
      </div>
    </Editor>
  )
}

export function ExtentEditor({ workspace, error }: EditorProps) {
  const recorded = workspace.source.kind === 'recorded'
  return (
    <Editor title="What the chain ran on" error={error}>
      <Choice
        stacked
        label="what the chain is applied to"
        value={recorded ? 'epochs' : workspace.extent}
        options={[
          {
            value: 'continuous',
            text: 'the continuous recording',
            hint: 'the filter sees what lies outside the epoch',
            disabled: recorded,
          },
          { value: 'epochs', text: 'the cut-out epochs', hint: 'what lies outside is invented by reflection' },
        ]}
        onChange={(extent) => say((w) => ({ ...w, extent }))}
      />
      {recorded ? (
        <p className="quiet">
          A loaded average holds nothing outside its epoch, so the chain can only run on the epoch.
        </p>
      ) : null}
    </Editor>
  )
}

export function EventsEditor({ workspace, error }: EditorProps) {
  const { source } = workspace
  if (source.kind !== 'built') return null
  const { events } = source
  const set = (next: typeof events, group?: string) =>
    say((w) => (w.source.kind === 'built' ? { ...w, source: { ...w.source, events: next } } : w), group)
  return (
    <Editor title="Events" subtitle="how they follow one another" error={error}>
      <Choice
        stacked
        label="how the events follow one another"
        value={events === 'alone' ? 'alone' : 'train'}
        options={[
          { value: 'alone', text: 'alone', hint: 'nothing overlaps' },
          { value: 'train', text: 'one after another', hint: 'the neighbours’ waveforms overlap, before the chain' },
        ]}
        onChange={(value) => set(value === 'alone' ? 'alone' : { fromMs: 1000, toMs: 1400 })}
      />
      {events === 'alone' ? null : (
        <WindowFields
          fromMs={events.fromMs}
          toMs={events.toMs}
          stepMs={50}
          onChange={(fromMs, toMs) => set({ fromMs, toMs }, 'events')}
        />
      )}
      <p className="quiet">Intervals are drawn evenly and independently between the two.</p>
    </Editor>
  )
}

export function BaselineEditor({ workspace, samplingRateHz, error }: EditorProps) {
  const { baseline } = workspace
  return (
    <Editor title="Baseline" subtitle="its mean is subtracted, before and after each get their own" error={error}>
      <Choice
        label="baseline correction"
        value={baseline === 'none' ? 'none' : 'window'}
        options={[
          { value: 'window', text: 'mean of a window' },
          { value: 'none', text: 'none' },
        ]}
        onChange={(value) => say((w) => ({ ...w, baseline: value === 'none' ? 'none' : { fromMs: -200, toMs: 0 } }))}
      />
      {baseline === 'none' ? null : (
        <WindowFields
          {...baseline}
          stepMs={1000 / samplingRateHz}
          onChange={(fromMs, toMs) => say((w) => ({ ...w, baseline: { fromMs, toMs } }), 'baseline')}
        />
      )}
    </Editor>
  )
}

export function TrialsEditor({ workspace, error }: EditorProps) {
  const change = (trials: number) => say((w) => ({ ...w, trials }), 'trials')
  return (
    <Editor title="Trials" subtitle="in the average, for the noise of the score" error={error}>
      <div className="editor-row">
        <SliderField
          label="trials"
          unit="trials"
          value={workspace.trials}
          min={10}
          max={1000}
          scale="log"
          ticks={[10, 20, 50, 100, 200, 500, 1000]}
          onChange={(trials) => change(Math.round(trials))}
          onEnd={endGesture}
        />
        <NumberField label="trials" hideLabel value={workspace.trials} onChange={change} />
      </div>
    </Editor>
  )
}

const SCORES: readonly { value: ScoreKind; text: string }[] = [
  { value: 'mean', text: 'mean amplitude' },
  { value: 'moment', text: 'value at a moment' },
  { value: 'peak-amplitude', text: 'peak amplitude' },
  { value: 'peak-latency', text: 'peak latency' },
  { value: 'area', text: 'signed area' },
  { value: 'area-latency', text: 'fractional-area latency' },
  { value: 'onset-latency', text: 'onset latency' },
]

export function ScoreEditor({ workspace, error }: EditorProps) {
  const { score } = workspace
  const sided = score.kind !== 'mean' && score.kind !== 'moment'
  const fraction = score.kind === 'area-latency' || score.kind === 'onset-latency'
  return (
    <Editor title="Score" subtitle="the one number that the study will analyse" error={error}>
      <Choice
        label="kind of score"
        value={score.kind}
        options={SCORES}
        onChange={(kind) =>
          say((w) => {
            const middle = Math.round((w.score.fromMs + w.score.toMs) / 2)
            const limits =
              kind === 'moment'
                ? { fromMs: middle, toMs: middle }
                : w.score.fromMs === w.score.toMs
                  ? { fromMs: w.score.fromMs - 30, toMs: w.score.toMs + 30 }
                  : {}
            return { ...w, score: { ...w.score, ...limits, kind } }
          })
        }
      />
      {sided ? (
        <Choice
          label="side"
          value={score.polarity}
          options={[
            { value: 'positive', text: 'positive' },
            { value: 'negative', text: 'negative' },
          ]}
          onChange={(polarity) => say((w) => ({ ...w, score: { ...w.score, polarity } }))}
        />
      ) : null}
      {fraction ? (
        <NumberField
          label={score.kind === 'area-latency' ? 'fraction of the area' : 'fraction of the peak'}
          unit="%"
          value={Number(((score.fraction ?? 0.5) * 100).toPrecision(10))}
          step={5}
          onChange={(percent) => say((w) => ({ ...w, score: { ...w.score, fraction: percent / 100 } }), 'fraction')}
        />
      ) : null}
    </Editor>
  )
}

export function ScoreWindowEditor({ workspace, samplingRateHz, error }: EditorProps) {
  const { score } = workspace
  if (score.kind === 'moment')
    return (
      <Editor title="Score" subtitle="its moment" error={error}>
        <NumberField
          label="moment"
          unit="ms"
          value={score.fromMs}
          step={1000 / samplingRateHz}
          onChange={(ms) => say((w) => ({ ...w, score: { ...w.score, fromMs: ms, toMs: ms } }), 'score-window')}
        />
      </Editor>
    )
  return (
    <Editor title="Score" subtitle="its window" error={error}>
      <WindowFields
        fromMs={score.fromMs}
        toMs={score.toMs}
        stepMs={1000 / samplingRateHz}
        onChange={(fromMs, toMs) => say((w) => ({ ...w, score: { ...w.score, fromMs, toMs } }), 'score-window')}
      />
      <p className="quiet">The band in the time figure can be dragged as well.</p>
    </Editor>
  )
}

/** The windows and the side of the readout's own rows: `measure:mean` or `measure:peak`. */
export function MeasureEditor({ workspace, samplingRateHz, error, which }: EditorProps & { which: 'mean' | 'peak' }) {
  const { measure } = workspace
  return (
    <Editor
      title="Readout"
      subtitle={which === 'mean' ? 'window of the mean amplitude' : 'window of peak, area and latencies'}
      error={error}
    >
      <WindowFields
        {...measure[which]}
        stepMs={1000 / samplingRateHz}
        onChange={(fromMs, toMs) =>
          say((w) => ({ ...w, measure: { ...w.measure, [which]: { fromMs, toMs } } }), `measure:${which}`)
        }
      />
      {which === 'peak' ? (
        <Choice
          label="side"
          value={measure.polarity}
          options={[
            { value: 'positive', text: 'positive' },
            { value: 'negative', text: 'negative' },
          ]}
          onChange={(polarity) => say((w) => ({ ...w, measure: { ...w.measure, polarity } }))}
        />
      ) : null}
    </Editor>
  )
}

interface LimitEditorProps {
  workspace: Workspace
  row: FigureId
  label: string
  /** Unit of the row's own values. */
  unit: Limit['unit']
}

export function LimitEditor({ workspace, row, label, unit }: LimitEditorProps) {
  const limit = workspace.limits[row]
  const fits = limit !== undefined && limitFits(limit, unit)
  const shown = fits ? limit : { value: unit === 'ms' ? 10 : 0.5, unit }
  const set = (next: Limit) => say((w) => ({ ...w, limits: { ...w.limits, [row]: next } }), `limit:${row}`)
  return (
    <Editor title="Limit" subtitle={`largest change accepted: ${label}`}>
      <NumberField
        label="limit ±"
        unit={shown.unit}
        value={shown.value}
        step={shown.unit === 'ms' || shown.unit === '%' ? 1 : 0.05}
        error={shown.value > 0 ? undefined : 'a limit is larger than 0'}
        onChange={(value) => {
          if (value > 0) set({ ...shown, value })
        }}
      />
      {unit === 'ms' ? null : (
        <Choice
          label="unit of the limit"
          value={shown.unit}
          options={[
            { value: unit, text: unit },
            { value: '%' as const, text: 'per cent' },
          ]}
          onChange={(next) => set({ value: next === '%' ? 10 : 0.5, unit: next })}
        />
      )}
      {limit && !fits ? (
        <p className="quiet">
          Set is ±{exact(limit.value)} {limit.unit}, which says nothing of a value in {unit}. It holds again once the
          score is in {limit.unit === '%' ? 'µV' : limit.unit}; a number written here takes its place.
        </p>
      ) : null}
      {limit ? (
        <WordButton
          onPress={() =>
            say((w) => {
              const { [row]: _, ...limits } = w.limits
              return { ...w, limits }
            })
          }
        >
          no limit
        </WordButton>
      ) : null}
    </Editor>
  )
}

/** The moment before which nothing can be brain activity: stated by the user for recorded waveforms. */
export function OnsetEditor({ workspace, samplingRateHz, error }: EditorProps) {
  return (
    <Editor title="Onset" subtitle="of the recorded waveform, as you know it" error={error}>
      <NumberField
        label="onset"
        unit="ms"
        value={workspace.onsetMs ?? 50}
        step={1000 / samplingRateHz}
        onChange={(onsetMs) => say((w) => ({ ...w, onsetMs }), 'onset')}
      />
      <p className="quiet">
        What the filter adds before this moment counts as false activity. For a built waveform it follows from the
        components.
      </p>
    </Editor>
  )
}

const KINDS: readonly { kind: StageKind; title: string; passes: readonly ('high' | 'low' | 'band' | 'stop')[] }[] = [
  { kind: 'butterworth', title: 'Butterworth', passes: ['high', 'low', 'band', 'stop'] },
  { kind: 'windowed-sinc', title: 'windowed sinc', passes: ['high', 'low', 'band', 'stop'] },
  { kind: 'amplifier', title: 'amplifier', passes: ['high', 'low'] },
  { kind: 'notch', title: 'notch', passes: [] },
  { kind: 'moving-average', title: 'moving average', passes: [] },
]

export function AddStageEditor({ workspace, samplingRateHz }: EditorProps) {
  const add = (kind: StageKind, pass: 'high' | 'low' | 'band' | 'stop') => {
    const fresh = newStage(kind, pass, samplingRateHz)
    const past = workspace.source.kind === 'recorded' && kind === 'amplifier'
    const { chain, index } = addStage(workspace.chain, past ? { ...fresh, inData: true } : fresh)
    say((w) => ({ ...w, chain }))
    look({ open: `stage:${index}:${kind === 'moving-average' ? 'duration' : 'cutoff'}` })
  }
  return (
    <Editor title="Add a stage" subtitle="an amplifier stage goes first, any other last">
      <dl className="add-list">
        {KINDS.map(({ kind, title, passes }) => (
          <div key={kind}>
            <dt>{title}</dt>
            <dd>
              {passes.length === 0 ? (
                <WordButton label={`add a ${title}`} onPress={() => add(kind, 'low')}>
                  add
                </WordButton>
              ) : (
                passes.map((pass) => (
                  <WordButton key={pass} label={`add ${title} ${PASS_WORD[pass]}`} onPress={() => add(kind, pass)}>
                    {PASS_WORD[pass]}
                  </WordButton>
                ))
              )}
            </dd>
          </div>
        ))}
      </dl>
    </Editor>
  )
}
