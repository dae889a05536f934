/** A number of a claim stays on one line with its unit. */
import type { PhrasePiece } from '../../phrases.tsx'

const NUMBER_AND_UNIT = /(\d) (?=(?:Hz|ms|dB|µV|%)(?![A-Za-z]))/g

export const unbrokenText = (words: string) => words.replace(NUMBER_AND_UNIT, '$1\u00a0')

/** The same of a sentence, whose amount and unit may be tokens of their own with nothing but a space between them. */
export function unbroken<Piece extends PhrasePiece>(pieces: readonly Piece[]): Piece[] {
  return pieces.map((piece, place) => {
    const amount = pieces[place - 1]
    const unit = pieces[place + 1]
    const between = piece.text === ' ' && /\d$/.test(amount?.text ?? '') && /^(?:ms|µV|%)/.test(unit?.text ?? '')
    return { ...piece, text: between ? '\u00a0' : unbrokenText(piece.text) }
  })
}
