import type { FigureId } from '../../../erp/figure.ts'
import { say } from '../../../state/store.ts'
import { asking } from '../../../state/trace-actions.ts'
import { openDesk } from '../open-desk.ts'

/** Opens the trace-back desk with a row of the readout: its value after the chain, or its change where that was asked before. */
export function openTrace(row: FigureId): void {
  say((w) => {
    const { question } = w.trace
    return asking(w, { kind: 'row', row, of: question.kind === 'row' && question.row === row ? question.of : 'after' })
  })
  openDesk('trace')
}
