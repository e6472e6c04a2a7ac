import { readFileSync } from 'node:fs'
import { carDocument } from '../../dist/server/documents/car.js'
import { carModel } from '../../dist/server/documents/car-model.js'
import { dayRules, raceCourse, stageRules } from '../../dist/server/documents/race-model.js'
import { raceDocument } from '../../dist/server/documents/race.js'
import { routeDocument } from '../../dist/server/documents/route.js'
import { skyModel } from '../../dist/server/documents/sky-model.js'
import { daySun, forecastDay } from '../../dist/server/engine/forecast.js'
import { fastestThatMeets } from '../../dist/server/engine/search.js'
import { gapJ, ledger, wentOutJ } from '../../dist/server/engine/ledger.js'
import { readCsvSky } from '../../dist/server/files/csv-sky.js'
import { skyTableOptions } from '../../dist/server/files/sky-table.js'

const WARM_UP = 60
const TIMED = 101

const demo = (name) => readFileSync(new URL(`../../server/demo/${name}`, import.meta.url), 'utf8')

/** A winding, hilly road of exactly `km` kilometres or a little more, a point every 250 m, due east along the plateau. */
function road(km) {
  const latDeg = []
  const lonDeg = []
  const elevationM = []
  for (let i = 0; i <= km * 4 + 20; i++) {
    const at = i / 4
    latDeg.push(-22.5 + 0.03 * Math.sin(at / 9))
    lonDeg.push(16.2 + at / 102.9)
    elevationM.push(1250 + 90 * Math.sin(at / 70) + 12 * Math.sin(at / 1.7))
  }
  return routeDocument.parse({ name: 'Bench road', points: { latDeg, lonDeg, elevationM } })
}

const stage = (i, fromKm, toKm, more) => ({
  id: `s${i}`,
  name: `Stage ${i}`,
  route: 'road',
  fromKm,
  toKm,
  start: `p${i - 1}`,
  finish: `p${i}`,
  ...more,
})

const day = (date, stages, more) => ({
  date,
  release: '05:45',
  driving: { from: '08:00', to: '17:30' },
  charging: [
    { from: '06:00', to: '08:00' },
    { from: '16:30', to: '18:30' },
  ],
  stages,
  ...more,
})

/** The demo car and sky on days of this road. */
function raceOf(km, days) {
  const race = raceDocument.parse({ name: 'Bench', zone: 'Africa/Windhoek', openingPct: 90, days })
  const { document } = readCsvSky(
    demo('sky.csv'),
    skyTableOptions.parse({ name: 'Bench', source: 'forecast', issuedAt: '2026-10-16T18:00:00+02:00' }),
  )
  return {
    car: carModel(carDocument.parse(JSON.parse(demo('weaver-2.json'))), { groundAlbedo: 0.2, skyModel: 'perez' }),
    course: raceCourse(race, { road: road(km) }),
    stages: stageRules(race),
    days: dayRules(race),
    sky: skyModel(document).sky,
  }
}

/** A 600 km Saturday with two stops. */
export const benchRace = () =>
  raceOf(600, [
    day(
      '2026-10-17',
      [stage(1, 0, 200, { stop: { minutes: 30 } }), stage(2, 200, 400, { stop: { minutes: 30 } }), stage(3, 400, 600)],
      { targetPct: 35 },
    ),
  ])

/** Five stages of 560 km on five days, a stop in the middle of each. */
export const benchWeek = () =>
  raceOf(
    2800,
    Array.from({ length: 5 }, (_, d) =>
      day(`2026-10-${17 + d}`, [
        stage(2 * d + 1, 560 * d, 560 * d + 280, { stop: { minutes: 30 } }),
        stage(2 * d + 2, 560 * d + 280, 560 * d + 560),
      ]),
    ),
  )

export const OPENING = { standing: { stage: 0, placeM: 0, stopLeftS: 0 }, charge: 0.9 }

function middle(times) {
  times.sort((a, b) => a - b)
  return times[times.length >> 1]
}

/** The same measure as in the tests: the ledger closes to 1e-6 of the energy moved, and the car is there. */
function checkDay(forecast) {
  const { spans } = forecast.timetable
  const all = spans.map((_, i) => i)
  const sums = ledger(spans, forecast.balance.spans, all, forecast)
  const movedJ = sums.energy.income + wentOutJ(sums.energy)
  if (!(Math.abs(gapJ(sums)) < 1e-6 * movedJ)) throw new Error(`the ledger is ${gapJ(sums)} J off`)
  if (!(Math.abs(forecast.timetable.evening.placeM - 600_000) < 1)) throw new Error('the car did not arrive')
}

/** Times one day's forecast at 80 km/h, and the search for the fastest speed that meets the target. */
export function dayBench() {
  const race = benchRace()
  const wantedMps = new Float64Array(race.course.pieces.count).fill(80 / 3.6)
  const path = daySun(race.days[0])
  const times = []
  let forecast
  for (let i = 0; i < WARM_UP + TIMED; i++) {
    const from = performance.now()
    forecast = forecastDay(race, 0, OPENING, wantedMps, path)
    if (i >= WARM_UP) times.push(performance.now() - from)
  }
  checkDay(forecast)
  const searches = []
  let found
  for (let i = 0; i < 5; i++) {
    const from = performance.now()
    found = fastestThatMeets(race, 0, OPENING, 0.35, { lowestKmh: 30, highestKmh: 130 })
    searches.push(performance.now() - from)
  }
  checkDay(found.forecast)
  return { ms: middle(times), steps: forecast.steps.count, searchMs: middle(searches), tried: found.tried }
}
