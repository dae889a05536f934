export { CALIBRATION } from '../evidence/calibration-table.ts'
