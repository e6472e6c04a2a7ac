/**
 * Elementary functions for arguments that creep from step to step, without the cost of the full call.
 *
 * Each keeps an anchor (argument and result) in a few slots of a `Float64Array` and answers by a short
 * series around it; once the argument has moved away, the full function is called and the anchor moved. Fresh
 * slots hold NaN, which forces the first full call. Moving the anchor is a function of its own, so that the short
 * part is small enough for the compiler to put in place: called across a border, its numbers would be boxed.
 */
const REACH = 0.05
const TURN_REACH = 0.02

/** Empty slots for `count` numbers of anchors. */
export const nearbySlots = (count: number): Float64Array => new Float64Array(count).fill(Number.NaN)

/** e^x from two slots; within 3e-11 of itself. */
export function expNear(slots: Float64Array, at: number, x: number): number {
  const d = x - slots[at]
  if (!(d < REACH && d > -REACH)) return anchorExp(slots, at, x)
  return slots[at + 1] * (1 + d * (1 + d * (1 / 2 + d * (1 / 6 + d * (1 / 24 + d * (1 / 120))))))
}

function anchorExp(slots: Float64Array, at: number, x: number): number {
  slots[at] = x
  slots[at + 1] = Math.exp(x)
  return slots[at + 1]
}

/** x^power for x > 0 from seven slots; the power must stay the same; within 1e-8 of itself for |power| < 6. */
export function powerNear(slots: Float64Array, at: number, x: number, power: number): number {
  const d = x - slots[at]
  if (!(d < slots[at + 6] && d > -slots[at + 6])) return anchorPower(slots, at, x, power)
  return slots[at + 1] + d * (slots[at + 2] + d * (slots[at + 3] + d * (slots[at + 4] + d * slots[at + 5])))
}

function anchorPower(slots: Float64Array, at: number, x: number, power: number): number {
  slots[at] = x
  slots[at + 6] = x * (REACH / 2)
  slots[at + 1] = x ** power
  for (let k = 1; k < 5; k++) slots[at + 1 + k] = (slots[at + k] * (power + 1 - k)) / (k * x)
  return slots[at + 1]
}

/** The angle whose sine is `sine` and whose cosine is `cosine` (>= 0), from three slots; within 4e-12 rad. */
export function asinNear(slots: Float64Array, at: number, sine: number, cosine: number): number {
  const s = sine * slots[at + 2] - cosine * slots[at + 1]
  if (!(s < REACH && s > -REACH)) return anchorAsin(slots, at, sine, cosine)
  const q = s * s
  return slots[at] + s * (1 + q * (1 / 6 + q * (3 / 40 + q * (15 / 336))))
}

function anchorAsin(slots: Float64Array, at: number, sine: number, cosine: number): number {
  slots[at] = Math.atan2(sine, cosine)
  slots[at + 1] = Math.sin(slots[at])
  slots[at + 2] = Math.cos(slots[at])
  return slots[at]
}

/** cot x for 0 < x < pi from two slots; within 1e-10 of itself. */
export function cotNear(slots: Float64Array, at: number, x: number): number {
  const d = x - slots[at]
  if (!(d < REACH && d > -REACH)) return anchorCot(slots, at, x)
  const q = d * d
  const tangent = d * (1 + q * (1 / 3 + q * (2 / 15 + q * (17 / 315))))
  return (slots[at + 1] - tangent) / (1 + slots[at + 1] * tangent)
}

function anchorCot(slots: Float64Array, at: number, x: number): number {
  slots[at] = x
  slots[at + 1] = 1 / Math.tan(x)
  return slots[at + 1]
}

/** Leaves sin x in slot `at + 3` and cos x in slot `at + 4` of five; within 3e-11. */
export function turnNear(slots: Float64Array, at: number, x: number): void {
  let d = x - slots[at]
  if (!(d < TURN_REACH && d > -TURN_REACH)) {
    anchorTurn(slots, at, x)
    d = 0
  }
  const q = d * d
  const sine = d * (1 - q * (1 / 6))
  const cosine = 1 - q * (1 / 2 - q * (1 / 24))
  slots[at + 3] = slots[at + 1] * cosine + slots[at + 2] * sine
  slots[at + 4] = slots[at + 2] * cosine - slots[at + 1] * sine
}

function anchorTurn(slots: Float64Array, at: number, x: number): void {
  slots[at] = x
  slots[at + 1] = Math.sin(x)
  slots[at + 2] = Math.cos(x)
}
