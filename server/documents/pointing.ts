import { z } from 'zod'
import { skySource } from './sky.ts'

const at = (meaning: string) => z.string().describe(`${meaning} (ISO 8601, local offset)`)
const deg = (meaning: string) => z.number().describe(`${meaning} [°]`)

const amounts = {
  stringsW: z.number().describe('mean of the strings’ best powers [W]'),
  harvestWh: z.number().describe('what the trackers take, at their inputs [Wh]'),
  packWh: z.number().describe('stored energy that the pack gains [Wh]'),
}

const brings = z.strictObject(amounts)

const costs = z.strictObject({
  ...amounts,
  costW: z.number().describe('less than at the best pose, strings’ best powers [W]'),
  costHarvestWh: z.number().describe('less than at the best pose, at the trackers’ inputs [Wh]'),
  costPackWh: z.number().describe('less than at the best pose, in the pack [Wh]'),
})

const yields = {
  best: brings.describe('at the poses told'),
  flat: costs.describe('with the array left down'),
  off: z
    .array(costs.extend({ offDeg: deg('angle between where the array faces and where it should') }))
    .describe('off by up to an angle all through the window, in the direction that costs most'),
}

const hold = z.strictObject({
  from: at('from when the pose is held'),
  to: at('until when'),
  turnToDeg: deg('azimuth that the array faces, clockwise from true north'),
  tiltDeg: deg('tilt from flat'),
  sunAzimuthDeg: deg('azimuth of the sun in the middle of that time, clockwise from true north'),
  sunElevationDeg: deg('elevation of the sun in the middle of that time, as seen through the air'),
  offSunDeg: deg('angle between where the array faces and the sun'),
  ...yields,
})

const window = z.strictObject({
  kind: z.enum(['morning-charge', 'stop', 'evening-charge']),
  name: z.string().describe('place'),
  from: at('start of the stop or of the charging window'),
  to: at('its end: departure from a stop that is stood to its end'),
  arrayUp: at('when the array stands lifted'),
  arrayDown: at('when it begins to come down'),
  headingDeg: deg('where the nose of the parked car points, clockwise from true north'),
  reaimEveryMin: z
    .number()
    .describe('time that a pose is held; 0: the stand follows, poses are those in the middle [min]'),
  holds: z.array(hold),
  total: z.strictObject(yields).describe('while the array is lifted'),
})

export const NO_WINDOW = ['no-stand', 'nothing-lifts', 'never-lifted'] as const

const pointingDay = z.strictObject({
  date: z.string(),
  zone: z.string(),
  utcOffsetMin: z.number().describe('offset of local time when the day opens [min]'),
  windows: z.array(window).describe('morning charge, stops and evening charge in which the array is lifted'),
  noWindow: z.enum(NO_WINDOW).describe('why there is none, where there is none').nullable(),
  cautions: z.array(z.string()).describe('to be read before the array is lifted'),
})

/** Where to point the array in the morning, at stops and in the evening, and what being off costs. */
export const pointingDocument = z
  .strictObject({
    engineVersion: z.string(),
    race: z.string(),
    car: z.string(),
    sky: z.strictObject({ name: z.string(), source: skySource, issuedAt: z.string() }),
    assumptions: z.array(z.string()).describe('what was assumed where the documents are silent'),
    days: z.array(pointingDay),
  })
  .meta({ title: 'Pointing' })

export type PointingDocument = z.output<typeof pointingDocument>
export type PointingDay = PointingDocument['days'][number]
export type PointingWindow = PointingDay['windows'][number]
export type PointingHold = PointingWindow['holds'][number]
