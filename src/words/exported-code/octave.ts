import { type ExportPlan, type ExportStage, exponent, headerLines } from './export-plan.ts'
import { commented, literal, literals, sectionRows } from './literal.ts'

/** The file has the name of its function, as the language asks. */
export const OCTAVE_FILE = 'sidelobe_chain.m'

/**
 * The chain as an Octave function file, complete and runnable; it uses the language's own `filter` alone. Without an argument it checks
 * itself.
 */
export function octaveSource(plan: ExportPlan): string {
  const { check } = plan
  return `function y = sidelobe_chain(x, column, out_file)
${commented(headerLines(plan), '%')}
%
%   sidelobe_chain                                runs the self-check
%   sidelobe_chain('data.csv', 'COLUMN', 'out.csv')   filters one column, by its name, of a comma-separated file
%   y = sidelobe_chain(x)                         filters a vector
  if nargin == 0
    self_check();
  elseif nargin == 3
    filter_column(x, column, out_file);
  elseif nargin == 1
    y = apply_chain(x);
  else
    error('arguments: none (self-check), a vector, or: data.csv COLUMN out.csv');
  end
end

function stages = chain_stages()
% sos: rows b0 b1 b2 a0 a1 a2 of one pass; gain: its gain at 0 Hz; taps: a kernel, its output moved "lead" samples earlier
  stages = {};
${plan.stages.map(stageEntry).join('')}end

${plan.extent === 'epochs' ? EPOCHS : continuous(plan)}
function y = run_sections(sos, y)
  for k = 1:size(sos, 1)
    y = filter(sos(k, 1:3), sos(k, 4:6), y);
  end
end

function x = as_column(x)
  if ~isnumeric(x) || ~isreal(x) || numel(x) ~= max(size(x)) || isempty(x) || any(~isfinite(x(:)))
    error('x must be a vector of finite numbers');
  end
  x = double(x(:));
end

function x = check_input(n)
% numbers from -8 to 12, the same in every language: each step is exact
  x = zeros(n, 1);
  state = 1;
  for i = 1:n
    state = mod(state * 4093 + 12345, 65536);
    x(i) = 20 * state / 65536 - 8;
  end
end

function self_check()
  at = [
${rowsOf(check.at, true)}
  ]';
  expected = [
${rowsOf(check.expected, false)}
  ]';
  x = check_input(${check.samples});
  y = apply_chain(x);
  difference = max(abs(y(at(:) + 1) - expected(:))) / max(abs(x));
  if ~(difference <= ${exponent(check.tolerance)})
    error('FAILED: differs by %.1e of the largest input, allowed %.0e', difference, ${exponent(check.tolerance)});
  end
  fprintf('OK: largest difference %.1e of the largest input, allowed %.0e\\n', difference, ${exponent(check.tolerance)});
end

function filter_column(file, column, out_file)
  lines = strsplit(strrep(fileread(file), char(13), ''), char(10));
  names = strtrim(strsplit(lines{1}, ','));
  place = find(strcmp(names, column), 1);
  if isempty(place)
    error('%s has no column %s; it has %s', file, column, strjoin(names, ', '));
  end
  x = [];
  for k = 2:numel(lines)
    if isempty(strtrim(lines{k})), continue; end
    cells = strsplit(lines{k}, ',', 'CollapseDelimiters', false);
    x(end + 1, 1) = str2double(cells{place});
  end
  y = apply_chain(x);
  out = fopen(out_file, 'w');
  if out < 0, error('%s cannot be written', out_file); end
  fprintf(out, '%s\\n', column);
  fprintf(out, '%.17g\\n', y);
  fclose(out);
end
`
}

/** A matrix of one row in several lines: without the dots each line would be a row of its own. */
function rowsOf(values: readonly number[], whole: boolean): string {
  return literals(values, '    ', whole ? 16 : 4, whole).replaceAll(',\n', ', ...\n')
}

function stageEntry({ words, rule, sections, taps, leadSamples, paddingSamples, gainAtZero }: ExportStage): string {
  const head = `  % ${words}\n`
  if (taps) {
    const values = literals(taps, '    ', 4).replaceAll(',\n', ', ...\n')
    return `${head}  stages{end + 1} = struct('rule', '${rule}', 'lead', ${leadSamples}, 'taps', [ ...\n${values} ...\n  ]);\n`
  }
  const rows = sectionRows(sections as Float64Array).map((row) => `    ${row.map(literal).join(', ')}; ...\n`)
  const facts = `'rule', '${rule}', 'padding', ${paddingSamples}, 'gain', ${literal(gainAtZero)}`
  return `${head}  stages{end + 1} = struct(${facts}, 'sos', [ ...\n${rows.join('')}  ]);\n`
}

const continuous = ({ zerosBefore, zerosAfter }: ExportPlan) => `function y = apply_chain(x)
% the chain applied to a waveform that stands alone; as many values as x
  shape = size(x);
  x = as_column(x);
  before = ${zerosBefore};
  y = [zeros(before, 1); x; zeros(${zerosAfter}, 1)];
  stages = chain_stages();
  for k = 1:numel(stages)
    stage = stages{k};
    if strcmp(stage.rule, 'taps')
      y = filter(stage.taps, 1, [y; zeros(stage.lead, 1)]);
      y = y(stage.lead + 1:end);
      continue;
    end
    y = run_sections(stage.sos, y);
    if strcmp(stage.rule, 'both')
      y = flipud(run_sections(stage.sos, flipud(y)));
    end
  end
  y = reshape(y(before + 1:before + numel(x)), shape);
end
`

const EPOCHS = `function y = apply_chain(x)
% the chain applied to one epoch; as many values as x
  shape = size(x);
  y = as_column(x);
  stages = chain_stages();
  for k = 1:numel(stages)
    stage = stages{k};
    if strcmp(stage.rule, 'taps')
      before = numel(stage.taps) - 1 - stage.lead;
      y = filter(stage.taps, 1, reflect_oddly(y, before, stage.lead));
      y = y(numel(stage.taps):end);
    elseif strcmp(stage.rule, 'both')
      y = reflect_oddly(y, stage.padding, stage.padding);
      y = run_steadily(stage, y);
      y = flipud(run_steadily(stage, flipud(y)));
      y = y(stage.padding + 1:end - stage.padding);
    elseif strcmp(stage.rule, 'forward')
      y = run_steadily(stage, y);
    else
      y = run_sections(stage.sos, y);
    end
  end
  y = reshape(y, shape);
end

function y = run_steadily(stage, x)
% starts in the steady state of the first sample, which is taken off before the run and comes back with the gain at 0 Hz
  y = run_sections(stage.sos, x - x(1)) + stage.gain * x(1);
end

function padded = reflect_oddly(x, before, after)
% 2*x(1) - x(1 + k) before the start, 2*x(end) - x(end - k) after the end
  if numel(x) <= max(before, after)
    error('this chain needs at least %d samples, the epoch has %d', max(before, after) + 1, numel(x));
  end
  padded = [2 * x(1) - x(before + 1:-1:2); x; 2 * x(end) - x(end - 1:-1:end - after)];
end
`
