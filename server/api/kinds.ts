import { z } from 'zod'
import type { Format } from '../compute/file-jobs.ts'
import { DOCUMENTS, type Kind } from '../compute/documents.ts'
import { routeQuery, skyQuery } from './file-options.ts'
import { slug } from '../documents/quantity.ts'

/** A kind of document as the API shows it. */
export interface KindRoutes {
  kind: Kind
  /** Its collection in addresses. */
  path: string
  schema: z.ZodType
  formats: Format[]
  /** Query parameters of its files' readers. */
  query: z.ZodType
}

const noQuery = z.strictObject({})

export const KINDS: KindRoutes[] = [
  { kind: 'car', path: 'cars', schema: DOCUMENTS.car, formats: ['json'], query: noQuery },
  { kind: 'route', path: 'routes', schema: DOCUMENTS.route, formats: ['json', 'gpx', 'csv'], query: routeQuery },
  { kind: 'race', path: 'races', schema: DOCUMENTS.race, formats: ['json'], query: noQuery },
  { kind: 'sky', path: 'skies', schema: DOCUMENTS.sky, formats: ['json', 'csv'], query: skyQuery },
]

export const pathOf = (kind: Kind): string => KINDS.find((entry) => entry.kind === kind)?.path ?? kind

export const idParam = (kind: string) => z.strictObject({ id: slug(`the ${kind}’s name for machines`) })

export const versionQuery = z.strictObject({
  version: z
    .string()
    .regex(/^[1-9]\d{0,8}$/, 'a version: a whole number from 1')
    .transform(Number)
    .describe('an earlier version instead of the one that holds now')
    .optional(),
})
