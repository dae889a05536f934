import { describe, expect, test } from 'vitest'
import { isElectrodeName } from '../../src/files/electrode-names.ts'
import { headerName } from '../../src/files/table-units.ts'

describe('a header', () => {
  test.each([
    ['time_ms', 'time', 'ms'],
    ['time (s)', 'time', 's'],
    ['Time [ms]', 'Time', 'ms'],
    ['time/ms', 'time', 'ms'],
    ['time, s', 'time', 's'],
    ['time in ms', 'time', 'ms'],
    ['Time.s', 'Time', 's'],
    ['latency (msec)', 'latency', 'ms'],
    ['t_µs', 't', 'µs'],
    ['ms', '', 'ms'],
  ])('"%s" is called "%s" and counts in %s', (field, name, time) => {
    expect(headerName(field, 0)).toMatchObject({ raw: field, name, time })
  })

  test.each([
    ['Cz (µV)', 'Cz', 'µV'],
    ['Cz (\u03bcV)', 'Cz', 'µV'],
    ['Cz_uV', 'Cz', 'µV'],
    ['Cz [mV]', 'Cz', 'mV'],
    ['uV', '', 'µV'],
    ['Fz (nV)', 'Fz', 'nV'],
    ['Fz(V)', 'Fz', 'V'],
    ['odd (left) (µV)', 'odd (left)', 'µV'],
    ['Cz (\ufffdV)', 'Cz', 'µV'],
  ])('"%s" is called "%s" and is in %s', (field, name, amplitude) => {
    expect(headerName(field, 0)).toMatchObject({ raw: field, name, amplitude })
  })

  test('a bracket that holds no unit stays part of the name', () => {
    expect(headerName('Cz (left)', 0)).toEqual({ raw: 'Cz (left)', name: 'Cz (left)', weak: false, damaged: false })
  })

  test('a column without a name is called by its place', () => {
    expect(headerName('  ', 2).raw).toBe('column 3')
  })
})

describe('electrode names', () => {
  test.each([
    'Fp1',
    'CZ',
    'po7',
    'AFz',
    'T10',
    'Iz',
    'FCC3h',
    'AFF5h',
    'M1',
    'VEOG',
    'E12',
    'EEG 001',
    'Cz-A1',
    'EEG Fpz',
    'Fc5.',
    'Cz..',
    'T3',
    'Oz',
  ])('%s is one', (name) => {
    expect(isElectrodeName(name)).toBe(true)
  })
  test.each(['standard', 'target', 'time', 'odd', 'A', 'P300', 'condition 1', 'congruent', 'nd', 'F11', 'S1 obj', ''])(
    '%s is none',
    (name) => {
      expect(isElectrodeName(name)).toBe(false)
    },
  )
})
