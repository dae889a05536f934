/** The components of a built waveform, or the condition and channel of a recorded one. */
import { useState } from 'react'
import type { Component } from '../../erp/component.ts'
import { endGesture, say } from '../../state/store.ts'
import type { BuiltSource, Workspace } from '../../state/workspace.ts'
import { brief } from '../../words/index.ts'
import { Actions, Choice, NumberField, WordButton } from '../fields.tsx'
import { Editor } from './editor.tsx'

const SHAPES: readonly { value: Component['shape']; text: string }[] = [
  { value: 'gaussian', text: 'Gaussian' },
  { value: 'asymmetric', text: 'asymmetric' },
  { value: 'slow-wave', text: 'slow wave' },
  { value: 'ramp', text: 'ramp' },
  { value: 'damped-oscillation', text: 'damped oscillation' },
  { value: 'tone', text: 'steady tone' },
]

const setSource = (change: (source: BuiltSource) => BuiltSource, group?: string) =>
  say((w) => (w.source.kind === 'built' ? { ...w, source: change(w.source) } : w), group && `waveform:${group}`)

export function BuiltWaveformEditor({ workspace, error }: { workspace: Workspace; error: string | undefined }) {
  const [chosenCondition, setCondition] = useState(workspace.shown.chosen)
  const [place, setPlace] = useState(0)
  const { source } = workspace
  if (source.kind !== 'built') return null
  const conditionIndex = Math.max(
    0,
    source.conditions.findIndex((entry) => entry.name === chosenCondition),
  )
  const condition = source.conditions[conditionIndex]
  const component = condition.components[Math.min(place, condition.components.length - 1)]
  const index = condition.components.indexOf(component)

  const setComponents = (components: Component[], group?: string) =>
    setSource(
      (s) => ({
        ...s,
        conditions: s.conditions.map((entry, i) => (i === conditionIndex ? { ...entry, components } : entry)),
      }),
      group && `${conditionIndex}:${index}:${group}`,
    )
  const setComponent = (next: Component, group?: string) =>
    setComponents(
      condition.components.map((entry, i) => (i === index ? next : entry)),
      group,
    )
  return (
    <Editor title="Waveform" subtitle="components, as functions of time" error={error}>
      {source.conditions.length > 1 ? (
        <Choice
          label="condition"
          value={condition.name}
          options={source.conditions.map((entry) => ({ value: entry.name, text: entry.name }))}
          onChange={(name) => {
            setCondition(name)
            setPlace(0)
          }}
        />
      ) : null}
      <table className="plain-table component-table">
        <thead>
          <tr>
            <th scope="col">component</th>
            <th scope="col">µV</th>
            <th scope="col">at ms</th>
            <th scope="col">width ms</th>
          </tr>
        </thead>
        <tbody>
          {condition.components.map((entry, i) => (
            <tr key={i}>
              <td>
                <button
                  type="button"
                  className="token small"
                  aria-pressed={entry === component}
                  onClick={() => setPlace(i)}
                >
                  {entry.name}
                </button>
              </td>
              <td>{brief(entry.amplitudeUv, 4)}</td>
              <td>{entry.shape === 'tone' ? '–' : brief(entry.latencyMs, 4)}</td>
              <td>{entry.shape === 'tone' ? `${brief(entry.frequencyHz, 4)} Hz` : brief(entry.widthMs, 4)}</td>
            </tr>
          ))}
        </tbody>
      </table>
      {component ? (
        <ComponentFields key={`${conditionIndex}:${index}`} component={component} onChange={setComponent} />
      ) : null}
      <Actions>
        <WordButton
          onPress={() => {
            setComponents([
              ...condition.components,
              {
                shape: 'gaussian',
                name: `component ${condition.components.length + 1}`,
                amplitudeUv: 5,
                latencyMs: 300,
                widthMs: 100,
              },
            ])
            setPlace(condition.components.length)
          }}
        >
          add a component
        </WordButton>
        {component ? (
          <WordButton
            onPress={() => {
              setComponents(condition.components.filter((_, i) => i !== index))
              setPlace(Math.max(0, index - 1))
            }}
          >
            remove “{component.name}”
          </WordButton>
        ) : null}
        <WordButton
          onPress={() => {
            const name = freshName(source.conditions.map((entry) => entry.name))
            setSource((s) => ({
              ...s,
              conditions: [...s.conditions, { name, components: structuredClone(condition.components) }],
            }))
            setCondition(name)
          }}
        >
          add a condition
        </WordButton>
        {source.conditions.length > 1 ? (
          <WordButton
            onPress={() =>
              say((w) => {
                if (w.source.kind !== 'built') return w
                const conditions = w.source.conditions.filter((_, i) => i !== conditionIndex)
                const first = conditions[0].name
                const shown = w.shown.conditions.filter((name) => name !== condition.name)
                const difference =
                  w.shown.difference &&
                  w.shown.difference.first !== condition.name &&
                  w.shown.difference.second !== condition.name
                    ? w.shown.difference
                    : null
                const gone = w.shown.chosen === condition.name || (!difference && w.shown.difference !== null)
                return {
                  ...w,
                  source: { ...w.source, conditions },
                  shown: {
                    ...w.shown,
                    conditions: shown.length > 0 ? shown : [first],
                    difference,
                    chosen: gone ? (shown[0] ?? first) : w.shown.chosen,
                  },
                }
              })
            }
          >
            remove “{condition.name}”
          </WordButton>
        ) : null}
      </Actions>
      <div className="fields epoch-fields">
        <NumberField
          label="epoch from"
          unit="ms"
          value={source.epoch.fromMs}
          step={10}
          onChange={(fromMs) => setSource((s) => ({ ...s, epoch: { ...s.epoch, fromMs } }), 'epoch')}
        />
        <NumberField
          label="epoch to"
          unit="ms"
          value={source.epoch.toMs}
          step={10}
          onChange={(toMs) => setSource((s) => ({ ...s, epoch: { ...s.epoch, toMs } }), 'epoch')}
        />
      </div>
    </Editor>
  )
}

