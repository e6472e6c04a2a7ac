import { forecastStore } from '../../server/store/forecast-store.ts'
import type { Sql } from '../../server/store/guarded-sql.ts'

/** Id of a newly saved forecast, for what must name one. */
export async function someForecast(sql: Sql): Promise<string> {
  const saved = await forecastStore(sql).save({
    raceId: 'plateau-run',
    raceVersion: 1,
    carId: 'weaver-2',
    carVersion: 1,
    skyId: 'saturday',
    skyVersion: 1,
    routeVersions: {},
    from: null,
    until: null,
    speeds: { kmh: 72 },
    inputsHash: 'a'.repeat(64),
    engineVersion: '0.1.0',
    budget: {},
  })
  return saved.id
}
