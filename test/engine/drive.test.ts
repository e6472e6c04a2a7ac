import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { attainableSpeedMps, prepareDrive, wheelToBus } from '../../server/engine/drive.ts'
import { holdingN } from '../../server/engine/road.ts'
import { DRIVE, LEVEL, LOAD } from './invented-car.ts'

describe('from the wheels to the bus', () => {
  it('driving costs the drive its share', () => {
    const power = wheelToBus(DRIVE, 960, 20)
    expect(power).toEqual({ busW: 1000, lossW: 40, brakedW: 0 })
  })

  it('braking gives back what it can and brakes the rest', () => {
    expect(wheelToBus(DRIVE, -1000, 20)).toEqual({ busW: -800, lossW: 200, brakedW: 0 })
    expect(wheelToBus(DRIVE, -5000, 20)).toEqual({ busW: -1500, lossW: 375, brakedW: 3125 })
    expect(wheelToBus({ ...DRIVE, regenMaxW: 0 }, -5000, 20)).toEqual({ busW: 0, lossW: 0, brakedW: 5000 })
    expect(wheelToBus({ ...DRIVE, regenEfficiency: 0 }, -5000, 20)).toEqual({ busW: 0, lossW: 0, brakedW: 5000 })
  })

  it('every watt has a name', () => {
    fc.assert(
      fc.property(fc.double({ min: -20_000, max: 20_000, noNaN: true }), (wheelW) => {
        const power = wheelToBus(DRIVE, wheelW, 20)
        expect(power.busW - wheelW - power.lossW - power.brakedW).toBeCloseTo(0, 9)
        expect(Math.min(power.lossW, power.brakedW)).toBeGreaterThanOrEqual(0)
        expect(power.busW).toBeGreaterThanOrEqual(-DRIVE.regenMaxW)
      }),
    )
  })
})

describe('the speed that the motor can hold', () => {
  const up = (slope: number) => ({ ...LEVEL, gradeRad: Math.atan(slope) })

  it('is the wanted one where the motor has enough', () => {
    expect(attainableSpeedMps(LOAD, DRIVE, LEVEL, 22)).toBe(22)
    expect(attainableSpeedMps(LOAD, DRIVE, up(-0.1), 30)).toBe(30)
  })

  it('uses the whole power on a hill', () => {
    const speedMps = attainableSpeedMps(LOAD, DRIVE, up(0.1), 30)
    expect((holdingN(LOAD, speedMps, up(0.1)) * speedMps) / DRIVE.motorMaxW).toBeCloseTo(1, 12)
    expect(speedMps).toBeLessThan(30)
  })

  it('uses the whole force where torque is short', () => {
    // Level, v = √((F − rolling)/(½ρCdA)), by hand with 40 N.
    const weak = { ...DRIVE, motorMaxN: 40 }
    const expectedMps = Math.sqrt((40 - 250 * 9.806_65 * 0.0035) / (0.5 * 1.17 * 0.1))
    expect(attainableSpeedMps(LOAD, weak, LEVEL, 40)).toBeCloseTo(expectedMps, 12)
  })

  it('is none on a hill that is too steep for the torque', () => {
    expect(attainableSpeedMps(LOAD, DRIVE, up(0.2), 30)).toBe(0)
  })

  it('never breaks a limit and never leaves speed on the road, whatever wind and slope', () => {
    const between = (min: number, max: number) => fc.double({ min, max, noNaN: true })
    fc.assert(
      fc.property(
        between(-0.12, 0.18),
        between(-12, 12),
        between(-12, 12),
        between(1, 40),
        (gradeRad, headwindMps, crosswindMps, wantedMps) => {
          const going = { ...LEVEL, gradeRad, headwindMps, crosswindMps }
          const canHold = (speedMps: number): boolean => {
            const forceN = holdingN(LOAD, speedMps, going)
            return forceN <= DRIVE.motorMaxN && forceN * speedMps <= DRIVE.motorMaxW
          }
          const speedMps = attainableSpeedMps(LOAD, DRIVE, going, wantedMps)
          if (speedMps > 0) expect(canHold(speedMps)).toBe(true)
          if (speedMps < wantedMps) expect(canHold(speedMps + 1e-6)).toBe(false)
        },
      ),
      { numRuns: 1000 },
    )
  })

  it('is never above the speed that the motor turns at', () => {
    expect(attainableSpeedMps(LOAD, { ...DRIVE, topMps: 18 }, LEVEL, 22)).toBeCloseTo(18, 12)
    expect(attainableSpeedMps(LOAD, { ...DRIVE, topMps: 18 }, LEVEL, 17)).toBe(17)
  })

  it('an endless wish is refused', () => {
    expect(() => attainableSpeedMps(LOAD, DRIVE, LEVEL, Infinity)).toThrowError(/wantedMps: Infinity given/)
  })
})

it.each([
  ['drive.efficiency', { efficiency: 0 }],
  ['drive.efficiency', { efficiency: 1.1 }],
  ['drive.regenEfficiency', { regenEfficiency: Number.NaN }],
  ['drive.motorMaxW', { motorMaxW: 0 }],
  ['drive.motorMaxN', { motorMaxN: -1 }],
  ['drive.regenMaxW', { regenMaxW: -1 }],
  ['drive.brakingMaxW', { brakingMaxW: Number.NaN }],
  ['drive.brakingMaxN', { brakingMaxN: -1 }],
  ['drive.brakingFromMps', { brakingFromMps: -1 }],
  ['drive.topMps', { topMps: 0 }],
])('a wrong %s is refused by name', (field, change) => {
  expect(() => prepareDrive({ ...DRIVE, ...change })).toThrowError(expect.objectContaining({ field }))
})
