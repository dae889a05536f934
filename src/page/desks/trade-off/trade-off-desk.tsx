/** Trade-off: which cutoff and roll-off keep the limits, and what each costs in bias and noise. */
import { useState } from 'react'
import { useStore } from 'zustand'
import type { Evaluation } from '../../../state/evaluation.ts'
import { answerOfRow, cellInChain, mapCsv, noiseError, overWaveforms } from '../../../state/map-figures.ts'
import { dataStore, recordedData } from '../../../state/recorded-data.ts'
import { endGesture, say } from '../../../state/store.ts'
import { scoreUnitOf, withFilter } from '../../../state/trade-off.ts'
import { DIFFERENCE, type Workspace } from '../../../state/workspace.ts'
import { exact, scoreWords, tradeOffWords } from '../../../words/index.ts'
import {
  FilterKindEditor,
  MapLimitsEditor,
  MapRangeEditor,
  MapWaveformsEditor,
} from '../../editors/trade-off-editors.tsx'
import { NumberField, SliderField, WordButton } from '../../fields.tsx'
import { useView } from '../../hooks.ts'
import { Token } from '../../token.tsx'
import type { DeskProps } from '../desks.tsx'
import { CutFigure } from './cut-figure.tsx'
import { FiltersTable } from './filters-table.tsx'
import { FrontFigure } from './front-figure.tsx'
import { MapFigure } from './map-figure.tsx'
import { candidateWords, limitWords, type MapUnit, rangeWords, waveformsWords } from './map-words.ts'
import './trade-off.css'
import { type DrawnMap, useMap } from './use-map.ts'

export function TradeOffDesk({ workspace, shown, caption }: DeskProps) {
  const { evaluation } = shown
  if (!evaluation) return null
  return (
    <div className="desk trade-off-desk">
      <Asked {...{ workspace, evaluation, caption }} />
    </div>
  )
}

interface AskedProps {
  workspace: Workspace
  evaluation: Evaluation
  caption: () => string
}

function Asked({ workspace, evaluation, caption }: AskedProps) {
  const before = evaluation.rows[0].before
  const outcome = useMap(workspace, typeof before === 'number' ? before : null)
  const editor = useEditor(workspace)
  if (!outcome.ok)
    return (
      <div className="grid">
        <p className="remark" role="status">
          {outcome.reason}
        </p>
        <div className="side desk-side">{editor}</div>
      </div>
    )
  return <Answered {...{ workspace, caption, editor }} map={outcome.map} />
}

function useEditor(workspace: Workspace) {
  const editing = useView((view) => view.open)
  switch (editing) {
    case 'trade-off-filter':
      return <FilterKindEditor workspace={workspace} />
    case 'trade-off-range':
      return <MapRangeEditor workspace={workspace} />
    case 'trade-off-limits':
      return <MapLimitsEditor workspace={workspace} />
    case 'trade-off-waveforms':
      return <MapWaveformsEditor workspace={workspace} />
    default:
      return null
  }
}

interface AnsweredProps {
  workspace: Workspace
  map: DrawnMap
  caption: () => string
  editor: React.ReactNode
}

function Answered({ workspace, map, caption: pageCaption, editor }: AnsweredProps) {
  const { request, state, figures, limits } = map
  const { cutoffsHz, rollOffs, candidate, waveforms } = request.question
  const columns = cutoffsHz.length
  const count = columns * rollOffs.length
  const unit: MapUnit = scoreUnitOf(workspace)
  const inChain = cellInChain(workspace, request)
  const [moved, setMoved] = useState<number | null>(null)
  const start = inChain ?? Math.min(count - 1, columns * Math.min(1, rollOffs.length - 1) + Math.floor(columns / 2))
  const at = moved !== null && moved < count ? moved : start
  const row = Math.floor(at / columns)
  const answer = answerOfRow(figures, row, columns, limits)
  const words = answer
    ? tradeOffWords({
        ...{ answer, candidate, limits, unit },
        rollOff: rollOffs[row],
        trials: workspace.trials,
        waveforms: waveforms.length,
        over: overWaveforms(request, workspace.tradeOff.over),
      })
    : 'The first map is being computed …'
  const caption = () => `${words} ${pageCaption()}`
  const pick = (index: number) => {
    const column = index % columns
    const rollOff = rollOffs[Math.floor(index / columns)]
    if (figures.cells[index]?.error !== null) return
    say((w) => withFilter(w, cutoffsHz[column], rollOff))
  }
  const best = answer && (answer.kind === 'some' || answer.kind === 'all') ? answer.best : null
  const named = [
    { name: 'at the cursor', index: at },
    ...(inChain === null ? [] : [{ name: 'in the chain (nearest of the grid)', index: inChain }]),
    ...(best ? [{ name: 'least total error of this row', index: best.index }] : []),
  ]
  const running = state?.status === 'running' || !state || map.stale
  return (
    <>
      <div className="grid">
        <div>
          <p className="desk-question">
            Which <Token id="trade-off-filter" text={candidateWords(candidate)} label="filter that is varied" /> from{' '}
            <Token
              id="trade-off-range"
              text={rangeWords(candidate, workspace.tradeOff, rollOffs)}
              label="range of the map"
            />{' '}
            keeps <Token id="trade-off-limits" text={limitWords(limits, unit)} label="limits of the map" /> in{' '}
            {scoreWords(workspace.score)} of{' '}
            <Token id="trade-off-waveforms" text={waveformsWords(workspace)} label="waveforms of the map" />?
          </p>
          <p className="remark summary" role="status">
            {words}
          </p>
          <Notes workspace={workspace} />
          <Progress map={map} running={running} />
        </div>
        <div className="side desk-side">{editor}</div>
      </div>
      <div className={map.stale ? 'grid desk-figures stale' : 'grid desk-figures'} aria-busy={running}>
        <div className="figure-body">
          <MapFigure
            {...{ map, unit, at, inChain, caption }}
            layer={workspace.tradeOff.layer}
            noiseErrorOf={(index) => noiseError(state, index)}
            onMove={setMoved}
            onPick={pick}
          />
          <CutFigure {...{ map, unit, at, caption }} />
        </div>
        <div className="figure-body">
          <FrontFigure {...{ map, unit, at, inChain, caption }} onMove={setMoved} onPick={pick} />
          <TrialsSlider workspace={workspace} />
          <p className="small quiet desk-hint">
            Unveiled: filters that keep every limit; a line at each limit. Ringed: no other filter beats them in both
            bias and noise. Filled: the filter in the chain. Hatched: cannot be realised. A click or Enter puts a filter
            into the chain; undo takes it back.
          </p>
        </div>
      </div>
      <FiltersTable
        filters={named.map(({ name, index }) => ({ name, index, cell: figures.cells[index] }))}
        {...{ candidate, limits, unit, inChain }}
        csv={() => mapCsv(figures, request, workspace)}
        onPick={pick}
      />
    </>
  )
}

