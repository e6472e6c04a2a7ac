import { InputError } from './input-error.ts'

/** Density of the standard normal. */
export const normalDensity = (x: number): number => Math.exp((-x * x) / 2) / Math.sqrt(2 * Math.PI)

/** Beyond this, the left tail is taken by continued fraction: the series would cancel. */
const TAIL = -4

/** φ(x)/(1 − Φ(x)) turned to the left tail: Φ(x) = φ(x)/tailFraction(x) for x well below 0; Laplace's fraction. */
function tailFraction(x: number): number {
  let below = -x
  for (let k = 80; k >= 1; k--) below = -x + k / below
  return below
}

/**
 * Share of the standard normal below x.
 *
 * @returns 0..1, within 1e-11 of itself from −38 to 38
 * @source Abramowitz & Stegun 26.2.11 (series) and 26.2.14 (Laplace's continued fraction), from memory
 */
export function normalBelow(x: number): number {
  if (x <= TAIL) return normalDensity(x) / tailFraction(x)
  if (x >= -TAIL) return 1 - normalDensity(x) / tailFraction(-x)
  let term = x
  let sum = x
  for (let k = 3; Math.abs(term) > 1e-17 * Math.abs(sum); k += 2) {
    term *= (x * x) / k
    sum += term
  }
  return 0.5 + normalDensity(x) * sum
}

/** φ(x)/Φ(x): how far, in standard deviations, cutting off what lies below moves a mean. Any x. */
export const normalHazard = (x: number): number => (x <= TAIL ? tailFraction(x) : normalDensity(x) / normalBelow(x))

/** Lanczos' coefficients for g = 7, nine terms (from memory; checked by the tests of the quantiles). */
const LANCZOS = [
  0.999_999_999_999_809_9, 676.520_368_121_885_1, -1259.139_216_722_402_8, 771.323_428_777_653_1,
  -176.615_029_162_140_6, 12.507_343_278_686_905, -0.138_571_095_265_720_12, 9.984_369_578_019_572e-6,
  1.505_632_735_149_311_6e-7,
]

/** Natural logarithm of Γ(x), x from 0.5 up. */
function logGamma(x: number): number {
  const base = x + 6.5
  const sum = LANCZOS.reduce((total, factor, k) => total + (k === 0 ? factor : factor / (x - 1 + k)), 0)
  return Math.log(2 * Math.PI) / 2 + (x - 0.5) * Math.log(base) - base + Math.log(sum)
}

/** Density of Student's t. */
function tDensity(t: number, dof: number): number {
  const front = logGamma((dof + 1) / 2) - logGamma(dof / 2) - Math.log(dof * Math.PI) / 2
  return Math.exp(front - ((dof + 1) / 2) * Math.log1p((t * t) / dof))
}

/** Continued fraction of the incomplete beta function, by Lentz' method. */
function betaFraction(x: number, a: number, b: number): number {
  const guard = (value: number): number => (Math.abs(value) < 1e-300 ? 1e-300 : value)
  let c = 1
  let d = 1 / guard(1 - ((a + b) * x) / (a + 1))
  let product = d
  for (let k = 1; k < 2000; k++) {
    const even = (k * (b - k) * x) / ((a + 2 * k - 1) * (a + 2 * k))
    d = 1 / guard(1 + even * d)
    c = guard(1 + even / c)
    product *= d * c
    const odd = (-(a + k) * (a + b + k) * x) / ((a + 2 * k) * (a + 2 * k + 1))
    d = 1 / guard(1 + odd * d)
    c = guard(1 + odd / c)
    product *= d * c
    if (Math.abs(d * c - 1) < 1e-15) break
  }
  return product
}

/** Regularised incomplete beta function. */
function betaShare(x: number, a: number, b: number): number {
  if (x <= 0) return 0
  if (x > (a + 1) / (a + b + 2)) return 1 - betaShare(1 - x, b, a)
  const front = logGamma(a + b) - logGamma(a) - logGamma(b) + a * Math.log(x) + b * Math.log1p(-x)
  return (Math.exp(front) * betaFraction(x, a, b)) / a
}

/**
 * Share of Student's t below a value.
 *
 * @param dof degrees of freedom, from 1 up; Infinity is the normal
 * @returns 0..1
 * @source Abramowitz & Stegun 26.7.1 and 26.5.8 (from memory)
 */
export function tBelow(t: number, dof: number): number {
  checkDof(dof)
  if (dof === Infinity) return normalBelow(t)
  const tail = betaShare(dof / (dof + t * t), dof / 2, 0.5) / 2
  return t < 0 ? tail : 1 - tail
}

/**
 * Value below which a share of Student's t lies.
 *
 * Bisection, ended by Newton's steps.
 *
 * @param p   share, above 0 and below 1
 * @param dof degrees of freedom, from 1 up; Infinity is the normal
 * @throws InputError when either is out of range
 */
export function quantileT(p: number, dof: number): number {
  if (!(p > 0 && p < 1)) throw new InputError('out-of-range', 'p', `${p} given, above 0 and below 1 expected`)
  checkDof(dof)
  if (p < 0.5) return -quantileT(1 - p, dof)
  let low = 0
  let high = 1
  while (tBelow(high, dof) < p && high < 1e16) high *= 2
  for (let i = 0; i < 40; i++) {
    const middle = (low + high) / 2
    if (tBelow(middle, dof) < p) low = middle
    else high = middle
  }
  const middle = (low + high) / 2
  const density = dof === Infinity ? normalDensity(middle) : tDensity(middle, dof)
  return density > 1e-12 ? middle - (tBelow(middle, dof) - p) / density : middle
}

function checkDof(dof: number): void {
  if (!(dof >= 1)) throw new InputError('out-of-range', 'dof', `${dof} given, at least 1 expected`)
}
