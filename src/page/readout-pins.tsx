/** The columns of the readout that belong to pinned chains: what each of them makes of the figure, between after and change. */
import type { FidelityRow } from '../evidence/fidelity.ts'
import type { Evaluation } from '../state/evaluation.ts'
import { valueWords } from '../words/index.ts'
import { type DrawnPin, PinSample } from './pin-line.tsx'

export function PinColumns({ pins }: { pins: readonly DrawnPin[] }) {
  return pins.map(({ index }) => <col key={index} className="col-pin" />)
}

export function PinHeads({ pins }: { pins: readonly DrawnPin[] }) {
  return pins.map(({ index, result }) => (
    <th key={index} scope="col" className="pin-head" title={result.name}>
      <PinSample index={index} />
      <span className="visually-hidden">after the pinned </span>
      <span className="pin-name">{result.name}</span>
    </th>
  ))
}

interface PinCellsProps {
  pins: readonly DrawnPin[]
  unit: FidelityRow['unit']
  /** The pin's value, or why there is none; undefined where the row has no counterpart. */
  read: (result: DrawnPin['result']) => FidelityRow['after'] | undefined
}

export function PinCells({ pins, unit, read }: PinCellsProps) {
  return pins.map(({ index, result }) => {
    const value = read(result)
    return (
      <td key={index} className="pin-cell">
        {value === undefined ? '–' : valueWords(value, unit)}
        {typeof value === 'number' ? <span className="unit">{unit}</span> : null}
      </td>
    )
  })
}

/** Why a pinned chain has no column. */
export function FailedPins({ pins }: { pins: Evaluation['pins'] }) {
  return pins.map((pin, i) =>
    'reason' in pin ? (
      <p key={i} className="footnote">
        No column for the pinned {pin.name}: {pin.reason}
      </p>
    ) : null,
  )
}