function TrialsSlider({ workspace }: { workspace: Workspace }) {
  const change = (trials: number) => say((w) => ({ ...w, trials }), 'trials')
  return (
    <div className="editor-row map-trials">
      <span className="small">trials</span>
      <SliderField
        label="trials of the map"
        unit="trials"
        value={workspace.trials}
        min={10}
        max={1000}
        scale="log"
        ticks={[10, 30, 100, 300, 1000]}
        onChange={(trials) => change(Math.round(trials))}
        onEnd={endGesture}
      />
      <NumberField label="number of trials of the map" hideLabel value={workspace.trials} onChange={change} />
    </div>
  )
}

/** How far the map is, with the means to stop it and to go on. */
function Progress({ map, running }: { map: DrawnMap; running: boolean }) {
  const { state, request } = map
  if (state?.status === 'failed')
    return (
      <p className="small over" role="alert">
        The map could not be computed: {state.reason} <WordButton onPress={map.goOn}>try again</WordButton>
      </p>
    )
  const drawn = request.simulated && state && state.draws > 0 ? `, ${exact(state.draws)} simulated averages each` : ''
  const done = state?.done ?? 0
  const total = request.question.cutoffsHz.length * request.question.rollOffs.length
  return (
    <p className="small quiet map-progress">
      {state?.status === 'cancelled' ? (
        <>
          Stopped at {done} of {total} filters{drawn}. <WordButton onPress={map.goOn}>go on</WordButton>
        </>
      ) : running ? (
        <>
          {request.simulated && state && state.draws > 0 ? 'Refining the noise: ' : 'Computing: '}
          {done} of {total} filters{drawn}. <WordButton onPress={map.cancel}>cancel</WordButton>
        </>
      ) : (
        <>
          {total} filters{drawn}
          {request.question.waveforms.length > 1 ? `, over ${request.question.waveforms.length} waveforms` : ''}.
        </>
      )}
    </p>
  )
}

/** What the map leaves out, and what it must not be used for. */
function Notes({ workspace }: { workspace: Workspace }) {
  const { source, shown, tradeOff } = workspace
  const data = useStore(dataStore, (state) => recordedData(source, state.files))
  if (source.kind === 'recorded' && tradeOff.waveform === 'chosen' && data?.conditions.length === 1)
    return (
      <p className="small map-note">
        A filter that is chosen on the data under test inflates false positives. Choose on other data, or on a built
        waveform (the first phrase of the page).
      </p>
    )
  if (source.kind === 'recorded' && tradeOff.waveform === 'chosen')
    return (
      <p className="small map-note">
        {shown.chosen === DIFFERENCE
          ? 'This difference wave is the effect under test: a filter that is chosen on it inflates false positives. '
          : 'A filter that is chosen on the data under test inflates false positives. '}
        Choose on{' '}
        <WordButton onPress={() => say((w) => ({ ...w, tradeOff: { ...w.tradeOff, waveform: 'average' } }))}>
          the average over all conditions
        </WordButton>{' '}
        instead, or on a built waveform (the first phrase of the page).
      </p>
    )
  if (source.kind === 'built' && source.events !== 'alone')
    return (
      <p className="small map-note">The map takes the event alone: what overlaps from its neighbours is not counted.</p>
    )
  return null
}
