/** The readout: what the chain did, row by row, held against the user's limits. */
import { useState } from 'react'
import type { FigureId, Limits } from '../erp/figure.ts'
import type { ScoreKind } from '../erp/score.ts'
import type { FidelityRow } from '../evidence/fidelity.ts'
import type { Estimate } from '../evidence/simulated-score.ts'
import { downloadBlob } from '../plot/index.ts'
import { EXTRAPOLATED_MARK } from '../state/chosen-noise.ts'
import type { Evaluation, Problem } from '../state/evaluation.ts'
import type { SimulatedNoise } from '../state/simulated-noise.ts'
import { readoutCsv } from '../state/readout-csv.ts'
import { trialsProblem } from '../state/trade-off.ts'
import { type Verdict, verdictOf } from '../state/verdict.ts'
import type { Workspace } from '../state/workspace.ts'
import { brief, changeWords, exact, fixed, list, rowWords, signed, valueWords, windowWords } from '../words/index.ts'
import { openTrace } from './desks/trace/open-trace.ts'
import { MultiplesAxis, MultiplesDot } from './multiples.tsx'
import { type DrawnPin, drawnPins } from './pin-line.tsx'
import { FailedPins, PinCells, PinColumns, PinHeads } from './readout-pins.tsx'
import { problemOf } from './protocol-line.tsx'
import { Token } from './token.tsx'
import { useSimulatedNoise } from './use-simulated-noise.ts'

const GROUP_WORDS = {
  score: 'the score',
  size: 'size',
  time: 'time',
  'false activity': 'false activity',
  precision: 'precision',
} as const

interface ReadoutProps {
  evaluation: Evaluation
  workspace: Workspace
  problems: readonly Problem[]
}

export function Readout({ evaluation, workspace, problems }: ReadoutProps) {
  const { rows, precision } = evaluation
  const pins = drawnPins(evaluation)
  const simulated = useSimulatedNoise(workspace, evaluation)
  const [failed, setFailed] = useState<string | null>(null)
  const save = () => {
    try {
      // The mark tells spreadsheets that the file is UTF-8; without it they misread µ.
      downloadBlob(
        new Blob(['\ufeff', readoutCsv(evaluation, workspace, simulated?.noise)], { type: 'text/csv' }),
        'readout.csv',
      )
      setFailed(null)
    } catch (error) {
      setFailed(`The readout could not be saved: ${error instanceof Error ? error.message : String(error)}`)
    }
  }
  return (
    <section className="scroll-x" aria-label="Readout">
      <table className={pins.length > 0 ? 'readout pinned' : 'readout'}>
        <caption className="visually-hidden">What the chain did to the waveform, held against the limits</caption>
        <colgroup>
          <col className="col-question" />
          <col className="col-name" />
          <col className="col-number" />
          <col className="col-number" />
          <PinColumns pins={pins} />
          <col className="col-number" />
          <col className="col-percent" />
          <col className="col-limit" />
          <col className="col-dot" />
          <col className="col-verdict" />
        </colgroup>
        <thead>
          <tr>
            <th scope="col" colSpan={2}>
              <h2>Readout</h2>
            </th>
            <th scope="col">before</th>
            <th scope="col">after</th>
            <PinHeads pins={pins} />
            <th scope="col">change</th>
            <th scope="col">in per cent</th>
            <th scope="col">limit</th>
            <th scope="col" className="axis-cell">
              <MultiplesAxis />
              <span className="visually-hidden">change in multiples of the limit</span>
            </th>
            <th scope="col" className="end-cell">
              {failed ? <span role="alert">{failed} </span> : null}
              <button type="button" className="plain save" onClick={save} aria-label="save the readout as CSV">
                save CSV
              </button>
            </th>
          </tr>
        </thead>
        <tbody>
          {rows.map((row, place) => (
            <Row
              key={row.id}
              row={row}
              limits={workspace.limits}
              begins={rows[place - 1]?.group !== row.group}
              pins={pins}
              recorded={workspace.source.kind === 'recorded'}
              problems={problems}
            />
          ))}
          <tr>
            <th scope="row" className="question">
              {GROUP_WORDS.precision}
            </th>
            <th scope="row">
              noise of the score, {workspace.trials === 1 ? '1 trial' : `${exact(workspace.trials)} trials`},{' '}
              <Token
                id="noise"
                className="small"
                text={evaluation.noiseOf.from === 'trials' ? 'estimated from the trials' : 'noise model'}
                label="noise of single trials"
              />
              {precision && !isLinear(workspace.score.kind) ? ` ${HELD_MARK}` : ''}
            </th>
            {precision ? (
              <>
                <Cell value={valueWords(precision.before, precision.unit)} unit={precision.unit} />
                <Cell value={valueWords(precision.after, precision.unit)} unit={precision.unit} />
                <PinCells pins={pins} unit={precision.unit} read={(result) => result.precision?.after} />
                <Cell value={changeWords(precision.change, precision.unit)} unit={precision.unit} />
                <td className="percent">{signed((100 * precision.change) / precision.before, 0)} %</td>
                <td className="quiet">no limit</td>
                <td colSpan={2} className="verdict precision">
                  {typeof precision.equalTrialsFactor === 'number'
                    ? `equal-trials factor ${brief(precision.equalTrialsFactor)}, precision factor ${brief(precision.precisionFactor)}`
                    : `${precision.equalTrialsFactor}; precision factor ${brief(precision.precisionFactor)}`}
                  <Extrapolated part={evaluation.noiseOf.extrapolated} />
                </td>
              </>
            ) : (
              <SimulatedCells {...{ evaluation, pins }} state={simulated} problem={trialsProblem(workspace)} />
            )}
          </tr>
        </tbody>
      </table>
      {rows.some((row) => row.percentOf === 'largest') ? (
        <p className="footnote">
          * per cent of the waveform’s largest value, since the value before is small beside it.
        </p>
      ) : null}
      {precision && simulated?.noise ? <FoundAnew noise={simulated.noise} kind={workspace.score.kind} /> : null}
      <Locked locked={evaluation.locked} />
      <FailedPins pins={evaluation.pins} />
    </section>
  )
}

