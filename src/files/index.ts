/** Files: bytes to data and back. */

export {
  type AmplitudeUnit,
  type DecimalSeparator,
  type Delimiter,
  type Guess,
  type SingleWaveform,
  type Table,
  type TableOptions,
  type TableRefusal,
  type TableWaveform,
  type TimeUnit,
  trialsOf,
  unnamedChannel,
  unnamedCondition,
  waveformOf,
} from './table.ts'
export { fewestSamples, largestTable, readTable } from './read-table.ts'
export { isElectrodeName } from './electrode-names.ts'
export { tableToCsv } from './write-table.ts'
