export { type Courier, courier, type WorkerApi } from './courier.ts'
