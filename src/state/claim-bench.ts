/** Workers of the claims' own: one for claims, which answer at once, and one for late-only fits, which take seconds. */
import { courier } from '../jobs/index.ts'
import type { BenchApi } from './bench.worker.ts'
import { type ClaimRequest, runClaim } from './claim-run.ts'

const bench = (name: string) =>
  courier<BenchApi>(() => new Worker(new URL('./bench.worker.ts', import.meta.url), { type: 'module', name }))

const claims = bench('sidelobe claims')
const fits = bench('sidelobe late-only fits')

export function computeClaim(request: ClaimRequest, signal: AbortSignal): Promise<void> {
  const own = request.form.form === 'late-only' ? fits : claims
  return runClaim(request, (key, question, budgetMs) => own.call('claimSlice', [key, question, budgetMs]), signal)
}
