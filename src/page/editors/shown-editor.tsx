/** Which conditions are drawn, which one the readout is about, the difference wave, the channel. */
import { say } from '../../state/store.ts'
import { DIFFERENCE, type Workspace } from '../../state/workspace.ts'
import { Choice } from '../fields.tsx'
import { Editor } from './editor.tsx'

interface ShownEditorProps {
  workspace: Workspace
  conditions: readonly string[]
  channels: readonly string[]
}

export function ShownEditor({ workspace, conditions, channels }: ShownEditorProps) {
  const { shown } = workspace
  const set = (change: Partial<Workspace['shown']>) => say((w) => ({ ...w, shown: { ...w.shown, ...change } }))
  const toggle = (name: string) => {
    if (name === shown.chosen) return
    const next = shown.conditions.includes(name)
      ? shown.conditions.filter((entry) => entry !== name)
      : conditions.filter((entry) => entry === name || shown.conditions.includes(entry))
    set({ conditions: next })
  }
  const choices = shown.difference ? [...conditions, DIFFERENCE] : conditions
  return (
    <Editor title="Shown" subtitle="conditions and channel">
      {channels.length > 1 ? (
        <div className="field">
          <label className="field-label" htmlFor="channel">
            channel
          </label>
          <select id="channel" value={shown.channel ?? ''} onChange={(event) => set({ channel: event.target.value })}>
            {channels.map((name) => (
              <option key={name}>{name}</option>
            ))}
          </select>
        </div>
      ) : null}
      <p className="quiet">The readout, the score and what was taken out are about</p>
      <Choice
        label="condition that the readout is about"
        value={shown.chosen}
        options={choices.map((value) => ({
          value,
          text:
            value === DIFFERENCE && shown.difference
              ? `${shown.difference.first} minus ${shown.difference.second}`
              : value,
        }))}
        onChange={(chosen) =>
          set({
            chosen,
            conditions:
              chosen === DIFFERENCE || shown.conditions.includes(chosen)
                ? shown.conditions
                : conditions.filter((entry) => entry === chosen || shown.conditions.includes(entry)),
          })
        }
      />
      {conditions.length > 1 ? (
        <>
          <fieldset className="checks">
            <legend className="quiet">also drawn</legend>
            {conditions
              .filter((name) => name !== shown.chosen)
              .map((name) => (
                <label key={name}>
                  <input type="checkbox" checked={shown.conditions.includes(name)} onChange={() => toggle(name)} />{' '}
                  {name}
                </label>
              ))}
          </fieldset>
          <DifferenceFields shown={shown} conditions={conditions} set={set} />
        </>
      ) : (
        <p className="quiet">A difference wave needs two conditions.</p>
      )}
    </Editor>
  )
}

function DifferenceFields(props: {
  shown: Workspace['shown']
  conditions: readonly string[]
  set: (change: Partial<Workspace['shown']>) => void
}) {
  const { shown, conditions, set } = props
  const first = shown.difference?.first ?? conditions[0]
  const second = shown.difference?.second ?? conditions[1]
  const menu = (label: string, value: string, change: (name: string) => void) => (
    <div className="field">
      <label className="field-label">
        {label}
        <select value={value} onChange={(event) => change(event.target.value)}>
          {conditions.map((name) => (
            <option key={name}>{name}</option>
          ))}
        </select>
      </label>
    </div>
  )
  return (
    <>
      <label className="check">
        <input
          type="checkbox"
          checked={shown.difference !== null}
          onChange={(event) =>
            set(
              event.target.checked
                ? { difference: { first, second }, chosen: DIFFERENCE }
                : { difference: null, chosen: shown.chosen === DIFFERENCE ? first : shown.chosen },
            )
          }
        />{' '}
        difference wave
      </label>
      {shown.difference ? (
        <div className="pair">
          {menu('of', first, (name) => set({ difference: { first: name, second } }))}
          {menu('minus', second, (name) => set({ difference: { first, second: name } }))}
        </div>
      ) : null}
    </>
  )
}
