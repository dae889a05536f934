/** The paragraph that states what is done to the data; its phrases are tokens. */
import { useMemo } from 'react'
import type { Problem } from '../state/evaluation.ts'
import { type Protocol, protocolLine, protocolText } from '../words/index.ts'
import { Phrases } from './phrases.tsx'

interface ProtocolLineProps {
  protocol: Protocol
  problems: readonly Problem[]
}

/** Whether a problem belongs to a token: it names the token itself, or only the token's stage. */
function concerns(problem: Problem, id: string): boolean {
  return problem.at === id || (problem.at.split(':').length === 2 && id === `${problem.at}:design`)
}

const messageId = (place: number) => `problem-${place}`

/** Id of the message about a token; undefined where there is none. */
export function problemOf(problems: readonly Problem[], id: string): string | undefined {
  const place = problems.findIndex((problem) => concerns(problem, id))
  return place < 0 ? undefined : messageId(place)
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
        <Phrases pieces={pieces} badOf={(id) => problemOf(problems, id)} />
      </p>
      {problems.map((problem, place) => (
        <p key={problem.at + problem.message} id={messageId(place)} className="message" role="alert">
          {problem.message}
        </p>
      ))}
    </div>
  )
}
