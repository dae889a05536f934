export { brief, exact, fixed, list, parseNumber, signed } from './number.ts'
export { componentsWords, type Protocol, protocolLine, protocolText, scoreWords, windowWords } from './protocol-line.ts'
export { meaningWords, PASS_WORD, type Piece, stageName, stagePieces, stageShortName, WINDOW_WORD } from './stage-words.ts'
