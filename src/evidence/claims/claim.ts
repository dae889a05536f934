/**
 * Claims: statements about a filter in a fixed form, and the shape of their answers. What is computed for each form is in the file
 * named after it; `answerClaim` in `answer-claim.ts` puts them together.
 */
import type { Score } from '../../erp/score.ts'
import type { TimeWindow } from '../../erp/time-axis.ts'
import type { NoiseSpec } from '../../erp/noise.ts'
import type { Extent } from '../../filter/apply-chain.ts'
import type { CutoffMeaning, StageSpec } from '../../filter/stage.ts'
import type { NoisePassed } from '../filtered-noise.ts'
import type { LateOnlyVerdict } from '../late-only-verdict.ts'
import type { TraceSource } from '../traced-waveform.ts'

/** Rows of the readout that a claim can be about. */
export type ClaimRow =
  | 'score'
  | 'mean-amplitude'
  | 'peak-amplitude'
  | 'signed-area'
  | 'peak-latency'
  | 'area-latency'
  | 'onset-latency'

/**
 * The filter changes a score or latency by at least (at most) so much: in the row's own unit, or in the readout's per cent, which is of its value before, or
 * of the waveform's largest absolute value where that value is small against it. Latencies have no per cent.
 */
export interface ChangeClaim {
  readonly form: 'change'
  readonly row: ClaimRow
  readonly relation: 'at least' | 'at most'
  readonly amount: number
  readonly unit: 'own' | '%'
}

/** The filter makes a deflection of at least so much in a window where the unfiltered waveform has none. */
export interface DeflectionClaim {
  readonly form: 'deflection'
  readonly window: TimeWindow
  readonly amount: number
  /** % of the largest absolute value of the unfiltered waveform. */
  readonly unit: 'µV' | '%'
}

/** At least so much of the filtered mean amplitude in a window comes from activity outside the window. */
export interface FromOutsideClaim {
  readonly form: 'from-outside'
  readonly window: TimeWindow
  readonly percent: number
}

/** What the filter does to the effect, first − second condition, mean amplitude in a window. */
export interface EffectClaim {
  readonly form: 'effect'
  readonly first: string
  readonly second: string
  readonly window: TimeWindow
  readonly says: 'exists without the filter' | 'is absent without the filter' | 'changes sign'
  /** An effect smaller than this counts as absent, µV. */
  readonly leastUv: number
}

/** The onset moves earlier (later) by at least so much. */
export interface OnsetClaim {
  readonly form: 'onset'
  readonly direction: 'earlier' | 'later'
  readonly ms: number
}

/** The chain attenuates a frequency by at least so many dB. */
export interface AttenuationClaim {
  readonly form: 'attenuation'
  readonly hz: number
  readonly db: number
}

/** A tone of so much falls below so much in the average; locked to the event it does not average out. */
export interface ToneClaim {
  readonly form: 'tone'
  readonly hz: number
  /** Amplitude (half of peak to peak) in single trials before the chain, µV. */
  readonly amplitudeUv: number
  readonly belowUv: number
  readonly locked: boolean
}

/** What a filter shows: the statements that another version of it may or may not make true as well. */
export type ShownClaim = ChangeClaim | DeflectionClaim | FromOutsideClaim | EffectClaim | OnsetClaim

/** A causal or a zero-phase version of the filter would not show it. */
export interface TwinClaim {
  readonly form: 'twin'
  readonly twin: 'causal' | 'zero-phase'
  readonly shows: ShownClaim
}

/** The reported cutoffs are of one meaning; with the other the conclusion is the same. */
export interface MeaningClaim {
  readonly form: 'meaning'
  readonly stated: CutoffMeaning
  readonly other: CutoffMeaning
  readonly conclusion: ShownClaim
}

/** The deflection before t0 can come from the filter alone (late-only fit). */
export interface LateOnlyClaim {
  readonly form: 'late-only'
  readonly t0Ms: number
  readonly early: TimeWindow
  /** Activity may begin this much before t0. */
  readonly slackMs: number
}

export type ClaimForm = ShownClaim | AttenuationClaim | ToneClaim | TwinClaim | MeaningClaim | LateOnlyClaim

/** A chain kept by the claim itself, so that the claim stands when a pin goes. */
export interface ClaimChain {
  readonly name: string
  readonly chain: readonly StageSpec[]
  readonly extent: Extent
}

/** What is varied in the search for what would change the answer. */
export interface Varied {
  /** Place in the chain of the claim, stages that are switched off included. */
  readonly stage: number
  readonly what: 'cutoff' | 'order' | 'transition'
  /** Which of a band's cutoffs. */
  readonly cutoff: 0 | 1
}

export type ClaimVerdict = 'holds' | 'does not hold' | 'cannot be told'

export type Unit = 'µV' | 'ms' | 'µV·s' | '%' | 'dB'