/** The noise of a latency or an area has no formula: it is simulated, and says how far the simulation itself may be off. */
function SimulatedCells(props: {
  evaluation: Evaluation
  pins: readonly DrawnPin[]
  state: ReturnType<typeof useSimulatedNoise>
  /** Why no average of that many trials can be simulated. */
  problem: string | null
}) {
  const { evaluation, pins, state, problem } = props
  const noise = state?.noise
  const { before, after } = evaluation.rows[0]
  if (!noise)
    return (
      <td colSpan={7 + pins.length} className="verdict quiet">
        {state?.reason ??
          (typeof before === 'number' && typeof after === 'number'
            ? (problem ?? 'being simulated …')
            : 'no score of both waveforms, so that it has no noise')}
      </td>
    )
  const { unit, precisionFactor, draws, missing } = noise
  const said = ({ value, standardError }: Estimate) => `${valueWords(value, unit)} ± ${brief(standardError, 1)}`
  const change = noise.after.value - noise.before.value
  return (
    <>
      <Cell value={said(noise.before)} unit={unit} />
      <Cell value={said(noise.after)} unit={unit} />
      {pins.map(({ index }) => (
        <td key={index} className="pin-cell">
          –
        </td>
      ))}
      <Cell value={changeWords(change, unit)} unit={unit} />
      <td className="percent">{signed((100 * change) / noise.before.value, 0)} %</td>
      <td className="quiet">no limit</td>
      <td colSpan={2} className="verdict precision">
        {precisionFactor
          ? `precision factor ${brief(precisionFactor.value)} ± ${brief(precisionFactor.standardError, 1)}; `
          : ''}
        {exact(draws)} simulated averages{missing > 0 ? `, ${exact(missing)} without such a score` : ''}
      </td>
    </>
  )
}

const HELD_MARK = '†'

/** A peak held at its moment has a formula for its noise; one that is looked for in every average has another noise, which is simulated. */
function FoundAnew({ noise, kind }: { noise: SimulatedNoise; kind: ScoreKind }) {
  const { before, after, unit, precisionFactor, draws } = noise
  const peak = kind === 'peak-amplitude'
  const said = ({ value, standardError }: Estimate) => `${valueWords(value, unit)} ± ${brief(standardError, 1)} ${unit}`
  return (
    <p className="footnote found-anew">
      {HELD_MARK} with {peak ? 'the peak held at its moment' : 'the samples on the stated side held fixed'}.{' '}
      {peak ? 'Found anew' : 'Taken anew'} in every average, as on the trade-off map, its noise is {said(before)} before
      and {said(after)} after
      {precisionFactor
        ? `, a precision factor of ${brief(precisionFactor.value)} ± ${brief(precisionFactor.standardError, 1)}`
        : ''}{' '}
      ({exact(draws)} simulated averages).
    </p>
  )
}

/** What the noise model holds that no number of trials averages out, and where the page counts it. */
function Locked({ locked }: { locked: Evaluation['locked'] }) {
  if (!locked) return null
  const { lines, score } = locked
  const names = list(lines.map(({ hz, amplitudeUv }) => `${exact(hz)} Hz, ${exact(amplitudeUv)} µV`))
  return (
    <p className="footnote locked-lines">
      Interference locked to the event ({names}) is not in these curves and rows; the trade-off map counts it as bias.
      {score
        ? ` It adds ${changeWords(score.before, 'µV')} µV to the score before the chain and ${changeWords(score.after, 'µV')} µV after it, with any number of trials.`
        : ''}
    </p>
  )
}

const isLinear = (kind: ScoreKind) => kind === 'mean' || kind === 'moment'

