import { type ExportPlan, type ExportStage, exponent, headerLines } from './export-plan.ts'
import { commented, literal, literals, sectionRows } from './literal.ts'

export const R_FILE = 'sidelobe_chain.R'

/** The chain as an R script, complete and runnable with base R (`stats::filter`); run alone it checks itself. */
export function rSource(plan: ExportPlan): string {
  const { check } = plan
  return `${commented(headerLines(plan), '#')}
#
#   Rscript ${R_FILE}                            runs the self-check
#   Rscript ${R_FILE} data.csv COLUMN out.csv    filters one column, by its name, of a comma-separated file
#   source("${R_FILE}"); y <- apply_chain(x)     filters a vector
#
# Needs base R alone; no package masks stats::filter here.

# sos: rows b0 b1 b2 a0 a1 a2 of one pass; gain: its gain at 0 Hz; taps: a kernel, its output moved "lead" samples earlier
stages <- list(${plan.stages.map(stageEntry).join(',')}
)

check_samples <- ${check.samples}
check_tolerance <- ${exponent(check.tolerance)}
check_at <- c(
${literals(check.at, '  ', 16, true)}
)
check_expected <- c(
${literals(check.expected, '  ', 4)}
)

convolve_taps <- function(x, taps) {
  # sum over k of taps[k + 1] * x[n - k], zeros before x
  y <- stats::filter(c(numeric(length(taps) - 1), x), taps, method = "convolution", sides = 1)
  as.numeric(y)[length(taps):(length(taps) - 1 + length(x))]
}

run_sections <- function(sos, y) {
  for (k in seq_len(nrow(sos))) {
    y <- convolve_taps(y, sos[k, 1:3])
    y <- as.numeric(stats::filter(y, -sos[k, 5:6], method = "recursive"))
  }
  y
}

as_vector <- function(x) {
  if (!is.numeric(x) || length(x) == 0 || !all(is.finite(x))) stop("x must be a vector of finite numbers")
  as.numeric(x)
}

${plan.extent === 'epochs' ? EPOCHS : continuous(plan)}
check_input <- function(n) {
  # numbers from -8 to 12, the same in every language: each step is exact
  x <- numeric(n)
  state <- 1
  for (i in seq_len(n)) {
    state <- (state * 4093 + 12345) %% 65536
    x[i] <- 20 * state / 65536 - 8
  }
  x
}

self_check <- function() {
  x <- check_input(check_samples)
  y <- apply_chain(x)
  difference <- max(abs(y[check_at + 1] - check_expected)) / max(abs(x))
  if (!isTRUE(difference <= check_tolerance)) {
    stop(sprintf("FAILED: differs by %.1e of the largest input, allowed %.0e", difference, check_tolerance))
  }
  cat(sprintf("OK: largest difference %.1e of the largest input, allowed %.0e\\n", difference, check_tolerance))
}

filter_column <- function(file, column, out_file) {
  data <- utils::read.csv(file, check.names = FALSE, fileEncoding = "UTF-8-BOM")
  if (!(column %in% names(data))) {
    stop(sprintf("%s has no column %s; it has %s", file, column, paste(names(data), collapse = ", ")))
  }
  y <- apply_chain(data[[column]])
  writeLines(c(column, sprintf("%.17g", y)), out_file)
}

if (sys.nframe() == 0L) {
  arguments <- commandArgs(trailingOnly = TRUE)
  if (length(arguments) == 0) {
    self_check()
  } else if (length(arguments) == 3) {
    filter_column(arguments[1], arguments[2], arguments[3])
  } else {
    stop("arguments: none (self-check), or: data.csv COLUMN out.csv")
  }
}
`
}

function stageEntry({ words, rule, sections, taps, leadSamples, paddingSamples, gainAtZero }: ExportStage): string {
  const head = `\n  # ${words}\n  list(rule = "${rule}", `
  if (taps) return `${head}lead = ${leadSamples}, taps = c(\n${literals(taps, '    ', 4)}\n  ))`
  const rows = sectionRows(sections as Float64Array).map((row) => `    ${row.map(literal).join(', ')}`)
  return `${head}padding = ${paddingSamples}, gain = ${literal(gainAtZero)}, sos = matrix(c(\n${rows.join(',\n')}\n  ), ncol = 6, byrow = TRUE))`
}

const continuous = ({ zerosBefore, zerosAfter }: ExportPlan) => `apply_chain <- function(x) {
  # the chain applied to a waveform that stands alone; as many values as x
  x <- as_vector(x)
  before <- ${zerosBefore}
  y <- c(numeric(before), x, numeric(${zerosAfter}))
  for (stage in stages) {
    if (stage$rule == "taps") {
      y <- convolve_taps(c(y, numeric(stage$lead)), stage$taps)
      y <- y[(stage$lead + 1):length(y)]
      next
    }
    y <- run_sections(stage$sos, y)
    if (stage$rule == "both") y <- rev(run_sections(stage$sos, rev(y)))
  }
  y[before + seq_along(x)]
}
`

const EPOCHS = `reflect_oddly <- function(x, before, after) {
  # 2*x[1] - x[1 + k] before the start, 2*x[n] - x[n - k] after the end
  n <- length(x)
  if (n <= max(before, after)) {
    stop(sprintf("this chain needs at least %d samples, the epoch has %d", max(before, after) + 1, n))
  }
  c(2 * x[1] - x[1 + rev(seq_len(before))], x, 2 * x[n] - x[n - seq_len(after)])
}

run_steadily <- function(stage, x) {
  # starts in the steady state of the first sample, which is taken off before the run and comes back with the gain at 0 Hz
  run_sections(stage$sos, x - x[1]) + stage$gain * x[1]
}

apply_chain <- function(x) {
  # the chain applied to one epoch; as many values as x
  y <- as_vector(x)
  n <- length(y)
  for (stage in stages) {
    if (stage$rule == "taps") {
      before <- length(stage$taps) - 1 - stage$lead
      y <- convolve_taps(reflect_oddly(y, before, stage$lead), stage$taps)
      y <- y[length(stage$taps) - 1 + seq_len(n)]
    } else if (stage$rule == "both") {
      y <- reflect_oddly(y, stage$padding, stage$padding)
      y <- run_steadily(stage, y)
      y <- rev(run_steadily(stage, rev(y)))
      y <- y[stage$padding + seq_len(n)]
    } else if (stage$rule == "forward") {
      y <- run_steadily(stage, y)
    } else {
      y <- run_sections(stage$sos, y)
    }
  }
  y
}
`
