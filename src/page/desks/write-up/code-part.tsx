/** The chain as code or coefficients, as it will stand in the file. */
import { useState } from 'react'
import { CODE_FILE, type CodeFormat, codeQuestion } from '../../../state/write-up.ts'
import { askForCode } from '../../../state/write-up-bench.ts'
import { exact, type WriteUpFacts } from '../../../words/index.ts'
import { Choice, WordButton } from '../../fields.tsx'
import { TakeText } from './take-text.tsx'
import { useAnswer } from './use-answer.ts'

const FORMATS: readonly { value: CodeFormat; text: string }[] = [
  { value: 'python', text: 'Python' },
  { value: 'octave', text: 'Octave' },
  { value: 'r', text: 'R' },
  { value: 'julia', text: 'Julia' },
  { value: 'json', text: 'coefficients, JSON' },
  { value: 'csv', text: 'coefficients, CSV' },
]

const TYPES: Record<CodeFormat, string> = {
  python: 'text/x-python',
  octave: 'text/x-octave',
  r: 'text/x-r',
  julia: 'text/x-julia',
  json: 'application/json',
  csv: 'text/csv',
}

const CHECKED = 'filter random and real waveforms with them, and hold the output to the page’s own'
const NOTES: Record<CodeFormat, string> = {
  python: `Needs NumPy and SciPy. Run alone, the file checks itself. This project’s own tests run such files: they ${CHECKED}.`,
  octave: `Needs no package. Called without an argument, the file checks itself. This project’s own tests run such files: they ${CHECKED}.`,
  r: `Needs no package beyond base R. Run alone, the file checks itself. This project’s own tests run such files: they ${CHECKED}.`,
  julia:
    'Base Julia. Not run here: this project’s own tests do not run Julia. Run alone, the file checks itself: do so before use.',
  json: 'Sections are rows b0 b1 b2 a0 a1 a2 of one pass, a0 = 1; every number reads back to the same double. How ends are handled is in the methods paragraph and in the code.',
  csv: 'A row for each section (b0 b1 b2 a0 a1 a2 of one pass) or tap (in b0); every number reads back to the same double.',
}

/** More letters than these are saved and copied, but not shown. */
const SHOWN = 60_000

interface CodePartProps {
  facts: WriteUpFacts
  /** The facts are not those of the sentence any more: their code is not taken away. */
  old: boolean
}

export function CodePart({ facts, old }: CodePartProps) {
  const [format, setFormat] = useState<CodeFormat>('python')
  const question = codeQuestion(facts, format)
  const answer = useAnswer(JSON.stringify(question), async (signal) => ({
    format,
    code: await askForCode(question, signal),
  }))
  const { value, failure } = answer
  const stale = answer.stale || old
  const name = FORMATS.find((entry) => entry.value === format)?.text ?? format
  // another language's text under this one's name would be taken for it
  const code = value?.format === format ? value.code : null
  const shown = code === null ? '' : beginning(code)
  return (
    <section aria-label="Code" className="write-up-part" tabIndex={-1}>
      <div className="figure-head">
        <h2>Code</h2>
        <Choice label="language of the code" value={format} options={FORMATS} onChange={setFormat} />
        <TakeText
          what={`the ${name} file`}
          text={stale ? null : code}
          fileName={CODE_FILE[format]}
          type={TYPES[format]}
        />
      </div>
      <p className="small quiet">{NOTES[format]}</p>
      {failure ? (
        <p className="small over" role="alert">
          This could not be written: {failure} <WordButton onPress={answer.again}>try again</WordButton>
        </p>
      ) : null}
      <section
        className={stale ? 'code stale' : 'code'}
        // biome-ignore lint/a11y/noNoninteractiveTabindex: a scrolling text is read by the arrow keys
        tabIndex={0}
        aria-label={`Text of ${CODE_FILE[format]}`}
        aria-busy={stale}
      >
        <pre>{code === null && !failure ? 'Writing …' : shown}</pre>
      </section>
      {code !== null && shown.length < code.length ? (
        <p className="small quiet">
          The first {exact(lines(shown))} of {exact(lines(code))} lines; copy and save take all of them.
        </p>
      ) : null}
    </section>
  )
}

const lines = (text: string) => text.split('\n').length - 1

/** Whole lines from the start, as many as are shown. */
export function beginning(code: string): string {
  return code.length <= SHOWN ? code : code.slice(0, code.lastIndexOf('\n', SHOWN) + 1)
}
