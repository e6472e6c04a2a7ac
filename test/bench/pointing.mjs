import { daySun, forecastDay } from '../../dist/server/engine/forecast.js'
import { aimAlong, holdsAlong } from '../../dist/server/engine/pointing.js'
import { pointingTable } from '../../dist/server/engine/pointing-table.js'
import { benchRace } from './day.mjs'

const RAD = Math.PI / 180
const OPENING = { standing: { stage: 0, placeM: 0, stopLeftS: 0 }, charge: 0.9 }
const TIMED = 21

function middleMs(work) {
  const times = []
  for (let i = 0; i < TIMED; i++) {
    const from = performance.now()
    work()
    times.push(performance.now() - from)
  }
  times.sort((a, b) => a - b)
  return times[TIMED >> 1]
}

/** Being off by more brings less, and flat brings less than the best: the measure of the tests. */
function checkTable(windows) {
  if (windows.length !== 4) throw new Error(`${windows.length} windows, expected 4`)
  for (const { best, flat, off } of windows) {
    const falling = [best, ...off].map(({ stringsW }) => stringsW)
    if (falling.some((W, i) => i > 0 && W > falling[i - 1]) || flat.stringsW > best.stringsW * 1.001)
      throw new Error('a pose is beaten by one that is off')
  }
}

/** Times the search for the poses of a two-hour morning in one-minute steps, and the table of the whole day. */
export function pointingBench() {
  const race = benchRace()
  const { array } = race.car
  const { stand } = array.model
  const wantedMps = new Float64Array(race.course.pieces.count).fill(80 / 3.6)
  const day = forecastDay(race, 0, OPENING, wantedMps, daySun(race.days[0]))
  const first = day.timetable.spans.findIndex((span) => span.kind === 'morning-charge')
  const lifted = day.steps.lifted.map((up, i) => (day.steps.span[i] === first ? up : 0))
  const poses = (reaimS) => {
    const steps = { weather: day.weather, headingRad: day.steps.headingRad, lifted }
    const hold = reaimS > 0 ? { hold: holdsAlong({ ...day.steps, lifted }, reaimS) } : {}
    const aim = { tiltRad: new Float64Array(lifted.length), azimuthRad: new Float64Array(lifted.length) }
    return middleMs(() => {
      array.aim.known.clear()
      aimAlong(array, stand, { ...steps, ...hold }, aim)
    })
  }
  const offRad = [5 * RAD, 10 * RAD, 20 * RAD]
  let windows = []
  const tableMs = middleMs(() => (windows = pointingTable(race, day, offRad)))
  checkTable(windows)
  return { holdMs: poses(600), followMs: poses(0), tableMs, steps: lifted.reduce((sum, up) => sum + up, 0) }
}
