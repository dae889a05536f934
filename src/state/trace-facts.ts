/** What the trace-back desk asks of the core. The page reaches the evidence room through this. */
export { moveBoundary, removeBoundary, splitStretch, type Stretches } from '../evidence/stretches.ts'
export { type MomentRow, shareDensity } from '../evidence/trace-by-moment.ts'
