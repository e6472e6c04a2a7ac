import { describe, expect, test } from 'vitest'
import { carModel } from '../../server/documents/car-model.ts'
import { trackerModel } from '../../server/documents/tracker-model.ts'
import { carDocument } from '../../server/documents/car.ts'
import type { CarInput } from '../../server/documents/car.ts'
import { someCar } from '../support/scenario.ts'

const model = (change: (car: CarInput) => void = () => undefined) => {
  const car = someCar()
  change(car)
  return carModel(carDocument.parse(car), { groundAlbedo: 0.2, skyModel: 'perez' })
}

describe('the car in the engine’s units', () => {
  test('body and drive: km/h to m/s, torque to force, percent to shares', () => {
    const { load, drive, auxDrivingW, auxParkedW, reserveCharge } = model((car) => {
      car.body.rollingPerKmh = 1e-5
    })
    expect(load.rollingPerMps).toBeCloseTo(3.6e-5, 12)
    expect(load).toMatchObject({ massKg: 250, rotatingFactor: 1.03, dragAreaM2: 0.1, rollingCoefficient: 0.0035 })
    expect(drive.motorMaxN).toBeCloseTo(90 / 0.28, 9)
    expect(drive).toMatchObject({ efficiency: 0.96, regenEfficiency: 0.6, motorMaxW: 5000, regenMaxW: 1200 })
    expect([auxDrivingW, auxParkedW, reserveCharge]).toEqual([30, 6, 0.1])
  })

  test('tyres, yaw and what draws: per cent to shares, degrees to radians, and nothing where nothing is given', () => {
    const plain = model()
    expect(plain.load).toMatchObject({ rollingPerC: 0, rollingAtC: 20 })
    expect(plain.load.yaw).toBeUndefined()
    expect(plain.drive.losses).toBeUndefined()
    expect(plain.auxChargingW).toBe(6)
    const { load, auxChargingW, auxParkedW } = model((car) => {
      car.body = { ...car.body, rollingPctPerC: 0.86, rollingAtC: 25 }
      car.body.dragByYaw = [0, 90].map((yawDeg) => ({ yawDeg, factor: 1 + yawDeg / 300 }))
      car.auxiliaries.chargingW = 14
    })
    expect(load.rollingPerC).toBeCloseTo(0.0086, 12)
    expect(load.rollingAtC).toBe(25)
    expect([...(load.yaw?.angleRad ?? [])]).toEqual([0, expect.closeTo(Math.PI / 2, 12)])
    expect([...(load.yaw?.factor ?? [])]).toEqual([1, 1.3])
    expect([auxChargingW, auxParkedW]).toEqual([14, 6])
  })

  test('bounds on a change of speed: 0.6 and 1 m/s² where the document says nothing', () => {
    expect(model().bounds).toEqual({ accelerationMps2: 0.6, brakingMps2: 1 })
    const { bounds } = model((car) => void (car.drive = { ...car.drive, accelerationMps2: 0.4, brakingMps2: 2 }))
    expect(bounds).toEqual({ accelerationMps2: 0.4, brakingMps2: 2 })
  })

  test('limits of braking: km/h, rpm and torque at the wheels, with one efficiency or with losses', () => {
    const braking = { regenerationMaxNm: 56, regenerationFromKmh: 18, motorMaxRpm: 1000, gearRatio: 2 }
    const { drive } = model((car) => void (car.drive = { ...car.drive, ...braking, regenerationBusMaxW: 900 }))
    expect(drive.brakingMaxN).toBeCloseTo(56 / 0.28, 9)
    expect(drive.brakingFromMps).toBeCloseTo(5, 12)
    // 1000 rpm of the motor are 500 of the wheel: 52.36 rad/s · 0.28 m
    expect(drive.topMps).toBeCloseTo(14.6608, 4)
    expect(drive).toMatchObject({ brakingMaxW: 2000, regenMaxW: 900 })
    const losses = { phaseOhm: 0.05, torqueNmPerA: 1.2 }
    expect(model((car) => void (car.drive = { ...car.drive, losses })).drive.regenMaxW).toBe(2000)
  })

  // 30s14p of 3.35 Ah and 45 mΩ with 20 mΩ of leads: 46.9 Ah, 0.1164 Ω, worked by hand
  test('the pack from its cells: volts in series, charge and current in parallel, resistance of both', () => {
    const { pack } = model()
    expect(pack.capacityC / 3600).toBeCloseTo(46.9, 9)
    expect(pack.resistanceOhm).toBeCloseTo(0.11643, 5)
    expect(pack.chargeMaxV).toBeCloseTo(126, 9)
    expect(pack.dischargeMinV).toBeCloseTo(78, 9)
    expect(pack.chargeMaxA).toBeCloseTo(22.4, 9)
    expect(pack.dischargeMaxA).toBeCloseTo(84, 9)
    expect(pack.coulombicEfficiency).toBeCloseTo(0.995, 12)
    expect(pack.ocv.V[1] / 30).toBeCloseTo(3.28, 9)
    expect(pack.ocv.charge[1]).toBeCloseTo(0.1, 12)
  })

  test('panels, stand and strings: degrees to radians, dust and rows counted', () => {
    const { array } = model((car) => {
      car.panels[1].rollDeg = -12
      car.stand = { tiltMinDeg: 5, tiltMaxDeg: 75, azimuthFromDeg: 270, azimuthToDeg: 90 }
      car.strings[1] = { ...car.strings[1], inParallel: 3, soilingPct: 4, bypassDropV: 0.4 }
    })
    const deg = (rad: number | undefined) => ((rad ?? Number.NaN) * 180) / Math.PI
    expect(deg(array.model.panels[1].pitchRad)).toBeCloseTo(8, 9)
    expect(deg(array.model.panels[1].rollRad)).toBeCloseTo(-12, 9)
    expect(deg(array.model.stand?.tiltMinRad)).toBeCloseTo(5, 9)
    expect(deg(array.model.stand?.azimuthFromRad)).toBeCloseTo(270, 9)
    expect(deg(array.model.stand?.azimuthToRad)).toBeCloseTo(90, 9)
    expect(array.model.stand).toMatchObject({ aim: 'most-light', reaimS: 600 })
    expect(array.model.strings[1]).toMatchObject({
      groups: [{ panel: 1, cellsInSeries: 100 }],
      cellsInParallel: 3,
      soilingFraction: 0.04,
      bypassV: 0.4,
    })
    // n·k·T/q at 25 °C: 1.04 · 25.6926 mV (CODATA 2018)
    expect(array.model.strings[0].cell.modifiedIdealityV).toBeCloseTo(0.0267203, 7)
  })

  test('each string is held by the tracker that it names', () => {
    const { trackers } = model((car) => {
      car.trackers.reverse()
      car.trackers[0].trackingPct = 98
    })
    expect(trackers.map((t) => t.name)).toEqual(['deck tracker', 'nose tracker'])
    expect(trackers.map((t) => t.trackingEfficiency)).toEqual([0.995, 0.98])
  })

  test('bench points give the losses that they were made from', () => {
    const { window } = someCar().trackers[0]
    const points = [20, 60, 150, 250, 400].flatMap((inputW) =>
      [70, 90].map((inputV) => {
        const lossW = 1 + 0.08 * (inputW / inputV) ** 2
        return { inputV, outputV: 110, inputW, efficiencyPct: 100 * (1 - lossW / inputW) }
      }),
    )
    const car = carDocument.parse({
      ...someCar(),
      trackers: ['deck tracker', 'nose tracker'].map((name) => ({ name, window, bench: points })),
    })
    const { losses } = trackerModel(car.trackers[0])
    expect(losses.standingW).toBeCloseTo(1, 6)
    expect(losses.conductionOhm).toBeCloseTo(0.08, 6)
  })

  test('what readings show stands in for a bench and its table, and leaves standby and heat', () => {
    const bench = [20, 60, 150, 400].map((inputW) => ({ inputV: 70, outputV: 110, inputW, efficiencyPct: 95 }))
    const derating = { fullToC: 65, leastFromC: 85 }
    const { window } = someCar().trackers[0]
    const car = carDocument.parse({
      ...someCar(),
      trackers: ['deck tracker', 'nose tracker'].map((name) => ({
        name,
        window,
        bench,
        benchUse: 'table',
        standbyW: 0.4,
        derating,
      })),
    })
    const learned = { standingW: 2, switchingFraction: 0.01, conductionOhm: 0.05, rectifierV: 0.3 }
    const of = (by: Record<string, typeof learned>) =>
      carModel(car, { groundAlbedo: 0.2, skyModel: 'perez' }, by).trackers[0]
    expect(of({}).table?.extraW).toHaveLength(4)
    expect(of({ 'deck tracker': learned })).toMatchObject({ losses: learned, standbyW: 0.4 })
    expect(of({ 'deck tracker': learned })).not.toHaveProperty('table')
    expect(of({ 'deck tracker': learned }).derating).toMatchObject({ fullToC: 65, leastShare: 0, parkedCPerW: 2 })
  })
})
