/** Below the chain table: the chains kept for comparison, and the word that keeps the present one. */
import { useMemo } from 'react'
import type { Evaluation } from '../state/evaluation.ts'
import { isInUse, namesOfPins, pinChain, swapPin, unpin, whyNotPinned } from '../state/pin-actions.ts'
import { say } from '../state/store.ts'
import { look, viewStore } from '../state/view.ts'
import { MAX_PINS, type Workspace } from '../state/workspace.ts'
import { PinSample } from './pin-line.tsx'
import './pins.css'
import { Token } from './token.tsx'

const PIN = 'pin-this-chain'

interface PinRowsProps {
  workspace: Workspace
  /** The last good one: it says which pins could not be computed. */
  evaluation: Evaluation
  /** The present chain cannot be designed. */
  broken: boolean
}

export function PinRows({ workspace, evaluation, broken }: PinRowsProps) {
  const { pins } = workspace
  const names = useMemo(() => namesOfPins(workspace), [workspace])
  const why = broken ? 'this chain cannot be computed' : whyNotPinned(workspace)
  return (
    <tbody className="pins">
      {pins.map((_, i) => {
        const name = names[i]
        const result = evaluation.pins[i]
        return (
          <PinRow key={i} index={i} name={name} present={isInUse(workspace, i)}>
            {result && 'reason' in result && pins.length === evaluation.pins.length ? result.reason : null}
          </PinRow>
        )
      })}
      <tr>
        <td>
          <QuietAction id={PIN} why={why} describedBy={`${PIN}-why`} onPress={() => say(pinChain)}>
            pin this chain
          </QuietAction>
        </td>
        <td colSpan={3} className="quiet" id={`${PIN}-why`}>
          {why ??
            (pins.length === 0 ? 'keeps its curves beside those of the next' : `${pins.length} of ${MAX_PINS} kept`)}
        </td>
      </tr>
    </tbody>
  )
}

function PinRow(props: { index: number; name: string; present: boolean; children: string | null }) {
  const { index, name, present, children: reason } = props
  return (
    <>
      <tr className="pin">
        <td colSpan={3}>
          <PinSample index={index} />
          <Token id={`pin:${index}`} className="small" text={name} label={`rename pin ${index + 1}`} />
        </td>
        <td>
          <QuietAction
            why={present ? 'this chain is in use' : null}
            label={`use ${name}: swap it with the present chain`}
            onPress={() => say((w) => swapPin(w, index))}
          >
            use
          </QuietAction>
          <QuietAction label={`unpin ${name}`} onPress={() => letGo(index)}>
            unpin
          </QuietAction>
        </td>
      </tr>
      {reason === null ? null : (
        <tr className="past">
          <td colSpan={4} className="remark-cell">
            Not drawn: {reason}
          </td>
        </tr>
      )}
    </>
  )
}

/** The editor of a pin does not outlive it, and the keyboard goes on from the word that pins. */
export function letGo(index: number): void {
  say((workspace) => unpin(workspace, index))
  if (viewStore.getState().open?.startsWith('pin:')) look({ open: null })
  document.getElementById(PIN)?.focus()
}

/** A word that stays within reach of the keyboard where it can do nothing, and says why. */
function QuietAction(props: {
  id?: string
  why?: string | null
  label?: string
  describedBy?: string
  onPress: () => void
  children: string
}) {
  const { id, why = null, label, describedBy, onPress, children } = props
  return (
    <button
      type="button"
      id={id}
      className="word"
      aria-disabled={why !== null}
      aria-label={label}
      aria-describedby={describedBy}
      title={why ?? undefined}
      onClick={() => (why === null ? onPress() : undefined)}
    >
      {children}
    </button>
  )
}
