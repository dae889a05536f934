/** The paragraph that states what is done to the data; its phrases are tokens. */
import { useMemo } from 'react'
import type { Problem } from '../state/evaluation.ts'
import { type Protocol, protocolLine, protocolText } from '../words/index.ts'
import { Token } from './token.tsx'

interface ProtocolLineProps {
  protocol: Protocol
  problems: readonly Problem[]
}

/** Whether a problem belongs to a token: it names the token itself, or only the token's stage. */
function concerns(problem: Problem, id: string): boolean {
  return problem.at === id || (problem.at.split(':').length === 2 && id === `${problem.at}:design`)
}

export function ProtocolLine({ protocol, problems }: ProtocolLineProps) {
  const pieces = useMemo(() => protocolLine(protocol), [protocol])
  return (
    <div>
      <p
        className="protocol"
        onCopy={(event) => {
          const chosen = document.getSelection()
          // Copied as a whole the paragraph leaves out the page's own additions.
          if (!chosen || !event.currentTarget.contains(chosen.anchorNode)) return
          const whole = chosen.toString().replace(/\s+/g, ' ').trim().length > 40
          if (!whole) return
          event.clipboardData.setData('text/plain', protocolText(pieces))
          event.preventDefault()
        }}
      >
        {pieces.map((piece, place) => {
          // biome-ignore lint/suspicious/noArrayIndexKey: a phrase is its place in the sentence
          if (piece.kind === 'text') return <span key={place}>{piece.text}</span>
          return (
            <Token
              key={piece.id}
              id={piece.id}
              text={piece.text}
              label={piece.label}
              off={piece.kind === 'token' ? piece.off : undefined}
              bad={problems.some((problem) => concerns(problem, piece.id))}
              className={piece.kind === 'add' ? 'add' : ''}
            />
          )
        })}
      </p>
      {problems.map((problem) => (
        <p key={problem.at + problem.message} className="message" role="alert">
          {problem.message}
        </p>
      ))}
    </div>
  )
}
