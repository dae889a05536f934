/** How often the late-only fit is wrong, by draws of which the truth is known. */
import { CALIBRATION } from '../../../state/calibration.ts'
import { fixed } from '../../../words/index.ts'

const percent = (share: number) => fixed(100 * share, 1)

const KIND: Record<(typeof CALIBRATION)[number]['kind'], string> = {
  'as assumed': 'as the fit assumes',
  misspecified: 'an assumption is wrong',
  'far from assumed': 'far from what is assumed, only reported',
  causal: 'a causal chain, which can make nothing early',
}

export function CalibrationTable() {
  return (
    <details className="calibration">
      <summary>How often is this fit wrong?</summary>
      <p className="small">
        Seeded draws of waveforms with noise, of which it is known whether anything was early. False alarm: the interval
        excludes zero though nothing was early (5 % is what a 95 % interval promises). Found: the interval excludes zero
        where an early component of four standard errors was put in. Covered: the interval holds the true amplitude. In
        “it can” nothing was early.
      </p>
      {/* biome-ignore lint/a11y/noNoninteractiveTabindex: a table wider than the page is scrolled by keyboard */}
      <section className="calibration-scroll" tabIndex={0} aria-label="error rates of the late-only fit">
        <table className="desk-table">
          <thead>
            <tr>
              <th scope="col">setting</th>
              <th scope="col">kind</th>
              <th scope="col">draws</th>
              <th scope="col">false alarms, %</th>
              <th scope="col">found, %</th>
              <th scope="col">covered, %</th>
              <th scope="col">“it can”, %</th>
            </tr>
          </thead>
          <tbody>
            {CALIBRATION.map((row) => (
              <tr key={row.id}>
                <th scope="row">{row.title}</th>
                <td>{KIND[row.kind]}</td>
                <td>{row.draws}</td>
                <td>{percent(row.falseAlarms)}</td>
                <td>{percent(row.found)}</td>
                <td>{percent(row.covered)}</td>
                <td>{percent(row.verdicts['it can'] / row.draws)}</td>
              </tr>
            ))}
          </tbody>
        </table>
      </section>
    </details>
  )
}
