import { forecastDay, daySun } from '../../dist/server/engine/forecast.js'
import { lossTable } from '../../dist/server/engine/loss-table.js'
import { fitLosses } from '../../dist/server/engine/loss-fit.js'
import { prepareTracker } from '../../dist/server/engine/tracker.js'
import { trackerOutputW } from '../../dist/server/engine/tracker-output.js'
import { trackerDayOf } from '../../dist/server/documents/tracker-day.js'
import { OPENING, benchRace } from './day.mjs'

const ASKS = 200_000
const ROUNDS = 9

const middle = (values) => values.sort((a, b) => a - b)[Math.floor(values.length / 2)]

/** A bench of 40 points with a bump that four terms do not follow. */
function bench() {
  const points = []
  for (const inputV of [40, 55, 70, 85])
    for (const outputV of [100, 120])
      for (const inputW of [20, 60, 150, 300, 450]) {
        const A = inputW / inputV
        const lossW = 1 + 0.004 * A * outputV + 0.06 * A * A + 0.5 * Math.sin(inputW / 90)
        points.push({ inputV, outputV, inputW, outputW: inputW - lossW })
      }
  return points
}

function nsPerAsk(tracker) {
  const times = []
  let sum = 0
  for (let round = 0; round < ROUNDS; round++) {
    const from = performance.now()
    for (let i = 0; i < ASKS; i++) sum += trackerOutputW(tracker, 30 + (i % 400), 45 + (i % 37), 105 + (i % 11))
    times.push(((performance.now() - from) / ASKS) * 1e6)
  }
  if (!(sum > 0 && sum < ASKS * ROUNDS * 430)) throw new Error('more out than in')
  return middle(times)
}

/** What a tracker's output costs by four terms and by 40 points, and the report of the bench's Saturday. */
export function trackersBench() {
  const points = bench()
  const window = {
    inputMinV: 20,
    inputMaxV: 100,
    inputMaxA: 20,
    outputMinV: 0,
    outputMaxV: 200,
    outputMaxA: 20,
    maxW: 600,
  }
  const fit = prepareTracker({ name: 'bench', window, losses: fitLosses(points).losses, trackingEfficiency: 1 })
  const table = lossTable(points, (p) => p.inputW - trackerOutputW(fit, p.inputW, p.inputV, p.outputV))
  const race = benchRace()
  const wantedMps = new Float64Array(race.course.pieces.count).fill(80 / 3.6)
  const forecast = forecastDay(race, 0, OPENING, wantedMps, daySun(race.days[0]))
  const stages = race.stages.map((_, i) => ({ dayIndex: 0, stage: { id: `s${i + 1}` } }))
  const day = { race, stages, dayIndex: 0, date: '2026-10-17', zone: 'Africa/Windhoek', forecast, heldKmh: 80 }
  const times = []
  let report
  for (let i = 0; i < 5; i++) {
    const from = performance.now()
    report = trackerDayOf({ ...day, search: null, targetCharge: null, penalties: {}, opening: OPENING, wantedMps })
    times.push(performance.now() - from)
  }
  if (!(report.price.whPerMin > 10 && report.price.whPerMin < 100)) throw new Error('no price of a minute')
  return {
    fitNs: nsPerAsk(fit),
    tableNs: nsPerAsk({ ...fit, table }),
    reportMs: middle(times),
    trackers: report.trackers.length,
  }
}
