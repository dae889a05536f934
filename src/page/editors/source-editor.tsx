/** Where the waveform comes from: one of the scenarios, the user's own file, or a built waveform that starts plain. */
import { SCENARIOS, workspaceOf } from '../../state/workspace.ts'
import { say } from '../../state/store.ts'
import { look } from '../../state/view.ts'

import { Actions, WordButton } from '../fields.tsx'
import { Editor } from './editor.tsx'

export function SourceEditor({ onOpenFile, error }: { onOpenFile: () => void; error: string | undefined }) {
  return (
    <Editor title="Waveform" subtitle="where it comes from" error={error}>
      <ul className="scenario-list">
        {SCENARIOS.map((scenario) => (
          <li key={scenario.id}>
            <WordButton
              onPress={() => {
                say(() => workspaceOf(scenario))
                look({ open: null })
              }}
            >
              {scenario.title}
            </WordButton>
            <div className="quiet">{scenario.sentence}</div>
          </li>
        ))}
      </ul>
      <p className="quiet">All scenarios are invented data. Opening one can be undone.</p>
      <Actions>
        <WordButton onPress={onOpenFile}>open a table of your own (CSV, TSV)</WordButton>
      </Actions>
    </Editor>
  )
}
