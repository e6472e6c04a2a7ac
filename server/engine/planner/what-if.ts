import { storedJ } from '../battery.ts'
import type { DayForecast, Race } from '../forecast.ts'
import type { DayTables, TableStop } from './day-tables.ts'
import { kineticOf, loads, type Reach } from './engine-tables.ts'
import { bestDay, type DayTask, settledTables } from './plan-day.ts'
import { refine, type Refined } from './refine.ts'
import { driveAlong } from './simulate.ts'

/** What is taken to be otherwise than planned; factors are 1 and all else is left out where nothing changes. */
export interface Change {
  sun: number
  dragArea: number
  rolling: number
  /** Added. [KG] */
  massKg: number
  /** Added all along the road. [Mps] */
  headwindMps: number
  /** Added to the charge at the opening, 0..1. */
  openingCharge: number
  /** Added to each stop of the day. [S] */
  stopS: number
  /** In place of the car's and the day's, 0..1. */
  reserveCharge?: number
  targetCharge?: number
  /** Index of a tracker that gives nothing. */
  trackerOff?: number
}

/** A planned day with all that is asked of it again and again. */
export interface QuickBase {
  race: Race
  forecast: DayForecast
  reach: Reach
  tables: DayTables
  refined: Refined
}

/** What a change does to the best plan, by the tables of the base and the price of energy. */
export interface QuickAnswer {
  /** Later than the base; negative is earlier; NaN where no speeds near the base's hold. [S] */
  laterS: number
  /** NaN in that case too. [J] */
  closingJ: number
  /** What those speeds then lack of reserve or target at least; 0 where only the hours do not suffice. [J] */
  lacksJ: number
}

/** The day planned once, its tables and prices kept; null where it cannot be planned. */
export function quickBase(task: DayTask): QuickBase | null {
  const begun = bestDay(task)
  if (begun === null) return null
  const { day, found } = begun
  const { tables } = settledTables(day, found.best, 0)
  const { reach } = day
  const start = driveAlong(tables, found.best.speedMps, reach.first)
  const refined = refine(tables, start, found.refined.multiplier)
  return { race: task.race, forecast: found.best.forecast, reach, tables, refined }
}

/**
 * The best plan after a change, approximately: the base's tables with the change in them, refined from the base's
 * speeds and prices. Loads are those of the changed car, sun and stops change in proportion; what a change does to the
 * time of day, to the pack's voltage and to the cells' warmth is left out.
 */
export function quickWhatIf(base: QuickBase, change: Change): QuickAnswer {
  const { refined } = base
  const { drive, track } = refine(changedTables(base, change), refined.drive, refined.multiplier)
  const end = drive.speedMps.length
  const lacksJ = Math.max(track.shortJ, 0)
  if (lacksJ > 0 || track.lateS > 0) return { laterS: Number.NaN, closingJ: Number.NaN, lacksJ }
  return { laterS: track.atS[end] - refined.track.atS[end], closingJ: track.duskJ, lacksJ }
}

/** The tables of a day with a change in them. */
export function changedTables({ race, forecast, reach, tables }: QuickBase, change: Change): DayTables {
  const car = changedCar(race, change)
  const road = { ...forecast.road, headwindMps: forecast.road.headwindMps.map((mps) => mps + change.headwindMps) }
  const sun = change.sun * (1 - trackerShare(forecast, change.trackerOff))
  const { pack } = race.car
  const floorJ = change.reserveCharge === undefined ? 0 : storedJ(pack, change.reserveCharge) - ownFloorJ(race)
  return {
    ...tables,
    ...loads({ race: car, base: { ...forecast, road } }, reach, tables.speeds),
    kinetic: kineticOf(car),
    harvestW: tables.harvestW.map((W) => W * sun),
    stops: tables.stops.map((stop) => changedStop(stop, change.stopS, sun)),
    duskGainJ: tables.duskGainJ.map((J) => gainedJ(J, sun)),
    floorJ: tables.floorJ.map((J) => J + floorJ),
    targetJ: change.targetCharge === undefined ? tables.targetJ : storedJ(pack, change.targetCharge),
    start: { ...tables.start, energyJ: startJ(race, tables, forecast, change.openingCharge, sun) },
  }
}

const ownFloorJ = ({ car }: Race): number => storedJ(car.pack, car.reserveCharge)

/** What a stand loses without sun stays as it is. [J] */
const gainedJ = (J: number, sun: number): number => (J > 0 ? J * sun : J)

/** Tables begin as the car sets off: with the opening charge and what the sun of the morning added. [J] */
function startJ(
  { car }: Race,
  { start, pack }: DayTables,
  { openingCharge, openingJ }: DayForecast,
  by: number,
  sun: number,
): number {
  const charge = Math.min(Math.max(openingCharge + by, 0), 1)
  return Math.min(storedJ(car.pack, charge) + gainedJ(start.energyJ - openingJ, sun), pack.ceilingJ)
}

function changedStop(stop: TableStop, byS: number, sun: number): TableStop {
  const lengthS = stop.lengthS.map((S) => Math.max(S + byS, 0))
  return {
    ...stop,
    lengthS,
    gainJ: stop.gainJ.map((J, k) => gainedJ(J, sun) * (stop.lengthS[k] > 0 ? lengthS[k] / stop.lengthS[k] : 1)),
  }
}

function changedCar(race: Race, { massKg, dragArea, rolling }: Change): Race {
  const { load } = race.car
  return {
    ...race,
    car: {
      ...race.car,
      load: {
        ...load,
        massKg: load.massKg + massKg,
        dragAreaM2: load.dragAreaM2 * dragArea,
        rollingCoefficient: load.rollingCoefficient * rolling,
        rollingPerMps: load.rollingPerMps * rolling,
      },
    },
  }
}

/** A tracker's share of what all of them gave over the day. */
function trackerShare({ balance }: DayForecast, tracker: number | undefined): number {
  if (tracker === undefined) return 0
  const gave = balance.trackers.map(({ inputJ, lossJ }) => inputJ - lossJ)
  const all = gave.reduce((sum, J) => sum + J, 0)
  return all > 0 ? gave[tracker] / all : 0
}
