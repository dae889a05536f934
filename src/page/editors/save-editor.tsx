/** Saving the workspace: under which name, and whether the loaded table travels inside. */
import { useState } from 'react'
import type { Workspace } from '../../state/workspace.ts'
import { Actions, Choice, WordButton } from '../fields.tsx'
import { Editor } from './editor.tsx'

interface SaveEditorProps {
  workspace: Workspace
  onSave: (fileName: string, encloseTable: boolean) => void
}

export function SaveEditor({ workspace, onSave }: SaveEditorProps) {
  const [name, setName] = useState(workspace.title)
  const [enclose, setEnclose] = useState(false)
  const { source } = workspace
  return (
    <Editor title="Save the workspace" subtitle="everything that you have said, as one file">
      <div className="field">
        <label className="field-label" htmlFor="workspace-name">
          name
        </label>
        <input
          id="workspace-name"
          className="text-input"
          value={name}
          onChange={(event) => setName(event.target.value)}
          onKeyDown={(event) => {
            if (event.key === 'Enter') onSave(name, enclose)
          }}
        />
      </div>
      {source.kind === 'recorded' ? (
        <Choice
          stacked
          label="data of the table"
          value={enclose ? 'inside' : 'outside'}
          options={[
            { value: 'outside', text: 'without the data', hint: `who opens it needs ${source.fileName}` },
            { value: 'inside', text: 'with the table inside', hint: 'who gets the file gets the data' },
          ]}
          onChange={(value) => setEnclose(value === 'inside')}
        />
      ) : null}
      <Actions>
        <WordButton onPress={() => onSave(name, enclose)}>save as a file</WordButton>
      </Actions>
    </Editor>
  )
}
