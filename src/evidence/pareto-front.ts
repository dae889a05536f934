/**
 * The points that no other beats: none has both |bias| and noise at most as large and one of them smaller. Of points that are equal in both
 * all are on the front; points with a missing figure are on none.
 *
 * By sorting along |bias| and keeping the least noise met so far (Kung, Luccio & Preparata, J. ACM 22, 469–476, 1975, in two dimensions).
 *
 * @returns indices into the points, by ascending |bias|, then by index.
 */
export function paretoFront(
  points: readonly { readonly bias: number | null; readonly noise: number | null }[],
): number[] {
  const known: { index: number; bias: number; noise: number }[] = []
  points.forEach(({ bias, noise }, index) => {
    if (bias !== null && noise !== null && Number.isFinite(bias) && Number.isFinite(noise)) {
      known.push({ index, bias: Math.abs(bias), noise })
    }
  })
  known.sort((a, b) => a.bias - b.bias || a.noise - b.noise || a.index - b.index)
  const front: number[] = []
  let leastBias = Infinity
  let leastNoise = Infinity
  for (const { index, bias, noise } of known) {
    if (noise < leastNoise) {
      leastBias = bias
      leastNoise = noise
      front.push(index)
    } else if (noise === leastNoise && bias === leastBias) {
      front.push(index)
    }
  }
  return front
}
