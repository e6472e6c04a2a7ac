import * as fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { driveModel } from '../../server/documents/road-model.ts'
import { drive as driveDocument } from '../../server/documents/car-drive.ts'
import { prepareDrive, wheelToBus } from '../../server/engine/drive.ts'
import { copperOhm, driveLossW, prepareLosses } from '../../server/engine/drive-loss.ts'
import type { DriveLosses } from '../../server/engine/drive-loss.ts'
import { DRIVE } from './invented-car.ts'

const MPS = 80 / 3.6
const document = {
  efficiencyPct: 96,
  motorMaxW: 5000,
  motorMaxNm: 90,
  wheelRadiusM: 0.28,
  regenerationMaxW: 3000,
}
const hub = { controllerW: 5, frictionNm: 0.05, eddyNmPerKrpm: 0.02, phaseOhm: 0.05, torqueNmPerA: 1.2, windingC: 60 }
const lossesOf = (more: object): DriveLosses => {
  const { losses } = driveModel(driveDocument.parse({ ...document, ...more }))
  if (losses === undefined) throw new Error('no losses')
  return losses
}

describe('copper', () => {
  // (234.5 + T)/(234.5 + 20), the winding-resistance rule of motor testing (IEEE 112, from memory)
  it.each([
    [20, 1],
    [60, 294.5 / 254.5],
    [100, 334.5 / 254.5],
    [-20, 214.5 / 254.5],
  ])('at %i °C has %f of its resistance at 20 °C', (atC, factor) => {
    expect(copperOhm(0.05, atC) / 0.05).toBeCloseTo(factor, 3)
  })
})

describe('a hub motor’s losses by torque and speed, worked by hand', () => {
  // 37.5 N at 80 km/h: 10.5 N·m, 79.365 rad/s, 757.9 rpm, 8.75 A.
  // 5 + 0.05 · 79.365 + 0.02 · 0.7579 · 79.365 + 3 · 8.75² · 0.05 · (1 + 0.00393 · 40) W
  it('come to 23.46 W of 833 W', () => {
    expect(driveLossW(lossesOf({ losses: hub }), 37.5 * MPS, MPS)).toBeCloseTo(23.4606, 3)
  })

  it('two motors share the torque and lose each their own: copper halves, the rest doubles', () => {
    // 10 + 2 · (3.9683 + 1.2030) + ½ · 13.2893
    expect(driveLossW(lossesOf({ losses: hub, motors: 2 }), 37.5 * MPS, MPS)).toBeCloseTo(26.987, 2)
  })

  it('a gear of 3 turns the motor faster with less torque', () => {
    // ω 238.095 rad/s, 2273.6 rpm, 3.5 N·m, 2.9167 A: 5 + 11.9048 + 0.045473 · 238.095 + 3 · 8.5069 · 0.05786
    expect(driveLossW(lossesOf({ losses: hub, gearRatio: 3 }), 37.5 * MPS, MPS)).toBeCloseTo(29.208, 2)
  })
})

describe('an efficiency map', () => {
  const map = {
    speedRpm: [400, 800],
    torqueNm: [5, 20],
    efficiencyPct: [
      [90, 92],
      [94, 95],
    ],
  }
  const losses = lossesOf({ map })
  const at = (nm: number, rpm: number): number => {
    const rad = (rpm * 2 * Math.PI) / 60
    return driveLossW(losses, nm * rad, rad * 0.28)
  }

  // torque · ω · (1/η − 1) at the corners
  it('gives its own points back', () => {
    expect(at(5, 400)).toBeCloseTo(23.271, 3)
    expect(at(5, 800)).toBeCloseTo(36.4238, 3)
    expect(at(20, 400)).toBeCloseTo(53.474, 3)
    expect(at(20, 800)).toBeCloseTo(88.1851, 3)
  })

  it('between them is linear in watts of loss', () => {
    expect(at(12.5, 600)).toBeCloseTo((23.271 + 36.4238 + 53.474 + 88.1851) / 4, 3)
  })

  it('below them keeps the nearest loss, so that efficiency falls to nothing without load', () => {
    expect(at(0.5, 300)).toBeCloseTo(23.271, 3)
    expect(at(0, 800)).toBeCloseTo(36.4238, 3)
  })

  it('above them loses in proportion', () => {
    expect(at(40, 800)).toBeCloseTo(2 * 88.1851, 3)
    expect(at(20, 1200)).toBeCloseTo(1.5 * 88.1851, 3)
  })
})

