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

/** A limit in a unit that the row no longer has (the score's kind was changed) counts as none. */
export function verdictOf(row: FidelityRow, limit: Limit | undefined): Verdict {
  if (!limit || (limit.unit !== row.unit && !(limit.unit === '%' && row.unit !== 'ms'))) return { kind: 'no limit' }
  const { kept, multiples } = judge(row, limit)
  if (kept === null) return { kind: 'unknown' }
  if (kept) return { kind: 'kept', multiples: multiples ?? 0 }
  return typeof row.after === 'string' ? { kind: 'gone' } : { kind: 'over', multiples }
}
