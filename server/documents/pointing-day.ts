import { type PoseYield, pointingTable, type PointingWindow as Table, type Yields } from '../engine/pointing-table.ts'
import { ENGINE_VERSION } from '../engine/version.ts'
import { type ForecastDay, placeName } from './budget-day.ts'
import { drivenRace, type ForecastRequest } from './forecast.ts'
import { localIso, offsetMin } from './local-time.ts'
import type { PointingDay, PointingDocument, PointingWindow } from './pointing.ts'

const DEG = Math.PI / 180
const WH = 1 / 3600

/** Angles that a tired crew is off by. [°] */
const OFF_DEG = [5, 10, 20]

/** Read before the array is lifted; common practice, no source. */
const CAUTIONS = [
  'Lift and lower only when and as the event’s rules allow.',
  'Mind the wind: lower the array before gusts that its stand is not made for, and never leave it lifted alone.',
  'Keep clear of live array connectors: an array in light carries lethal direct voltage, connected or not. Work on it is for those who are licensed to do it.',
]

/**
 * Where to point the array on the days of a forecast request, and what being off costs.
 *
 * @throws InputError when the documents do not fit together: field, value and what was expected
 */
export function pointingDocuments(request: ForecastRequest): PointingDocument {
  const { car, race, sky } = request
  const { days, assumptions } = drivenRace(request, pointingDay)
  return {
    engineVersion: ENGINE_VERSION,
    race: race.name,
    car: car.name,
    sky: { name: sky.name, source: sky.source, issuedAt: sky.issuedAt },
    assumptions,
    days,
  }
}

/** One day's standing windows. */
export function pointingDay(day: ForecastDay): PointingDay {
  const { race, forecast, date, zone } = day
  const offRad = OFF_DEG.map((deg) => deg * DEG)
  const windows = noStand(day) === null ? pointingTable(race, forecast, offRad) : []
  return {
    date,
    zone,
    utcOffsetMin: offsetMin(race.days[day.dayIndex].opensMs, zone),
    windows: windows.map((window) => windowDocument(day, window)),
    noWindow: windows.length > 0 ? null : (noStand(day) ?? 'never-lifted'),
    cautions: CAUTIONS,
  }
}

function noStand({ race }: ForecastDay): PointingDay['noWindow'] {
  const { stand, panels } = race.car.array.model
  if (stand === null) return 'no-stand'
  return panels.some(({ lifts }) => lifts) ? null : 'nothing-lifts'
}

function windowDocument(day: ForecastDay, window: Table): PointingWindow {
  const { forecast, zone, race } = day
  const span = forecast.timetable.spans[window.span]
  const local = (atMs: number): string => localIso(atMs, zone)
  return {
    kind: span.kind as PointingWindow['kind'],
    name: placeName(day, span.fromM),
    from: local(span.fromMs),
    to: local(span.toMs),
    arrayUp: local(span.liftedFromMs),
    arrayDown: local(span.liftedToMs),
    headingDeg: window.headingRad / DEG,
    reaimEveryMin: (race.car.array.model.stand?.reaimS ?? 0) / 60,
    holds: window.holds.map((hold) => ({
      from: local(hold.fromMs),
      to: local(hold.toMs),
      turnToDeg: hold.pose.azimuthRad / DEG,
      tiltDeg: hold.pose.tiltRad / DEG,
      sunAzimuthDeg: hold.sun.azimuthRad / DEG,
      sunElevationDeg: 90 - hold.sun.tiltRad / DEG,
      offSunDeg: hold.offSunRad / DEG,
      ...yieldsDocument(hold),
    })),
    total: yieldsDocument(window),
  }
}

function yieldsDocument({ best, flat, off }: Yields) {
  const brings = ({ stringsW, takenJ, storedJ }: PoseYield) => ({
    stringsW,
    harvestWh: takenJ * WH,
    packWh: storedJ * WH,
  })
  const costs = (less: PoseYield) => ({
    ...brings(less),
    costW: best.stringsW - less.stringsW,
    costHarvestWh: (best.takenJ - less.takenJ) * WH,
    costPackWh: (best.storedJ - less.storedJ) * WH,
  })
  return {
    best: brings(best),
    flat: costs(flat),
    off: off.map((each, i) => ({ offDeg: OFF_DEG[i], ...costs(each) })),
  }
}