/** The mark of a noise that the trials are too short to show; the factors hang on the noise before as well. */
function Extrapolated({ part }: { part: Evaluation['noiseOf']['extrapolated'] }) {
  if (part === null || Math.max(part.before, part.after) <= EXTRAPOLATED_MARK) return null
  const [before, after] = [part.before, part.after].map((share) => `${fixed(100 * share, 0)} %`)
  const shares = before === after ? before : `${before} before, ${after} after`
  return <span className="over">; rests on extrapolated noise ({shares})</span>
}

function Cell({ value, unit }: { value: string; unit: string }) {
  const missing = /^[a-z]/.test(value)
  return (
    <td className={missing ? 'missing' : undefined}>
      {value}
      {missing ? null : <span className="unit">{unit}</span>}
    </td>
  )
}

interface RowProps {
  row: FidelityRow
  limits: Limits
  begins: boolean
  pins: DrawnPin[]
  recorded: boolean
  problems: readonly Problem[]
}

function Row({ row, limits, begins, pins, recorded, problems }: RowProps) {
  const limit = limits[row.id]
  const { name, where } = rowWords(row)
  const verdict = verdictOf(row, limit)
  return (
    <tr className={row.group === 'score' ? 'main' : undefined}>
      <th scope="row" className="question">
        {/* printed once for its rows, read out with each of them */}
        <span className={begins ? undefined : 'visually-hidden'}>{GROUP_WORDS[row.group]}</span>
      </th>
      <th scope="row">
        {name} <Where row={row} where={where} recorded={recorded} problems={problems} />
      </th>
      <Cell value={valueWords(row.before, row.unit)} unit={row.unit} />
      <Cell value={valueWords(row.after, row.unit)} unit={row.unit} />
      <PinCells pins={pins} unit={row.unit} read={({ rows }) => rows.find(({ id }) => id === row.id)?.after} />
      {row.change === null ? (
        <td className="quiet">–</td>
      ) : (
        <Cell value={changeWords(row.change, row.unit)} unit={row.unit} />
      )}
      <td
        className="percent"
        title={
          row.percentOf === 'largest' ? 'of the waveform’s largest value, since the value before is small' : undefined
        }
      >
        {row.percent === null ? '' : `${signed(row.percent, 0)} %${row.percentOf === 'largest' ? '*' : ''}`}
      </td>
      <td>
        <Token
          id={`limit:${row.id}`}
          className="small"
          text={
            limit
              ? `±${limit.unit === 'ms' || limit.unit === '%' ? exact(limit.value) : fixed(limit.value, limit.value < 0.1 ? 3 : 2)}`
              : 'no limit'
          }
          label={`limit of ${name}`}
        />
        <span className="unit">{limit?.unit ?? ''}</span>
      </td>
      <td className="dot-cell">
        <MultiplesDot verdict={verdict} />
      </td>
      <td className="verdict">
        <VerdictWords verdict={verdict} />
        {row.change === null && row.id === 'false-deflection' ? null : (
          <button
            type="button"
            className="word quiet-word trace-row"
            aria-label={`trace ${name} ${where} back`}
            onClick={() => openTrace(row.id)}
          >
            trace
          </button>
        )}
      </td>
    </tr>
  )
}

const MEASURE_TOKEN: Partial<Record<FigureId, string>> = {
  score: 'score-window',
  'mean-amplitude': 'measure:mean',
  'peak-amplitude': 'measure:peak',
}

/** Where the row is measured; a token once for each window that can be changed. */
function Where(props: { row: FidelityRow; where: string; recorded: boolean; problems: readonly Problem[] }) {
  const { row, where, recorded, problems } = props
  if (row.id === 'false-deflection' && recorded) {
    const stated = row.before !== 'onset not given'
    const { toMs } = row.label.window
    return (
      <>
        <Token
          id="onset"
          className="small"
          text={stated ? windowWords(toMs, toMs) : 'state the onset'}
          label="onset of the recorded waveform"
        />
        {stated && where ? `, ${where}` : ''}
      </>
    )
  }
  const token = MEASURE_TOKEN[row.id]
  if (token && row.id !== 'score') {
    return (
      <Token id={token} className="small" text={where} label="window of this row" bad={problemOf(problems, token)} />
    )
  }
  return <>{where}</>
}

function VerdictWords({ verdict }: { verdict: Verdict }) {
  switch (verdict.kind) {
    case 'kept':
      return <span className="kept">kept</span>
    case 'over':
      return (
        <span className="over">over limit{verdict.multiples === null ? '' : `, ${brief(verdict.multiples, 2)} ×`}</span>
      )
    case 'gone':
      return <span className="over">over limit: gone</span>
    case 'unknown':
      return <span className="quiet">nothing to compare</span>
    case 'no limit':
      return <span className="quiet">no limit set</span>
    case 'other unit':
      return <span className="quiet">the limit, in {verdict.unit}, does not apply</span>
  }
}
