import { z } from 'zod'
import { label, quantity } from './quantity.ts'

/** Most points that a route may hold. */
export const MAX_ROUTE_POINTS = 100_000

const column = (min: number, max: number, meaning: string) =>
  z.array(z.number().min(min).max(max)).min(2).max(MAX_ROUTE_POINTS).describe(meaning)

const stretch = z
  .strictObject({
    fromKm: quantity(0, 50_000, 'start of the stretch along the route [km]'),
    toKm: quantity(0, 50_000, 'end of the stretch along the route [km]'),
    limitKmh: quantity(5, 200, 'posted or event speed limit [km/h]').optional(),
    surfaceFactor: quantity(0.5, 5, 'rolling resistance against smooth dry asphalt, 1 = the same').optional(),
    haltsPerKm: quantity(0, 20, 'expected halts from the held speed, per km [1/km]').optional(),
  })
  .refine((s) => s.toKm > s.fromKm, { path: ['toKm'], error: 'more than fromKm' })

/** The road as points, with what is known of its stretches. Distances run along the points. */
export const routeDocument = z
  .strictObject({
    name: label('name of the route'),
    points: z.strictObject({
      latDeg: column(-90, 90, 'latitudes, north positive [°]'),
      lonDeg: column(-180, 180, 'longitudes, east positive [°]'),
      elevationM: column(-500, 9000, 'heights above sea level [m]').optional(),
    }),
    elevation: z
      .strictObject({
        method: label('how the heights were smoothed'),
        climbBeforeM: quantity(0, 1e6, 'total climb as recorded [m]'),
        climbAfterM: quantity(0, 1e6, 'total climb as kept [m]'),
      })
      .optional(),
    limitKmh: quantity(5, 200, 'speed limit where no stretch says otherwise [km/h]').default(110),
    roughnessM: quantity(0.0001, 2, 'roughness length of the land beside the road [m]').default(0.03),
    groundAlbedo: quantity(0, 1, 'share of light that the ground beside the car throws back').default(0.2),
    roadHeatC: quantity(
      0,
      30,
      'by how much the sun warms the air over the panels above the forecast’s, at 1000 W/m² of global light [°C]',
    ).default(0),
    stretches: z.array(stretch).max(5000).default([]),
  })
  .superRefine((route, context) => {
    const { latDeg, lonDeg, elevationM } = route.points
    const wanted = `as many values as latDeg (${latDeg.length})`
    if (lonDeg.length !== latDeg.length)
      context.addIssue({ code: 'custom', path: ['points', 'lonDeg'], message: wanted, input: lonDeg.length })
    if (elevationM !== undefined && elevationM.length !== latDeg.length)
      context.addIssue({ code: 'custom', path: ['points', 'elevationM'], message: wanted, input: elevationM.length })
  })
  .meta({ title: 'Route' })

export type RouteDocument = z.output<typeof routeDocument>
export type RouteInput = z.input<typeof routeDocument>
