import { parentPort } from 'node:worker_threads'
import { applyChain } from '../../src/filter/apply-chain.ts'
import { designChain } from '../../src/filter/index.ts'
import { AVERAGES, BROAD_BAND, EPOCH, RATE, SAMPLES, noise, sweepByFiltering } from './workloads.ts'

/** One of two workers: does its half of W1 or W5p when asked. */
const averages = Array.from({ length: AVERAGES }, (_, a) => noise(EPOCH, a + 1))
const output = new Float64Array(SAMPLES)
let channels: Float64Array[] = []

parentPort!.on('message', (job: { id: string; half: number; shared?: SharedArrayBuffer[] }) => {
  if (job.shared) channels = job.shared.map((buffer) => new Float64Array(buffer, 0, SAMPLES))
  if (job.id === 'W1') {
    const chain = designChain(BROAD_BAND, RATE)
    for (const x of channels) applyChain(chain, x, 'epochs', output)
  }
  if (job.id === 'W5p') sweepByFiltering(averages, 'peak-amplitude', job.half * 160, job.half * 160 + 160)
  parentPort!.postMessage('done')
})
