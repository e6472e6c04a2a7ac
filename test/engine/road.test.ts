import { describe, expect, it } from 'vitest'
import { wheelToBus } from '../../server/engine/drive.ts'
import {
  climbingN,
  dragN,
  type Going,
  holdingN,
  kineticJ,
  prepareRoadLoad,
  rollingN,
  tyreFactor,
  yawFactor,
} from '../../server/engine/road.ts'
import { windAtCarMps } from '../../server/engine/wind.ts'
import { DRIVE, LEVEL, LOAD } from './invented-car.ts'

const AUXILIARIES_W = 30
const powerW = (kmh: number, change: Partial<Going> = {}): number =>
  wheelToBus(DRIVE, (holdingN(LOAD, kmh / 3.6, { ...LEVEL, ...change }) * kmh) / 3.6, kmh / 3.6).busW + AUXILIARIES_W
const atSlope = (slope: number): Partial<Going> => ({ gradeRad: Math.atan(slope) })

describe('the invented car, P = F·v/η + auxiliaries, worked by hand', () => {
  it.each([
    [60, 461, 7.69],
    [80, 897, 11.22],
    [100, 1584, 15.84],
  ])('%i km/h take %i W, %f Wh/km', (kmh, watts, whPerKm) => {
    expect(Math.abs(powerW(kmh) - watts)).toBeLessThan(0.5)
    expect(Math.abs(powerW(kmh) / kmh - whPerKm)).toBeLessThan(0.006)
  })

  it('a grade of 1 % takes 568 W more at 80 km/h', () => {
    expect(Math.abs(powerW(80, atSlope(0.01)) - powerW(80) - 568)).toBeLessThan(0.6)
  })

  it('5 m/s against take 1232 W, with 630 W, across 914 W', () => {
    expect(Math.abs(powerW(80, { headwindMps: 5 }) - 1232)).toBeLessThan(0.5)
    expect(Math.abs(powerW(80, { headwindMps: -5 }) - 630)).toBeLessThan(0.5)
    expect(Math.abs(powerW(80, { crosswindMps: 5 }) - 914)).toBeLessThan(0.5)
    expect(powerW(80, { crosswindMps: -5 })).toBe(powerW(80, { crosswindMps: 5 }))
  })

  it('6 m/s at 10 m as headwind: 1084 W over grass, 1307 W if taken uncorrected', () => {
    expect(Math.abs(powerW(80, { headwindMps: windAtCarMps(6, 0.03, 0.5) }) - 1084)).toBeLessThan(0.5)
    expect(Math.abs(powerW(80, { headwindMps: 6 }) - 1307)).toBeLessThan(0.5)
  })

  it('80 km/h are held by a grade of 1.53 % alone', () => {
    expect(holdingN(LOAD, 80 / 3.6, { ...LEVEL, ...atSlope(-0.015_25) })).toBeGreaterThan(0)
    expect(holdingN(LOAD, 80 / 3.6, { ...LEVEL, ...atSlope(-0.015_35) })).toBeLessThan(0)
  })

  it('80 km/h store 17.7 Wh', () => expect(Math.abs(kineticJ(LOAD, 80 / 3.6) / 3600 - 17.7)).toBeLessThan(0.05))
})

describe('forces', () => {
  it('a wind from behind that is faster than the car pushes it', () => {
    expect(dragN(LOAD, 2, -7, 0, 1.17)).toBe(-dragN(LOAD, 0, 5, 0, 1.17))
    expect(dragN(LOAD, 2, -7, 0, 1.17)).toBeLessThan(0)
  })

  it('rolling grows with speed, surface and weight on the road', () => {
    const soft = { ...LOAD, rollingPerMps: 0.000_05 }
    // 250 · 9.80665 · (0.0035 + 0.00005 · 20) · 1.3, by hand
    expect(rollingN(soft, 20, 0, 1.3)).toBeCloseTo(14.342_226, 6)
    expect(rollingN(soft, 20, 0.2, 1.3) / rollingN(soft, 20, 0, 1.3)).toBeCloseTo(Math.cos(0.2), 12)
  })

  it('climbing energy is weight times height', () => {
    const slope = 0.06
    const alongM = 1000 * Math.hypot(1, slope)
    expect(climbingN(LOAD, Math.atan(slope)) * alongM).toBeCloseTo(250 * 9.806_65 * 60, 6)
  })
})

