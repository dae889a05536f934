/** Trade-off: which cutoff and roll-off keep the limits, and what each costs in bias and noise; one kind of filter, or several side by side. */
import { useMemo, useState } from 'react'
import type { CellFigures } from '../../../evidence/trade-off-figures.ts'
import type { Evaluation } from '../../../state/evaluation.ts'
import {
  answerOfRow,
  bestOfAllRows,
  cellInChain,
  firstRow,
  mapCsv,
  noiseError,
  overWaveforms,
} from '../../../state/map-figures.ts'
import { endGesture, say } from '../../../state/store.ts'
import { aboutKind, scoreUnitOf, trialsProblem, withFilter } from '../../../state/trade-off.ts'
import type { Workspace } from '../../../state/workspace.ts'
import {
  candidateWords,
  exact,
  list,
  mapLineWords,
  rollOffWords,
  scoreWords,
  tradeOffWords,
} from '../../../words/index.ts'
import {
  BesideEditor,
  FilterKindEditor,
  MapLimitsEditor,
  MapRangeEditor,
  MapWaveformsEditor,
} from '../../editors/trade-off-editors.tsx'
import { NumberField, SliderField } from '../../fields.tsx'
import { useView } from '../../hooks.ts'
import { Token } from '../../token.tsx'
import type { DeskProps } from '../desks.tsx'
import { CutFigure } from './cut-figure.tsx'
import { FiltersTable, type NamedFilter } from './filters-table.tsx'
import { FrontFigure } from './front-figure.tsx'
import { LayerChoice, MapFigure } from './map-figure.tsx'
import { MapNotes } from './map-notes.tsx'
import { isRunning, MapProgress } from './map-progress.tsx'
import { shadeOf } from './map-shape.ts'
import { capital, kindWords, limitWords, type MapUnit, placeWords, rangeWords, waveformsWords } from './map-words.ts'
import './trade-off.css'
import { type DrawnMap, type DrawnMaps, useMaps } from './use-maps.ts'

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
  const outcome = useMaps(workspace, typeof before === 'number' ? before : null)
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
  return <Answered {...{ workspace, evaluation, caption, editor }} drawn={outcome.drawn} />
}

