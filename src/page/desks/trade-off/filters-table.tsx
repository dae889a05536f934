/** The filters that matter, side by side in numbers: at the cursor, in the chain, and the best of the cursor's row. */
import type { TradeOffLimits } from '../../../evidence/trade-off-answer.ts'
import type { CellFigures } from '../../../evidence/trade-off-figures.ts'
import type { Candidate } from '../../../evidence/trade-off-candidate.ts'
import { verdictOnLimits } from '../../../state/map-figures.ts'
import { brief, exact, rollOffWords } from '../../../words/index.ts'
import { WordButton } from '../../fields.tsx'
import { TableHead } from '../table-head.tsx'
import { changeText, factorText, type MapUnit, sizeText } from './map-words.ts'

export interface NamedFilter {
  name: string
  cell: CellFigures | null
  candidate: Candidate
  inChain: boolean
  onPick: () => void
}

interface FiltersTableProps {
  filters: readonly NamedFilter[]
  limits: TradeOffLimits
  unit: MapUnit
  /** How many maps the CSV holds. */
  maps: number
  csv: () => string
}

export function FiltersTable({ filters, limits, unit, maps, csv }: FiltersTableProps) {
  const limited = Object.keys(limits).length > 0
  return (
    <>
      <TableHead
        title="Filters"
        told={`the CSV holds every filter of the ${maps > 1 ? 'maps' : 'map'}`}
        what={maps > 1 ? 'the maps' : 'the map'}
        fileName="trade-off-map"
        csv={csv}
      />
      <div className="scroll-x">
        <table className="desk-table filters-table">
          <caption className="visually-hidden">Filters of the map in numbers</caption>
          <thead>
            <tr>
              <th scope="col">filter</th>
              <th scope="col">cutoff</th>
              <th scope="col">roll-off</th>
              <th scope="col">bias</th>
              <th scope="col">noise</th>
              <th scope="col">total error</th>
              <th scope="col">precision factor</th>
              <th scope="col">equal-trials factor</th>
              <th scope="col">limits</th>
              <th scope="col">
                <span className="visually-hidden">into the chain</span>
              </th>
            </tr>
          </thead>
          <tbody>
            {filters.map(({ name, cell, candidate, inChain, onPick }) => (
              <tr key={name}>
                <th scope="row">{name}</th>
                <td>{cell ? `${exact(cell.cutoffHz)} Hz` : '–'}</td>
                <td>{cell ? rollOffWords(candidate, cell.rollOff) : '–'}</td>
                <Size value={cell?.bias} unit={unit} words={changeText} />
                <Size value={cell?.noise} unit={unit} words={sizeText} />
                <Size value={cell?.totalError} unit={unit} words={sizeText} />
                <td>{factor(cell?.precisionFactor)}</td>
                <td>{factor(cell?.equalTrialsFactor)}</td>
                <td>
                  <Verdict cell={cell} limits={limits} limited={limited} />
                </td>
                <td>
                  {inChain ? (
                    <span className="quiet">in the chain</span>
                  ) : cell && cell.error === null ? (
                    <WordButton
                      label={`put ${name}, ${exact(cell.cutoffHz)} Hz, ${rollOffWords(candidate, cell.rollOff)}, into the chain`}
                      onPress={onPick}
                    >
                      use
                    </WordButton>
                  ) : null}
                </td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
    </>
  )
}

const factor = (value: number | null | undefined) => (value === null || value === undefined ? '–' : factorText(value))

function Size(props: { value: number | null | undefined; unit: MapUnit; words: (value: number) => string }) {
  const { value, unit, words } = props
  if (value === null || value === undefined) return <td className="quiet">–</td>
  return (
    <td>
      {words(value)}
      <span className="unit">{unit}</span>
    </td>
  )
}

function Verdict({ cell, limits, limited }: { cell: CellFigures | null; limits: TradeOffLimits; limited: boolean }) {
  if (cell && cell.error !== null) return <span className="over">cannot be used</span>
  if (!cell || !limited) return <span className="quiet">–</span>
  const { kept, tightest } = verdictOnLimits(cell, limits)
  if (kept) return <span className="kept">kept</span>
  const by = tightest && Number.isFinite(tightest.multiples) ? `, ${brief(tightest.multiples, 2)} ×` : ''
  return <span className="over">over limit{by}</span>
}
