import type { Car } from '../balance.ts'
import type { StageRule } from '../day-rules.ts'
import type { Opening, Race } from '../forecast.ts'
import { channelsOf, sharedTracker, type Tracker } from '../tracker.ts'
import type { Change } from './what-if.ts'

/** A change that is made to the whole day, to be planned anew. */
export interface DayChange extends Omit<Change, 'targetCharge'> {
  /** Factor on what the trackers lose and draw. */
  trackerLoss: number
}

/**
 * A race and a day's opening with a change in them: what `quickWhatIf` answers by tables, forecast and planned in full.
 *
 * Sun is a factor on all light; the headwind is added at the car wherever it heads; stops change where the day may
 * still stand in them. What the change leaves alone stays the same object.
 */
export function changedDay(
  race: Race,
  dayIndex: number,
  opening: Opening,
  change: DayChange,
): { race: Race; opening: Opening } {
  const { sun, headwindMps, stopS, openingCharge } = change
  const { standing } = opening
  const isSky = sun !== 1 || headwindMps !== 0
  const last = race.days[dayIndex].lastStage
  const isStoodIn = (s: number): boolean => s >= standing.stage && s <= last
  return {
    race: {
      ...race,
      car: changedCar(race.car, change),
      ...(isSky ? { sky: { ...race.sky, change: { sun, headwindMps } } } : {}),
      ...(stopS === 0 ? {} : { stages: race.stages.map((stage, s) => (isStoodIn(s) ? longer(stage, stopS) : stage)) }),
    },
    opening: {
      ...opening,
      charge: Math.min(Math.max(opening.charge + openingCharge, 0), 1),
      standing: standing.stopLeftS > 0 ? { ...standing, stopLeftS: Math.max(standing.stopLeftS + stopS, 0) } : standing,
    },
  }
}

const longer = (stage: StageRule, byS: number): StageRule =>
  stage.stop === null ? stage : { ...stage, stop: { ...stage.stop, lengthS: Math.max(stage.stop.lengthS + byS, 0) } }

function changedCar(car: Car, { dragArea, rolling, massKg, reserveCharge, trackerLoss, trackerOff }: DayChange): Car {
  const { load } = car
  const isOtherTracker = trackerLoss !== 1 || trackerOff !== undefined
  return {
    ...car,
    load: {
      ...load,
      massKg: load.massKg + massKg,
      dragAreaM2: load.dragAreaM2 * dragArea,
      rollingCoefficient: load.rollingCoefficient * rolling,
      rollingPerMps: load.rollingPerMps * rolling,
    },
    reserveCharge: reserveCharge ?? car.reserveCharge,
    ...(isOtherTracker ? { trackers: changedTrackers(car.trackers, trackerLoss, trackerOff) } : {}),
  }
}

/** Trackers that lose by another factor, one of all channels dead. */
function changedTrackers(trackers: Tracker[], loss: number, off: number | undefined): Tracker[] {
  let first = 0
  return trackers.map((held) => {
    const channels = channelsOf(held).map((own, c) => {
      const lossy = loss === 1 ? own : lossier(own, loss)
      return first + c === off ? { ...lossy, isDead: true } : lossy
    })
    first += channels.length
    return channels.length === 1 ? channels[0] : sharedTracker(held.name, channels)
  })
}

function lossier(tracker: Tracker, by: number): Tracker {
  const { losses, table, standbyW } = tracker
  return {
    ...tracker,
    losses: {
      standingW: losses.standingW * by,
      switchingFraction: losses.switchingFraction * by,
      conductionOhm: losses.conductionOhm * by,
      rectifierV: losses.rectifierV * by,
    },
    ...(standbyW === undefined ? {} : { standbyW: standbyW * by }),
    ...(table === undefined ? {} : { table: { ...table, extraW: table.extraW.map((W) => W * by) } }),
  }
}
