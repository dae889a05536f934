/** Title line of a desk's table: name, what it shows, and saving it. */
import type { ReactNode, RefObject } from 'react'
import { CsvButton } from './csv-button.tsx'

interface TableHeadProps {
  title: string
  titleRef?: RefObject<HTMLHeadingElement | null>
  told: ReactNode
  children?: ReactNode
  what: string
  fileName: string
  csv: () => string
}

export function TableHead({ title, titleRef, told, children, what, fileName, csv }: TableHeadProps) {
  return (
    <div className="figure-head table-head">
      <h2 ref={titleRef} tabIndex={titleRef ? -1 : undefined}>
        {title}
      </h2>
      <span className="told">{told}</span>
      {children}
      <span className="end">
        <CsvButton {...{ what, fileName, csv }} />
      </span>
    </div>
  )
}
