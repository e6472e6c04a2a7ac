import { describe, expect, it } from 'vitest'
import { coastDownS } from '../../server/engine/coast.ts'
import { rollingN } from '../../server/engine/road.ts'
import { LOAD } from './invented-car.ts'

describe('coast-down times of 40 CFR 86.529-98, figure F98-9: 70 to 60 km/h, F = A + C·V² with V in km/h', () => {
  // The printed 5.57 s of 250 kg is 5.561 s by its own coefficients.
  it.each([
    [150, 4.32, 0.0238, 3.994, 3.99],
    [200, 8.69, 0.0252, 4.848, 4.85],
    [250, 13.06, 0.0266, 5.561, 5.57],
    [300, 17.43, 0.0279, 6.185, 6.18],
  ])('%i kg', (massKg, A, C, computedS, printedS) => {
    const seconds = coastDownS(massKg, A, 0, C * 3.6 ** 2, 70 / 3.6, 60 / 3.6)
    expect(Math.abs(seconds - computedS)).toBeLessThan(0.0005)
    expect(Math.abs(seconds - printedS)).toBeLessThan(0.01)
  })
})

describe('the invented car coasts', () => {
  const coast = (fromKmh: number, toKmh: number): number =>
    coastDownS(250 * 1.03, rollingN(LOAD, 0, 0, 1), 0, 0.5 * 1.17 * 0.1, fromKmh / 3.6, toKmh / 3.6)

  it('from 80 to 60 km/h in 47.0 s, from 60 to 40 in 72.7 s', () => {
    expect(coast(80, 60)).toBeCloseTo(47.0, 1)
    expect(coast(60, 40)).toBeCloseTo(72.7, 1)
  })

  it('in as long as its two halves', () => expect(coast(80, 60) + coast(60, 0)).toBeCloseTo(coast(80, 0), 9))
})

it.each([
  ['two real roots', 8, 3, 0.05],
  ['no real root', 8, 0.1, 0.06],
  ['one double root', 8, 2 * Math.sqrt(8 * 0.06), 0.06],
  ['no square term', 8, 0.4, 0],
  ['constant force', 8, 0, 0],
  ['a linear term that falls', 8, -0.3, 0.02],
])('with %s the closed form agrees with the integral in a thousand Simpson steps', (_name, F0, F1, F2) => {
  const inverse = (v: number): number => 250 / (F0 + F1 * v + F2 * v * v)
  const n = 1000
  const h = (25 - 5) / n
  let sum = inverse(5) + inverse(25)
  for (let i = 1; i < n; i++) sum += (i % 2 === 1 ? 4 : 2) * inverse(5 + i * h)
  expect(coastDownS(250, F0, F1, F2, 25, 5) / ((sum * h) / 3)).toBeCloseTo(1, 9)
})

it.each([
  ['massKg', 0, 8, 0, 25, 5],
  ['fromMps', 250, 8, 0, 5, 25],
  ['F0', 250, 0, 0.02, 25, 0],
  ['F0', 250, 8, -1, 25, 5],
])('an impossible %s is refused', (field, massKg, F0, F1, fromMps, toMps) => {
  expect(() => coastDownS(massKg, F0, F1, 0.02, fromMps, toMps)).toThrowError(expect.objectContaining({ field }))
})