describe('whatever the losses and limits', () => {
  /** Even over the range; fc.double is even over the digits, so mostly next to 0. */
  const number = (min: number, max: number) =>
    fc.integer({ min: 0, max: 1_000_000 }).map((n) => min + ((max - min) * n) / 1e6)
  const terms = fc
    .record({ standingW: number(0, 50), frictionN: number(0, 3), eddyNsM: number(0, 0.2), copperWN2: number(0, 0.05) })
    .map((t): DriveLosses => ({ kind: 'terms', ...t }))
  const table = fc.array(number(0, 400), { minLength: 6, maxLength: 6 }).map(
    (lossW): DriveLosses => ({
      kind: 'table',
      forceN: Float64Array.of(5, 50, 300),
      speedMps: Float64Array.of(3, 25),
      lossW: Float64Array.from(lossW),
    }),
  )
  const anyDrive = fc
    .record({
      losses: fc.oneof(terms, table, fc.constant(null)),
      regenMaxW: fc.oneof(fc.constant(0), number(0, 3000)),
      brakingMaxW: number(0, 5000),
      brakingMaxN: number(0, 400),
      brakingFromMps: number(0, 8),
    })
    .map(({ losses, ...limits }) => prepareDrive({ ...DRIVE, ...limits, ...(losses === null ? {} : { losses }) }))

  it('no energy is made on the way, braking never returns more than it takes, and no limit is broken', () => {
    let regained = 0
    fc.assert(
      fc.property(anyDrive, number(-8000, 8000), number(0.1, 40), (drive, wheelW, speedMps) => {
        const { busW, lossW, brakedW } = wheelToBus(drive, wheelW, speedMps)
        expect(busW - wheelW - lossW - brakedW).toBeCloseTo(0, 8)
        expect(Math.min(lossW, brakedW)).toBeGreaterThanOrEqual(0)
        expect(busW).toBeGreaterThanOrEqual(wheelW - 1e-9)
        expect(busW).toBeGreaterThanOrEqual(-drive.regenMaxW)
        if (wheelW >= 0) return
        const takenW = -wheelW - brakedW
        expect(takenW).toBeLessThanOrEqual((drive.brakingMaxW ?? 0) + 1e-9)
        expect(takenW).toBeLessThanOrEqual((drive.brakingMaxN ?? 0) * speedMps + 1e-9)
        if (speedMps < (drive.brakingFromMps ?? 0)) expect(takenW).toBeLessThan(1e-9)
        if (busW < 0) regained++
      }),
      { numRuns: 2000 },
    )
    expect(regained).toBeGreaterThan(100)
  })

  it.each([
    ['power', { brakingMaxW: 700 }, 700],
    ['torque, at 20 m/s', { brakingMaxN: 30 }, 600],
    ['torque of the motor where braking has no limit of its own', { motorMaxN: 25 }, 500],
    ['lowest speed', { brakingFromMps: 20.1 }, 0],
    ['bus, 640 W at 80 %', { regenMaxW: 640 }, 800],
  ])('braking is held to the limit of %s', (_name, limits, takenW) => {
    const power = wheelToBus(prepareDrive({ ...DRIVE, ...limits }), -3000, 20)
    expect(power.busW).toBeCloseTo(-0.8 * takenW, 9)
    expect(power.brakedW).toBeCloseTo(3000 - takenW, 9)
  })

  it('braking at the bus limit takes what reaches it', () => {
    const drive = prepareDrive({
      ...DRIVE,
      regenMaxW: 1000,
      losses: { kind: 'terms', standingW: 10, frictionN: 1, eddyNsM: 0, copperWN2: 0.01 },
    })
    // taken − (10 + 20 + 0.01 · (taken/20)²) = 1000: taken = (1 − √(1 − 4 · 0.000025 · 1030))/(2 · 0.000025)
    const takenW = (1 - Math.sqrt(1 - 4 * 0.000_025 * 1030)) / (2 * 0.000_025)
    const power = wheelToBus(drive, -4000, 20)
    expect(power.busW).toBeCloseTo(-1000, 6)
    expect(power.brakedW).toBeCloseTo(4000 - takenW, 3)
  })
})

it.each([
  ['drive.losses.copperWN2', { kind: 'terms', standingW: 1, frictionN: 0, eddyNsM: 0, copperWN2: -1 }],
  ['drive.losses.forceN', { kind: 'table', forceN: [5, 5], speedMps: [1, 2], lossW: [1, 1, 1, 1] }],
  ['drive.losses.speedMps', { kind: 'table', forceN: [5, 6], speedMps: [0, 2], lossW: [1, 1, 1, 1] }],
  ['drive.losses.lossW', { kind: 'table', forceN: [5, 6], speedMps: [1, 2], lossW: [1, 1, 1] }],
  ['drive.losses.lossW', { kind: 'table', forceN: [5, 6], speedMps: [1, 2], lossW: [1, 1, 1, -1] }],
])('a wrong %s is refused by name', (field, losses) => {
  const arrays = Object.fromEntries(
    Object.entries(losses).map(([name, value]) => [name, Array.isArray(value) ? Float64Array.from(value) : value]),
  ) as unknown as DriveLosses
  expect(() => prepareLosses(arrays)).toThrowError(expect.objectContaining({ field }))
})
