import { useEffect } from 'react'
import { look } from '../state/view.ts'

const KEYS: readonly [string, string][] = [
  ['Tab, Shift+Tab', 'to the next or the last token, band, handle or button'],
  ['Enter', 'opens the editor of a token'],
  ['Escape', 'closes the editor or the help; during a drag it puts back what was there'],
  ['arrow keys', 'on a band or handle: one sample or one per cent; in a number field: one step'],
  ['Shift + arrow keys', 'ten steps'],
  ['Home, End', 'on a band or handle: as far as it goes'],
  ['T', 'on the cursor of the time figure: traces the value there back'],
  ['Delete', 'on a boundary of the trace-back desk: joins the two stretches'],
  ['Ctrl+Z, Ctrl+Shift+Z', 'undo and redo'],
  ['Ctrl+O, Ctrl+S', 'open a table or a workspace; save the workspace'],
  ['?', 'this help'],
]

export function Help() {
  useEffect(() => {
    const before = document.activeElement
    return () => {
      // Its own button goes with it: the keyboard returns to where it was.
      if (document.activeElement === document.body && before instanceof HTMLElement) before.focus()
    }
  }, [])
  return (
    <section className="help" aria-label="Help">
      <div>
        <h2>How the page works</h2>
        <p>
          The paragraph at the top states what is done to the data; every figure and number follows from it. The dotted
          phrases can be changed. What you see at once: the waveform before and after the chain and what was taken out;
          the weight that the score gives to every moment of the unfiltered waveform; the gain; the kernel; and a
          readout with your limits.
        </p>
        <p>
          Bring your own average as a table (CSV, TSV or semicolons: a time column, then channels or conditions; or one
          row per value). It stays in this browser: nothing is sent anywhere.
        </p>
      </div>
      <div>
        <h2>Keyboard</h2>
        <dl>
          {KEYS.map(([key, what]) => (
            <div key={key} style={{ display: 'contents' }}>
              <dt>{key}</dt>
              <dd>{what}</dd>
            </div>
          ))}
        </dl>
      </div>
      <div>
        <h2>Words</h2>
        <dl>
          <dt>half-amplitude</dt>
          <dd>the frequency at which half the amplitude is left (−6 dB)</dd>
          <dt>half-power</dt>
          <dd>71 % of the amplitude is left (−3 dB)</dd>
          <dt>as applied</dt>
          <dd>after all passes of a stage: run both ways, its gain counts twice</dd>
          <dt>effective window</dt>
          <dd>the score’s weight on each moment of the unfiltered waveform</dd>
          <dt>reach</dt>
          <dd>the lags outside which at most 0.5 % of the kernel’s absolute area lies on either side</dd>
          <dt>unseen share</dt>
          <dd>the part of a result’s absolute weight that falls on samples outside the data</dd>
          <dt>equal-trials factor</dt>
          <dd>
            how many times as many trials the unfiltered score would need to tell the effect from noise equally well
          </dd>
          <dt>precision factor</dt>
          <dd>variance of the score’s noise, unfiltered over filtered; the effect’s own shrinking is not counted</dd>
          <dt>trade-off map</dt>
          <dd>bias and noise of the score over a grid of filters</dd>
          <dt>claim</dt>
          <dd>a checkable statement about a filter; it holds, does not hold, or cannot be told</dd>
          <dt>late-only fit</dt>
          <dd>
            the best account of a filtered waveform by activity after a given moment only; its error rates stand beside
            every such claim
          </dd>
        </dl>
      </div>
      <div>
        <h2>Caution</h2>
        <p>
          For research planning, not for diagnosis. Clinical recordings follow the local laboratory’s standards and the
          responsible clinician. A filter must be chosen on expected or pooled data, not on the effect under test:
          choosing by the largest effect inflates false positives.
        </p>
        <button type="button" className="word" onClick={() => look({ help: false })}>
          close help
        </button>
      </div>
    </section>
  )
}
