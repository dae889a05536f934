/** The editors of the trade-off desk: which filter is varied, over which range, under which limits, for which waveforms. */
import { type ComponentProps, useEffect, useRef, useState } from 'react'
import { endGesture, say } from '../../state/store.ts'
import {
  canVary,
  comparedKinds,
  FILTER_KINDS,
  type FilterKind,
  limitsInUnit,
  mapPlace,
  mapRollOffs,
  RANGE,
  sameKind,
  scoreUnitOf,
  varyingStage,
} from '../../state/trade-off.ts'
import { limitFits } from '../../state/verdict.ts'
import { MAX_ROLL_OFFS, type TradeOff, type Workspace } from '../../state/workspace.ts'
import { exact, parseNumber, stageName } from '../../words/index.ts'
import { kindWords } from '../desks/trade-off/map-words.ts'
import { Choice, NumberField } from '../fields.tsx'
import { Editor } from './editor.tsx'

interface EditorProps {
  workspace: Workspace
}

const set = (change: Partial<TradeOff>, group?: string) =>
  say((w) => ({ ...w, tradeOff: { ...w.tradeOff, ...change } }), group && `trade-off:${group}`)

const ABOVE_0 = (value: number) => (value > 0 ? null : 'a limit is larger than 0')

type CheckedFieldProps = ComponentProps<typeof NumberField> & { rule: (value: number) => string | null }

/** A number that the workspace does not take stays in its field, with the rule and what holds instead. */
function CheckedField({ rule, onChange, ...field }: CheckedFieldProps) {
  const [broken, setBroken] = useState<string | null>(null)
  return (
    <NumberField
      {...field}
      error={broken === null ? undefined : `${broken}: ${exact(field.value)} still holds`}
      onChange={(value) => {
        const problem = Number.isNaN(value) ? null : rule(value)
        setBroken(problem)
        if (problem === null && !Number.isNaN(value)) onChange(value)
      }}
    />
  )
}

export function FilterKindEditor({ workspace }: EditorProps) {
  const { tradeOff, chain } = workspace
  const place = mapPlace(workspace)
  const stages = chain.flatMap((spec, index) => (canVary(spec) ? [{ spec, index }] : []))
  return (
    <Editor title="Trade-off" subtitle="the filter that is varied">
      <Choice
        stacked
        label="stage that is varied"
        value={place.replaces ? String(place.at) : 'insert'}
        options={[
          ...stages.map(({ spec, index }) => ({
            value: String(index),
            text: `in place of stage ${index + 1}`,
            hint: stageName(spec),
          })),
          { value: 'insert', text: 'a new stage', hint: 'at the end of the chain' },
        ]}
        onChange={(value) => say((w) => varyingStage(w, value === 'insert' ? 'insert' : Number(value)))}
      />
      <Choice
        label="pass"
        value={tradeOff.pass}
        options={[
          { value: 'high', text: 'high-pass' },
          { value: 'low', text: 'low-pass' },
        ]}
        onChange={(pass) =>
          set({
            pass,
            ...RANGE[pass],
            rollOffs: null,
            ...(place.replaces && tradeOff.stage === null ? {} : { stage: place.replaces ? place.at : 'insert' }),
          })
        }
      />
      <Choice
        label="design"
        value={tradeOff.design}
        options={[
          { value: 'butterworth', text: 'Butterworth' },
          { value: 'windowed-sinc', text: 'windowed sinc' },
        ]}
        onChange={(design) => set({ design, rollOffs: null })}
      />
      <Choice
        label="direction"
        value={tradeOff.direction}
        options={[
          { value: 'both', text: 'zero-phase' },
          { value: 'forward', text: 'causal' },
        ]}
        onChange={(direction) => set({ direction })}
      />
      <p className="quiet">The rest of the chain stays as it is.</p>
    </Editor>
  )
}

/** Other kinds of filter, whose maps stand beside the first. */
export function BesideEditor({ workspace }: EditorProps) {
  const { tradeOff } = workspace
  const toggle = (kind: FilterKind, on: boolean) => {
    const others = comparedKinds(tradeOff).slice(1)
    set({ beside: on ? [...others, kind] : others.filter((other) => !sameKind(other, kind)) })
  }
  return (
    <Editor title="Trade-off" subtitle="kinds of filter beside it">
      {FILTER_KINDS.filter((kind) => !sameKind(kind, tradeOff)).map((kind) => (
        <label key={kindWords(kind)} className="small beside-kind">
          <input
            type="checkbox"
            checked={tradeOff.beside.some((other) => sameKind(other, kind))}
            onChange={(event) => toggle(kind, event.target.checked)}
          />{' '}
          {kindWords(kind)}
        </label>
      ))}
      <p className="quiet">
        Each has a map of its own, on the same cutoffs and the same shades. A filter that is picked from any of them
        takes the place of the one that is varied.
      </p>
    </Editor>
  )
}

