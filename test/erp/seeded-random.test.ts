import { describe, expect, test } from 'vitest'
import { seededRandom } from '../../src/erp/seeded-random.ts'

/** xoshiro128** again, on 64-bit integers as the paper writes it, from a given state. */
function plain(state: bigint[], count: number): number[] {
  const mask = 0xffffffffn
  const rotate = (x: bigint, k: bigint) => ((x << k) | (x >> (32n - k))) & mask
  const s = state.slice()
  return Array.from({ length: count }, () => {
    const result = (rotate((s[1] * 5n) & mask, 7n) * 9n) & mask
    const t = (s[1] << 9n) & mask
    s[2] ^= s[0]
    s[3] ^= s[1]
    s[1] ^= s[2]
    s[0] ^= s[3]
    s[2] ^= t
    s[3] = rotate(s[3], 11n)
    return Number(result) / 2 ** 32
  })
}

/** The state that a seed fills, by the same mixing on 64-bit integers. */
function stateOf(seed: bigint, stream: bigint): bigint[] {
  const mask = 0xffffffffn
  const mix = (value: bigint) => {
    let z = value
    z = ((z ^ (z >> 16n)) * 0x21f0aaadn) & mask
    z = ((z ^ (z >> 15n)) * 0x735a2d97n) & mask
    return z ^ (z >> 15n)
  }
  let filling = ((stream * 0x9e3779b1n) & mask) ^ mix(seed)
  return Array.from({ length: 4 }, () => {
    filling = (filling + 0x9e3779b9n) & mask
    return mix(filling)
  })
}

describe('seededRandom', () => {
  test('is xoshiro128** as published, computed a second way', () => {
    // Source: Blackman & Vigna 2021, the recurrence as reported
    for (const [seed, stream] of [
      [0, 0],
      [1, 0],
      [1, 7],
      [0xffffffff, 0xfffffffe],
    ]) {
      const random = seededRandom(seed, stream)
      const expected = plain(stateOf(BigInt(seed), BigInt(stream)), 500)
      expect(expected.map(() => random.uniform())).toEqual(expected)
    }
  })

  test('is uniform: mean, variance, neighbours and 64 equal boxes', () => {
    const random = seededRandom(4)
    const n = 200_000
    const boxes = new Float64Array(64)
    let [sum, squares, products] = [0, 0, 0]
    let last = 0.5
    for (let i = 0; i < n; i++) {
      const u = random.uniform()
      boxes[Math.floor(64 * u)]++
      sum += u
      squares += (u - 0.5) ** 2
      products += (u - 0.5) * (last - 0.5)
      last = u
    }
    expect(Math.abs(sum / n - 0.5)).toBeLessThan(4 * Math.sqrt(1 / 12 / n))
    expect(Math.abs(squares / n - 1 / 12)).toBeLessThan(4 * Math.sqrt(1 / 180 / n))
    expect(Math.abs(products / n)).toBeLessThan((4 / 12) * Math.sqrt(1 / n))
    const chiSquare = boxes.reduce((s, count) => s + (count - n / 64) ** 2 / (n / 64), 0)
    // 63 degrees of freedom: mean 63, SD 11.2
    expect(chiSquare).toBeGreaterThan(30)
    expect(chiSquare).toBeLessThan(110)
  })

  test('normal values have the moments and the tails of a standard normal', () => {
    const random = seededRandom(5, 1)
    const n = 200_000
    let [m1, m2, m3, m4, beyond] = [0, 0, 0, 0, 0]
    for (let i = 0; i < n; i++) {
      const x = random.normal()
      m1 += x / n
      m2 += (x * x) / n
      m3 += x ** 3 / n
      m4 += x ** 4 / n
      if (Math.abs(x) > 1.959964) beyond += 1 / n
    }
    expect(Math.abs(m1)).toBeLessThan(4 / Math.sqrt(n))
    expect(Math.abs(m2 - 1)).toBeLessThan(4 * Math.sqrt(2 / n))
    expect(Math.abs(m3)).toBeLessThan(4 * Math.sqrt(15 / n))
    expect(Math.abs(m4 - 3)).toBeLessThan(4 * Math.sqrt(96 / n))
    expect(Math.abs(beyond - 0.05)).toBeLessThan(4 * Math.sqrt((0.05 * 0.95) / n))
  })

  test('seeds and streams give sequences that have nothing to do with each other', () => {
    const n = 20_000
    const draws = [
      [1, 0],
      [1, 1],
      [1, 2],
      [2, 0],
      [3, 1],
    ].map(([seed, stream]) => {
      const random = seededRandom(seed, stream)
      return Array.from({ length: n }, () => random.normal())
    })
    for (let a = 0; a < draws.length; a++) {
      for (let b = 0; b < a; b++) {
        const correlation = draws[a].reduce((s, x, i) => s + x * draws[b][i], 0) / n
        expect(Math.abs(correlation)).toBeLessThan(4.5 / Math.sqrt(n))
      }
    }
  })

  test.each([-1, 0.5, 2 ** 32, NaN])('refuses the seed %s', (seed) => {
    expect(() => seededRandom(seed)).toThrow(/seed must be a whole number from 0 to 4294967295/)
    expect(() => seededRandom(1, seed)).toThrow(/stream must be/)
  })
})
