import { readFileSync } from 'node:fs'
import { describe, expect, test } from 'vitest'
import type { BudgetDocument } from '../../server/documents/budget.ts'
import { carDocument } from '../../server/documents/car.ts'
import { checkDocument } from '../../server/documents/check.ts'
import { forecastDocuments, forecastRequest } from '../../server/documents/forecast.ts'
import { readCsvRoute } from '../../server/files/csv-route.ts'
import { readCsvSky } from '../../server/files/csv-sky.ts'
import { readGpxRoute } from '../../server/files/gpx-route.ts'
import { skyTableOptions } from '../../server/files/sky-table.ts'

const demoText = (name: string): string => readFileSync(new URL(`../../server/demo/${name}`, import.meta.url), 'utf8')
const demoJson = (name: string): unknown => JSON.parse(demoText(name))

interface Entry {
  kind: string
  id: string
  file: string
  query?: Record<string, string>
}

function read(entry: Entry): unknown {
  const { kind, file, query = {} } = entry
  if (file.endsWith('.json')) return demoJson(file)
  const reading =
    kind === 'sky'
      ? readCsvSky(demoText(file), skyTableOptions.parse(query))
      : file.endsWith('.gpx')
        ? readGpxRoute(demoText(file), query)
        : readCsvRoute(demoText(file), query)
  if ('problems' in reading && reading.problems !== undefined) throw new Error(JSON.stringify(reading.problems))
  return reading.document
}

function demoBudget(speeds: unknown): BudgetDocument {
  const entries = demoJson('demo.json') as Entry[]
  const of = (kind: string) => entries.filter((e) => e.kind === kind)
  const { document, problems } = checkDocument(forecastRequest, {
    car: read(of('car')[0]),
    race: read(of('race')[0]),
    routes: Object.fromEntries(of('route').map((e) => [e.id, read(e)])),
    sky: read(of('sky')[0]),
    speeds,
  })
  if (document === undefined) throw new Error(JSON.stringify(problems))
  return forecastDocuments(document)
}

describe('the demo race', () => {
  const budget = demoBudget({ kind: 'meet-target' })
  const [friday, saturday, sunday] = budget.days

  test('its documents and files read without a problem and make three days', () => {
    expect(budget.days.map((d) => d.date)).toEqual(['2026-10-16', '2026-10-17', '2026-10-18'])
    expect(saturday.drivenKm).toBeCloseTo(568, 0)
  })

  test('every day has a speed that meets its target and ends at its finish', () => {
    if (process.env.SHOW === '1') {
      for (const day of budget.days) {
        const { series: _s, spans: _p, ...rest } = day
        console.log(JSON.stringify(rest, (_k, v) => (typeof v === 'number' ? Math.round(v * 10) / 10 : v)))
      }
      console.log(budget.assumptions)
    }
    for (const day of [friday, saturday, sunday]) {
      expect(day.outcome.kind, day.outcome.text).toBe('done')
      expect(day.targetMarginWh).toBeGreaterThanOrEqual(0)
      expect(day.marginWh).toBeGreaterThanOrEqual(0)
      expect(day.ledger.shortWh).toBe(0)
    }
  })

  test('its strings lie over curved panels, and its tail tracker loses some of Saturday below its lowest voltage', () => {
    const car = carDocument.parse(demoJson('weaver-2.json'))
    expect(car.strings.length).toBe(3)
    for (const { cells } of car.strings) {
      const places = cells.map(({ panel }) => car.panels.find(({ name }) => name === panel))
      expect(new Set(places.map((place) => `${place?.pitchDeg}/${place?.rollDeg}`)).size).toBe(cells.length)
      expect(cells.length).toBeGreaterThanOrEqual(2)
    }
    const [nose, deck, tail] = saturday.trackers
    expect([...nose.limits, ...deck.limits].every(({ deniedWh }) => deniedWh < 1)).toBe(true)
    const low = tail.limits.find(({ limit }) => limit === 'input-low')
    expect(low?.deniedWh).toBeGreaterThan(5)
    expect(low?.deniedWh).toBeLessThan(50)
  })

  test('one km/h more on Saturday misses the target', () => {
    const faster = demoBudget({
      kind: 'legs',
      speedKmh: friday.heldKmh,
      legs: saturday.stages.map((s) => ({ stage: s.id, speedKmh: (saturday.heldKmh ?? 0) + 1 })),
    })
    expect(faster.days[1].targetMarginWh).toBeLessThan(0)
  })
})
