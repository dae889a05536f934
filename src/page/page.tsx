/** The page: header, protocol line with the chain table beside it, figures, readout. */
import { useEffect, useMemo, useRef, useState } from 'react'
import { useStore } from 'zustand'
import { dataStore, recordedData, rereadTable } from '../state/recorded-data.ts'
import { protocolOf } from '../state/protocol.ts'
import { redo, say, undo } from '../state/store.ts'
import { showsFalseDeflection } from '../state/trace-actions.ts'
import { look, viewStore } from '../state/view.ts'
import { startWorkspace, type Workspace } from '../state/workspace.ts'
import { list, protocolLine, protocolText } from '../words/index.ts'
import { ChainTable } from './chain-table.tsx'
import { Desks } from './desks/desks.tsx'
import { openTrace } from './desks/trace/open-trace.ts'
import { closeEditor } from './editors/editor.tsx'
import { TokenEditor } from './editors/token-editor.tsx'
import { FrequencyFigure } from './frequency-figure.tsx'
import { Header } from './header.tsx'
import { Help } from './help.tsx'
import { useView, useWorkspace } from './hooks.ts'
import { KernelFigure } from './kernel-figure.tsx'
import { PinRows } from './pins.tsx'
import { ProtocolLine } from './protocol-line.tsx'
import { Readout } from './readout.tsx'
import { TimeFigures } from './time-figures.tsx'
import { useEvaluation } from './use-evaluation.ts'
import { useFiles } from './use-files.ts'

export function Page() {
  const workspace = useWorkspace()
  const shown = useEvaluation(workspace)
  const theme = useView((view) => view.theme)
  const help = useView((view) => view.help)
  const files = useFiles()
  const { evaluation } = shown

  useEffect(() => {
    document.documentElement.dataset.theme = theme
  }, [theme])
  useKeys(files.chooseFile, () => void files.saveWorkspace())
  useStoredFile(workspace, files.report)

  // That of the workspace in the sentence, which may be ahead of the figures.
  const table = useStore(dataStore, (state) => recordedData(workspace.source, state.files))
  const samplingRateHz =
    workspace.source.kind === 'built'
      ? workspace.source.samplingRateHz
      : (table?.samplingRateHz ?? evaluation?.samplingRateHz ?? 0)
  const protocol = useMemo(() => protocolOf(workspace, samplingRateHz), [workspace, samplingRateHz])
  const caption = () => {
    const of = shown.of ?? workspace
    const drawn = protocolOf(of, evaluation?.samplingRateHz ?? samplingRateHz)
    const pinned = evaluation?.pins.flatMap((pin) => ('reason' in pin ? [] : [pin.name])) ?? []
    const beside = pinned.length > 0 ? ` Quiet curves: pinned for comparison, ${list(pinned)}.` : ''
    return protocolText(protocolLine(drawn)) + beside
  }

  return (
    // biome-ignore lint/a11y/noStaticElementInteractions: a file may be dropped anywhere on the page
    <div className="page" onDragOver={files.dragOver} onDragLeave={files.dragLeave} onDrop={files.drop}>
      <Header
        title={workspace.title}
        kind={workspace.source.kind === 'built' ? 'built waveform' : 'recorded waveform'}
        onOpen={files.chooseFile}
        onSave={() => look({ open: 'save' })}
        onNew={() => say(startWorkspace)}
        onCopyLink={files.copyLink}
      />
      {help ? <Help /> : null}
      <main aria-busy={files.lookingForWork}>
        <section className="top grid" aria-label="Protocol line">
          <div>
            <ProtocolLine protocol={protocol} problems={shown.problems} />
            {files.messages.map(({ kind, text, answers }) => (
              <p key={text} className={`message ${kind}`} role={kind === 'note' ? 'status' : 'alert'}>
                {text}
                {(answers ?? [{ words: 'dismiss', run: files.dismiss }]).map(({ words, run }) => (
                  <button key={words} type="button" className="word" onClick={run}>
                    {words}
                  </button>
                ))}
              </p>
            ))}
            <ReadingProgress />
          </div>
          <div className="side">
            {evaluation ? (
              <ChainTable evaluation={evaluation}>
                <PinRows
                  workspace={workspace}
                  evaluation={evaluation}
                  broken={shown.problems.some(({ at }) => at.startsWith('stage:'))}
                />
              </ChainTable>
            ) : null}
            <TokenEditor
              workspace={workspace}
              shown={shown}
              onOpenFile={files.chooseFile}
              onSave={(name, enclose) => {
                void files.saveWorkspace(name, enclose)
                closeEditor()
              }}
            />
          </div>
        </section>
        {evaluation && shown.of ? (
          <>
            <div className={`figures grid${shown.stale ? ' stale' : ''}`} aria-busy={shown.working}>
              <div className="figure-body">
                <TimeFigures evaluation={evaluation} workspace={shown.of} caption={caption} />
                <p className="remark">
                  {evaluation.remark}
                  {showsFalseDeflection(shown.of, evaluation) ? (
                    <>
                      {' '}
                      <button type="button" className="word" onClick={() => openTrace('score')}>
                        The trace-back desk shows where it came from.
                      </button>
                    </>
                  ) : null}
                </p>
              </div>
              <div className="figure-body">
                <FrequencyFigure evaluation={evaluation} workspace={shown.of} caption={caption} height={178} />
                <KernelFigure evaluation={evaluation} caption={caption} height={148} />
              </div>
            </div>
            <div className={shown.stale ? 'stale' : undefined} aria-busy={shown.working}>
              <Readout evaluation={evaluation} workspace={shown.of} problems={shown.problems} />
            </div>
            <Desks workspace={workspace} shown={shown} caption={caption} />
          </>
        ) : (
          <p className="remark">
            {shown.problems.length > 0
              ? 'There is nothing to draw until the above is mended; undo brings back what was there.'
              : 'Working …'}
          </p>
        )}
      </main>
      <footer className="caution">
        For research planning, not for diagnosis. Clinical recordings follow the local laboratory’s standards and the
        responsible clinician.
      </footer>
      {files.dragging ? <div className="drop-veil">Drop a table or a workspace to open it</div> : null}
      <input {...files.input} />
    </div>
  )
}

