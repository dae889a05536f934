/**
 * Random numbers that are the same everywhere for the same seed: xoshiro128** 1.1 (Blackman & Vigna, Scrambled linear pseudorandom
 * number generators, ACM Trans. Math. Softw. 47, 2021; placed in the public domain), its state filled by splitmix32.
 */
export interface SeededRandom {
  /** Uniform on [0, 1), 32 bits. */
  uniform(): number
  /** Standard normal, by Marsaglia's polar method (SIAM Review 6, 260–264, 1964). */
  normal(): number
}

/**
 * @param seed   whole number from 0 to 2³² − 1.
 * @param stream another stream of the same seed, so that batches and workers need to hand over no state; from 0 to 2³² − 1.
 * @throws RangeError for a seed or a stream that is none.
 */
export function seededRandom(seed: number, stream = 0): SeededRandom {
  checkWord('seed', seed)
  checkWord('stream', stream)
  // a multiplication by an odd constant keeps different streams different
  let filling = (Math.imul(stream, 0x9e3779b1) ^ splitmix(seed)) | 0
  const next = () => {
    filling = (filling + 0x9e3779b9) | 0
    return splitmix(filling)
  }
  let s0 = next()
  let s1 = next()
  let s2 = next()
  let s3 = next()
  if ((s0 | s1 | s2 | s3) === 0) s0 = 1

  const uniform = () => {
    const product = Math.imul(s1, 5)
    const result = Math.imul((product << 7) | (product >>> 25), 9)
    const shifted = s1 << 9
    s2 ^= s0
    s3 ^= s1
    s1 ^= s2
    s0 ^= s3
    s2 ^= shifted
    s3 = (s3 << 11) | (s3 >>> 21)
    return (result >>> 0) / 2 ** 32
  }
  let spare: number | null = null
  const normal = () => {
    if (spare !== null) {
      const value = spare
      spare = null
      return value
    }
    for (;;) {
      const u = 2 * uniform() - 1
      const v = 2 * uniform() - 1
      const square = u * u + v * v
      if (square > 0 && square < 1) {
        const scale = Math.sqrt((-2 * Math.log(square)) / square)
        spare = v * scale
        return u * scale
      }
    }
  }
  return { uniform, normal }
}

/** The finaliser of splitmix32 (after Steele, Lea & Flood 2014, with the constants of Wellons' 32-bit mixer). */
function splitmix(value: number): number {
  let z = value
  z = Math.imul(z ^ (z >>> 16), 0x21f0aaad)
  z = Math.imul(z ^ (z >>> 15), 0x735a2d97)
  return z ^ (z >>> 15)
}

function checkWord(name: string, value: number): void {
  if (!Number.isInteger(value) || value < 0 || value > 0xffffffff) {
    throw new RangeError(`${name} must be a whole number from 0 to 4294967295, was ${value}`)
  }
}
