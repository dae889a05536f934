/** What the trade-off desk says of filters, limits and cells. */
import type { LimitName, TradeOffLimits } from '../../../evidence/trade-off-answer.ts'
import type { CellFigures } from '../../../evidence/trade-off-figures.ts'
import type { Candidate } from '../../../evidence/trade-off-candidate.ts'
import { verdictOnLimits } from '../../../state/map-figures.ts'
import { type FilterKind, mapPlace } from '../../../state/trade-off.ts'
import type { TradeOff, Workspace } from '../../../state/workspace.ts'
import { brief, exact, inWords, list, measured, rollOffWords, signed } from '../../../words/index.ts'

export type MapUnit = 'µV' | 'ms' | 'µV·s'

export const capital = (text: string) => text[0].toUpperCase() + text.slice(1)

/** A kind of filter whose pass is clear: "Butterworth run forward", "zero-phase windowed sinc" */
export function kindWords({ design, direction }: FilterKind): string {
  if (design === 'butterworth') return `Butterworth run ${direction === 'both' ? 'both ways' : 'forward'}`
  return `${direction === 'both' ? 'zero-phase' : 'causal'} windowed sinc`
}

export function rangeWords(candidate: Candidate, { fromHz, toHz }: TradeOff, rollOffs: readonly number[]): string {
  const first = exact(rollOffs[0])
  const last = exact(rollOffs[rollOffs.length - 1])
  const rows = first === last ? first : `${first} to ${last}`
  const name = candidate.design === 'butterworth' ? `order ${rows}` : `transition width ${rows} Hz`
  return `${exact(fromHz)} to ${exact(toHz)} Hz, ${name}`
}

export const LIMIT_WORD: Record<LimitName, string> = {
  bias: 'bias',
  noise: 'noise',
  totalError: 'total error',
  latencyShiftMs: 'latency shift',
}

export const limitUnit = (limit: LimitName, unit: MapUnit) => (limit === 'latencyShiftMs' ? 'ms' : unit)

export function limitWords(limits: TradeOffLimits, unit: MapUnit): string {
  const said = (Object.keys(LIMIT_WORD) as LimitName[])
    .filter((name) => limits[name] !== undefined)
    .map((name) => `${LIMIT_WORD[name]} within ${exact(limits[name] as number)} ${limitUnit(name, unit)}`)
  return said.length === 0 ? 'no limit' : list(said)
}

/** Where the map's filters stand; said where the chain holds anything, since the rest of it counts too. */
export function placeWords(workspace: Workspace): string {
  if (workspace.chain.length === 0) return ''
  const { at, replaces } = mapPlace(workspace)
  return replaces ? `, in place of stage ${at + 1}` : ', as a new last stage'
}

export function waveformsWords({ source, tradeOff }: Workspace): string {
  if (source.kind === 'recorded')
    return tradeOff.waveform === 'average' ? 'the average over all conditions' : 'the recorded waveform'
  const { robust } = tradeOff
  if (!robust) return 'the waveform as built'
  return tradeOff.over === 'worst' ? 'the worst of 65 waveforms' : 'the typical one of 65 waveforms'
}

export const layerUnit = (layer: TradeOff['layer'], unit: MapUnit) =>
  layer === 'equal-trials factor' ? '' : layer === 'latency shift' ? 'ms' : unit

/** "0.15 Hz, order 2: bias −0.12 µV, noise 0.71 µV, total error 0.72 µV, …; keeps the limits" */
export function cellWords(
  cell: CellFigures | null,
  candidate: Candidate,
  limits: TradeOffLimits,
  unit: MapUnit,
  noiseError: number | null,
): string {
  if (!cell) return 'not computed yet'
  const name = `${exact(cell.cutoffHz)} Hz, ${rollOffWords(candidate, cell.rollOff)}`
  if (cell.error !== null) return `${name}: cannot be used. ${inWords(cell.error).replace(/\.$/, '')}`
  const parts: string[] = []
  if (cell.bias !== null) parts.push(`bias ${changeText(cell.bias)} ${unit}`)
  if (cell.noise !== null)
    parts.push(`noise ${sizeText(cell.noise)}${noiseError === null ? '' : ` ± ${brief(noiseError, 1)}`} ${unit}`)
  if (cell.totalError !== null) parts.push(`total error ${sizeText(cell.totalError)} ${unit}`)
  if (cell.precisionFactor !== null) parts.push(`precision factor ${factorText(cell.precisionFactor)}`)
  if (cell.equalTrialsFactor !== null) parts.push(`equal-trials factor ${factorText(cell.equalTrialsFactor)}`)
  if (cell.latencyShiftMs !== null) parts.push(`latency shift ${changeText(cell.latencyShiftMs)} ms`)
  if (cell.missingShare > 0) parts.push(`no such score in ${brief(100 * cell.missingShare, 2)} % of the averages`)
  const verdict = verdictOnLimits(cell, limits)
  const limited = Object.keys(limits).length > 0
  return `${name}: ${parts.length > 0 ? parts.join(', ') : 'no such score'}${limited ? `; ${verdict.kept ? 'keeps the limits' : 'over a limit'}` : ''}`
}

/** Three significant digits with a sign. */
export function changeText(value: number): string {
  const size = Math.abs(value)
  const decimals = size === 0 ? 2 : Math.max(0, Math.min(4, 2 - Math.floor(Math.log10(size))))
  return signed(value, decimals)
}

/** Three significant digits of a size; what rounding left of nothing needs no zeros. */
export const sizeText = (size: number) => (size === 0 ? '0' : size < 0.0001 ? 'below 0.0001' : measured(size, 3))

/** A factor that says "as good as nothing" needs no zeros. */
export const factorText = (value: number) => (value < 0.001 ? 'below 0.001' : measured(value, 3))