export function MapRangeEditor({ workspace }: EditorProps) {
  const { tradeOff } = workspace
  const { fromHz, toHz, design } = tradeOff
  const orders = design === 'butterworth'
  const [draft, setDraft] = useState(() => mapRollOffs(tradeOff).map(exact).join(', '))
  const [bad, setBad] = useState<string | null>(null)
  // both limits as they are written: only the two together are a range, whichever is written first
  const [written, setWritten] = useState({ fromHz, toHz })
  const problem = rangeProblem(written)
  const inForce = useRef({ fromHz, toHz })
  useEffect(() => {
    if (inForce.current.fromHz === fromHz && inForce.current.toHz === toHz) return
    inForce.current = { fromHz, toHz }
    setWritten({ fromHz, toHz })
  }, [fromHz, toHz])
  const range = (change: Partial<typeof written>) => {
    const next = { ...written, ...change }
    setWritten(next)
    if (rangeProblem(next) !== null) return
    inForce.current = next
    set(next, 'range')
  }
  const type = (text: string) => {
    setDraft(text)
    const values = text
      .split(/[;\s]+|,\s+/)
      .filter((part) => part !== '')
      .map((part) => parseNumber(part.replace(/,$/, '')))
    const problem = rollOffProblem(values, orders)
    setBad(problem)
    if (!problem) set({ rollOffs: values }, 'roll-offs')
  }
  return (
    <Editor title="Trade-off" subtitle="cutoffs and roll-offs of the map">
      <div className="pair">
        <NumberField
          label="cutoffs from"
          unit="Hz"
          value={written.fromHz}
          ratio={1.1}
          onChange={(value) => {
            if (!Number.isNaN(value)) range({ fromHz: value })
          }}
        />
        <NumberField
          label="to"
          unit="Hz"
          value={written.toHz}
          ratio={1.1}
          onChange={(value) => {
            if (!Number.isNaN(value)) range({ toHz: value })
          }}
        />
      </div>
      {problem ? (
        <p className="field-error" role="alert">
          {problem}: {exact(fromHz)} to {exact(toHz)} Hz still holds.
        </p>
      ) : null}
      <div className="field">
        <label className="field-label" htmlFor="map-roll-offs">
          {orders ? 'orders of one pass' : 'transition widths, Hz'}
        </label>
        <input
          id="map-roll-offs"
          className="words"
          value={draft}
          autoComplete="off"
          aria-invalid={bad ? true : undefined}
          onChange={(event) => type(event.target.value)}
        />
        {bad ? (
          <span className="field-error" role="alert">
            {bad}
          </span>
        ) : null}
      </div>
      <p className="quiet">60 cutoffs, evenly spaced in log frequency. Filters that cannot be realised are hatched.</p>
    </Editor>
  )
}

/** What is wrong with the cutoffs of a map; null where they are a range. */
export function rangeProblem({ fromHz, toHz }: Pick<TradeOff, 'fromHz' | 'toHz'>): string | null {
  if (!(fromHz > 0)) return `cutoffs begin above 0 Hz, not at ${exact(fromHz)}`
  if (!(toHz > fromHz)) return `cutoffs run upwards, not from ${exact(fromHz)} to ${exact(toHz)} Hz`
  return null
}

/** What is wrong with the roll-offs of a map; null where they can be used. */
export function rollOffProblem(values: readonly number[], orders: boolean): string | null {
  if (values.length === 0) return 'write at least one number'
  if (values.length > MAX_ROLL_OFFS) return `at most ${MAX_ROLL_OFFS} roll-offs`
  if (values.some((value) => !(value > 0))) return 'numbers above 0, separated by spaces'
  if (orders && values.some((value) => !Number.isInteger(value))) return 'orders are whole numbers'
  return null
}

