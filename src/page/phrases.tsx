/** A sentence of plain text and tokens. */
import type { ReactNode } from 'react'
import { Token } from './token.tsx'

/** The sentence's parts as the words make them. */
export type PhrasePiece =
  | { kind: 'text'; text: string }
  | { kind: string; id: string; text: string; label: string; off?: boolean | undefined }

const isToken = (piece: PhrasePiece | undefined): piece is Extract<PhrasePiece, { id: string }> =>
  piece !== undefined && 'id' in piece

/** The comma or full stop that follows a token: it stays on the token's line. */
const leadingMark = (words: string) => /^[,.;:]/.exec(words)?.[0] ?? ''

interface PhrasesProps {
  pieces: readonly PhrasePiece[]
  /** Id of a token on the page. */
  idOf?: (id: string) => string
  /** Id of the message about a token. */
  badOf?: (id: string) => string | undefined
}

export function Phrases({ pieces, idOf = (id) => id, badOf }: PhrasesProps): ReactNode {
  return pieces.map((piece, place) => {
    if (!isToken(piece)) {
      const mark = isToken(pieces[place - 1]) ? leadingMark(piece.text) : ''
      return <span key={place}>{piece.text.slice(mark.length)}</span>
    }
    const next = pieces[place + 1]
    return (
      <span key={piece.id} className="phrase">
        <Token
          id={idOf(piece.id)}
          text={piece.text}
          label={piece.label}
          off={piece.kind === 'token' ? piece.off : undefined}
          bad={badOf?.(piece.id)}
          className={piece.kind === 'add' ? 'add' : ''}
        />
        {next?.kind === 'text' ? leadingMark(next.text) : ''}
      </span>
    )
  })
}
