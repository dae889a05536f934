export { type Courier, courier, type WorkerApi } from './courier.ts'
export { type Pool, pool, poolSize } from './pool.ts'
