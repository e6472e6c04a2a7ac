import type { CarInput } from '../../documents/car.ts'

const TRACKER_WINDOW = { inputMinV: 15, inputMaxV: 100, inputMaxA: 8, outputMaxV: 160, outputMinV: 70, maxW: 350 }
const TRACKER_LOSSES = { standingW: 1.2, switchingPct: 0.35, conductionOhm: 0.045, rectifierV: 0.6 }

/** The canopy stands before the tail panel: a sun ahead and below 25° loses a fifth of its beam there. */
const CANOPY_AHEAD = [
  { bearingDeg: 0, heightDeg: 25, lostPct: 20 },
  { bearingDeg: 40, heightDeg: 15, lostPct: 8 },
  { bearingDeg: 70, heightDeg: 0, lostPct: 0 },
  { bearingDeg: 290, heightDeg: 0, lostPct: 0 },
  { bearingDeg: 320, heightDeg: 15, lostPct: 8 },
]

/** An invented car with four flat panels, one string and one tracker each. */
export const carExample: CarInput = {
  name: 'Weaver 2',
  body: {
    massKg: 248,
    rotatingFactor: 1.03,
    dragAreaM2: 0.115,
    rollingCoefficient: 0.0048,
    rollingPerKmh: 0.000008,
    rollingPctPerC: 0.86,
    rollingAtC: 25,
    dragByYaw: [
      { yawDeg: 0, factor: 1 },
      { yawDeg: 10, factor: 1.04 },
      { yawDeg: 20, factor: 1.15 },
    ],
  },
  drive: {
    efficiencyPct: 94,
    regenerationPct: 60,
    motorMaxW: 5000,
    motorMaxNm: 110,
    wheelRadiusM: 0.278,
    regenerationMaxW: 2500,
    regenerationFromKmh: 8,
    losses: { controllerW: 6, frictionNm: 0.08, eddyNmPerKrpm: 0.05, phaseOhm: 0.06, torqueNmPerA: 1.3, windingC: 70 },
  },
  auxiliaries: { drivingW: 28, parkedW: 6, chargingW: 14 },
  panels: [
    { name: 'nose', pitchDeg: 8, lifts: true },
    { name: 'left', rollDeg: -5, lifts: true },
    { name: 'right', rollDeg: 5, lifts: true },
    { name: 'tail', pitchDeg: -6, lifts: true, shade: CANOPY_AHEAD },
  ],
  stand: { tiltMaxDeg: 70 },
  cellTypes: {
    'high desert mono': {
      lightCurrentA: 6.3,
      saturationCurrentA: 3e-12,
      seriesOhm: 0.0032,
      shuntOhm: 40,
      idealityFactor: 1,
      lightCurrentAPerC: 0.0032,
    },
  },
  strings: ['nose', 'left', 'right', 'tail'].map((panel) => ({
    name: panel,
    tracker: `${panel} tracker`,
    cellType: 'high desert mono',
    cells: [{ panel, inSeries: 64, bypassDiodes: 4 }],
    soilingPct: 2,
    faults: panel === 'left' ? [{ kind: 'weak' as const, panel, underDiode: 2, lightPct: 70 }] : [],
  })),
  trackers: ['nose', 'left', 'right', 'tail'].map((panel) => ({
    name: `${panel} tracker`,
    window: TRACKER_WINDOW,
    losses: TRACKER_LOSSES,
  })),
  pack: {
    seriesCells: 35,
    parallelCells: 12,
    cellAh: 3.4,
    cellOcv: [
      { chargePct: 0, restingV: 3.0 },
      { chargePct: 10, restingV: 3.35 },
      { chargePct: 30, restingV: 3.55 },
      { chargePct: 50, restingV: 3.67 },
      { chargePct: 70, restingV: 3.85 },
      { chargePct: 90, restingV: 4.05 },
      { chargePct: 100, restingV: 4.17 },
    ],
    cellOhm: 0.032,
    ohmFactors: {
      tempsC: [0, 25, 45],
      rows: [
        { chargePct: 0, factors: [3.4, 1.6, 1.3] },
        { chargePct: 20, factors: [2.2, 1.05, 0.85] },
        { chargePct: 80, factors: [2, 1, 0.8] },
        { chargePct: 100, factors: [2.2, 1.1, 0.9] },
      ],
    },
    leadsOhm: 0.012,
    cellMaxV: 4.2,
    cellMinV: 2.8,
    cellChargeMaxA: 1.7,
    cellDischargeMaxA: 6.8,
    chargeTemps: { minC: 0, fullFromC: 10, fullToC: 42, maxC: 45 },
    weakestCell: { capacityDeficitPct: 2, extraResistancePct: 15 },
    heat: { capacityKjPerC: 26, lossMovingWPerC: 9, lossParkedWPerC: 3 },
    reservePct: 15,
  },
}
