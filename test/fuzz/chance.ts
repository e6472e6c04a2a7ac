/** Random choices that a seed repeats. */
export interface Chance {
  /** A whole number from 0, below the limit. */
  below(limit: number): number
  pick<T>(items: readonly T[]): T
  /** True in about this share of calls. */
  isLucky(share: number): boolean
}

/** The same choices for the same seed (FNV-1a into mulberry32, both public domain, from memory). */
export function chance(seed: string): Chance {
  let state = 0x811c9dc5
  for (const byte of Buffer.from(seed)) state = Math.imul(state ^ byte, 0x01000193)
  const next = (): number => {
    state = (state + 0x6d2b79f5) | 0
    let t = Math.imul(state ^ (state >>> 15), 1 | state)
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32
  }
  const below = (limit: number): number => Math.floor(next() * limit)
  return { below, pick: (items) => items[below(items.length)], isLucky: (share) => next() < share }
}
