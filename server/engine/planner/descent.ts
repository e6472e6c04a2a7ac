/** A smooth function to be made small: its value, its slope written into `slope`. */
export type Objective = (x: Float64Array, slope: Float64Array) => number

/** Steps remembered. */
const MEMORY = 10
const SUFFICIENT = 1e-4

/**
 * Makes a function small inside a box: projected steps of limited-memory BFGS, each held to give a real decrease.
 *
 * Numbers at an edge that the slope holds there are left out of the step, so that the curvature is of the free ones.
 *
 * @param x      start inside the box; overwritten by the end
 * @param scale  guess of the curvature of each number, above 0
 * @returns steps made
 * @source Nocedal & Wright, Numerical Optimization, 2nd ed., alg. 7.4 (two loops) and §16.7 (projection) (from memory)
 */
export function descend(
  f: Objective,
  x: Float64Array,
  box: { low: Float64Array; high: Float64Array; scale: Float64Array },
  most: number,
  enough: number,
): number {
  const n = x.length
  const slope = new Float64Array(n)
  const nextSlope = new Float64Array(n)
  const next = new Float64Array(n)
  const step = new Float64Array(n)
  const free = new Uint8Array(n)
  const moves: { s: Float64Array; y: Float64Array; rho: number }[] = []
  let value = f(x, slope)
  for (let made = 0; made < most; made++) {
    let leftOver = 0
    for (let i = 0; i < n; i++) {
      const isHeld = (x[i] <= box.low[i] && slope[i] > 0) || (x[i] >= box.high[i] && slope[i] < 0)
      free[i] = isHeld ? 0 : 1
      if (!isHeld) leftOver += (slope[i] * slope[i]) / box.scale[i]
    }
    if (leftOver <= enough) return made
    direction(moves, slope, free, box.scale, step)
    let along = dot(step, slope)
    if (!(along < 0)) {
      moves.length = 0
      direction(moves, slope, free, box.scale, step)
      along = dot(step, slope)
      if (!(along < 0)) return made
    }
    let length = 1
    let nextValue = Number.NaN
    let isSound = false
    for (let cut = 0; cut < 30; cut++) {
      let promised = 0
      for (let i = 0; i < n; i++) {
        next[i] = Math.min(Math.max(x[i] + length * step[i], box.low[i]), box.high[i])
        promised += slope[i] * (next[i] - x[i])
      }
      nextValue = f(next, nextSlope)
      if (nextValue <= value + SUFFICIENT * promised && promised < 0) {
        isSound = true
        break
      }
      length *= 0.4
    }
    if (!isSound) {
      if (moves.length === 0) return made
      moves.length = 0
      continue
    }
    remember(moves, x, next, slope, nextSlope)
    x.set(next)
    slope.set(nextSlope)
    value = nextValue
  }
  return most
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i]
  return sum
}

function remember(
  moves: { s: Float64Array; y: Float64Array; rho: number }[],
  x: Float64Array,
  next: Float64Array,
  slope: Float64Array,
  nextSlope: Float64Array,
): void {
  const n = x.length
  const oldest = moves.length === MEMORY ? moves.shift() : undefined
  const { s, y } = oldest ?? { s: new Float64Array(n), y: new Float64Array(n) }
  for (let i = 0; i < n; i++) {
    s[i] = next[i] - x[i]
    y[i] = nextSlope[i] - slope[i]
  }
  const curved = dot(s, y)
  if (curved > 1e-12 * Math.sqrt(dot(s, s) * dot(y, y))) moves.push({ s, y, rho: 1 / curved })
}

/** Step against the slope, by what the last moves told of the curvature. */
function direction(
  moves: { s: Float64Array; y: Float64Array; rho: number }[],
  slope: Float64Array,
  free: Uint8Array,
  scale: Float64Array,
  out: Float64Array,
): void {
  const n = slope.length
  for (let i = 0; i < n; i++) out[i] = free[i] === 1 ? -slope[i] : 0
  const alphas: number[] = []
  for (let m = moves.length - 1; m >= 0; m--) {
    const { s, y, rho } = moves[m]
    const alpha = rho * dot(s, out)
    alphas[m] = alpha
    for (let i = 0; i < n; i++) out[i] -= alpha * y[i]
  }
  let gamma = 1
  if (moves.length > 0) {
    const { y, rho } = moves[moves.length - 1]
    let weighed = 0
    for (let i = 0; i < n; i++) weighed += (y[i] * y[i]) / scale[i]
    gamma = 1 / (rho * weighed)
  }
  for (let i = 0; i < n; i++) out[i] *= gamma / scale[i]
  for (let m = 0; m < moves.length; m++) {
    const { s, y, rho } = moves[m]
    const beta = rho * dot(y, out)
    for (let i = 0; i < n; i++) out[i] += s[i] * (alphas[m] - beta)
  }
  for (let i = 0; i < n; i++) if (free[i] === 0) out[i] = 0
}
