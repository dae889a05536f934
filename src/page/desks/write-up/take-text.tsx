/** Takes a text away: copied, which is said aloud, or saved as a file. */
import { useEffect, useState } from 'react'
import { downloadBlob } from '../../../plot/index.ts'

interface TakeTextProps {
  /** What it is: "the methods paragraph". */
  what: string
  /** The text of the moment; null while there is none. */
  text: string | null
  fileName: string
  type: string
}

export function TakeText({ what, text, fileName, type }: TakeTextProps) {
  const [said, setSaid] = useState<{ words: string; failed: boolean } | null>(null)
  // what was copied is another text as soon as this one changes
  // biome-ignore lint/correctness/useExhaustiveDependencies: see above
  useEffect(() => setSaid(null), [text])
  const copy = async () => {
    try {
      await navigator.clipboard.writeText(text ?? '')
      setSaid({ words: 'copied', failed: false })
    } catch {
      setSaid({ words: 'The browser did not allow copying: save it, or select the text and copy it.', failed: true })
    }
  }
  const save = () => {
    try {
      downloadBlob(new Blob([text ?? ''], { type }), fileName)
      setSaid({ words: `saved as ${fileName}`, failed: false })
    } catch (error) {
      setSaid({ words: `This could not be saved: ${error instanceof Error ? error.message : error}`, failed: true })
    }
  }
  return (
    <span className="end take">
      <span role="status" className={said?.failed ? 'over' : 'quiet'}>
        {said?.words}
      </span>
      <button
        type="button"
        className="word"
        disabled={text === null}
        onClick={() => void copy()}
        aria-label={`copy ${what}`}
      >
        copy
      </button>
      <button type="button" className="word" disabled={text === null} onClick={save} aria-label={`save ${what}`}>
        save
      </button>
    </span>
  )
}
