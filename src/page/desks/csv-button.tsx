/** Saves a table as CSV. */
import { useState } from 'react'
import { downloadBlob } from '../../plot/index.ts'

interface CsvButtonProps {
  /** Name of the table: "the shares". */
  what: string
  fileName: string
  /** The file's text, made when the user saves. */
  csv: () => string
}

export function CsvButton({ what, fileName, csv }: CsvButtonProps) {
  const [failed, setFailed] = useState<string | null>(null)
  const save = () => {
    try {
      // The mark tells spreadsheets that the file is UTF-8; without it they misread µ.
      downloadBlob(new Blob(['\ufeff', csv()], { type: 'text/csv' }), `${fileName}.csv`)
      setFailed(null)
    } catch (error) {
      setFailed(`This could not be saved: ${error instanceof Error ? error.message : String(error)}`)
    }
  }
  return (
    <>
      {failed ? (
        <span role="alert" className="over">
          {failed}{' '}
        </span>
      ) : null}
      <button type="button" className="plain save" onClick={save} aria-label={`save ${what} as CSV`}>
        save CSV
      </button>
    </>
  )
}
