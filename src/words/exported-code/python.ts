import { type ExportPlan, type ExportStage, exponent, headerLines } from './export-plan.ts'
import { literal, literals, sectionRows } from './literal.ts'

/** Name under which the file is imported: `from sidelobe_chain import apply_chain`. */
export const PYTHON_FILE = 'sidelobe_chain.py'

/**
 * The chain as a Python file for NumPy and SciPy, complete and runnable: filters a vector or a column of a CSV file, and checks itself
 * when run alone.
 */
export function pythonSource(plan: ExportPlan): string {
  const { check } = plan
  return `"""
${headerLines(plan).join('\n')}

  python3 ${PYTHON_FILE}                            runs the self-check
  python3 ${PYTHON_FILE} data.csv COLUMN out.csv    filters one column, by its name, of a comma-separated file
  from sidelobe_chain import apply_chain            y = apply_chain(x) filters a vector

Needs NumPy and SciPy.
"""
import csv
import sys

import numpy as np
from scipy import signal

SAMPLING_RATE_HZ = ${literal(plan.samplingRateHz)}

# sos: rows b0 b1 b2 a0 a1 a2 of one pass; taps: a kernel, its output moved "lead" samples earlier
STAGES = [${plan.stages.map(stageEntry).join('')}
]

CHECK_SAMPLES = ${check.samples}
CHECK_TOLERANCE = ${exponent(check.tolerance)}
CHECK_AT = [
${literals(check.at, '    ', 16, true)}
]
CHECK_EXPECTED = [
${literals(check.expected, '    ', 4)}
]


${plan.extent === 'epochs' ? epochs(plan) : continuous(plan)}

def check_input(n):
    """Numbers from -8 to 12, the same in every language: each step is exact."""
    x, state = np.empty(n), 1
    for i in range(n):
        state = (state * 4093 + 12345) % 65536
        x[i] = 20 * state / 65536 - 8
    return x


def self_check():
    """Raises an error unless the chain gives what was expected when this file was written."""
    x = check_input(CHECK_SAMPLES)
    y = apply_chain(x)
    difference = np.max(np.abs(y[CHECK_AT] - CHECK_EXPECTED)) / np.max(np.abs(x))
    if not difference <= CHECK_TOLERANCE:
        raise SystemExit(f"FAILED: differs by {difference:.1e} of the largest input, allowed {CHECK_TOLERANCE:.0e}")
    print(f"OK: largest difference {difference:.1e} of the largest input, allowed {CHECK_TOLERANCE:.0e}")


def filter_column(path, column, out_path):
    """Filters one column, named in the first line of a comma-separated file."""
    with open(path, newline="", encoding="utf-8-sig") as file:
        rows = list(csv.reader(file))
    names = [name.strip() for name in rows[0]]
    if column not in names:
        raise SystemExit(f"{path} has no column {column!r}; it has {', '.join(names)}")
    x = np.array([float(row[names.index(column)]) for row in rows[1:] if row])
    with open(out_path, "w", newline="", encoding="utf-8") as file:
        writer = csv.writer(file)
        writer.writerow([column])
        writer.writerows([repr(float(value))] for value in apply_chain(x))


if __name__ == "__main__":
    if len(sys.argv) == 1:
        self_check()
    elif len(sys.argv) == 4:
        filter_column(*sys.argv[1:])
    else:
        raise SystemExit("arguments: none (self-check), or: data.csv COLUMN out.csv")
`
}

function stageEntry({ words, rule, sections, taps, leadSamples, paddingSamples }: ExportStage): string {
  const head = `\n    {  # ${words}\n        "rule": "${rule}",\n`
  if (taps) {
    return `${head}        "lead": ${leadSamples},\n        "taps": np.array([\n${literals(taps, '            ', 4)}\n        ]),\n    },`
  }
  const rows = sectionRows(sections as Float64Array).map((row) => `            [${row.map(literal).join(', ')}],\n`)
  const padding = rule === 'both' ? `        "padding": ${paddingSamples},\n` : ''
  return `${head}${padding}        "sos": np.array([\n${rows.join('')}        ]),\n    },`
}

const CHECKED = `    x = np.asarray(x, dtype=float)
    if x.ndim != 1 or not np.all(np.isfinite(x)):
        raise ValueError("x must be a vector of finite numbers")
`

const continuous = ({ zerosBefore, zerosAfter }: ExportPlan) => `ZEROS_BEFORE = ${zerosBefore}
ZEROS_AFTER = ${zerosAfter}


def apply_chain(x):
    """The chain applied to a waveform that stands alone; as many values as x."""
${CHECKED}    y = np.concatenate([np.zeros(ZEROS_BEFORE), x, np.zeros(ZEROS_AFTER)])
    for stage in STAGES:
        if stage["rule"] == "taps":
            lead = stage["lead"]
            y = signal.convolve(y, stage["taps"])[lead:lead + len(y)]
            continue
        y = signal.sosfilt(stage["sos"], y)
        if stage["rule"] == "both":
            y = signal.sosfilt(stage["sos"], y[::-1])[::-1]
    return y[ZEROS_BEFORE:ZEROS_BEFORE + len(x)].copy()

`

const epochs = ({ shortestSamples }: ExportPlan) => `SHORTEST_SAMPLES = ${shortestSamples}


def reflect_oddly(x, before, after):
    """2*x[0] - x[k] before the start, 2*x[-1] - x[-1-k] after the end."""
    start = 2 * x[0] - x[before:0:-1]
    end = 2 * x[-1] - x[-2:-(after + 2):-1]
    return np.concatenate([start, x, end])


def apply_chain(x):
    """The chain applied to one epoch; as many values as x."""
${CHECKED}    if len(x) < SHORTEST_SAMPLES:
        raise ValueError(f"this chain needs at least {SHORTEST_SAMPLES} samples, the epoch has {len(x)}")
    y = x.copy()
    for stage in STAGES:
        if stage["rule"] == "taps":
            taps, lead = stage["taps"], stage["lead"]
            before = len(taps) - 1 - lead
            y = signal.convolve(reflect_oddly(y, before, lead), taps, mode="valid")
        elif stage["rule"] == "both":
            y = signal.sosfiltfilt(stage["sos"], y, padtype="odd", padlen=stage["padding"])
        elif stage["rule"] == "forward":
            y, _ = signal.sosfilt(stage["sos"], y, zi=signal.sosfilt_zi(stage["sos"]) * y[0])
        else:
            y = signal.sosfilt(stage["sos"], y)
    return y

`