export function MapLimitsEditor({ workspace }: EditorProps) {
  const { tradeOff, limits } = workspace
  const unit = scoreUnitOf(workspace)
  const held = limitsInUnit(tradeOff, unit)
  const change = (next: TradeOff['limits'], group?: string) => set({ limits: { ...next, unit } }, group)
  const { bias } = held
  const own = limits.score
  const fits = own !== undefined && limitFits(own, unit)
  const sizes = [
    { name: 'noise', label: 'noise of the score', unit, start: 1 },
    { name: 'totalError', label: 'total error', unit, start: 1 },
    { name: 'latencyShiftMs', label: 'shift of the peak latency', unit: 'ms', start: 10 },
  ] as const
  return (
    <Editor title="Trade-off" subtitle="the largest sizes accepted">
      <Choice
        label="limit of the bias"
        value={bias === undefined ? 'score' : bias === 'none' ? 'none' : 'own'}
        options={[
          {
            value: 'score',
            text: 'bias: the score’s limit',
            hint: own ? `${exact(own.value)} ${own.unit}${fits ? '' : `, which is no limit in ${unit}`}` : 'none set',
          },
          { value: 'own', text: 'another' },
          { value: 'none', text: 'none' },
        ]}
        onChange={(value) => {
          const { bias: _, ...others } = held
          const start = fits && own.unit === unit ? own.value : unit === 'ms' ? 10 : 0.5
          change(value === 'score' ? others : { ...others, bias: value === 'none' ? 'none' : start })
        }}
      />
      {typeof bias === 'number' ? (
        <CheckedField
          label="bias within"
          unit={unit}
          value={bias}
          step={unit === 'ms' ? 1 : 0.05}
          rule={ABOVE_0}
          onChange={(value) => change({ ...held, bias: value }, 'bias')}
        />
      ) : null}
      {sizes.map(({ name, label, unit: of, start }) => {
        const value = held[name]
        return (
          <div key={name} className="pair">
            <label className="small">
              <input
                type="checkbox"
                checked={value !== undefined}
                onChange={(event) => {
                  const { [name]: _, ...others } = held
                  change(event.target.checked ? { ...others, [name]: start } : others)
                }}
              />{' '}
              {label}
            </label>
            {value === undefined ? null : (
              <CheckedField
                label={`${label} within`}
                hideLabel
                unit={of}
                value={value}
                step={of === 'ms' ? 1 : 0.05}
                rule={ABOVE_0}
                onChange={(next) => change({ ...held, [name]: next }, name)}
              />
            )}
          </div>
        )
      })}
    </Editor>
  )
}

const START_ROBUST = { latencyMs: 50, widthPercent: 20, amplitudePercent: 30 }

export function MapWaveformsEditor({ workspace }: EditorProps) {
  const { tradeOff, source, shown } = workspace
  if (source.kind === 'recorded')
    return (
      <Editor title="Trade-off" subtitle="the waveform that the filters are judged on">
        <Choice
          stacked
          label="waveform of the map"
          value={tradeOff.waveform}
          options={[
            {
              value: 'average',
              text: 'the average over all conditions',
              hint: 'pooled: it does not favour the effect',
            },
            { value: 'chosen', text: `the recorded ${shown.chosen}` },
          ]}
          onChange={(waveform) => set({ waveform })}
        />
        <p className="quiet">
          Ranges of latency, width and amplitude need a built waveform, whose components are known.
        </p>
      </Editor>
    )
  const { robust } = tradeOff
  const fields = [
    { name: 'latencyMs', label: 'latency ±', unit: 'ms', most: 1000 },
    { name: 'widthPercent', label: 'width ±', unit: '%', most: 90 },
    { name: 'amplitudePercent', label: 'amplitude ±', unit: '%', most: 100 },
  ] as const
  return (
    <Editor title="Trade-off" subtitle="what is not known of the components">
      <Choice
        stacked
        label="waveforms of the map"
        value={robust === null ? 'built' : tradeOff.over}
        options={[
          { value: 'built', text: 'the waveform as built', hint: 'a gamble if it turns out otherwise' },
          { value: 'worst', text: 'the worst of 65 waveforms', hint: 'each figure on its own' },
          { value: 'typical', text: 'the typical one of 65 waveforms', hint: 'the median' },
        ]}
        onChange={(value) =>
          value === 'built' ? set({ robust: null }) : set({ over: value, robust: robust ?? START_ROBUST })
        }
      />
      {robust === null ? null : (
        <div className="pair">
          {fields.map(({ name, label, unit, most }) => (
            <CheckedField
              key={name}
              label={label}
              unit={unit}
              value={robust[name]}
              step={5}
              rule={(value) => (value >= 0 && value <= most ? null : `from 0 to ${most} ${unit}`)}
              onChange={(value) => {
                set({ robust: { ...robust, [name]: value } }, name)
                endGesture()
              }}
            />
          ))}
        </div>
      )}
      {robust === null ? null : (
        <p className="quiet">
          The waveform as built and 64 others that fill these ranges evenly, every component on its own.
        </p>
      )}
    </Editor>
  )
}
