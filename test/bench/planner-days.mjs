// Random cloudy days against the best that is known of each; exits with 1 on a miss. By hand: node test/bench/planner-days.mjs [how many] [first seed]
import { execFileSync } from 'node:child_process'
import { fileURLToPath } from 'node:url'
import { runnerImport } from 'vite'

const START = fileURLToPath(new URL('../../server/start.mjs', import.meta.url))
execFileSync(process.execPath, [START, '--build-only'], { stdio: ['ignore', 'ignore', 'inherit'] })
const load = (name) => import(`../../dist/server/engine/planner/${name}.js`)
const source = async (name) =>
  (await runnerImport(fileURLToPath(new URL(`../engine/planner/${name}`, import.meta.url)))).module
const { bestDrive } = await load('best-drive')
const { backTrack, earliestEnd } = await load('back-track')
const { earliestArrival } = await load('bound-day')
const { frontier } = await load('frontier')
const { refine } = await load('refine')
const { cloudyDay } = await source('cloudy-day.ts')
const { drivenByTheSecond } = await source('second-by-second.ts')

const COUNT = Number(process.argv[2] ?? 200)
const FIRST = Number(process.argv[3] ?? 1)
const FINE = { binS: 10, speedMps: 1 / 3.6 }
const STARTS_KMH = [45, 58, 70, 82, 95]
const BOUND_CELL_S = 20
/** What a plan may lose against the best known, and the median bound. [s, share of the driving time] */
const MOST_LATE_S = 1
const MOST_GAP = 0.002
/** Rounding that a judge forgives. [J] */
const ROUNDING_J = 1

/** The judge: a simulator of its own. Gives the end, or Infinity where floor, target or hours are not kept. [s] */
function judgedEndS(day, result) {
  if (result === null || result === undefined) return Infinity
  const { endS, duskJ, lowestJ } = drivenByTheSecond(day, result.drive)
  const keeps = lowestJ >= day.floorJ[1] - ROUNDING_J && duskJ >= day.targetJ - ROUNDING_J && endS <= day.latestS
  return keeps ? endS : Infinity
}

function fineDrive(day) {
  const found = frontier(day, FINE.binS, FINE.speedMps)
  const endS = earliestEnd(day, found)
  return endS === Infinity ? null : refine(day, backTrack(day, found, endS))
}

function constantStart(day, kmh) {
  const speedMps = day.fastestMps.map((fastest) => Math.min(fastest, kmh / 3.6))
  return refine(day, { speedMps, waitS: new Float64Array(day.pieces + 1) })
}

const cpuMs = (from) => process.cpuUsage(from).user / 1000

/** One day: the plan, the best known, the bound. */
function tried(seed) {
  const isHard = seed % 2 === 0
  const day = cloudyDay(seed, isHard)
  const from = process.cpuUsage()
  const plan = bestDrive(day)
  const planMs = cpuMs(from)
  const planS = judgedEndS(day, plan)
  const rivals = [
    ['plan', planS],
    ['fine', judgedEndS(day, fineDrive(day))],
  ]
  for (const kmh of STARTS_KMH) rivals.push([`${kmh}`, judgedEndS(day, constantStart(day, kmh))])
  const [by, knownS] = rivals.reduce((a, b) => (b[1] < a[1] - 1e-3 ? b : a))
  const drivingS = planS - day.start.atS - 1800 * day.stops.length
  const boundS = plan === null ? NaN : earliestArrival(day, plan.sPerJ, planS, BOUND_CELL_S, plan.track.atS)
  return { seed, isHard, km: day.pieces, plan, planS, planMs, knownS, by, boundS, drivingS }
}

const misses = []
const rows = []
const say = (cells) => console.log(cells.map((cell) => String(cell).padStart(9)).join(''))
say(['seed', 'kind', 'km', 'drive h', 'late s', 'best by', 'bound s', 'bound %', 'CPU ms'])
for (let seed = FIRST; seed < FIRST + COUNT; seed++) {
  const one = tried(seed)
  const kind = one.isHard ? 'hard' : 'plain'
  if (one.knownS === Infinity) {
    if (one.plan !== null) misses.push(`seed ${seed}: a plan that does not hold`)
    say([seed, kind, one.km, 'none', '', '', '', '', one.planMs.toFixed(0)])
    continue
  }
  const lateS = one.planS - one.knownS
  const gapS = one.planS - one.boundS
  if (one.planS === Infinity)
    misses.push(`seed ${seed}: ${one.plan === null ? 'no plan' : 'a plan that does not hold'}, known by ${one.by}`)
  else if (lateS > MOST_LATE_S) misses.push(`seed ${seed}: ${lateS.toFixed(1)} s after the best known, by ${one.by}`)
  if (one.boundS > one.knownS + 1e-6) misses.push(`seed ${seed}: the bound is above the best known`)
  rows.push({ lateS, gap: gapS / one.drivingS, planMs: one.planMs })
  say([
    seed,
    kind,
    one.km,
    (one.drivingS / 3600).toFixed(2),
    lateS.toFixed(2),
    one.by,
    gapS.toFixed(1),
    ((100 * gapS) / one.drivingS).toFixed(3),
    one.planMs.toFixed(0),
  ])
}
const sorted = (key) => rows.map((row) => row[key]).sort((a, b) => a - b)
const part = (values, share) => values[Math.min(Math.floor(share * values.length), values.length - 1)]
const gaps = sorted('gap')
const lates = sorted('lateS')
console.log(`${rows.length} of ${COUNT} days can be driven`)
console.log(
  `after the best known: median ${part(lates, 0.5).toFixed(2)} s, 95 % ${part(lates, 0.95).toFixed(2)} s, worst ${lates.at(-1).toFixed(2)} s`,
)
console.log(
  `bound under the plan: median ${(100 * part(gaps, 0.5)).toFixed(3)} % of the driving time, 95 % ${(100 * part(gaps, 0.95)).toFixed(3)} %, worst ${(100 * gaps.at(-1)).toFixed(2)} %`,
)
console.log(
  `CPU of a plan: median ${part(sorted('planMs'), 0.5).toFixed(0)} ms, worst ${sorted('planMs').at(-1).toFixed(0)} ms`,
)
if (part(gaps, 0.5) > MOST_GAP)
  misses.push(`the median bound is more than ${100 * MOST_GAP} % of the driving time below`)
for (const miss of misses) console.error(miss)
process.exit(misses.length > 0 ? 1 : 0)
