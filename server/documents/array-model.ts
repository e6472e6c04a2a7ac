import { prepareArray } from '../engine/array.ts'
import type { Panel, PreparedArray } from '../engine/array.ts'
import { CAR_COOLING } from '../engine/cell-temperature.ts'
import type { CellReference } from '../engine/cell.ts'
import type { CellFault, StringModel } from '../engine/substrings.ts'
import type { CarDocument } from './car.ts'
import { shadeModel } from './horizon-model.ts'

const DEG = Math.PI / 180

/** Boltzmann's constant over the elementary charge. [V/K] CODATA 2018, exact in the SI. */
const BOLTZMANN_V_PER_K = 1.380649e-23 / 1.602176634e-19

/** 25 °C, at which cells are described. [K] */
const REFERENCE_K = 298.15

/** Which sky model and ground the planes see. */
export interface Surroundings {
  groundAlbedo: number
  skyModel: 'hay-davies' | 'perez'
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
            aim: car.stand.aim,
            reaimS: car.stand.reaimEveryMin * 60,
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
    shade: shadeModel(panel.shade),
    cooling:
      panel.cooling.kind === 'faiman'
        ? {
            kind: 'faiman',
            u0: panel.cooling.u0Wm2PerC,
            u1: panel.cooling.u1WsM3PerC,
            capacityJm2K: panel.cooling.heatCapacityKjM2C * 1000,
          }
        : {
            ...CAR_COOLING,
            lengthM: panel.cooling.lengthM,
            stillWm2K: panel.cooling.parkedWm2PerC,
            heatFraction: panel.cooling.heatPct / 100,
            startsLaminar: panel.cooling.laminarStart,
            capacityJm2K: panel.cooling.heatCapacityKjM2C * 1000,
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
      bypassDiodes: group.bypassDiodes,
    })),
    faults: string.faults.map((fault) => cellFault(string, fault)),
    cellsInParallel: string.inParallel,
    soilingFraction: string.soilingPct / 100,
    bypassV: string.bypassDropV,
  }
}

function cellFault(
  string: CarDocument['strings'][number],
  fault: CarDocument['strings'][number]['faults'][number],
): CellFault {
  return {
    group: string.cells.findIndex((group) => group.panel === fault.panel),
    diode: fault.underDiode - 1,
    cells: fault.cells,
    kind: fault.kind,
    lightShare: fault.kind === 'weak' ? fault.lightPct / 100 : 0,
  }
}
