/** The one editor that is open: which it is follows from the token's id. */
import { useStore } from 'zustand'
import { designCutoffsHz } from '../../state/stage-facts.ts'
import type { FigureId } from '../../erp/figure.ts'
import { dataStore, recordedData } from '../../state/recorded-data.ts'
import type { Workspace } from '../../state/workspace.ts'
import { rowWords } from '../../words/index.ts'
import { useView } from '../hooks.ts'
import type { Shown } from '../use-evaluation.ts'
import { NoiseEditor } from './noise-editor.tsx'
import { PinEditor } from './pin-editor.tsx'
import { ReadingEditor } from './reading-editor.tsx'
import { ShownEditor } from './shown-editor.tsx'
import {
  AddStageEditor,
  BaselineEditor,
  EventsEditor,
  ExtentEditor,
  LimitEditor,
  MeasureEditor,
  OnsetEditor,
  RateEditor,
  ScoreEditor,
  ScoreWindowEditor,
  TrialsEditor,
} from './simple-editors.tsx'
import { SaveEditor } from './save-editor.tsx'
import { SourceEditor } from './source-editor.tsx'
import { StageEditor } from './stage-editor.tsx'
import { BuiltWaveformEditor } from './waveform-editor.tsx'

interface TokenEditorProps {
  workspace: Workspace
  shown: Shown
  onOpenFile: () => void
  onSave: (fileName: string, encloseTable: boolean) => void
}

export function TokenEditor({ workspace, shown, onOpenFile, onSave }: TokenEditorProps) {
  const open = useView((view) => view.open)
  const files = useStore(dataStore, (state) => state.files)
  if (!open) return null
  const { source } = workspace
  const table = recordedData(source, files)
  const samplingRateHz =
    source.kind === 'built' ? source.samplingRateHz : (table?.samplingRateHz ?? shown.evaluation?.samplingRateHz ?? 500)
  const error = shown.problems.find((problem) => problem.at === open)?.message
  const common = { workspace, samplingRateHz, error }
  const [kind, first, second] = open.split(':')
  switch (kind) {
    case 'scenario':
      return source.kind === 'recorded' && table ? (
        <ReadingEditor key={source.fileId} source={source} table={table} onOpenFile={onOpenFile} />
      ) : (
        <SourceEditor onOpenFile={onOpenFile} error={error} />
      )
    case 'source':
      return <SourceEditor onOpenFile={onOpenFile} error={error} />
    case 'waveform':
    case 'shown': {
      if (kind === 'waveform' && source.kind === 'built')
        return <BuiltWaveformEditor key={workspace.title} workspace={workspace} error={error} />
      const conditions =
        source.kind === 'built' ? source.conditions.map((entry) => entry.name) : (table?.conditions ?? [])
      return <ShownEditor workspace={workspace} conditions={conditions} channels={table?.channels ?? []} />
    }
    case 'save':
      return <SaveEditor workspace={workspace} onSave={onSave} />
    case 'rate':
      return <RateEditor {...common} />
    case 'stage': {
      const index = Number(first)
      return (
        <StageEditor
          key={`${index}:${second}`}
          workspace={workspace}
          samplingRateHz={samplingRateHz}
          index={index}
          part={second}
          problems={shown.problems}
          designHz={designHz(workspace, index, samplingRateHz)}
        />
      )
    }
    case 'add':
      return <AddStageEditor {...common} />
    case 'extent':
      return <ExtentEditor {...common} />
    case 'trials':
      return <TrialsEditor {...common} />
    case 'noise':
      return <NoiseEditor workspace={workspace} table={table} samplingRateHz={samplingRateHz} error={error} />
    case 'events':
      return <EventsEditor {...common} />
    case 'baseline':
      return <BaselineEditor {...common} />
    case 'score':
      return <ScoreEditor {...common} />
    case 'score-window':
      return <ScoreWindowEditor {...common} />
    case 'measure':
      return <MeasureEditor key={first} {...common} which={first === 'mean' ? 'mean' : 'peak'} />
    case 'pin':
      return <PinEditor key={open} workspace={workspace} index={Number(first)} />
    case 'onset':
      return <OnsetEditor {...common} />
    case 'limit': {
      const row = shown.evaluation?.rows.find((entry) => entry.id === first)
      if (!row) return null
      return (
        <LimitEditor
          key={first}
          workspace={workspace}
          row={first as FigureId}
          label={rowWords(row).name}
          unit={row.unit}
        />
      )
    }
    default:
      return null
  }
}

function designHz(workspace: Workspace, index: number, samplingRateHz: number): readonly number[] | null {
  const spec = workspace.chain[index]
  if (!spec) return null
  try {
    return designCutoffsHz(spec, samplingRateHz)
  } catch {
    return null
  }
}
