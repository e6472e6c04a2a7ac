import { prepareArray } from '../engine/array.ts'
import type { Panel, PreparedArray } from '../engine/array.ts'
import type { Car } from '../engine/balance.ts'
import { preparePack } from '../engine/battery.ts'
import type { Pack } from '../engine/battery.ts'
import { CAR_COOLING } from '../engine/cell-temperature.ts'
import type { CellReference } from '../engine/cell.ts'
import { prepareDrive } from '../engine/drive.ts'
import { fitLosses } from '../engine/loss-fit.ts'
import { prepareRoadLoad, STANDARD_GRAVITY } from '../engine/road.ts'
import type { StringModel } from '../engine/string.ts'
import { prepareTracker } from '../engine/tracker.ts'
import type { Tracker, TrackerWindow } from '../engine/tracker.ts'
import type { CarDocument } from './car.ts'
import type { LearnedLosses } from './learned.ts'

const DEG = Math.PI / 180
const KMH = 1 / 3.6

/** Boltzmann's constant over the elementary charge. [V/K] CODATA 2018, exact in the SI. */
const BOLTZMANN_V_PER_K = 1.380649e-23 / 1.602176634e-19

/** 25 °C, at which cells are described. [K] */
const REFERENCE_K = 298.15

/** Which sky model and ground the planes see. */
export interface Surroundings {
  groundAlbedo: number
  skyModel: 'hay-davies' | 'perez'
}

/**
 * The car as the engine needs it: SI units, tables built, `trackers[i]` holding string `i`.
 *
 * @param learned  losses of trackers by name, in place of those of the document
 */
export function carModel(car: CarDocument, surroundings: Surroundings, learned: LearnedLosses = {}): Car {
  const { body, drive, auxiliaries } = car
  return {
    load: prepareRoadLoad({
      massKg: body.massKg,
      rotatingFactor: body.rotatingFactor,
      dragAreaM2: body.dragAreaM2,
      rollingCoefficient: body.rollingCoefficient,
      rollingPerMps: body.rollingPerKmh / KMH,
      gravity: STANDARD_GRAVITY,
    }),
    drive: prepareDrive({
      efficiency: drive.efficiencyPct / 100,
      regenEfficiency: drive.regenerationPct / 100,
      motorMaxW: drive.motorMaxW,
      motorMaxN: drive.motorMaxNm / drive.wheelRadiusM,
      // The document limits the motor at the wheels, the engine what reaches the bus.
      regenMaxW: (drive.regenerationMaxW * drive.regenerationPct) / 100,
    }),
    windHeightM: body.windHeightM,
    auxDrivingW: auxiliaries.drivingW,
    auxParkedW: auxiliaries.parkedW,
    array: arrayModel(car, surroundings),
    trackers: car.strings.map((s) => {
      const model = trackerModel(car.trackers.find((t) => t.name === s.tracker) ?? car.trackers[0])
      return Object.hasOwn(learned, s.tracker) ? prepareTracker({ ...model, losses: learned[s.tracker] }) : model
    }),
    pack: packModel(car.pack),
    reserveCharge: car.pack.reservePct / 100,
  }
}

/** Panels, stand and strings, with their power tables. */
export function arrayModel(car: CarDocument, surroundings: Surroundings): PreparedArray {
  return prepareArray({
    panels: car.panels.map(panelModel),
    stand:
      car.stand === undefined
        ? null
        : {
            tiltMinRad: car.stand.tiltMinDeg * DEG,
            tiltMaxRad: car.stand.tiltMaxDeg * DEG,
            azimuthFromRad: car.stand.azimuthFromDeg * DEG,
            azimuthToRad: car.stand.azimuthToDeg * DEG,
          },
    strings: car.strings.map((s) => stringModel(car, s)),
    albedo: surroundings.groundAlbedo,
    skyModel: surroundings.skyModel,
  })
}

function panelModel(panel: CarDocument['panels'][number]): Panel {
  return {
    pitchRad: panel.pitchDeg * DEG,
    rollRad: panel.rollDeg * DEG,
    lifts: panel.lifts,
    incidence: panel.glass,
    cooling:
      panel.cooling.kind === 'faiman'
        ? { kind: 'faiman', u0: panel.cooling.u0Wm2PerC, u1: panel.cooling.u1WsM3PerC }
        : {
            ...CAR_COOLING,
            lengthM: panel.cooling.lengthM,
            stillWm2K: panel.cooling.parkedWm2PerC,
            heatFraction: panel.cooling.heatPct / 100,
          },
  }
}

function stringModel(car: CarDocument, string: CarDocument['strings'][number]): StringModel {
  const cell = car.cellTypes[string.cellType]
  const reference: CellReference = {
    lightA: cell.lightCurrentA,
    saturationA: cell.saturationCurrentA,
    seriesOhm: cell.seriesOhm,
    shuntOhm: cell.shuntOhm,
    modifiedIdealityV: cell.idealityFactor * BOLTZMANN_V_PER_K * REFERENCE_K,
    currentCoefficientAPerC: cell.lightCurrentAPerC,
    bandGapEv: cell.bandGapEv,
    bandGapPerC: cell.bandGapPerC,
  }
  return {
    name: string.name,
    cell: reference,
    groups: string.cells.map((group) => ({
      panel: car.panels.findIndex((p) => p.name === group.panel),
      cellsInSeries: group.inSeries,
    })),
    cellsInParallel: string.inParallel,
    soilingFraction: string.soilingPct / 100,
    bypassV: string.bypassDropV,
  }
}

/** The window of a tracker in the engine's terms. */
export const windowModel = ({ window }: CarDocument['trackers'][number]): TrackerWindow => ({
  inputMinV: window.inputMinV,
  inputMaxV: window.inputMaxV,
  inputMaxA: window.inputMaxA,
  outputMinV: window.outputMinV,
  outputMaxV: window.outputMaxV,
  outputMaxA: window.outputMaxA ?? Number.POSITIVE_INFINITY,
  maxW: window.maxW,
})

/** A tracker with its window; its losses as given, or fitted to its bench points. */
export function trackerModel(tracker: CarDocument['trackers'][number]): Tracker {
  const { losses, bench } = tracker
  return prepareTracker({
    name: tracker.name,
    window: windowModel(tracker),
    losses:
      losses === undefined
        ? fitLosses((bench ?? []).map((p) => ({ ...p, outputW: p.inputW * (p.efficiencyPct / 100) }))).losses
        : {
            standingW: losses.standingW,
            switchingFraction: losses.switchingPct / 100,
            conductionOhm: losses.conductionOhm,
            rectifierV: losses.rectifierV,
          },
    trackingEfficiency: tracker.trackingPct / 100,
  })
}

/** The pack from its cells. */
export function packModel(pack: CarDocument['pack']): Pack {
  const { seriesCells, parallelCells, cellOcv } = pack
  return preparePack({
    capacityC: pack.cellAh * 3600 * parallelCells,
    ocv: {
      charge: Float64Array.from(cellOcv, (row) => row.chargePct / 100),
      V: Float64Array.from(cellOcv, (row) => row.restingV * seriesCells),
    },
    resistanceOhm: (pack.cellOhm * seriesCells) / parallelCells + pack.leadsOhm,
    chargeMaxV: pack.cellMaxV * seriesCells,
    dischargeMinV: pack.cellMinV * seriesCells,
    chargeMaxA: pack.cellChargeMaxA * parallelCells,
    dischargeMaxA: pack.cellDischargeMaxA * parallelCells,
    coulombicEfficiency: pack.coulombicPct / 100,
  })
}
