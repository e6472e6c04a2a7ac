import { prepareDrive } from '../engine/drive.ts'
import type { Drive } from '../engine/drive.ts'
import { prepareBounds } from '../engine/driven-road.ts'
import type { MotionBounds } from '../engine/driven-road.ts'
import { copperOhm } from '../engine/drive-loss.ts'
import type { DriveLosses } from '../engine/drive-loss.ts'
import { prepareRoadLoad, STANDARD_GRAVITY } from '../engine/road.ts'
import type { RoadLoad } from '../engine/road.ts'
import type { CarDocument } from './car.ts'
import type { DriveDocument } from './car-drive.ts'

const KMH = 1 / 3.6
const DEG = Math.PI / 180
const RPM = (2 * Math.PI) / 60

/** What body and wheels ask of the road. */
export function roadLoadModel(body: CarDocument['body']): RoadLoad {
  return prepareRoadLoad({
    massKg: body.massKg,
    rotatingFactor: body.rotatingFactor,
    dragAreaM2: body.dragAreaM2,
    rollingCoefficient: body.rollingCoefficient,
    rollingPerMps: body.rollingPerKmh / KMH,
    gravity: STANDARD_GRAVITY,
    rollingPerC: body.rollingPctPerC / 100,
    rollingAtC: body.rollingAtC,
    ...(body.dragByYaw === undefined ? {} : { yaw: yawFactors(body.dragByYaw) }),
  })
}

const yawFactors = (rows: NonNullable<CarDocument['body']['dragByYaw']>) => ({
  angleRad: Float64Array.from(rows, (row) => row.yawDeg * DEG),
  factor: Float64Array.from(rows, (row) => row.factor),
})

/** Motor and its electronics. */
export function driveModel(drive: DriveDocument): Drive {
  const { wheelRadiusM, regenerationMaxNm = drive.motorMaxNm, motorMaxRpm = Infinity } = drive
  const losses = lossesModel(drive)
  // With one efficiency the motor's braking power at the wheels is a limit of the bus, by that efficiency.
  const throughW =
    losses === undefined ? (drive.regenerationMaxW * drive.regenerationPct) / 100 : drive.regenerationMaxW
  return prepareDrive({
    efficiency: drive.efficiencyPct / 100,
    regenEfficiency: drive.regenerationPct / 100,
    motorMaxW: drive.motorMaxW,
    motorMaxN: drive.motorMaxNm / wheelRadiusM,
    regenMaxW: Math.min(throughW, drive.regenerationBusMaxW ?? Infinity),
    brakingMaxW: drive.regenerationMaxW,
    brakingMaxN: regenerationMaxNm / wheelRadiusM,
    brakingFromMps: drive.regenerationFromKmh * KMH,
    topMps: motorMaxRpm / rpmPerMps(drive),
    ...(losses === undefined ? {} : { losses }),
  })
}

/** How fast the driver changes speed. */
export const boundsModel = (drive: DriveDocument): MotionBounds =>
  prepareBounds({ accelerationMps2: drive.accelerationMps2, brakingMps2: drive.brakingMps2 })

/** Turns of the motor per minute for each m/s of the car. */
const rpmPerMps = ({ gearRatio, wheelRadiusM }: DriveDocument): number => gearRatio / wheelRadiusM / RPM

function lossesModel(drive: DriveDocument): DriveLosses | undefined {
  const { losses, motors, gearRatio, wheelRadiusM } = drive
  if (drive.map !== undefined) return mapModel(drive, drive.map)
  if (losses === undefined) return undefined
  // One motor turns so many radians per metre of road, and pulls its share of the force.
  const radPerM = gearRatio / wheelRadiusM
  const ampPerN = 1 / (radPerM * motors * losses.torqueNmPerA)
  return {
    kind: 'terms',
    standingW: motors * losses.controllerW,
    frictionN: motors * losses.frictionNm * radPerM,
    eddyNsM: (motors * losses.eddyNmPerKrpm * radPerM * radPerM) / (1000 * RPM),
    copperWN2: motors * 3 * copperOhm(losses.phaseOhm, losses.windingC) * ampPerN * ampPerN,
  }
}

/** Efficiency at a torque and a speed as watts of loss of all motors, at the wheels' force and speed. */
function mapModel(drive: DriveDocument, map: NonNullable<DriveDocument['map']>): DriveLosses {
  const { motors, gearRatio, wheelRadiusM } = drive
  return {
    kind: 'table',
    forceN: Float64Array.from(map.torqueNm, (nm) => (nm * motors * gearRatio) / wheelRadiusM),
    speedMps: Float64Array.from(map.speedRpm, (rpm) => rpm / rpmPerMps(drive)),
    lossW: Float64Array.from(
      map.torqueNm.flatMap((nm, i) =>
        map.speedRpm.map((rpm, j) => motors * nm * rpm * RPM * (100 / map.efficiencyPct[i][j] - 1)),
      ),
    ),
  }
}
