/** The page's worker: reads tables and evaluates what would hold up the page. It imports only what needs no page. */
import { expose } from 'comlink'
import { readTable } from '../files/index.ts'
import { claimSlice } from './claim-worker.ts'
import { evaluate } from './evaluate.ts'
import { mapSlice } from './map-worker.ts'
import { noiseSlice } from './simulated-noise.ts'
import { exportedCode, writeUpWords } from './write-up.ts'

const api = { readTable, evaluate, mapSlice, claimSlice, noiseSlice, exportedCode, writeUpWords }
export type BenchApi = typeof api
expose(api)
