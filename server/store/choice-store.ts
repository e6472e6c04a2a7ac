import type { Conflict, Saved } from './document-store.ts'
import type { Fragment, Sql } from './guarded-sql.ts'
import { checkBy, checkField, isDay, isSlug, isUuid, isVersion, json, saving, utc } from './storable.ts'

/** What the crew follows on a day. */
export interface Choice {
  carId: string
  skyId: string
  speeds: unknown
  /** Where the car is parked before the day's road ends; null or left out where the day drives its road. */
  until?: unknown
}

/** A choice with its day, version and newest forecast. `savedAt` is ISO 8601 in UTC. */
export interface StoredChoice extends Choice {
  date: string
  version: number
  forecastId: string
  savedAt: string
}

export interface ChoiceStore {
  /** The day's choice that holds; null where none was made or the last was taken back. */
  get(raceId: string, date: string): Promise<StoredChoice | null>
  /** The choice that holds on each day of a race, by date. */
  list(raceId: string): Promise<StoredChoice[]>
  /** Races with a choice that holds whose forecast another engine made. */
  outdated(engineVersion: string): Promise<string[]>
  /**
   * Chooses for a day, starting from the version that holds, null where none does.
   *
   * @param forecastId  a saved forecast made from the choice
   */
  put(
    day: { raceId: string; date: string },
    expectedVersion: number | null,
    choice: Choice & { forecastId: string },
    by: string | null,
  ): Promise<Saved | Conflict | 'missing'>
  /** Takes the choice that holds back, so that nothing is followed; its versions stay and count on. */
  takeBack(
    day: { raceId: string; date: string },
    version: number,
    by: string | null,
  ): Promise<Saved | Conflict | 'missing'>
  /** Names a newer forecast of the same choice; false when another choice holds by now. */
  setForecast(raceId: string, date: string, version: number, forecastId: string): Promise<boolean>
}

/**
 * The crew's choice for each day, with every version.
 *
 * @throws StoreError field-not-storable from `put` and `setForecast`
 */
export function choiceStore(sql: Sql): ChoiceStore {
  const savedAt = (): Fragment => sql`${utc(sql, 'saved_at')} as "savedAt"`
  const current = (where: Fragment): Fragment => sql`
    select date, version, "carId", "skyId", speeds, until, "forecastId", "savedAt" from (
      select distinct on (date) date, version, car_id as "carId", sky_id as "skyId", speeds, until_camp as until,
        forecast_id as "forecastId", is_none, ${savedAt()}
      from day_choices where ${where} order by date, version desc
    ) last where not is_none order by date`

  const get: ChoiceStore['get'] = async (raceId, date) => {
    if (!isSlug(raceId) || !isDay(date)) return null
    const rows = await sql<StoredChoice[]>`${current(sql`race_id = ${raceId} and date = ${date}`)}`
    return rows[0] ?? null
  }
  const conflictOrMissing = async (raceId: string, date: string): Promise<Conflict | 'missing'> => {
    const holds = await get(raceId, date)
    return holds === null ? 'missing' : { conflict: holds.version }
  }
  const checkForecast = (id: string): void => checkField('forecastId', id, isUuid(id), 'a UUID')

  return {
    get,

    async list(raceId) {
      if (!isSlug(raceId)) return []
      const rows = await sql<StoredChoice[]>`${current(sql`race_id = ${raceId}`)}`
      return rows
    },

    async outdated(engineVersion) {
      const rows = await sql<{ raceId: string }[]>`
        select distinct c.race_id as "raceId"
        from (
          select distinct on (race_id, date) race_id, forecast_id, is_none
          from day_choices order by race_id, date, version desc
        ) c
        join forecasts f on f.id = c.forecast_id
        where not c.is_none and f.engine_version <> ${engineVersion}
        order by 1`
      return rows.map((row) => row.raceId)
    },

    async put({ raceId, date }, expectedVersion, { carId, skyId, speeds, until = null, forecastId }, by) {
      checkField('raceId', raceId, isSlug(raceId), '1 to 64 lower-case letters, digits or hyphens')
      checkField('date', date, isDay(date), 'a day as YYYY-MM-DD')
      checkForecast(forecastId)
      checkBy(by)
      const expected = expectedVersion ?? 0
      if (expectedVersion !== null && !isVersion(expectedVersion)) return conflictOrMissing(raceId, date)
      const rows = await saving(
        { carId, skyId, speeds, until },
        () => sql<Saved[]>`
        insert into day_choices (race_id, date, version, car_id, sky_id, speeds, until_camp, forecast_id, created_by)
        select ${raceId}, ${date}, last.version + 1, ${carId}, ${skyId}, ${json(sql, 'speeds', speeds)},
          ${until === null ? null : json(sql, 'until', until)}, ${forecastId}::uuid, ${by}::uuid
        from (
          select coalesce(max(version), 0) as version, coalesce(max(version) filter (where not is_none), 0) as held
          from day_choices where race_id = ${raceId} and date = ${date}
        ) last
        where ${expected}::integer = case when last.held = last.version then last.version else 0 end
        on conflict (race_id, date, version) do nothing
        returning version, ${savedAt()}`,
      )
      return rows.length > 0 ? rows[0] : conflictOrMissing(raceId, date)
    },

    async takeBack({ raceId, date }, version, by) {
      checkBy(by)
      if (!isSlug(raceId) || !isDay(date) || !isVersion(version)) return conflictOrMissing(raceId, date)
      const rows = await sql<Saved[]>`
        insert into day_choices
          (race_id, date, version, car_id, sky_id, speeds, until_camp, forecast_id, created_by, is_none)
        select race_id, date, version + 1, car_id, sky_id, speeds, until_camp, forecast_id, ${by}::uuid, true
        from day_choices
        where race_id = ${raceId} and date = ${date} and version = ${version} and not is_none and version = (
          select max(version) from day_choices where race_id = ${raceId} and date = ${date}
        )
        on conflict (race_id, date, version) do nothing
        returning version, ${savedAt()}`
      return rows.length > 0 ? rows[0] : conflictOrMissing(raceId, date)
    },

    async setForecast(raceId, date, version, forecastId) {
      checkForecast(forecastId)
      if (!isSlug(raceId) || !isDay(date) || !isVersion(version)) return false
      const rows = await saving(
        {},
        () => sql`
        update day_choices set forecast_id = ${forecastId}
        where race_id = ${raceId} and date = ${date} and version = ${version} and version = (
          select max(version) from day_choices where race_id = ${raceId} and date = ${date}
        )
        returning version`,
      )
      return rows.length > 0
    },
  }
}
