/** A line of the user's own words. */
import { useEffect, useId, useRef, useState } from 'react'

interface TextFieldProps {
  label: string
  hint?: string
  value: string
  onChange: (text: string) => void
  onEnd: () => void
}

export function TextField({ label, hint, value, onChange, onEnd }: TextFieldProps) {
  const id = useId()
  const [draft, setDraft] = useState(value)
  const last = useRef(value)
  // What changed elsewhere (undo) replaces what stands in the field; what is typed here does not fight the typing.
  useEffect(() => {
    if (value === last.current) return
    last.current = value
    setDraft(value)
  }, [value])
  return (
    <div className="field claim-text">
      <label htmlFor={id} className="small quiet">
        {label}
      </label>
      <input
        id={id}
        type="text"
        maxLength={400}
        autoComplete="off"
        placeholder={hint}
        value={draft}
        onChange={(event) => {
          setDraft(event.target.value)
          last.current = event.target.value
          onChange(event.target.value)
        }}
        onBlur={onEnd}
      />
    </div>
  )
}
