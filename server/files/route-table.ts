import { z } from 'zod'
import { label } from '../documents/quantity.ts'
import { routeDocument } from '../documents/route.ts'
import { DELIMITERS } from './csv-table.ts'
import type { FieldSpec } from './header.ts'

export const ROUTE_SPECS: FieldSpec[] = [
  { field: 'latDeg', kind: 'latitude', names: ['lat', 'latitude', 'y'], bare: 'take' },
  { field: 'lonDeg', kind: 'longitude', names: ['lon', 'lng', 'long', 'longitude', 'x'], bare: 'take' },
  {
    field: 'elevationM',
    kind: 'height',
    names: ['elevation', 'elev', 'ele', 'alt', 'altitude', 'height', 'z'],
    bare: 'say',
  },
  {
    field: 'limitKmh',
    kind: 'roadSpeed',
    names: ['speed limit', 'speedlimit', 'limit', 'max speed', 'maxspeed', 'maximum speed', 'posted speed'],
    bare: 'refuse',
  },
  { field: 'surfaceFactor', kind: 'factor', names: ['surface factor', 'surface', 'rolling factor'], bare: 'take' },
  {
    field: 'haltsPerKm',
    kind: 'perDistance',
    names: ['halts per km', 'halts', 'expected halts', 'expected halts per km', 'halts expected'],
    bare: 'take',
  },
]

const FIELDS = ['latDeg', 'lonDeg', 'elevationM', 'limitKmh', 'surfaceFactor', 'haltsPerKm'] as const
export const STRETCH_FIELDS = ['limitKmh', 'surfaceFactor', 'haltsPerKm'] as const
export type RouteField = (typeof FIELDS)[number]
export type StretchField = (typeof STRETCH_FIELDS)[number]

/** What a person may say about a table of road points. */
export const routeTableOptions = z.strictObject({
  name: label('name of the route').optional(),
  columns: z.partialRecord(z.enum(FIELDS), z.string().max(200)).optional().describe('header by field'),
  units: z.partialRecord(z.enum(FIELDS), z.string().max(40)).optional().describe('unit by field'),
  delimiter: z.enum(DELIMITERS).optional().describe('what parts the columns; found by itself when left out'),
  decimal: z.enum(['.', ',']).optional().describe('decimal sign; found by itself when left out'),
})
export type RouteTableOptions = z.input<typeof routeTableOptions>

const { points, stretches } = routeDocument.shape
const stretchShape = stretches.unwrap().element.shape
/** What each column may hold, as the route document has it. */
export const ROUTE_RANGES: Record<RouteField, z.ZodNumber> = {
  latDeg: points.shape.latDeg.element,
  lonDeg: points.shape.lonDeg.element,
  elevationM: points.shape.elevationM.unwrap().element,
  limitKmh: stretchShape.limitKmh.unwrap(),
  surfaceFactor: stretchShape.surfaceFactor.unwrap(),
  haltsPerKm: stretchShape.haltsPerKm.unwrap(),
}
