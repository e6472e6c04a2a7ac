import { z } from 'zod'
import { count, label, quantity } from './quantity.ts'

const cellType = z.strictObject({
  lightCurrentA: quantity(0.01, 30, 'light current of one cell at 1000 W/m² and 25 °C [A]'),
  saturationCurrentA: quantity(1e-30, 1e-3, 'diode saturation current at 25 °C [A]'),
  seriesOhm: quantity(0, 0.5, 'series resistance of one cell [Ω]'),
  shuntOhm: quantity(0.05, 1e6, 'shunt resistance of one cell at 1000 W/m² [Ω]'),
  idealityFactor: quantity(0.5, 3, 'diode ideality factor'),
  lightCurrentAPerC: quantity(-0.05, 0.05, 'change of light current with temperature [A/°C]'),
  bandGapEv: quantity(0.5, 2.5, 'band gap at 25 °C [eV]').default(1.121),
  bandGapPerC: quantity(-0.01, 0, 'relative change of the band gap with temperature [1/°C]').default(-0.0002677),
})

const cooling = z.discriminatedUnion('kind', [
  z.strictObject({
    kind: z.literal('car-body'),
    lengthM: quantity(0.1, 6, 'length of the surface along the airflow [m]').default(2),
    parkedWm2PerC: quantity(5, 60, 'least heat loss, parked in still air [W/(m²·°C)]').default(17),
    heatPct: quantity(10, 100, 'share of the light that turns to heat: absorbed less made into power [%]').default(67),
  }),
  z.strictObject({
    kind: z.literal('faiman'),
    u0Wm2PerC: quantity(1, 100, 'Faiman constant heat loss [W/(m²·°C)]'),
    u1WsM3PerC: quantity(0, 50, 'Faiman heat loss with wind [W·s/(m³·°C)]'),
  }),
])

const panel = z.strictObject({
  name: label('name of the panel'),
  pitchDeg: quantity(-60, 60, 'pitch on the car, positive tips the face forward [°]').default(0),
  rollDeg: quantity(-60, 60, 'roll on the car, positive tips the face to the right [°]').default(0),
  lifts: z.boolean().describe('whether the panel is lifted to the sun when parked').default(false),
  cooling: cooling.default({ kind: 'car-body', lengthM: 2, parkedWm2PerC: 17, heatPct: 67 }),
  glass: z
    .enum(['martin-ruiz', 'physical', 'ashrae', 'none'])
    .describe('incidence-angle modifier; none: no loss at any angle')
    .default('martin-ruiz'),
})

const string = z.strictObject({
  name: label('name of the string'),
  tracker: label('name of the tracker that holds it'),
  cellType: label('name of its cell type'),
  cells: z
    .array(z.strictObject({ panel: label('name of the panel'), inSeries: count(1, 500, 'cells in series there') }))
    .min(1)
    .max(12),
  inParallel: count(1, 20, 'such rows of cells in parallel').default(1),
  soilingPct: quantity(0, 90, 'light lost to dust [%]').default(0),
  bypassDropV: quantity(0, 2, 'forward drop of a bypass diode [V]').default(0.5),
})

const benchPoint = z.strictObject({
  inputV: quantity(1, 1000, 'input voltage [V]'),
  outputV: quantity(1, 1000, 'output voltage [V]'),
  inputW: quantity(0.1, 20_000, 'input power [W]'),
  efficiencyPct: quantity(1, 100, 'output over input power [%]'),
  spreadPct: quantity(0, 20, 'standard uncertainty of the efficiency [points]').default(0.5),
})

const lossTerms = z.strictObject({
  standingW: quantity(0, 200, 'loss with no load [W]'),
  switchingPct: quantity(0, 20, 'loss per input current × output voltage [%]'),
  conductionOhm: quantity(0, 5, 'loss per input current squared [Ω]'),
  rectifierV: quantity(0, 5, 'loss per output current [V]'),
})

