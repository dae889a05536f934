import type { Limit } from '../erp/figure.ts'
import { type FidelityRow, judge } from '../evidence/fidelity.ts'

/** How a row of the readout stands to its limit. */
export type Verdict =
  | { kind: 'kept'; multiples: number }
  | { kind: 'over'; multiples: number | null }
  /** It existed before the chain and does not after it. */
  | { kind: 'gone' }
  | { kind: 'unknown' }
  | { kind: 'no limit' }
  /** One is set, but in a unit that the row does not have (the score's kind was changed): it limits nothing. */
  | { kind: 'other unit'; unit: Limit['unit'] }

/** Whether a limit says anything of values in this unit: it is in the same one, or in per cent of what has a size. */
export const limitFits = (limit: Limit, unit: Limit['unit']) =>
  limit.unit === unit || (limit.unit === '%' && unit !== 'ms')

export function verdictOf(row: FidelityRow, limit: Limit | undefined): Verdict {
  if (!limit) return { kind: 'no limit' }
  if (!limitFits(limit, row.unit)) return { kind: 'other unit', unit: limit.unit }
  const { kept, multiples } = judge(row, limit)
  if (kept === null) return { kind: 'unknown' }
  if (kept) return { kind: 'kept', multiples: multiples ?? 0 }
  return typeof row.after === 'string' ? { kind: 'gone' } : { kind: 'over', multiples }
}
