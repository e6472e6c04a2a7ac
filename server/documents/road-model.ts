import { prepareDrive } from '../engine/drive.ts'
import type { Drive } from '../engine/drive.ts'
import { prepareRoadLoad, STANDARD_GRAVITY } from '../engine/road.ts'
import type { RoadLoad } from '../engine/road.ts'
import type { CarDocument } from './car.ts'

const KMH = 1 / 3.6

/** What body and wheels ask of the road. */
export function roadLoadModel(body: CarDocument['body']): RoadLoad {
  return prepareRoadLoad({
    massKg: body.massKg,
    rotatingFactor: body.rotatingFactor,
    dragAreaM2: body.dragAreaM2,
    rollingCoefficient: body.rollingCoefficient,
    rollingPerMps: body.rollingPerKmh / KMH,
    gravity: STANDARD_GRAVITY,
  })
}

/** Motor and its electronics. */
export function driveModel(drive: CarDocument['drive']): Drive {
  return prepareDrive({
    efficiency: drive.efficiencyPct / 100,
    regenEfficiency: drive.regenerationPct / 100,
    motorMaxW: drive.motorMaxW,
    motorMaxN: drive.motorMaxNm / drive.wheelRadiusM,
    // The document limits the motor at the wheels, the engine what reaches the bus.
    regenMaxW: (drive.regenerationMaxW * drive.regenerationPct) / 100,
  })
}
