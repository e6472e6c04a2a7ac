/**
 * Standard normal numbers from a seed; the same seed gives the same numbers everywhere.
 *
 * @source Marsaglia 1964, polar method; the uniform numbers by sfc32 (Doty-Humphrey, public domain, from memory)
 */
export function normals(seed: number): () => number {
  let [a, b, c, counter] = [seed | 0, (seed ^ 0x9e3779b9) | 0, 0x2545f491, 1]
  const uniform = (): number => {
    const t = (((a + b) | 0) + counter) | 0
    counter = (counter + 1) | 0
    a = b ^ (b >>> 9)
    b = (c + (c << 3)) | 0
    c = ((c << 21) | (c >>> 11)) + t
    c |= 0
    return (t >>> 0) / 4_294_967_296
  }
  for (let i = 0; i < 16; i++) uniform()
  let kept = Number.NaN
  return () => {
    if (!Number.isNaN(kept)) {
      const value = kept
      kept = Number.NaN
      return value
    }
    for (;;) {
      const x = 2 * uniform() - 1
      const y = 2 * uniform() - 1
      const s = x * x + y * y
      if (s >= 1 || s === 0) continue
      const scale = Math.sqrt((-2 * Math.log(s)) / s)
      kept = y * scale
      return x * scale
    }
  }
}
