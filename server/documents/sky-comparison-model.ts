import { InputError } from '../engine/input-error.ts'
import { geodesicM } from '../engine/route.ts'
import { prepareSky } from '../engine/sky.ts'
import { compareAt, LIGHT_COLUMNS, type ComparedPlace, type SkyMeasure } from '../engine/sky-compare.ts'
import { reachOf, type SkySide } from '../engine/sky-common-rows.ts'
import { type ComparedRows, skyScore } from '../engine/sky-score.ts'
import { localClock } from './local-clock.ts'
import { localIso } from './local-time.ts'
import type { ComparedScore, ComparisonRequest, SkyComparison } from './sky-comparison.ts'
import { LINKE_DEFAULT, skyInputs } from './sky-model.ts'
import { skyWorth } from './sky-worth.ts'
import type { SkyDocument, SkyPlace } from './sky.ts'

const H = 3_600_000

type Clock = ReturnType<typeof localClock>

/** The document's name of each measure, and its value of one engine unit. */
const NAMES: Record<SkyMeasure, { id: ComparedScore['id']; factor: number }> = {
  ghiWm2: { id: 'ghiWm2', factor: 1 },
  dniWm2: { id: 'dniWm2', factor: 1 },
  dhiWm2: { id: 'dhiWm2', factor: 1 },
  clearSkyIndex: { id: 'clearSkyIndex', factor: 1 },
  airC: { id: 'airTempC', factor: 1 },
  windMps: { id: 'windMps', factor: 1 },
  windAlongMps: { id: 'windAlongMps', factor: 1 },
  windAcrossMps: { id: 'windAcrossMps', factor: 1 },
  pressurePa: { id: 'pressureHpa', factor: 0.01 },
}

/** Ends of the spans of lead time, at which forecasts are usually told apart: common practice, no source. [h] */
const LEADS_H = [0, 6, 12, 24, 48, 72, 120, Number.POSITIVE_INFINITY]

/**
 * How far a forecast was from what was measured, at every measured place, and what that is worth on a day.
 *
 * @throws InputError where the two have no time in common, or the day cannot be worked out with both
 */
export function compareSkies(request: ComparisonRequest): SkyComparison {
  const { forecast, measured, day } = request
  const zone = request.zone ?? day?.race.zone ?? offsetZone(measured)
  const sides = { forecast: sideOf(forecast, 'forecast.places'), measured: sideOf(measured, 'measured.places') }
  const compared = measured.places.map((_, p) => compareAt(sides.forecast, sides.measured, p))
  const clock = localClock(zone)
  const places = compared.flatMap((one, p) => {
    if (one.global.fromMs.length === 0) return []
    return [placeOf(one, measured.places[p], { forecast, zone, clock })]
  })
  if (places.length === 0) throw noOverlap(sides, zone)
  const missed = measured.places.filter((_, p) => compared[p].global.fromMs.length === 0)
  return {
    forecast: headOf(forecast),
    measured: headOf(measured),
    zone,
    places,
    notes: [
      ...missed.map(({ name }) => `${name}: no row that the forecast reaches over; left out.`),
      ...lightNotes('forecast', forecast),
      ...lightNotes('measured', measured),
      ...lackingNotes(compared),
    ],
    worth: day === undefined ? null : skyWorth(request, day),
  }
}

/** The offset of the first measured stamp as a zone. */
const offsetZone = ({ places }: SkyDocument): string => `UTC${/[+-]\d{2}:\d{2}$/.exec(places[0].at[0])?.[0] ?? ''}`

const headOf = ({ name, source, issuedAt }: SkyDocument) => ({ name, source, issuedAt })

function sideOf(sky: SkyDocument, field: string): SkySide {
  const places = skyInputs(sky, undefined, field)
  return { places, sky: prepareSky({ places, linkeDefault: LINKE_DEFAULT }) }
}

function noOverlap({ forecast, measured }: Record<'forecast' | 'measured', SkySide>, zone: string): InputError {
  const [ours, theirs] = [forecast.places, measured.places].map((places) => {
    const reaches = places.flatMap((place) => reachOf([place], LIGHT_COLUMNS) ?? [])
    const fromMs = Math.min(...reaches.map((reach) => reach.fromMs))
    const toMs = Math.max(...reaches.map((reach) => reach.toMs))
    return `${localIso(fromMs, zone)} to ${localIso(toMs, zone)}`
  })
  return new InputError(
    'no-overlap',
    'measured.places',
    `the light of the forecast covers ${ours}, the measured ${theirs}; expected at least one measured row inside the forecast`,
  )
}

