/** The page's worker: reads tables and evaluates what would hold up the page. It imports only what needs no page. */
import { expose } from 'comlink'
import { readTable } from '../files/index.ts'
import { evaluate } from './evaluate.ts'
import { mapSlice } from './map-worker.ts'
import { exportedCode, writeUpWords } from './write-up.ts'

const api = { readTable, evaluate, mapSlice, exportedCode, writeUpWords }
export type BenchApi = typeof api
expose(api)
