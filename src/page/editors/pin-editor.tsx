/** The editor of a pinned chain: its name, what it is in words, and what can be done with it. */
import { useState } from 'react'
import { isInUse, namesOfPins, renamePin, swapPin } from '../../state/pin-actions.ts'
import { endGesture, say } from '../../state/store.ts'
import type { Pin, Workspace } from '../../state/workspace.ts'
import { list, stagePieces } from '../../words/index.ts'
import { Actions, WordButton } from '../fields.tsx'
import { letGo } from '../pins.tsx'
import { closeEditor, Editor } from './editor.tsx'

/** Longest name that a link has to carry. */
const LONGEST = 80

export function PinEditor({ workspace, index }: { workspace: Workspace; index: number }) {
  const pin = workspace.pins[index]
  const [draft, setDraft] = useState(() => (pin ? namesOfPins(workspace)[index] : ''))
  if (!pin) return null
  const own = pin.name.trim() !== ''
  return (
    <Editor title="Pinned chain" subtitle={`${index + 1} of ${workspace.pins.length}`}>
      <div className="field">
        <label className="field-label" htmlFor="pin-name">
          name
        </label>
        <input
          id="pin-name"
          className="text-input"
          autoComplete="off"
          value={draft}
          maxLength={LONGEST}
          onChange={(event) => {
            const name = event.target.value
            setDraft(name)
            say((w) => renamePin(w, index, name.trim()), `pin:${index}`)
          }}
          onBlur={endGesture}
        />
      </div>
      <p>{chainWords(pin)}</p>
      <p className="quiet">
        {own
          ? 'An empty name is filled with what tells this chain from the present one.'
          : 'The name says what tells this chain from the present one, until you write your own.'}
      </p>
      <Actions>
        <WordButton
          disabled={isInUse(workspace, index)}
          onPress={() => {
            say((w) => swapPin(w, index))
            closeEditor()
          }}
        >
          use this chain
        </WordButton>
        <WordButton onPress={() => letGo(index)}>unpin</WordButton>
      </Actions>
    </Editor>
  )
}

/** The chain as the protocol line would say it. */
function chainWords({ chain, extent }: Pin): string {
  const stages = chain.flatMap((spec, i) =>
    spec.enabled === false
      ? []
      : [
          stagePieces(spec, i)
            .map((piece) => piece.text)
            .join('') + (spec.inData ? ' (in the data)' : ''),
        ],
  )
  if (stages.length === 0) return 'No filter.'
  const said = list(stages)
  return `${said.charAt(0).toUpperCase()}${said.slice(1)}; on ${extent === 'epochs' ? 'the cut-out epochs' : 'the continuous recording'}.`
}
