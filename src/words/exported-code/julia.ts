import { type ExportPlan, type ExportStage, exponent, headerLines } from './export-plan.ts'
import { commented, literal, literals, sectionRows } from './literal.ts'

export const JULIA_FILE = 'sidelobe_chain.jl'

/** The chain as a Julia script in base Julia, without a package; run alone it checks itself. */
export function juliaSource(plan: ExportPlan): string {
  const { check } = plan
  return `${commented(headerLines(plan), '#')}
#
#   julia ${JULIA_FILE}                            runs the self-check
#   julia ${JULIA_FILE} data.csv COLUMN out.csv    filters one column, by its name, of a comma-separated file
#   include("${JULIA_FILE}"); y = apply_chain(x)   filters a vector
#
# Needs base Julia alone.

struct Stage
    rule::Symbol
    sections::Vector{NTuple{6,Float64}}  # b0 b1 b2 a0 a1 a2 of one pass
    gain::Float64                        # of one pass at 0 Hz
    padding::Int                         # samples of odd reflection at both ends of an epoch
    taps::Vector{Float64}                # a kernel, its output moved "lead" samples earlier
    lead::Int
end

const STAGES = Stage[${plan.stages.map(stageEntry).join('')}
]

const CHECK_SAMPLES = ${check.samples}
const CHECK_TOLERANCE = ${exponent(check.tolerance)}
const CHECK_AT = Int[
${literals(check.at, '    ', 16, true)}
]
const CHECK_EXPECTED = Float64[
${literals(check.expected, '    ', 4)}
]

# transposed direct form II, from rest
function run_sections(sections, x)
    y = copy(x)
    for (b0, b1, b2, a0, a1, a2) in sections
        z1 = 0.0
        z2 = 0.0
        for n in eachindex(y)
            v = y[n]
            out = b0 * v + z1
            z1 = b1 * v - a1 * out + z2
            z2 = b2 * v - a2 * out
            y[n] = out
        end
    end
    return y
end

# outputs first, first + 1, ..., first + count - 1 (counted from 0) of the convolution of x with taps, zeros around x
function convolve_taps(x, taps, first, count)
    y = zeros(count)
    for i in 1:count
        sum = 0.0
        for k in eachindex(taps)
            m = first + i - k + 1
            if 1 <= m <= length(x)
                sum += taps[k] * x[m]
            end
        end
        y[i] = sum
    end
    return y
end

function as_vector(x)
    values = collect(Float64, x)
    if isempty(values) || !all(isfinite, values)
        error("x must be a vector of finite numbers")
    end
    return vec(values)
end

${plan.extent === 'epochs' ? EPOCHS : continuous(plan)}
# numbers from -8 to 12, the same in every language: each step is exact
function check_input(n)
    x = zeros(n)
    state = 1
    for i in 1:n
        state = mod(state * 4093 + 12345, 65536)
        x[i] = 20 * state / 65536 - 8
    end
    return x
end

function self_check()
    x = check_input(CHECK_SAMPLES)
    y = apply_chain(x)
    difference = maximum(abs.(y[CHECK_AT .+ 1] .- CHECK_EXPECTED)) / maximum(abs.(x))
    if !(difference <= CHECK_TOLERANCE)
        error("FAILED: differs by $(difference) of the largest input, allowed $(CHECK_TOLERANCE)")
    end
    println("OK: largest difference $(difference) of the largest input, allowed $(CHECK_TOLERANCE)")
end

function filter_column(path, column, out_path)
    lines = filter(line -> !isempty(strip(line)), readlines(path))
    names = strip.(split(replace(lines[1], '\\ufeff' => ""), ','))
    place = findfirst(==(column), names)
    if place === nothing
        error("$(path) has no column $(column); it has $(join(names, ", "))")
    end
    x = [parse(Float64, strip(split(line, ',')[place])) for line in lines[2:end]]
    open(out_path, "w") do io
        println(io, column)
        foreach(value -> println(io, value), apply_chain(x))
    end
end

if abspath(PROGRAM_FILE) == @__FILE__
    if length(ARGS) == 0
        self_check()
    elseif length(ARGS) == 3
        filter_column(ARGS[1], ARGS[2], ARGS[3])
    else
        error("arguments: none (self-check), or: data.csv COLUMN out.csv")
    end
end
`
}

function stageEntry({ words, rule, sections, taps, leadSamples, paddingSamples, gainAtZero }: ExportStage): string {
  const head = `\n    # ${words}\n    Stage(:${rule}, `
  if (taps) return `${head}NTuple{6,Float64}[], 1.0, 0, [\n${literals(taps, '        ', 4)}\n    ], ${leadSamples}),`
  const rows = sectionRows(sections as Float64Array).map((row) => `        (${row.map(literal).join(', ')}),\n`)
  return `${head}[\n${rows.join('')}    ], ${literal(gainAtZero)}, ${paddingSamples}, Float64[], 0),`
}

const continuous = ({ zerosBefore, zerosAfter }: ExportPlan) => `const ZEROS_BEFORE = ${zerosBefore}
const ZEROS_AFTER = ${zerosAfter}

# the chain applied to a waveform that stands alone; as many values as x
function apply_chain(x)
    values = as_vector(x)
    y = vcat(zeros(ZEROS_BEFORE), values, zeros(ZEROS_AFTER))
    for stage in STAGES
        if stage.rule === :taps
            y = convolve_taps(y, stage.taps, stage.lead, length(y))
            continue
        end
        y = run_sections(stage.sections, y)
        if stage.rule === :both
            y = reverse(run_sections(stage.sections, reverse(y)))
        end
    end
    return y[ZEROS_BEFORE+1:ZEROS_BEFORE+length(values)]
end
`

const EPOCHS = `# 2*x[1] - x[1 + k] before the start, 2*x[end] - x[end - k] after the end
function reflect_oddly(x, before, after)
    if length(x) <= max(before, after)
        error("this chain needs at least $(max(before, after) + 1) samples, the epoch has $(length(x))")
    end
    start = Float64[2 * x[1] - x[1+k] for k in before:-1:1]
    finish = Float64[2 * x[end] - x[end-k] for k in 1:after]
    return vcat(start, x, finish)
end

# starts in the steady state of the first sample, which is taken off before the run and comes back with the gain at 0 Hz
function run_steadily(stage, x)
    return run_sections(stage.sections, x .- x[1]) .+ stage.gain * x[1]
end

# the chain applied to one epoch; as many values as x
function apply_chain(x)
    y = as_vector(x)
    n = length(y)
    for stage in STAGES
        if stage.rule === :taps
            before = length(stage.taps) - 1 - stage.lead
            padded = reflect_oddly(y, before, stage.lead)
            y = convolve_taps(padded, stage.taps, length(stage.taps) - 1, n)
        elseif stage.rule === :both
            y = reflect_oddly(y, stage.padding, stage.padding)
            y = run_steadily(stage, y)
            y = reverse(run_steadily(stage, reverse(y)))
            y = y[stage.padding+1:stage.padding+n]
        elseif stage.rule === :forward
            y = run_steadily(stage, y)
        else
            y = run_sections(stage.sections, y)
        end
    end
    return y
end
`
