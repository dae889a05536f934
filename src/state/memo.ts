/**
 * Remembers the last few results of a pure function by the identity of its arguments, so that a change of the score does not redesign
 * the chain. Results must not be changed by whoever receives them.
 */
export function memoised<Args extends readonly unknown[], Result>(
  compute: (...args: Args) => Result,
  size = 6,
): (...args: Args) => Result {
  const kept: { args: Args; result: Result }[] = []
  return (...args) => {
    const place = kept.findIndex(
      (entry) => entry.args.length === args.length && entry.args.every((value, i) => Object.is(value, args[i])),
    )
    if (place >= 0) {
      const [entry] = kept.splice(place, 1)
      kept.unshift(entry)
      return entry.result
    }
    const result = compute(...args)
    kept.unshift({ args, result })
    kept.length = Math.min(kept.length, size)
    return result
  }
}