function freshName(taken: readonly string[]): string {
  for (let n = taken.length + 1; ; n++) if (!taken.includes(`condition ${n}`)) return `condition ${n}`
}

function ComponentFields({
  component,
  onChange,
}: {
  component: Component
  onChange: (next: Component, group?: string) => void
}) {
  const field = (key: string, label: string, unit: string, step: number) => {
    const value = (component as unknown as Record<string, number>)[key]
    return (
      <NumberField
        label={label}
        unit={unit}
        value={value}
        step={step}
        onChange={(next) => onChange({ ...component, [key]: next } as Component, key)}
      />
    )
  }
  return (
    <div className="component-fields">
      <Choice
        label="shape"
        value={component.shape}
        options={SHAPES}
        onChange={(shape) => onChange(reshaped(component, shape))}
      />
      <div className="fields">
        <div className="field">
          <label className="field-label" htmlFor="component-name">
            name
          </label>
          <input
            id="component-name"
            className="text-input"
            value={component.name}
            onChange={(event) => onChange({ ...component, name: event.target.value.slice(0, 200) }, 'name')}
            onBlur={() => endGesture()}
          />
        </div>
        {field('amplitudeUv', 'amplitude', 'µV', 0.1)}
        {component.shape === 'tone' ? (
          <>
            {field('frequencyHz', 'frequency', 'Hz', 1)}
            {field('phaseRad', 'phase at 0 ms', 'rad', 0.1)}
          </>
        ) : (
          <>
            {field('latencyMs', 'latency', 'ms', 2)}
            {field('widthMs', 'width at half maximum', 'ms', 2)}
          </>
        )}
        {component.shape === 'asymmetric' || component.shape === 'ramp' || component.shape === 'damped-oscillation'
          ? field('riseShare', 'share of the width before the peak', '', 0.05)
          : null}
        {component.shape === 'slow-wave' ? field('edgeMs', 'on- and offset', 'ms', 10) : null}
        {component.shape === 'damped-oscillation' ? field('frequencyHz', 'frequency', 'Hz', 1) : null}
      </div>
    </div>
  )
}

/** The same component in another shape: what both shapes know is kept. */
function reshaped(component: Component, shape: Component['shape']): Component {
  const { name, amplitudeUv } = component
  const latencyMs = component.shape === 'tone' ? 300 : component.latencyMs
  const widthMs = component.shape === 'tone' ? 100 : component.widthMs
  const riseShare = 'riseShare' in component ? component.riseShare : 0.4
  const frequencyHz = 'frequencyHz' in component ? component.frequencyHz : 10
  switch (shape) {
    case 'gaussian':
      return { shape, name, amplitudeUv, latencyMs, widthMs }
    case 'asymmetric':
    case 'ramp':
      return { shape, name, amplitudeUv, latencyMs, widthMs, riseShare }
    case 'slow-wave':
      return { shape, name, amplitudeUv, latencyMs, widthMs, edgeMs: widthMs / 3 }
    case 'damped-oscillation':
      return { shape, name, amplitudeUv, latencyMs, widthMs, riseShare, frequencyHz }
    case 'tone':
      return { shape, name, amplitudeUv, frequencyHz, phaseRad: 0 }
  }
}
