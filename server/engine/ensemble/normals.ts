/**
 * Fills arrays with standard normal numbers from a seed; the same seed gives the same numbers everywhere.
 *
 * @source Marsaglia 1964, polar method; the uniform numbers by sfc32 (Doty-Humphrey, public domain, from memory)
 */
export function normals(seed: number): (out: Float64Array) => void {
  const state = Int32Array.of(seed, seed ^ 0x9e3779b9, 0x2545f491, 1)
  const spare = Float64Array.of(Number.NaN)
  for (let i = 0; i < 16; i++) uniform(state)
  return (out) => {
    let i = 0
    if (out.length > 0 && !Number.isNaN(spare[0])) {
      out[i++] = spare[0]
      spare[0] = Number.NaN
    }
    while (i < out.length) {
      const x = 2 * uniform(state) - 1
      const y = 2 * uniform(state) - 1
      const s = x * x + y * y
      if (s >= 1 || s === 0) continue
      const scale = Math.sqrt((-2 * Math.log(s)) / s)
      out[i++] = x * scale
      if (i < out.length) out[i++] = y * scale
      else spare[0] = y * scale
    }
  }
}

function uniform(state: Int32Array): number {
  const [a, b, c, counter] = [state[0], state[1], state[2], state[3]]
  const t = (((a + b) | 0) + counter) | 0
  state[0] = b ^ (b >>> 9)
  state[1] = (c + (c << 3)) | 0
  state[2] = ((c << 21) | (c >>> 11)) + t
  state[3] = counter + 1
  return (t >>> 0) / 4_294_967_296
}
