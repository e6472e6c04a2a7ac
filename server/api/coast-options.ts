import { z } from 'zod'
import type { Format } from '../compute/file-jobs.ts'
import { checkDocument } from '../documents/check.ts'
import { coastTest } from '../documents/coast-down.ts'
import { counted, Fault } from '../errors.ts'
import { coastTableOptions } from '../files/coast-table.ts'
import { more, number } from './file-options.ts'

const { car } = coastTest.shape
const { directions, delimiter, decimal } = coastTableOptions.shape

/** Query parameters beside a logged table: what is known of car, air and road, and how the table is read. */
export const coastQuery = z.strictObject({
  car: car.unwrap().shape.id.optional(),
  massKg: number(20, 5000, 'mass on the day, with crew and ballast; left out: the car’s [kg]'),
  rotatingFactor: number(1, 1.3, 'equivalent mass with turning wheels over mass; left out: the car’s, or 1.03'),
  temperatureC: number(-40, 60, 'air temperature at the test [°C]'),
  pressureHpa: number(400, 1100, 'pressure at the place, not reduced to the sea [hPa]'),
  humidityPct: number(0, 100, 'relative humidity; left out: 50 [%]'),
  densityKgM3: number(0.4, 2, 'density of the air, where it is known [kg/m³]'),
  rollingPerKmh: number(0, 0.001, 'linear rolling term, held or expected; left out: the car’s, or 0 [h/km]'),
  rollingPerKmhSd: number(0, 0.001, 'how well the linear term is known; left out or 0: held [h/km]'),
  rollingPctPerC: number(0, 3, 'rolling that a tyre loses per °C; left out: the car’s, or 0 [%/°C]'),
  gradePct: number(-10, 10, 'steady slope, up on the way there; left out: found from both ways [%]'),
  windAlongMps: number(-40, 40, 'steady wind against the runs there; left out: found from both ways [m/s]'),
  directions,
  delimiter,
  decimal,
  options: more,
})

/** What a query says, parted into the test and the options of the table's reader. */
export interface CoastOptions {
  test: Record<string, unknown>
  table: Record<string, unknown>
}

/**
 * The options beside a body.
 *
 * @throws Fault 'bad-query' with every wrong or needless one
 */
export function coastOptions(format: Format, query: z.output<typeof coastQuery>): CoastOptions {
  const { options, directions: ways, delimiter: parts, decimal: sign, ...known } = query
  if (format === 'json') {
    checkedQuery(z.strictObject({}), query)
    return { test: {}, table: {} }
  }
  const { car: id, temperatureC, pressureHpa, humidityPct, densityKgM3, ...rest } = known
  const table = checkedQuery(
    coastTableOptions,
    without({ ...options, directions: ways, delimiter: parts, decimal: sign }),
  )
  const air = without({ temperatureC, pressureHpa, humidityPct, densityKgM3 })
  return { test: without({ ...rest, car: id === undefined ? undefined : { id }, air }), table }
}

const without = (fields: Record<string, unknown>): Record<string, unknown> =>
  Object.fromEntries(Object.entries(fields).filter(([, value]) => value !== undefined))

function checkedQuery<S extends z.ZodType>(schema: S, query: unknown): z.output<S> {
  const { document, problems } = checkDocument(schema, query)
  if (problems === undefined) return document
  const detail = `The options of this coast-down have ${counted(problems.length, 'problem')}.`
  throw new Fault('bad-query', detail, { errors: problems })
}
