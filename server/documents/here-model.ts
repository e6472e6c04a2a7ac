import type { Opening, Race } from '../engine/forecast.ts'
import { dayFrom } from '../engine/from-here.ts'
import { InputError } from '../engine/input-error.ts'
import { dayUntil } from '../engine/until-there.ts'
import type { CampDocument, HereDocument } from './here.ts'
import { localIso } from './local-time.ts'
import { placedStages, zoneOf } from './race-model.ts'
import type { RaceDocument } from './race.ts'

/** A car nearer than this to the end of a stage stands on it. [M] */
const AT_END_M = 50

/** A day begun in its middle: the race cut to what is left of it, and the opening. */
export interface Begun {
  race: Race
  dayIndex: number
  opening: Opening
}

/**
 * The race from where a car is.
 *
 * @param date  the day on which it must be; left out, any day of the race
 * @throws InputError when instant, stage, place and stop do not fit the race
 */
export function begunDay(race: Race, document: RaceDocument, from: HereDocument, date?: string): Begun {
  const atMs = Date.parse(from.at)
  const dayIndex = dayOf(race, document, { atMs, at: from.at, date })
  const charge = from.chargePct / 100
  const warmth = from.packC === undefined ? {} : { warmth: { packC: from.packC, airC: from.packC, atMs } }
  const standing = { ...standingAt(race, document, from), speedMps: from.speedKmh / 3.6 }
  return { dayIndex, ...dayFrom(race, dayIndex, { atMs, standing, charge, ...warmth }) }
}

function dayOf({ days }: Race, document: RaceDocument, of: { atMs: number; at: string; date?: string }): number {
  const { atMs, at, date } = of
  const isOn = (d: number): boolean => atMs >= days[d].opensMs && atMs <= days[d].closesMs
  const hours = (d: number): string => {
    const zone = zoneOf(document, d)
    return `${localIso(days[d].opensMs, zone)} to ${localIso(days[d].closesMs, zone)}`
  }
  const meant = document.days.flatMap((day, d) => (date === undefined || day.date === date ? [d] : []))
  const found = meant.find(isOn)
  if (found !== undefined) return found
  const expected = meant.map(hours).join(', or ')
  throw new InputError('out-of-range', 'from.at', `${at} given; expected an instant from ${expected}`)
}

function standingAt(race: Race, document: RaceDocument, from: HereDocument): Opening['standing'] {
  const stage = stageIndex(document, from.stage, 'from.stage')
  const { fromM, toM } = race.course.stages[stage]
  const placeM = fromM + from.km * 1000
  if (placeM > toM + AT_END_M) throw offStage('from.km', from.km, toM - fromM)
  const { stop } = race.stages[stage]
  const isAtEnd = placeM > toM - AT_END_M
  if (from.stopLeftMin !== undefined && from.stopLeftMin > 0 && !(isAtEnd && stop !== null))
    throw new InputError(
      'out-of-range',
      'from.stopLeftMin',
      `${from.stopLeftMin} given; expected it only at the end of a stage with a stop${
        stop === null ? '' : ` (km ${((toM - fromM) / 1000).toFixed(1)} of ${from.stage})`
      }`,
    )
  if (!isAtEnd) return { stage, placeM, stopLeftS: 0 }
  const stopLeftS = from.stopLeftMin === undefined ? (stop?.lengthS ?? 0) : from.stopLeftMin * 60
  return { stage: stage + 1, placeM: toM, stopLeftS }
}

/**
 * The race with a day that ends at a camp.
 *
 * @throws InputError when it is not on the road of that day
 */
export function campedDay(race: Race, document: RaceDocument, camp: CampDocument, dayIndex: number): Race {
  const stage = stageIndex(document, camp.stage, 'until.stage')
  const { fromM, toM, firstPiece, endPiece } = race.course.stages[stage]
  const placeM = fromM + camp.km * 1000
  const isHere = (M: number): boolean => Math.abs(M - placeM) < 1
  const inside = race.course.pieces.fromM.findIndex((M, i) => i > firstPiece && i < endPiece && isHere(M))
  const edge = isHere(toM) ? endPiece : inside
  if (edge < 0) throw offStage('until.km', camp.km, toM - fromM)
  if (stage > race.days[dayIndex].lastStage)
    throw new InputError('unknown-stage', 'until.stage', `${camp.stage} given; expected a stage of that day or before`)
  const { name, finish } = race.stages[stage]
  return dayUntil(race, dayIndex, edge, edge === endPiece ? finish : `Camp at km ${camp.km.toFixed(0)} of ${name}`)
}

function stageIndex(document: RaceDocument, id: string, field: string): number {
  const stages = placedStages(document)
  const found = stages.findIndex(({ stage }) => stage.id === id)
  if (found >= 0) return found
  const known = stages.map(({ stage }) => stage.id).join(', ')
  throw new InputError('unknown-stage', field, `${JSON.stringify(id)} given; expected one of ${known}`)
}

const offStage = (field: string, km: number, lengthM: number): InputError =>
  new InputError(
    'off-the-stage',
    field,
    `${km} given; expected a place on the stage, which is ${(lengthM / 1000).toFixed(3)} km long`,
  )