describe('wind from the side', () => {
  const rad = (deg: number): number => (deg * Math.PI) / 180
  const yaw = { angleRad: Float64Array.of(0, rad(10), rad(20)), factor: Float64Array.of(1, 1.1, 1.3) }
  const slanted = prepareRoadLoad({ ...LOAD, yaw })
  const at = (deg: number, windMps = 20) => yawFactor(yaw, windMps * Math.cos(rad(deg)), windMps * Math.sin(rad(deg)))

  it('from 5° adds half of what it adds from 10°, by hand 30.45 N at 80 km/h', () => {
    // ½ · 1.17 · 0.10 · 1.05 · (22.222/cos 5°) · 22.222
    const v = 80 / 3.6
    expect(dragN(slanted, v, 0, v * Math.tan(rad(5)), 1.17)).toBeCloseTo(30.449_2, 4)
  })

  it('counts the same from both sides, and beyond the table as in its last row', () => {
    for (const deg of [0, 3, 10, 17.5, 20, 60, 120, 179]) expect(at(deg)).toBe(at(-deg))
    expect([at(0), at(10), at(15), at(20), at(90), at(180)]).toEqual([
      1,
      expect.closeTo(1.1, 12),
      expect.closeTo(1.2, 12),
      expect.closeTo(1.3, 12),
      1.3,
      1.3,
    ])
  })

  it('changes nothing with a factor of 1 at every angle', () => {
    const even = { ...LOAD, yaw: { angleRad: Float64Array.of(0, 1), factor: Float64Array.of(1, 1) } }
    for (const cross of [-12, 0, 4]) expect(dragN(even, 20, 3, cross, 1.1)).toBe(dragN(LOAD, 20, 3, cross, 1.1))
  })

  it('by the power law with 1/7, 0.652 of 6 m/s at 10 m as headwind take 1154 W', () => {
    // (0.5/10)^(1/7), by hand; the engine itself uses the logarithmic law.
    const share = 0.05 ** (1 / 7)
    expect(share).toBeCloseTo(0.652, 3)
    expect(Math.abs(powerW(80, { headwindMps: 6 * 0.652 }) - 1154)).toBeLessThan(0.5)
  })
})

describe('a tyre in warm and cold air, 0.86 % per °C from 20 °C', () => {
  const tyre = { ...LOAD, rollingPerC: 0.0086, rollingAtC: 20 }
  // 1/(1 + 0.0086 · (T − 20)), by pocket calculator
  it.each([
    [20, 1],
    [35, 0.885_74],
    [5, 1.148_11],
    [80, 0.7],
    [-60, 1.5],
  ])('rolls at %f °C with %f of its reference', (airC, factor) => {
    expect(tyreFactor(tyre, airC)).toBeCloseTo(factor, 5)
  })

  it('is not asked where no figure is given', () => expect(tyreFactor(LOAD, -30)).toBe(1))
})

it.each([
  ['load.rollingPerC', { rollingPerC: 0.2 }],
  ['load.rollingAtC', { rollingAtC: Number.NaN }],
  ['load.yaw', { yaw: { angleRad: Float64Array.of(0.1, 1), factor: Float64Array.of(1, 1) } }],
  ['load.yaw[1]', { yaw: { angleRad: Float64Array.of(0, 0), factor: Float64Array.of(1, 1) } }],
  ['load.yaw[0]', { yaw: { angleRad: Float64Array.of(0, 1), factor: Float64Array.of(0, 1) } }],
  ['load.massKg', { massKg: 0 }],
  ['load.rotatingFactor', { rotatingFactor: 0.97 }],
  ['load.dragAreaM2', { dragAreaM2: Number.NaN }],
  ['load.rollingCoefficient', { rollingCoefficient: -0.001 }],
  ['load.gravity', { gravity: Infinity }],
])('a wrong %s is refused by name', (field, change) => {
  expect(() => prepareRoadLoad({ ...LOAD, ...change })).toThrowError(expect.objectContaining({ field }))
})