function placeOf(
  { measures, global }: ComparedPlace,
  place: SkyPlace,
  { forecast, zone, clock }: { forecast: SkyDocument; zone: string; clock: Clock },
): SkyComparison['places'][number] {
  const last = global.toMs.length - 1
  const issuedMs = Date.parse(forecast.issuedAt)
  const timed = [...measures].map(([measure, rows]): TimedRows => {
    const mids = rows.fromMs.map((_, row) => midMs(rows, row))
    const hours = Int8Array.from(mids, clock.hourOf)
    return { measure, rows, hours, leadH: mids.map((ms) => (ms - issuedMs) / H) }
  })
  const scoresOf = (keeps: (of: TimedRows, row: number) => boolean): ComparedScore[] =>
    timed.flatMap((of) => {
      const score = skyScore(of.rows, (row) => keeps(of, row))
      return score === null ? [] : [inUnits(of.measure, score)]
    })
  const leads = forecast.source === 'forecast' ? LEADS_H.slice(0, -1) : []
  return {
    name: place.name,
    nearest: nearestTo(place, forecast),
    from: localIso(global.fromMs[0], zone),
    to: localIso(global.toMs[last], zone),
    rows: last + 1,
    scores: scoresOf(() => true),
    byHour: Array.from({ length: 24 }, (_, hour) => ({
      hour,
      scores: scoresOf(({ hours }, row) => hours[row] === hour),
    })).filter(isFilled),
    byLead: leads
      .map((fromH, i) => {
        const toH = LEADS_H[i + 1]
        const scores = scoresOf(({ leadH }, row) => leadH[row] >= fromH && leadH[row] < toH)
        return { fromH, toH: Number.isFinite(toH) ? toH : null, scores }
      })
      .filter(isFilled),
    days: daysOf(global, clock),
  }
}

/** Rows of a measure with the local hour of their middle and how long after the issue it lies. */
interface TimedRows {
  measure: SkyMeasure
  rows: ComparedRows
  hours: Int8Array
  leadH: Float64Array
}

const isFilled = ({ scores }: { scores: ComparedScore[] }): boolean => scores.length > 0

const midMs = ({ fromMs, toMs }: ComparedRows, row: number): number => (fromMs[row] + toMs[row]) / 2

function inUnits(measure: SkyMeasure, score: NonNullable<ReturnType<typeof skyScore>>): ComparedScore {
  const { id, factor } = NAMES[measure]
  const { rows, forecastMean, measuredMean, bias, meanAbsoluteError, rms } = score
  return {
    id,
    rows,
    forecastMean: forecastMean * factor,
    measuredMean: measuredMean * factor,
    bias: bias * factor,
    meanAbsoluteError: meanAbsoluteError * factor,
    rms: rms * factor,
  }
}

function nearestTo(place: SkyPlace, forecast: SkyDocument): { name: string; km: number } {
  const rad = (deg: number) => (deg * Math.PI) / 180
  const away = forecast.places.map(({ name, latDeg, lonDeg }) => ({
    name,
    km: geodesicM(rad(latDeg), rad(lonDeg), rad(place.latDeg), rad(place.lonDeg)) / 1000,
  }))
  return away.reduce((a, b) => (b.km < a.km ? b : a))
}

/** Light of each local day over the rows that were measured. */
function daysOf(global: ComparedRows, clock: Clock): SkyComparison['places'][number]['days'] {
  const days = new Map<string, { s: number; forecastJm2: number; measuredJm2: number }>()
  global.weightS.forEach((seconds, row) => {
    const date = clock.dateOf(midMs(global, row))
    const day = days.get(date) ?? { s: 0, forecastJm2: 0, measuredJm2: 0 }
    days.set(date, {
      s: day.s + seconds,
      forecastJm2: day.forecastJm2 + seconds * global.forecast[row],
      measuredJm2: day.measuredJm2 + seconds * global.measured[row],
    })
  })
  return [...days].map(([date, { s, forecastJm2, measuredJm2 }]) => ({
    date,
    hours: s / 3600,
    forecastWhm2: forecastJm2 / 3600,
    measuredWhm2: measuredJm2 / 3600,
    ratio: measuredJm2 > 0 ? forecastJm2 / measuredJm2 : null,
  }))
}

/** Light that a sky does not bring itself is the model's: its score is partly the model's too. */
function lightNotes(which: 'forecast' | 'measured', { places }: SkyDocument): string[] {
  const has = (name: 'ghiWm2' | 'dniWm2' | 'dhiWm2') => places.every((place) => place[name] !== undefined)
  const sky = which === 'forecast' ? 'The forecast' : 'The measured sky'
  const given = (['ghiWm2', 'dniWm2', 'dhiWm2'] as const).filter(has).length
  if (given >= 2) return []
  if (has('ghiWm2')) return [`${sky} brings global irradiance alone: direct and diffuse are worked out from it.`]
  return [`${sky} brings cloud cover: irradiance is worked out from it.`]
}

const LACKING = { air: 'air temperature', wind: 'wind', pressure: 'pressure' } as const

const lackingNotes = (compared: ComparedPlace[]): string[] =>
  (['air', 'wind', 'pressure'] as const)
    .filter((what) => compared.some(({ lacking }) => lacking.includes(what)))
    .map((what) => `No ${LACKING[what]} in common, at least at one place.`)
