import fc from 'fast-check'
import { describe, test } from 'vitest'
import { advance, backwardStart, multiply, stateSpaceOf } from '../../src/filter/state-space.ts'
import { runStateVariable, stateVariableProgram } from '../../src/filter/state-variable.ts'
import { singleStage } from './arbitrary-chain.ts'
import { expectClose, largest } from './expect-close.ts'

const noise = (n: number) =>
  Float64Array.from({ length: n }, (_, i) => ((i * 7919 + ((i * i) % 1013)) % 2003) / 1001 - 1)

const program = singleStage
  .filter(({ stages }) => stages[0].analogue !== null)
  .map(({ stages }) => stateVariableProgram(stages[0].analogue as Float64Array))

describe('state space of a cascade', () => {
  test('gives the outputs and states of the loop', () => {
    fc.assert(
      fc.property(program, (sections) => {
        const space = stateSpaceOf(sections)
        const input = noise(40)
        const expected = input.slice()
        const expectedStates = new Float64Array(sections.length / 3)
        runStateVariable(sections, expectedStates, expected, 0, 40, false)
        let states = new Float64Array(space.size)
        const actual = input.map((v) => {
          const output = multiply(space.c, states, 1, space.size)[0] + space.through * v
          const change = multiply(space.d, states, space.size, space.size)
          states = states.map((s, i) => s + change[i] + space.b[i] * v)
          return output
        })
        expectClose(actual, expected, 1e-10 * (1 + largest(expected)))
        expectClose(states, expectedStates, 1e-10 * (1 + largest(expectedStates)))
      }),
    )
  })

  test('advance is so many steps without input', () => {
    fc.assert(
      fc.property(program, fc.integer({ min: 0, max: 300 }), (sections, steps) => {
        const states = new Float64Array(sections.length / 3)
        runStateVariable(sections, states, noise(30), 0, 30, false)
        const actual = advance(stateSpaceOf(sections).d, states, steps)
        const size = largest(states)
        runStateVariable(sections, states, new Float64Array(steps), 0, steps, false)
        expectClose(actual, states, 1e-10 * (1 + size))
      }),
    )
  })

  test('backwardStart is the state of a backward pass that has come all the way', () => {
    fc.assert(
      fc.property(program, program, (first, second) => {
        const forward = stateSpaceOf(first)
        const backward = stateSpaceOf(second)
        const states = new Float64Array(first.length / 3)
        runStateVariable(first, states, noise(30), 0, 30, false)
        const tail = new Float64Array(8000)
        runStateVariable(first, states.slice(), tail, 0, tail.length, false)
        const expected = new Float64Array(second.length / 3)
        runStateVariable(second, expected, tail, 0, tail.length, true)
        const x = backwardStart(forward, backward, 1e-3)
        const actual = multiply(x, states, backward.size, forward.size)
        expectClose(actual, expected, 1e-9 * (1 + largest(expected)))
      }),
      { numRuns: 40 },
    )
  })
})
