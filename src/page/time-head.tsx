/** Title line of the time figure: what is shown, and whether what was taken out is drawn. */
import type { RefObject } from 'react'
import type { Evaluation } from '../state/evaluation.ts'
import { unnamedCondition } from '../state/protocol.ts'
import { look } from '../state/view.ts'
import type { Workspace } from '../state/workspace.ts'
import { FigureHead, Switch } from './figure-head.tsx'
import { Token } from './token.tsx'

interface TimeHeadProps {
  evaluation: Evaluation
  workspace: Workspace
  takenOut: boolean
  /** Shows or hides the difference of a causal chain, which is not kept as a way of looking. */
  onDelayed: (shown: boolean) => void
  svg: RefObject<SVGSVGElement | null>
  caption: () => string
}

/** "rare targets, Pz": the chosen condition first. */
export function shownWords(evaluation: Evaluation, channel: string | null): string {
  const others = evaluation.curves.filter((_, i) => i !== evaluation.chosen).map((curves) => curves.name)
  const chosen = evaluation.curves[evaluation.chosen].name
  const beside = others.length === 0 ? [] : [others.length === 1 ? `with ${others[0]}` : `with ${others.length} more`]
  // A table that names no condition has nothing to say of it beside the channel.
  const named = chosen === unnamedCondition && channel !== null ? [] : [chosen]
  return [...named, ...beside, ...(channel === null ? [] : [channel])].join(', ')
}

export function TimeHead({ evaluation, workspace, takenOut, onDelayed, svg, caption }: TimeHeadProps) {
  const { delayIncluded } = evaluation
  const name = delayIncluded ? 'before − after, delay included,' : 'taken out'
  return (
    <FigureHead title="Time" svg={svg} caption={caption} fileName="time">
      <Token
        id="shown"
        text={shownWords(evaluation, workspace.shown.channel)}
        label="conditions and channel shown"
        className="small"
      />
      {evaluation.standardErrors ? (
        <span className="quiet">
          {evaluation.standardErrors.after ? 'bands: ±1 standard error' : 'band: ±1 standard error before'}
        </span>
      ) : null}
      <Switch
        value={takenOut ? 'shown' : 'hidden'}
        options={['shown', 'hidden']}
        words={{ shown: `${name} shown`, hidden: `${name} hidden` }}
        label="Time figure"
        onChange={(next) => (delayIncluded ? onDelayed(next === 'shown') : look({ takenOut: next === 'shown' }))}
      />
    </FigureHead>
  )
}
