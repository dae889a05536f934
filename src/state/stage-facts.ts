/** What an editor must know about a stage before anything is evaluated. The page reaches the filter room through this. */
export { hzToTimeConstant, timeConstantToHz } from '../filter/amplifier.ts'
export { designCutoffsHz } from '../filter/cutoff-meaning.ts'
export { causalTwin, zeroPhaseTwin } from '../filter/twins.ts'
