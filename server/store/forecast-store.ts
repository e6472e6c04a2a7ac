import type { Fragment, Sql } from './guarded-sql.ts'
import { JsonText } from './json-text.ts'
import { checkField, isUuid, isVersion, json, saving, utc } from './storable.ts'
import { StoreError } from './store-error.ts'

/** What a forecast was reckoned from, and its outcome. */
export interface NewForecast {
  /** A UUID made by the caller, so that a repeat is harmless; made by the database when left out. */
  id?: string
  raceId: string
  raceVersion: number
  carId: string
  carVersion: number
  skyId: string
  skyVersion: number
  /** Version of each route used, by the route's id. */
  routeVersions: Record<string, number>
  speeds: unknown
  /** Where in the middle of a day it begins, and where it ends before its road does; null where it does neither. */
  from: unknown
  until: unknown
  inputsHash: string
  engineVersion: string
  budget: unknown
}

/** A saved forecast without its budget. `createdAt` is ISO 8601 in UTC. */
export interface ForecastEntry extends Omit<NewForecast, 'id' | 'budget'> {
  id: string
  createdAt: string
}

export interface StoredForecast extends ForecastEntry {
  budget: unknown
}

/** The same for handing on, its budget not read. */
export interface ForecastText extends ForecastEntry {
  budget: JsonText
}

export interface SavedForecast {
  id: string
  createdAt: string
}

export interface ForecastStore {
  /** Saves once: the same id with the same inputs again gives back what was saved. */
  save(forecast: NewForecast): Promise<SavedForecast>
  get(id: string): Promise<StoredForecast | null>
  text(id: string): Promise<ForecastText | null>
  /** The race's last 50, newest first. */
  list(raceId: string): Promise<ForecastEntry[]>
  /** The newest forecast from exactly these inputs by this engine. */
  findByInputs(inputsHash: string, engineVersion: string): Promise<StoredForecast | null>
}

/**
 * Forecasts as they were given, never changed.
 *
 * @throws StoreError field-not-storable or forecast-id-taken from `save`
 */
export function forecastStore(sql: Sql): ForecastStore {
  const createdAt = (): Fragment => sql`${utc(sql, 'created_at')} as "createdAt"`

  const entry = (): Fragment => sql`
    id, race_id as "raceId", race_version as "raceVersion", car_id as "carId", car_version as "carVersion",
    sky_id as "skyId", sky_version as "skyVersion", route_versions as "routeVersions", speeds,
    from_here as "from", until_camp as until, inputs_hash as "inputsHash", engine_version as "engineVersion", ${createdAt()}`

  const get = async (id: string): Promise<StoredForecast | null> => {
    if (!isUuid(id)) return null
    const rows = await sql<StoredForecast[]>`select ${entry()}, budget from forecasts where id = ${id}`
    return rows[0] ?? null
  }

  const insert = (f: NewForecast): Promise<SavedForecast[]> =>
    saving(
      { ...f },
      () =>
        sql<SavedForecast[]>`
        insert into forecasts (
          id, race_id, race_version, car_id, car_version, sky_id, sky_version,
          route_versions, speeds, from_here, until_camp, inputs_hash, engine_version, budget
        ) values (
          ${f.id ?? sql`gen_random_uuid()`}, ${f.raceId}, ${f.raceVersion}, ${f.carId}, ${f.carVersion},
          ${f.skyId}, ${f.skyVersion}, ${json(sql, 'routeVersions', f.routeVersions)}, ${json(sql, 'speeds', f.speeds)},
          ${f.from === null ? null : json(sql, 'from', f.from)}, ${f.until === null ? null : json(sql, 'until', f.until)},
          ${f.inputsHash}, ${f.engineVersion}, ${json(sql, 'budget', f.budget)}
        )
        on conflict (id) do nothing
        returning id, ${createdAt()}`,
    )

  return {
    async save(forecast) {
      const { id } = forecast
      checkField('id', id, id === undefined || isUuid(id), 'a UUID')
      for (const field of ['raceVersion', 'carVersion', 'skyVersion'] as const) {
        checkField(field, forecast[field], isVersion(forecast[field]), 'a whole number from 1 to 2147483647')
      }
      const rows = await insert(forecast)
      if (rows.length > 0) return rows[0]
      const saved = id === undefined ? null : await get(id)
      if (saved?.inputsHash === forecast.inputsHash && saved.engineVersion === forecast.engineVersion) {
        return { id: saved.id, createdAt: saved.createdAt }
      }
      throw new StoreError(
        'forecast-id-taken',
        `id: '${id}' is taken by a forecast from other inputs; expected a new UUID.`,
      )
    },

    get,

    async text(id) {
      if (!isUuid(id)) return null
      const rows = await sql<(ForecastEntry & { text: string })[]>`
        select ${entry()}, budget::text as text from forecasts where id = ${id}`
      if (rows.length === 0) return null
      const { text, ...found } = rows[0]
      return { ...found, budget: new JsonText(text) }
    },

    async list(raceId) {
      const rows = await sql<ForecastEntry[]>`
        select ${entry()} from forecasts where race_id = ${raceId} order by save_number desc limit 50`
      return rows
    },

    async findByInputs(inputsHash, engineVersion) {
      const rows = await sql<StoredForecast[]>`
        select ${entry()}, budget from forecasts
        where inputs_hash = ${inputsHash} and engine_version = ${engineVersion}
        order by save_number desc limit 1`
      return rows[0] ?? null
    },
  }
}
