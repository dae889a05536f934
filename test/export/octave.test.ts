import { spawnSync } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { applyChain } from '../../src/filter/index.ts'
import { exportPlan, OCTAVE_FILE, octaveSource } from '../../src/words/index.ts'
import { EXPORTED } from './chains.ts'
import { claims, INPUTS, type Outcome, runAll } from './exported-files.ts'

const octave = ['octave-cli', 'octave'].find((name) => spawnSync(name, ['--version']).status === 0)
if (!octave) console.log('Octave files are not run: no octave-cli was found (apt-get install octave-signal)')
const OPTIONS = ['--norc', '--quiet', '--no-gui']
const signalPackage = octave !== undefined && evaluate('pkg load signal', tmpdir()).status === 0
if (octave && !signalPackage) console.log('Octave’s signal package was not found: one comparison is left out')

function evaluate(program: string, cwd: string) {
  return spawnSync(octave ?? '', [...OPTIONS, '--eval', program], { cwd, encoding: 'utf8', timeout: 120_000 })
}

const DRIVER = `
top = pwd;
inputs = strsplit(strtrim(fileread('inputs.txt')), char(10));
for i = 0:str2double(fileread('folders.txt')) - 1
  cd(fullfile(top, num2str(i)));
  clear sidelobe_chain
  file = fopen('check.txt', 'w');
  fprintf(file, '%s', evalc('sidelobe_chain'));
  fclose(file);
  file = fopen('outputs.txt', 'w');
  for k = 1:numel(inputs)
    y = sidelobe_chain(sscanf(inputs{k}, '%f')');
    if rows(y) ~= 1, error('a row must stay a row'); end
    fprintf(file, '%.17g ', y);
    fprintf(file, '\\n');
  end
  fclose(file);
end
`

describe.skipIf(!octave)('Octave', () => {
  let folder = ''
  let outcomes: Outcome[] = []

  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'sidelobe-octave-'))
    outcomes = runAll(
      {
        name: 'Octave',
        fileName: OCTAVE_FILE,
        source: octaveSource,
        driver: DRIVER,
        driverName: 'driver.m',
        command: [octave ?? '', ...OPTIONS],
      },
      folder,
    )
  }, 300_000)
  afterAll(() => rmSync(folder, { recursive: true, force: true }))

  claims(() => outcomes)

  const { chain, extent } = EXPORTED.find(({ title }) => title === 'everything, one after another, epochs')!

  test('run alone, a file checks itself; a column of a table is filtered; faults are refused by name', () => {
    writeFileSync(join(folder, OCTAVE_FILE), octaveSource(exportPlan(chain, extent)))
    const x = INPUTS[0]
    writeFileSync(join(folder, 'in.csv'), `time, Cz\r\n${Array.from(x, (v, i) => `${i},${v}`).join('\r\n')}\r\n`)
    const { stdout, status } = evaluate(
      `sidelobe_chain; sidelobe_chain('in.csv', 'Cz', 'out.csv');
       try, sidelobe_chain(ones(20, 1)); catch e, disp(e.message); end
       try, sidelobe_chain([1 NaN 3]); catch e, disp(e.message); end
       try, sidelobe_chain('in.csv', 'Pz', 'out.csv'); catch e, disp(e.message); end`,
      folder,
    )
    expect(status).toBe(0)
    expect(stdout).toMatch(/^OK: largest difference /)
    expect(stdout).toMatch(/needs at least \d+ samples, the epoch has 20/)
    expect(stdout).toContain('x must be a vector of finite numbers')
    expect(stdout).toContain('in.csv has no column Pz; it has time, Cz')
    const [head, ...rows] = readFileSync(join(folder, 'out.csv'), 'utf8').trim().split('\n')
    expect(head).toBe('Cz')
    const expected = applyChain(chain, x, extent)
    rows.forEach((row, i) => expect(Number(row)).toBeCloseTo(expected[i], 7))
    expect(rows.length).toBe(x.length)
  })

  test('a file whose expected output was changed by a millionth fails loudly', () => {
    const source = octaveSource(exportPlan(chain, extent))
    const at = source.indexOf('expected = [')
    const value = /-?\d+\.\d+/.exec(source.slice(at))![0]
    const changed = source.slice(0, at) + source.slice(at).replace(value, String(Number(value) + 1e-5))
    writeFileSync(join(folder, OCTAVE_FILE), changed)
    const { stderr, status } = evaluate('sidelobe_chain', folder)
    expect(stderr).toContain('FAILED: differs by')
    expect(status).toBe(1)
  })

  test.skipIf(!signalPackage)('the signal package’s own sosfilt runs the exported sections to the same output', () => {
    const { chain } = EXPORTED.find(({ title }) => title === 'a Butterworth low-pass of order 12 forward, continuous')!
    const [stage] = exportPlan(chain, 'continuous').stages
    const rows = Array.from({ length: 6 }, (_, k) => Array.from(stage.sections!.subarray(6 * k, 6 * k + 6)).join(' '))
    const x = INPUTS[1]
    const program = `pkg load signal; fprintf('%.17g\\n', sosfilt([${rows.join('; ')}], [${Array.from(x).join(' ')}]));`
    const y = evaluate(program, folder).stdout.trim().split('\n').map(Number)
    const expected = applyChain(chain, x, 'continuous')
    expect(y.length).toBe(x.length)
    y.forEach((value, i) => expect(Math.abs(value - expected[i])).toBeLessThan(1e-9))
  })
})
