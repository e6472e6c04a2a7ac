import { z } from 'zod'
import { shade } from './horizon.ts'
import { label, quantity } from './quantity.ts'

/** One kind of cell by the five values of its single diode. */
export const cellType = z.strictObject({
  lightCurrentA: quantity(0.01, 30, 'light current of one cell at 1000 W/m² and 25 °C [A]'),
  saturationCurrentA: quantity(1e-30, 1e-3, 'diode saturation current at 25 °C [A]'),
  seriesOhm: quantity(0, 0.5, 'series resistance of one cell [Ω]'),
  shuntOhm: quantity(0.05, 1e6, 'shunt resistance of one cell at 1000 W/m² [Ω]'),
  idealityFactor: quantity(0.5, 3, 'diode ideality factor'),
  lightCurrentAPerC: quantity(-0.05, 0.05, 'change of light current with temperature [A/°C]'),
  bandGapEv: quantity(0.5, 2.5, 'band gap at 25 °C [eV]').default(1.121),
  bandGapPerC: quantity(-0.01, 0, 'relative change of the band gap with temperature [1/°C]').default(-0.0002677),
})

const heatCapacity = quantity(
  0,
  100,
  'heat that the panel takes up per degree and area, 0: it follows light and air at once [kJ/(m²·°C)]',
).default(3)

const cooling = z.discriminatedUnion('kind', [
  z.strictObject({
    kind: z.literal('car-body'),
    lengthM: quantity(0.1, 6, 'length of the surface along the airflow [m]').default(2),
    parkedWm2PerC: quantity(5, 60, 'least heat loss, parked in still air [W/(m²·°C)]').default(17),
    heatPct: quantity(10, 100, 'share of the light that turns to heat: absorbed less made into power [%]').default(67),
    laminarStart: z
      .boolean()
      .describe('whether the airflow starts laminar, as over a clean smooth nose; it then cools less')
      .default(false),
    heatCapacityKjM2C: heatCapacity,
  }),
  z.strictObject({
    kind: z.literal('faiman'),
    u0Wm2PerC: quantity(1, 100, 'Faiman constant heat loss [W/(m²·°C)]'),
    u1WsM3PerC: quantity(0, 50, 'Faiman heat loss with wind; wind above 36 km/h counts as 36 km/h [W·s/(m³·°C)]'),
    heatCapacityKjM2C: heatCapacity,
  }),
])

/** One flat facet of the array. */
export const panel = z.strictObject({
  name: label('name of the panel'),
  pitchDeg: quantity(-60, 60, 'pitch on the car, positive tips the face forward [°]').default(0),
  rollDeg: quantity(-60, 60, 'roll on the car, positive tips the face to the right [°]').default(0),
  lifts: z.boolean().describe('whether the panel is lifted to the sun when parked').default(false),
  cooling: cooling.default(cooling.parse({ kind: 'car-body' })),
  glass: z
    .enum(['martin-ruiz', 'physical', 'ashrae', 'none'])
    .describe('incidence-angle modifier; none: no loss at any angle')
    .default('martin-ruiz'),
  shade,
})

/** How the lifted array can be held. */
export const stand = z
  .strictObject({
    tiltMinDeg: quantity(0, 90, 'least tilt from flat [°]').default(0),
    tiltMaxDeg: quantity(0, 90, 'most tilt from flat [°]'),
    azimuthFromDeg: quantity(0, 360, 'start of the arc it can face, clockwise from north [°]').default(0),
    azimuthToDeg: quantity(0, 360, 'end of the arc it can face; equal to its start: that azimuth only [°]').default(
      360,
    ),
    aim: z
      .enum(['most-light', 'at-sun'])
      .describe('most-light: where the cells get most of all light, flat under an overcast sky; at-sun: at the sun')
      .default('most-light'),
    reaimEveryMin: quantity(
      0,
      720,
      'time that one pose is held before the crew aims anew; 0: follows all the time [min]',
    ).default(10),
  })
  .optional()
  .describe('limits of the stand that lifts the array; left out: the array stays flat')