/** What decided a verdict, with the numbers that its sentence needs. */
export type ClaimGrounds =
  /** The number against the claimed amount. */
  | { readonly kind: 'number' }
  /** The claimed amount lies in the 95 % interval of the number; about so many trials would settle it, or null where no number would. */
  | { readonly kind: 'within noise'; readonly trialsNeeded: number | null }
  /** Too large a part of the weight falls on samples outside the data. */
  | {
      readonly kind: 'unseen'
      readonly share: number
      readonly threshold: number
      /** How much further the data would have to reach for the share to fall to the threshold; null where no length would do. */
      readonly furtherMs?: { readonly back: number; readonly on: number } | null
    }
  /** The recording was filtered before, and nobody said how. */
  | { readonly kind: 'filtered before' }
  | {
      readonly kind: 'no value'
      readonly missing: 'no peak' | 'no area' | 'no onset'
      readonly where: 'before' | 'after'
    }
  /** No share can be told of a value that is about zero. */
  | { readonly kind: 'about zero'; readonly valueUv: number }
  /** Form 2: the unfiltered waveform has a deflection there already. */
  | { readonly kind: 'already there'; readonly largestUv: number; readonly limitUv: number }
  /** Form 7: the filter as it is does not show it, so that there is nothing that its twin would remove. */
  | { readonly kind: 'not shown'; readonly shown: ShownAnswer }
  /** Form 7: what the filter and its twin show. Form 8: the conclusion with the stated and with the other meaning. */
  | { readonly kind: 'compared'; readonly present: ShownAnswer; readonly compared: ShownAnswer }
  /** Form 7: no stage of the chain has such a twin, or every stage is of that kind already. */
  | { readonly kind: 'no twin'; readonly why: string }
  /** Form 8: no stage states a cutoff with a meaning. */
  | { readonly kind: 'no meaning' }
  | { readonly kind: 'late-only'; readonly verdict: LateOnlyVerdict; readonly changed: boolean }

/** Of one of the forms 1 to 5. */
export interface ShownAnswer {
  readonly verdict: ClaimVerdict
  /**
   * What is held against the amount, in `unit`; null where there is none. Changes, deflections and effects are signed and held by their size; an onset's shift
   * counts in the claimed direction; an effect's is the value before where that settles it, else the one after; a twin's claim has the twin's, where the filter
   * shows it at all; a meaning's that of the stated one. `claimBounds` gives the numbers at which a verdict can turn.
   */
  readonly number: number | null
  readonly unit: Unit
  /** 95 % interval of the number under the noise of the trials; null where the waveform is taken as it stands, or the noise leaves none that ends. */
  readonly interval: readonly [number, number] | null
  readonly grounds: ClaimGrounds
  /**
   * Named values beside the number, in the order in which they are told: 'before', 'after', 'change', 'at', 'largest before' (the reference of a per cent of
   * it), 'largest before in the window'; 'value', 'from inside', 'from outside'; 'gain', 'unfiltered'; 'as it is', 'twin'; 'as stated', 'other meaning';
   * 'early activity', 'late share', 'noise scale', 'alpha'.
   */
  readonly values: readonly { readonly name: string; readonly value: number; readonly unit: Unit }[]
}

export type ClaimAnswer = ShownAnswer

/** A number against one quantity of the chain. */
export interface ClaimCurve {
  readonly varied: Varied
  /** Hz for cutoffs and transition widths, none for orders. */
  readonly unit: 'Hz' | null
  /** Where the chain stands. */
  readonly present: number
  readonly points: readonly ClaimPoint[]
  /** Every change of the verdict that the search found, ascending; where there is none, the answer is the same over the whole range. */
  readonly flips: readonly ClaimFlip[]
}

export interface ClaimPoint {
  readonly at: number
  /** Null where the filter cannot be realised or the number does not exist. */
  readonly number: number | null
  readonly verdict: ClaimVerdict | null
}

export interface ClaimFlip {
  /** The critical value; of orders the first on the other side. */
  readonly at: number
  readonly below: ClaimVerdict
  readonly above: ClaimVerdict
}

/** What a claim is answered from: all that the page knows, as plain data. */
export interface ClaimSetting {
  readonly samplingRateHz: number
  readonly timesMs: Float64Array
  /** Stages that are switched off or in the data included; those are not run, as everywhere. */
  readonly chain: readonly StageSpec[]
  readonly extent: Extent
  readonly baseline: 'none' | TimeWindow
  readonly score: Score
  /** Windows of the readout's own rows. */
  readonly measure: {
    readonly mean: TimeWindow
    readonly peak: TimeWindow
    readonly polarity: 'positive' | 'negative'
  }
  /** Every condition, unfiltered by the stages that are applied here. */
  readonly conditions: readonly { readonly name: string; readonly source: TraceSource }[]
  /** The waveform that claims are about where they do not name two conditions. */
  readonly chosen:
    | { readonly kind: 'condition'; readonly name: string }
    | { readonly kind: 'difference'; readonly first: string; readonly second: string }
  readonly noise: NoiseSpec
  readonly noisePassed: NoisePassed
  /** Per condition. */
  readonly trials: number
  /**
   * 'as it stands': the waveform is taken as known without noise. 'as measured': numbers carry the noise of the trials, and an amount that lies
   * within their 95 % interval cannot be told from them. A recorded average is always measured.
   */
  readonly taken: 'as it stands' | 'as measured'
  /** Of a recording: the stages in the data are all that it has passed, or nobody knows. Built waveforms: 'as stated'. */
  readonly filteredBefore: 'as stated' | 'not known'
  /** An unseen share above it is too much, 0 to 1. */
  readonly unseenThreshold: number
}