const tracker = z
  .strictObject({
    name: label('name of the tracker'),
    window: z.strictObject({
      inputMinV: quantity(0, 1000, 'lowest input voltage [V]'),
      inputMaxV: quantity(1, 1000, 'highest input voltage [V]'),
      inputMaxA: quantity(0.1, 200, 'highest input current [A]'),
      outputMaxV: quantity(1, 1000, 'highest output voltage [V]'),
      outputMinV: quantity(0, 1000, 'lowest output voltage [V]').default(0),
      outputMaxA: quantity(0.1, 200, 'highest output current [A]').optional(),
      maxW: quantity(1, 20_000, 'highest input power [W]'),
    }),
    trackingPct: quantity(50, 100, 'share of the best power that the tracker finds [%]').default(99.5),
    losses: lossTerms.optional(),
    lossesSpreadPct: quantity(
      1,
      200,
      'standard uncertainty of each of the losses given; 25 when left out [%]',
    ).optional(),
    bench: z.array(benchPoint).min(4).max(500).optional(),
  })
  .superRefine((t, context) => {
    const issue = (path: string[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    if ((t.losses === undefined) === (t.bench === undefined))
      issue(['losses'], 'either losses or bench, exactly one of the two', t.losses === undefined ? 'neither' : 'both')
    if (t.window.inputMaxV <= t.window.inputMinV)
      issue(['window', 'inputMaxV'], `more than inputMinV (${t.window.inputMinV})`, t.window.inputMaxV)
    if (t.window.outputMaxV <= t.window.outputMinV)
      issue(['window', 'outputMaxV'], `more than outputMinV (${t.window.outputMinV})`, t.window.outputMaxV)
  })

const meter = z.strictObject({
  name: label('name of the meter'),
  measures: z.enum(['V', 'A']).describe('volts or amps'),
  accuracyPct: quantity(
    0.01,
    20,
    'its class: what it shows is right within this share, anywhere in it evenly likely [%]',
  ),
})

/** Rows of the voltage table closer together than this would be a jump. [%] */
const LEAST_STEP_PCT = 0.01

const pack = z
  .strictObject({
    seriesCells: count(1, 500, 'cells in series'),
    parallelCells: count(1, 500, 'cells in parallel'),
    cellAh: quantity(0.1, 500, 'capacity of one cell [Ah]'),
    cellOcv: z
      .array(
        z.strictObject({
          chargePct: quantity(0, 100, 'charge [%]'),
          restingV: quantity(0.5, 5, 'rested voltage of one cell [V]'),
        }),
      )
      .min(2)
      .max(200)
      .describe('rested cell voltage by charge, from 0 to 100 %'),
    cellOhm: quantity(1e-5, 1, 'resistance of one cell [Ω]'),
    leadsOhm: quantity(0, 1, 'resistance of leads and contactors [Ω]').default(0),
    cellMaxV: quantity(0.5, 5, 'highest cell voltage [V]'),
    cellMinV: quantity(0.1, 5, 'lowest cell voltage [V]'),
    cellChargeMaxA: quantity(0.01, 500, 'highest charging current of one cell [A]'),
    cellDischargeMaxA: quantity(0.01, 1000, 'highest discharging current of one cell [A]'),
    coulombicPct: quantity(80, 100, 'charge stored over charge put in [%]').default(99.5),
    reservePct: quantity(0, 90, 'charge that the crew will not go below [%]'),
  })
  .superRefine((p, context) => {
    const issue = (path: (string | number)[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    const { cellOcv } = p
    if (cellOcv[0].chargePct !== 0) issue(['cellOcv', 0, 'chargePct'], '0 in the first row', cellOcv[0].chargePct)
    const last = cellOcv.length - 1
    if (cellOcv[last].chargePct !== 100)
      issue(['cellOcv', last, 'chargePct'], '100 in the last row', cellOcv[last].chargePct)
    for (let i = 1; i <= last; i++) {
      if (cellOcv[i].chargePct < cellOcv[i - 1].chargePct + LEAST_STEP_PCT)
        issue(
          ['cellOcv', i, 'chargePct'],
          `at least ${LEAST_STEP_PCT} more than the row before (${cellOcv[i - 1].chargePct})`,
          cellOcv[i].chargePct,
        )
      if (cellOcv[i].restingV < cellOcv[i - 1].restingV)
        issue(
          ['cellOcv', i, 'restingV'],
          `not less than the row before (${cellOcv[i - 1].restingV})`,
          cellOcv[i].restingV,
        )
    }
    if (p.cellMaxV <= p.cellMinV) issue(['cellMaxV'], `more than cellMinV (${p.cellMinV})`, p.cellMaxV)
    if (p.cellMaxV < cellOcv[last].restingV)
      issue(['cellMaxV'], `at least the rested voltage at 100 % (${cellOcv[last].restingV})`, p.cellMaxV)
  })

/** The car: body, panels, strings, trackers, drive, pack. */
export const carDocument = z
  .strictObject({
    name: label('name of the car'),
    body: z.strictObject({
      massKg: quantity(20, 5000, 'mass with crew and ballast [kg]'),
      rotatingFactor: quantity(1, 1.3, 'equivalent mass with turning wheels over mass').default(1.03),
      dragAreaM2: quantity(0.02, 3, 'drag area CdA [m²]'),
      rollingCoefficient: quantity(0.0005, 0.05, 'rolling resistance coefficient'),
      rollingPerKmh: quantity(0, 0.001, 'added to the coefficient per km/h [h/km]').default(0),
      windHeightM: quantity(0.1, 5, 'height at which the wind is felt [m]').default(0.5),
    }),
    drive: z.strictObject({
      efficiencyPct: quantity(10, 100, 'motor and controller, bus to wheel [%]'),
      regenerationPct: quantity(0, 100, 'wheel to bus when braking with the motor [%]').default(0),
      motorMaxW: quantity(50, 200_000, 'highest power at the wheels [W]'),
      motorMaxNm: quantity(1, 5000, 'highest torque at the wheels together [N·m]'),
      wheelRadiusM: quantity(0.1, 1, 'rolling radius [m]'),
      regenerationMaxW: quantity(0, 200_000, 'highest braking power of the motor at the wheels [W]').default(0),
    }),
    auxiliaries: z.strictObject({
      drivingW: quantity(0, 2000, 'auxiliaries while driving [W]'),
      parkedW: quantity(0, 2000, 'auxiliaries while parked and awake [W]').default(0),
    }),
    panels: z.array(panel).min(1).max(60),
    stand: z
      .strictObject({
        tiltMinDeg: quantity(0, 90, 'least tilt from flat [°]').default(0),
        tiltMaxDeg: quantity(0, 90, 'most tilt from flat [°]'),
        azimuthFromDeg: quantity(0, 360, 'start of the arc it can face, clockwise from north [°]').default(0),
        azimuthToDeg: quantity(0, 360, 'end of the arc it can face [°]').default(360),
      })
      .optional()
      .describe('limits of the stand that lifts the array; left out: the array stays flat'),
    cellTypes: z.record(label('name of a cell type'), cellType),
    strings: z.array(string).min(1).max(60),
    trackers: z.array(tracker).min(1).max(60),
    meters: z.array(meter).max(60).optional().describe('meters that trackers are read with'),
    pack,
  })
  .superRefine((car, context) => {
    const issue = (path: (string | number)[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    const panels = car.panels.map((p) => p.name)
    const trackers = car.trackers.map((t) => t.name)
    const oneOf = (names: string[]) => `one of ${names.map((name) => JSON.stringify(name)).join(', ')}`
    repeated(panels).forEach((i) => issue(['panels', i, 'name'], 'a name used once', panels[i]))
    repeated(trackers).forEach((i) => issue(['trackers', i, 'name'], 'a name used once', trackers[i]))
    const meters = (car.meters ?? []).map((m) => m.name)
    repeated(meters).forEach((i) => issue(['meters', i, 'name'], 'a name used once', meters[i]))
    const names = car.strings.map((s) => s.name)
    repeated(names).forEach((i) => issue(['strings', i, 'name'], 'a name used once', names[i]))
    const held = car.strings.map((s) => s.tracker)
    repeated(held).forEach((i) => issue(['strings', i, 'tracker'], 'a tracker that holds no other string', held[i]))
    car.strings.forEach((s, i) => {
      if (!trackers.includes(s.tracker)) issue(['strings', i, 'tracker'], oneOf(trackers), s.tracker)
      if (!Object.hasOwn(car.cellTypes, s.cellType))
        issue(['strings', i, 'cellType'], oneOf(Object.keys(car.cellTypes)), s.cellType)
      s.cells.forEach((c, j) => {
        if (!panels.includes(c.panel)) issue(['strings', i, 'cells', j, 'panel'], oneOf(panels), c.panel)
      })
    })
    if (car.stand !== undefined && car.stand.tiltMaxDeg < car.stand.tiltMinDeg)
      issue(['stand', 'tiltMaxDeg'], `at least tiltMinDeg (${car.stand.tiltMinDeg})`, car.stand.tiltMaxDeg)
  })
  .meta({ title: 'Car' })

const repeated = (names: string[]): number[] => names.flatMap((name, i) => (names.indexOf(name) < i ? [i] : []))

export type CarDocument = z.output<typeof carDocument>
export type CarInput = z.input<typeof carDocument>
