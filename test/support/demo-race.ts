import { readFileSync } from 'node:fs'
import { type DrivenDay, drivenRace, forecastRequest } from '../../server/documents/forecast.ts'
import { checkDocument } from '../../server/documents/check.ts'
import { readCsvRoute } from '../../server/files/csv-route.ts'
import { readCsvSky } from '../../server/files/csv-sky.ts'
import { readGpxRoute } from '../../server/files/gpx-route.ts'
import { skyTableOptions } from '../../server/files/sky-table.ts'

const text = (name: string): string => readFileSync(new URL(`../../server/demo/${name}`, import.meta.url), 'utf8')

interface Entry {
  kind: string
  id: string
  file: string
  query?: Record<string, string>
}

function read({ kind, file, query = {} }: Entry): unknown {
  if (file.endsWith('.json')) return JSON.parse(text(file))
  const reading =
    kind === 'sky'
      ? readCsvSky(text(file), skyTableOptions.parse(query))
      : file.endsWith('.gpx')
        ? readGpxRoute(text(file), query)
        : readCsvRoute(text(file), query)
  return reading.document
}

/** The demo's documents as a request; more fields go over them. */
export function demoRequest(more: object = {}): Record<string, unknown> {
  const entries = JSON.parse(text('demo.json')) as Entry[]
  const of = (kind: string): Entry[] => entries.filter((entry) => entry.kind === kind)
  return {
    car: read(of('car')[0]),
    race: read(of('race')[0]),
    routes: Object.fromEntries(of('route').map((entry) => [entry.id, read(entry)])),
    sky: read(of('sky')[0]),
    ...more,
  }
}

/** A day of the demo, driven at a constant speed. */
export function demoDay(date: string, more: object = {}): DrivenDay {
  const speeds = { kind: 'constant', speedKmh: 70 }
  const { document, problems } = checkDocument(forecastRequest, demoRequest({ speeds, date, ...more }))
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return drivenRace(document, (day) => day).days[0]
}
