/** The few form parts that every token editor is made of. All of them report each change at once. */
import { type ReactNode, useEffect, useId, useRef, useState } from 'react'
import { beginGesture } from '../state/store.ts'
import { exact, parseNumber } from '../words/index.ts'

interface NumberFieldProps {
  label: string
  unit?: string
  value: number
  /** What arrow keys add; for a ratio step give `ratio`. */
  step?: number
  /** Arrow keys multiply by this instead of adding `step`. */
  ratio?: number
  /** Shown in words under the field; the value itself is kept. */
  error?: string | undefined
  /** Called with NaN when the field holds no number. */
  onChange: (value: number) => void
  hideLabel?: boolean
}

const roundTo = (value: number, digits: number) => Number(value.toPrecision(digits))

export function NumberField({ label, unit, value, step = 1, ratio, error, onChange, hideLabel }: NumberFieldProps) {
  const id = useId()
  const [draft, setDraft] = useState(() => exact(value))
  const [bad, setBad] = useState<string | null>(null)
  const last = useRef(value)
  // A value that changed elsewhere (a drag, undo) replaces what stands in the field; one typed here does not fight the typing.
  useEffect(() => {
    if (value !== last.current) {
      last.current = value
      setDraft(exact(value))
      setBad(null)
    }
  }, [value])
  const say = (text: string) => {
    setDraft(text)
    const number = parseNumber(text)
    if (Number.isNaN(number)) {
      setBad(text.trim() === '' ? `${label} is empty: write a number` : `“${text}” is no number`)
      return
    }
    setBad(null)
    last.current = number
    onChange(number)
  }
  const nudge = (direction: 1 | -1, coarse: boolean) => {
    const base = bad ? last.current : parseNumber(draft)
    const next = ratio
      ? roundTo(base * (coarse ? ratio ** 10 : ratio) ** direction, 4)
      : roundTo(base + direction * step * (coarse ? 10 : 1), 12)
    say(exact(next))
  }
  const message = bad ?? error
  return (
    <div className="field">
      <label htmlFor={id} className={hideLabel ? 'visually-hidden' : 'field-label'}>
        {label}
      </label>
      <span className="field-row">
        <input
          id={id}
          className="number"
          inputMode="decimal"
          autoComplete="off"
          value={draft}
          aria-invalid={message ? true : undefined}
          aria-describedby={message ? `${id}-error` : undefined}
          onChange={(event) => say(event.target.value)}
          onBlur={() => {
            if (!bad) return
            setDraft(exact(last.current))
            setBad(null)
          }}
          onKeyDown={(event) => {
            if (event.key !== 'ArrowUp' && event.key !== 'ArrowDown') return
            event.preventDefault()
            nudge(event.key === 'ArrowUp' ? 1 : -1, event.shiftKey)
          }}
        />
        {unit ? <span className="quiet unit">{unit}</span> : null}
      </span>
      {message ? (
        <span className="field-error" id={`${id}-error`} role="alert">
          {message}
        </span>
      ) : null}
    </div>
  )
}

interface SliderFieldProps {
  label: string
  unit: string
  value: number
  min: number
  max: number
  scale: 'linear' | 'log'
  ticks: readonly number[]
  /** Smallest step of a linear slider. */
  step?: number
  onChange: (value: number) => void
  onEnd?: () => void
}

/** A slider over a linear or a logarithmic range, its ticks written under it. */
export function SliderField({
  label,
  unit,
  value,
  min,
  max,
  scale,
  ticks,
  step = 1,
  onChange,
  onEnd,
}: SliderFieldProps) {
  const steps = 1000
  const toShare = (v: number) => (scale === 'log' ? Math.log(v / min) / Math.log(max / min) : (v - min) / (max - min))
  const fromShare = (share: number) =>
    scale === 'log' ? roundTo(min * (max / min) ** share, 3) : Math.round((min + share * (max - min)) / step) * step
  const share =
    Number.isFinite(value) && (scale === 'linear' || value > 0) ? Math.min(1, Math.max(0, toShare(value))) : 0
  return (
    <div className="slider">
      <input
        type="range"
        aria-label={label}
        aria-valuetext={`${exact(value)} ${unit}`}
        min={0}
        max={steps}
        step={1}
        value={Math.round(share * steps)}
        style={{ '--share': `${share * 100}%` } as React.CSSProperties}
        onChange={(event) => onChange(roundTo(fromShare(Number(event.target.value) / steps), 10))}
        onKeyDown={(event) => {
          const direction = { ArrowRight: 1, ArrowUp: 1, ArrowLeft: -1, ArrowDown: -1 }[event.key]
          if (!direction) return
          event.preventDefault()
          const coarse = event.shiftKey ? 10 : 1
          const next = scale === 'log' ? value * 1.02 ** (direction * coarse) : value + direction * step * coarse
          onChange(Math.min(max, Math.max(min, roundTo(next, scale === 'log' ? 3 : 10))))
        }}
        onPointerDown={beginGesture}
        onPointerUp={onEnd}
        onPointerCancel={onEnd}
        onKeyUp={onEnd}
      />
      <div className="slider-ticks" aria-hidden="true">
        {ticks
          .filter((tick) => tick >= min && tick <= max)
          .map((tick) => (
            <span key={tick} style={{ left: `calc(9px + (100% - 18px) * ${toShare(tick)})` }}>
              {exact(tick)}
            </span>
          ))}
      </div>
    </div>
  )
}

interface ChoiceProps<T extends string> {
  label: string
  value: T
  options: readonly { value: T; text: string; hint?: string; disabled?: boolean }[]
  onChange: (value: T) => void
  stacked?: boolean
}

/** One of a few, as underlined words; a radio group for keyboard and screen reader. */
export function Choice<T extends string>({ label, value, options, onChange, stacked }: ChoiceProps<T>) {
  const name = useId()
  return (
    <fieldset className={stacked ? 'choice stacked' : 'choice'}>
      <legend className="visually-hidden">{label}</legend>
      {options.map((option) => (
        <label key={option.value} className={option.value === value ? 'chosen' : undefined}>
          <input
            type="radio"
            className="visually-hidden"
            name={name}
            value={option.value}
            checked={option.value === value}
            disabled={option.disabled}
            onChange={() => onChange(option.value)}
          />
          <span>{option.text}</span>
          {option.hint ? <small className="quiet">{option.hint}</small> : null}
        </label>
      ))}
    </fieldset>
  )
}

/** A line of plain word buttons. */
export function Actions({ children }: { children: ReactNode }) {
  return <div className="actions">{children}</div>
}

export function WordButton(props: { onPress: () => void; children: ReactNode; disabled?: boolean; label?: string }) {
  return (
    <button type="button" className="word" onClick={props.onPress} disabled={props.disabled} aria-label={props.label}>
      {props.children}
    </button>
  )
}

/** From and to of a window on the time axis. */
export function WindowFields(props: {
  fromMs: number
  toMs: number
  stepMs: number
  error?: string | undefined
  onChange: (fromMs: number, toMs: number) => void
}) {
  const { fromMs, toMs, stepMs, error, onChange } = props
  return (
    <div className="pair">
      <NumberField label="from" unit="ms" value={fromMs} step={stepMs} onChange={(value) => onChange(value, toMs)} />
      <NumberField
        label="to"
        unit="ms"
        value={toMs}
        step={stepMs}
        error={error}
        onChange={(value) => onChange(fromMs, value)}
      />
    </div>
  )
}