/** One line while a file is being read, with the means to stop it. */
function ReadingProgress() {
  const reading = useStore(dataStore, (state) => state.reading)
  if (!reading) return null
  return (
    <p className="message note" role="status">
      Reading {reading.fileName} …
      <button type="button" className="word" onClick={reading.cancel}>
        cancel
      </button>
    </p>
  )
}

/** Undo, redo, open, save and help by keyboard; keys typed into a field stay there. */
function useKeys(openFile: () => void, saveWorkspace: () => void): void {
  const actions = useRef({ openFile, saveWorkspace })
  actions.current = { openFile, saveWorkspace }
  useEffect(() => {
    const onKey = (event: KeyboardEvent) => {
      const inField = event.target instanceof HTMLInputElement && event.target.type === 'text'
      if (event.key === 'Escape') return viewStore.getState().open === null ? look({ help: false }) : closeEditor()
      if (event.key === '?' && !inField) return look({ help: true })
      if (!(event.ctrlKey || event.metaKey)) return
      const key = event.key.toLowerCase()
      if (key === 'z' && !inField) {
        event.preventDefault()
        if (event.shiftKey) redo()
        else undo()
      } else if (key === 'y' && !inField) {
        event.preventDefault()
        redo()
      } else if (key === 'o') {
        event.preventDefault()
        actions.current.openFile()
      } else if (key === 's') {
        event.preventDefault()
        actions.current.saveWorkspace()
      }
    }
    window.addEventListener('keydown', onKey)
    return () => window.removeEventListener('keydown', onKey)
  }, [])
}

/** After a reload, a link or an undo the workspace may name a file that is not read yet: it is taken from the browser's storage. */
function useStoredFile(workspace: Workspace, report: (text: string) => void): void {
  const files = useStore(dataStore, (state) => state.files)
  const [asked, setAsked] = useState<unknown>(null)
  const { source } = workspace
  useEffect(() => {
    if (source.kind !== 'recorded' || asked === source || recordedData(source, files)) return
    setAsked(source)
    rereadTable(source, source.reading).then(
      (table) => {
        if (table && !table.ok) report(`${source.fileName} could not be read again: ${table.reason}`)
      },
      () => undefined,
    )
  }, [source, files, asked, report])
}
