export { brief, exact, fixed, list, parseNumber, signed } from './number.ts'
export { type RemarkFacts, remarkWords } from './remark.ts'
export { changeWords, decimalsOf, rowWords, valueWords } from './row-words.ts'
export { inWords, partOfField } from './problem.ts'
export { componentsWords, type Protocol, protocolLine, protocolText, scoreWords, windowWords } from './protocol-line.ts'
export {
  meaningWords,
  PASS_WORD,
  type Piece,
  stageName,
  stagePieces,
  stageShortName,
  WINDOW_WORD,
} from './stage-words.ts'