function useEditor(workspace: Workspace) {
  const editing = useView((view) => view.open)
  switch (editing) {
    case 'trade-off-filter':
      return <FilterKindEditor workspace={workspace} />
    case 'trade-off-beside':
      return <BesideEditor workspace={workspace} />
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
  evaluation: Evaluation
  drawn: DrawnMaps
  caption: () => string
  editor: React.ReactNode
}

function Answered({ workspace, evaluation, drawn, caption: pageCaption, editor }: AnsweredProps) {
  const { maps } = drawn
  const several = maps.length > 1
  // of the maps that are drawn, which may still be those of another score
  const unit: MapUnit = scoreUnitOf(maps[0].request.question.scores[0])
  const { layer, over } = workspace.tradeOff
  const [active, setActive] = useState<string | null>(null)
  const [moved, setMoved] = useState<Readonly<Record<string, number>>>({})
  const views = maps.map((map) => viewOf(workspace, map, moved[map.id]))
  const shown = views.find(({ map }) => map.id === active) ?? views[0]
  const all = maps.map(({ figures }) => figures.cells)
  // biome-ignore lint/correctness/useExhaustiveDependencies: the cells of all maps, which are as many as there are maps
  const shade = useMemo(() => shadeOf(all.flat(), layer), [layer, ...all])
  const running = isRunning(drawn)
  const words = shown.answer
    ? tradeOffWords({
        ...{ answer: shown.answer, candidate: shown.candidate, limits: shown.map.limits, unit },
        rollOff: shown.rollOff,
        trials: workspace.trials,
        waveforms: shown.map.request.question.waveforms.length,
        over: overWaveforms(shown.map.request, over),
      })
    : notYet(shown, running)
  const caption = () => `${words} ${pageCaption()}`
  const move = (map: DrawnMap) => (index: number) => {
    setActive(map.id)
    setMoved((before) => ({ ...before, [map.id]: index }))
  }
  const pick = (map: DrawnMap) => (index: number) => {
    const { cutoffsHz, rollOffs } = map.request.question
    if (map.figures.cells[index]?.error !== null) return
    const rollOff = rollOffs[Math.floor(index / cutoffsHz.length)]
    say((w) => withFilter(w, cutoffsHz[index % cutoffsHz.length], rollOff, map.kind))
  }
  const figures = views.map((view, i) => {
    const { map, at, inChain, answer, candidate, rollOff } = view
    const lineOf = () =>
      answer === null
        ? notYet(view, running)
        : mapLineWords({
            ...{ answer, candidate, rollOff, limits: map.limits, unit },
            ofAllRows: bestOfAllRows(map.figures),
          })
    return (
      <div key={map.id} className={map.stale ? 'figure-body stale' : 'figure-body'}>
        <MapFigure
          {...{ map, unit, at, inChain, layer, shade }}
          name={several ? kindWords(map.kind) : null}
          fileName={i === 0 ? 'trade-off-map' : `trade-off-map-${i + 1}`}
          caption={several ? () => `${candidateWords(candidate)}. ${lineOf()} ${pageCaption()}` : caption}
          noiseErrorOf={(index) => noiseError(map.state, index)}
          onMove={move(map)}
          onPick={pick(map)}
        >
          {several ? null : <LayerChoice {...{ layer, shade, unit }} />}
        </MapFigure>
        {several ? <p className="map-line">{lineOf()}</p> : null}
      </div>
    )
  })
  const under = { map: shown.map, unit, at: shown.at, caption }
  const frontFigure = (
    <div className="figure-body">
      <FrontFigure {...under} inChain={shown.inChain} onMove={move(shown.map)} onPick={pick(shown.map)} />
      <TrialsSlider workspace={workspace} />
      <p className="small quiet desk-hint">
        Unveiled and broadly edged: filters that keep every limit; a line at each limit. Ringed: no other filter beats
        them in both bias and noise. Filled: the filter in the chain. Hatched: cannot be realised.
        {shown.map.figures.cells.some(leavesNoScore) ? ' Blank: leaves no such score.' : ''} A click or Enter puts a
        filter into the chain; undo takes it back.
      </p>
    </div>
  )
  return (
    <>
      <div className="grid">
        <div>
          <Question {...{ workspace, maps, unit }} />
          <p className="remark summary" role="status">
            {words}
          </p>
          <MapNotes {...{ workspace, evaluation, unit }} />
          <MapProgress drawn={drawn} />
        </div>
        <div className="side desk-side">{editor}</div>
      </div>
      {several ? (
        <section className="desk-figures" aria-label="Maps side by side" aria-busy={running}>
          <div className="figure-head maps-head">
            <h2>Maps</h2>
            <LayerChoice {...{ layer, shade, unit }} />
          </div>
          <div className={`maps-beside of-${maps.length}`}>{figures}</div>
          <p className="small maps-below">
            Below: <b>{kindWords(shown.map.kind)}</b>, the map whose cursor was moved last.
          </p>
        </section>
      ) : null}
      <div className={shown.map.stale ? 'grid desk-figures stale' : 'grid desk-figures'} aria-busy={running}>
        <div>
          {several ? null : figures}
          <div className="figure-body">
            <CutFigure {...under} />
          </div>
        </div>
        {frontFigure}
      </div>
      <FiltersTable
        filters={namedFilters(views, shown, several, pick)}
        {...{ limits: shown.map.limits, unit }}
        maps={maps.length}
        csv={() => mapCsv(maps, workspace)}
      />
    </>
  )
}

function Question({ workspace, maps, unit }: { workspace: Workspace; maps: readonly DrawnMap[]; unit: MapUnit }) {
  const { candidate, rollOffs } = maps[0].request.question
  const beside = maps.slice(1).map(({ kind }) => kindWords(kind))
  const limits = limitWords(maps[0].limits, unit)
  return (
    <p className="desk-question">
      Which{' '}
      <Token
        id="trade-off-filter"
        text={`${candidateWords(candidate)}${placeWords(workspace)}`}
        label="filter that is varied"
      />
      {beside.length > 0 ? ', beside ' : ' '}
      <Token
        id="trade-off-beside"
        className={beside.length > 0 ? '' : 'add'}
        text={beside.length > 0 ? list(beside) : '+ compare'}
        label="kinds of filter beside it"
      />
      {beside.length > 0 ? ', from ' : ' from '}
      <Token id="trade-off-range" text={rangeWords(candidate, workspace.tradeOff, rollOffs)} label="range of the map" />{' '}
      {limits === 'no limit' ? 'has the least total error, with ' : 'keeps '}
      <Token id="trade-off-limits" text={limits} label="limits of the map" />
      {limits === 'no limit' ? ', in ' : ' in '}
      {scoreWords(workspace.score)} of{' '}
      <Token id="trade-off-waveforms" text={waveformsWords(workspace)} label="waveforms of the map" />?
    </p>
  )
}

/** A map with its cursor and what its row answers. */
function viewOf(workspace: Workspace, map: DrawnMap, moved: number | undefined) {
  const { cutoffsHz, rollOffs, candidate } = map.request.question
  const columns = cutoffsHz.length
  const count = columns * rollOffs.length
  const inChain = cellInChain(aboutKind(workspace, map.kind), map.request)
  const start = inChain ?? columns * firstRow(map.figures, columns, rollOffs.length) + Math.floor(columns / 2)
  const at = moved !== undefined && moved < count ? moved : start
  const row = Math.floor(at / columns)
  return {
    map,
    candidate,
    inChain,
    at,
    rollOff: rollOffs[row],
    answer: answerOfRow(map.figures, row, columns, map.limits),
  }
}

type MapView = ReturnType<typeof viewOf>

const leavesNoScore = (cell: CellFigures | null) => cell !== null && cell.error === null && cell.bias === null

/** A coarse map leaves out every second row. */
function notYet({ map, candidate, rollOff }: MapView, running: boolean): string {
  if (map.figures.cells.some((cell) => cell !== null))
    return `${capital(rollOffWords(candidate, rollOff))}: not computed yet${running ? ' …' : ', other rows are.'}`
  return running ? 'The first map is being computed …' : 'Nothing is computed yet.'
}

/** The filters that matter: of the map with the cursor all, of the others the best of their row. */
function namedFilters(
  views: readonly MapView[],
  shown: MapView,
  several: boolean,
  pick: (map: DrawnMap) => (index: number) => void,
): NamedFilter[] {
  const named = (view: MapView, name: string, index: number | null | undefined): NamedFilter[] =>
    index === null || index === undefined
      ? []
      : [
          {
            name: several ? `${name}, ${kindWords(view.map.kind)}` : name,
            cell: view.map.figures.cells[index],
            candidate: view.candidate,
            inChain: index === view.inChain,
            onPick: () => pick(view.map)(index),
          },
        ]
  const bestOf = ({ answer }: MapView) => (answer && 'best' in answer ? answer.best?.index : null)
  const least = several ? 'least total error of its row' : 'least total error of this row'
  return [
    ...named(shown, 'at the cursor', shown.at),
    ...views.flatMap((view) => named(view, 'in the chain (nearest of the grid)', view.inChain)),
    ...views.flatMap((view) => named(view, least, bestOf(view))),
  ]
}

function TrialsSlider({ workspace }: { workspace: Workspace }) {
  const [refused, setRefused] = useState<string | null>(null)
  // a number that is none would take the page's figures away, and with them the field that it was written in
  const change = (trials: number) => {
    const problem = Number.isNaN(trials) ? null : trialsProblem({ ...workspace, trials })
    setRefused(problem)
    if (problem === null && !Number.isNaN(trials)) say((w) => ({ ...w, trials }), 'trials')
  }
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
      <NumberField
        label="number of trials of the map"
        hideLabel
        value={workspace.trials}
        error={refused ? `${refused} ${exact(workspace.trials)} still holds.` : undefined}
        onChange={change}
      />
    </div>
  )
}
